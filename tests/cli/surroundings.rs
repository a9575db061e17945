//! Language, time zone and folder of the machine mean nothing: the same file gives the same bytes.

use super::bench::{Bench, SMALL, names};

/// All files of a result, with their names.
fn bytes(bench: &Bench, folder: &str) -> Vec<(String, Vec<u8>)> {
    let folder = bench.path(folder);
    names(&folder)
        .into_iter()
        .filter(|name| folder.join(name).is_file())
        .map(|name| {
            let content = std::fs::read(folder.join(&name)).unwrap();
            (name, content)
        })
        .collect()
}

#[test]
fn language_and_time_zone_of_the_machine_mean_nothing() {
    let bench = Bench::new("surroundings");
    let file = format!(
        "{SMALL}studies:\n  drawn: {{ monte_carlo: {{ draws: 10, seed: 3, spread: {{ magnetic_couplings.coupling.pull_out: {{ normal: {{ relative: 5 % }} }} }} }} }}\n"
    );
    bench.write("case.yaml", &file);
    // A comma for the point, another alphabet, the ends of the clock, no surroundings at all.
    let surroundings: [&[(&str, &str)]; 4] = [
        &[("LC_ALL", "C"), ("TZ", "UTC")],
        &[("LC_ALL", "de_DE.UTF-8"), ("LANG", "de_DE.UTF-8"), ("TZ", "Pacific/Kiritimati")],
        &[("LC_ALL", "ar_EG.UTF-8"), ("LC_NUMERIC", "ar_EG.UTF-8"), ("TZ", "Etc/GMT+12")],
        &[("TZ", ":nowhere"), ("HOME", "/nonexistent"), ("COLUMNS", "20"), ("NO_COLOR", "1")],
    ];
    let mut first: Option<(String, String, Vec<(String, Vec<u8>)>)> = None;
    for variables in surroundings {
        let told = |arguments: &[&str]| {
            let output = bench
                .command(arguments)
                .env_clear()
                .envs(variables.iter().copied())
                .output()
                .unwrap();
            assert_eq!(output.status.code(), Some(0), "{variables:?}: {output:?}");
            String::from_utf8(output.stdout).unwrap()
        };
        let run = told(&["run", "case.yaml", "--out", "out"]);
        let report = told(&["report", "case.yaml", "--out", "out", "--threads", "2", "--quiet"]);
        let found = (run, report, bytes(&bench, "out"));
        assert!(found.2.iter().any(|(name, _)| name == "report.html"));
        match &first {
            None => first = Some(found),
            Some(first) => {
                assert_eq!(first.0, found.0, "{variables:?}");
                assert_eq!(first.1, found.1, "{variables:?}");
                for (one, other) in first.2.iter().zip(&found.2) {
                    assert!(one == other, "{variables:?}: {} differs", one.0);
                }
                assert_eq!(first.2.len(), found.2.len());
            }
        }
    }
}
