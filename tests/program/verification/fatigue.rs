//! Rainflow counts and damage-equivalent ranges.

use super::sheet::Case;
use super::study;
use std::collections::BTreeMap;

const CHAPTER: &str = "Rainflow counting";
const STANDARD: &str = "ASTM E1049-85, example (read second-hand)";

/// A torque that runs straight from value to value, one a second.
fn history(values: &[f64]) -> String {
    let points: Vec<String> =
        values.iter().enumerate().map(|(time, value)| format!("[{time}, {value}]")).collect();
    format!(
        "duration: {} s\nbodies: {{ a: {{ inertia: 1 }} }}\n\
         loads: {{ history: {{ body: a, law: {{ prescribed: {{ torque: {{ points: [{}] }} }} }} }} }}",
        values.len() - 1,
        points.join(", ")
    )
}

/// Counts by range, as one line of text.
fn counts(values: &[f64]) -> String {
    let answer = study(&history(values), "{ rainflow: { of: history.torque, slope: 4 } }");
    let mut sums: BTreeMap<i64, f64> = BTreeMap::new();
    for cycle in answer["cycles"].as_array().unwrap() {
        let range = cycle["range"].as_f64().unwrap().round() as i64;
        *sums.entry(range).or_default() += cycle["count"].as_f64().unwrap();
    }
    let lines: Vec<String> =
        sums.iter().map(|(range, count)| format!("{range}: {count}")).collect();
    lines.join(", ")
}

const EXAMPLE: [f64; 9] = [-2.0, 1.0, -3.0, 5.0, -1.0, 3.0, -4.0, 4.0, -2.0];

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, STANDARD, |sheet| {
            let expected = "3: 0.5, 4: 1.5, 6: 0.5, 8: 1, 9: 0.5";
            sheet.exact("counts by range", expected, counts(&EXAMPLE));
        }),
        Case::new(CHAPTER, "ASTM E1049-85, repeating history (from memory)", |sheet| {
            let repeating = [5.0, -1.0, 3.0, -4.0, 4.0, -2.0, 1.0, -3.0, 5.0];
            sheet.exact(
                "counts of a repeating history",
                "3: 1, 4: 1, 7: 1, 9: 1",
                counts(&repeating),
            );
        }),
        Case::new(CHAPTER, "closed form, (sum n S^m/N)^(1/m)", |sheet| {
            for (slope, expected) in [
                (3, 10.3039981964),
                (4, 9.58741060508),
                (5, 9.25325663101),
                (8, 8.896493152),
                (10, 8.82000395759),
            ] {
                let words = format!("{{ rainflow: {{ of: history.torque, slope: {slope} }} }}");
                let answer = study(&history(&EXAMPLE), &words);
                let found = answer["damage_equivalent"].as_f64().unwrap();
                let what = format!("damage-equivalent range, slope {slope}");
                sheet.relative(what, "N*m", [expected, found], 1e-10);
            }
        }),
        Case::new(CHAPTER, "closed form, a hundred sines with two end half cycles", |sheet| {
            let answer = study(
                "duration: 100 s\nbodies: { a: { inertia: 1 } }\n\
                 loads: { history: { body: a, law: { prescribed: { torque: { sine: { mean: 0, amplitude: 1, frequency: 1 Hz, phase: 0 deg } } } } } }",
                "{ rainflow: { of: history.torque, slope: 4, equivalent_cycles: 100 } }",
            );
            let found = answer["damage_equivalent"].as_f64().unwrap();
            sheet.relative("a hundred sines", "N*m", [1.9978089, found], 1e-7);
        }),
    ]
}
