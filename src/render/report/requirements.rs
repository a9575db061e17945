//! Section 1: the requirements with what was found, failures first.

use super::Material;
use super::figures::percent;
use super::html::{HtmlTable, escape, paragraph, verdict};
use crate::results::RequirementResult;

/// Where the limit stands in the bar, as a share of its width.
const LIMIT_AT: f64 = 0.74;

/// Width and height of the bar, px.
const BAR: [f64; 2] = [100.0, 14.0];

/// The section's content.
pub fn section(material: &Material<'_>) -> String {
    let requirements = &material.result.requirements;
    if requirements.is_empty() {
        return paragraph(
            "No requirements are stated, so this report passes no verdict on the run. \
             The peaks in the next section are what it found.",
        );
    }
    let mut order: Vec<&RequirementResult> = requirements.iter().collect();
    order.sort_by_key(|one| match one.met {
        Some(false) => 0,
        None => 1,
        Some(true) => 2,
    });
    let head = ["Requirement", "Found", "Limit", "Use of limit", "Margin", "Verdict"];
    let mut table = HtmlTable::new("<>><><", &head).class("requirements");
    for one in order {
        table.row(row(material, one));
    }
    table.html()
}

fn row(material: &Material<'_>, one: &RequirementResult) -> Vec<String> {
    let figure = |value: f64| escape(&material.written.value(&one.of, one.unit, value));
    let found = match (one.value, one.met) {
        (Some(value), _) => figure(value),
        (None, None) => "the run did not get that far".to_owned(),
        (None, _) => "never".to_owned(),
    };
    vec![
        format!("<b>{}</b><br><small>{}</small>", escape(&one.name), escape(&one.text)),
        found,
        one.limit.map_or_else(|| "any time".to_owned(), figure),
        use_of_limit(one).map_or_else(String::new, bar),
        margin(one).map_or_else(|| "–".to_owned(), |share| escape(&percent(share))),
        verdict(one.met),
    ]
}

/// Found and limit on one scale: magnitudes, but where the limit is negative.
fn pair(one: &RequirementResult) -> Option<(f64, f64)> {
    let (value, limit) = (one.value?, one.limit?);
    Some(if limit >= 0.0 { (value.abs(), limit) } else { (value, limit) })
}

/// How much of its limit a requirement uses: 1 at the limit.
pub fn use_of_limit(one: &RequirementResult) -> Option<f64> {
    let (value, limit) = pair(one)?;
    if limit < 0.0 {
        return None;
    }
    if limit == 0.0 {
        return Some(if value > 0.0 && !one.at_least { f64::INFINITY } else { 0.0 });
    }
    let share = if one.at_least { limit / value } else { value / limit };
    (!share.is_nan()).then_some(share)
}

/// Distance to the limit over the limit, negative beyond it.
pub fn margin(one: &RequirementResult) -> Option<f64> {
    let (value, limit) = pair(one)?;
    let distance = if one.at_least { value - limit } else { limit - value };
    let share = distance / limit.abs();
    share.is_finite().then_some(share)
}

fn bar(share: f64) -> String {
    let [width, height] = BAR;
    let end = (share * LIMIT_AT).clamp(0.0, 1.0) * width;
    let at = LIMIT_AT * width;
    let class = if share > 1.0 { "beyond" } else { "within" };
    format!(
        "<svg class=\"use {class}\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\" aria-hidden=\"true\">\
         <path class=\"track\" d=\"M0 7H{width}\"/><path class=\"found\" d=\"M0 7H{end:.1}\"/>\
         <path class=\"limit\" d=\"M{at} 1V13\"/></svg>"
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    fn requirement(value: f64, limit: f64, at_least: bool) -> RequirementResult {
        RequirementResult {
            name: "r".to_owned(),
            text: String::new(),
            of: "a.speed".to_owned(),
            met: Some(true),
            value: Some(value),
            limit: Some(limit),
            unit: "rad/s",
            time: None,
            at_least,
        }
    }

    #[test]
    fn margins_are_distances_over_the_limit() {
        let near = |a: Option<f64>, b: f64| a.is_some_and(|a| (a - b).abs() < 1e-12);
        assert!(near(margin(&requirement(80.0, 100.0, false)), 0.2));
        assert!(near(margin(&requirement(-110.0, 100.0, false)), -0.1));
        assert!(near(margin(&requirement(110.0, 100.0, true)), 0.1));
        assert!(near(use_of_limit(&requirement(125.0, 100.0, true)), 0.8));
        assert_eq!(margin(&requirement(3.0, 0.0, false)), None);
        assert_eq!(use_of_limit(&requirement(3.0, 0.0, false)), Some(f64::INFINITY));
        assert_eq!(use_of_limit(&requirement(0.0, 0.0, false)), Some(0.0));
    }
}
