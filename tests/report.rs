//! The report as a reader meets it: one page that holds everything and asks for nothing outside.

use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};
use std::sync::atomic::{AtomicUsize, Ordering};

static FOLDERS: AtomicUsize = AtomicUsize::new(0);

/// A train of our own invention: two inertias about a magnetic gear, driven by a torque that steps.
fn scenario(torque: &str, more: &str) -> String {
    format!(
        "lodeshaft: 1\n\
         title: Winder <b>&amp; \"gear\"</b>\n\
         about: Does it hold? <script>alert(1)</script> is only text.\n\
         document: {{ project: Hall <7>, revision: B }}\n\
         duration: 1.5 s\n\
         bodies:\n  hub: {{ inertia: 0.05 kg*m2, speed: 100 rad/s, source: \"drawing </table>\" }}\n  \
         reel: {{ inertia: 0.5 kg*m2 }}\n\
         magnetic_gears:\n  gear: {{ inner: hub, modulator: ground, outer: reel, \
         pole_pairs: {{ inner: 4, outer: 16 }}, pull_out: {{ at: outer, torque: 100 N*m }}, \
         damping: {{ at: outer, coefficient: 2 N*m*s/rad }} }}\n\
         loads:\n  drag: {{ body: reel, law: {{ viscous: {{ coefficient: 0.2 N*m*s/rad }} }} }}\n  \
         burst: {{ body: reel, law: {{ prescribed: {{ torque: {{ pulse: {{ start: 0.5 s, end: 0.8 s, \
         base: 0 N*m, peak: {torque} }} }} }} }} }}\n\
         requirements:\n  no_slip: {{ of: gear.slips, at_most: 0 }}\n  \
         fast: {{ of: hub.speed, at_least: 1 rad/s, before: 0.4 s }}\n{more}"
    )
}

struct Case {
    folder: PathBuf,
}

impl Case {
    fn new(text: &str) -> Self {
        let number = FOLDERS.fetch_add(1, Ordering::Relaxed);
        let name = format!("report-{}-{number}", std::process::id());
        let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
        fs::create_dir_all(&folder).expect("a folder for the test can be made");
        fs::write(folder.join("case.yaml"), text).expect("the scenario can be written");
        Self { folder }
    }

    fn report(&self, arguments: &[&str]) -> Output {
        Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
            .args(["report", "case.yaml", "--out", "out"])
            .args(arguments)
            .current_dir(&self.folder)
            .output()
            .expect("the program starts")
    }

    fn page(&self) -> String {
        fs::read_to_string(self.folder.join("out/report.html")).expect("the page is there")
    }
}

impl Drop for Case {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.folder);
    }
}

fn told(output: &Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

const STUDIES: &str = "studies:\n  \
    hot: { margin: { vary: magnetic_gears.gear.pull_out.torque, between: [100 N*m, 10 N*m], points: 5 } }\n  \
    grid: { sweep: { vary: { bodies.reel.inertia: { from: 0.4 kg*m2, to: 0.6 kg*m2, count: 3 }, \
    bodies.hub.inertia: { values: [0.05, 0.06] } } } }\n  \
    spread: { monte_carlo: { draws: 12, seed: 3, spread: { magnetic_gears.gear.pull_out.torque: \
    { normal: { relative: 4 % } } } } }\n  \
    cases: { load_cases: { cases: { heavy: { about: Twice the reel, changes: { bodies.reel.inertia: 1 kg*m2 } } } } }\n";

#[test]
fn a_case_that_holds_is_told_on_one_page() {
    let case = Case::new(&scenario("-20 N*m", STUDIES));
    let output = case.report(&[]);
    assert_eq!(output.status.code(), Some(0), "{}", told(&output));
    let page = case.page();
    let heads =
        ["Requirements", "The run", "Studies", "Inputs", "How far to trust it", "Reproduction"];
    let mut from = 0;
    for (place, head) in heads.iter().enumerate() {
        let wanted = format!("</span>{head}</h2>");
        let at =
            page[from..].find(&wanted).unwrap_or_else(|| panic!("section {} {head}", place + 1));
        from += at;
    }
    assert!(page.contains("Met: every requirement."));
    for group in ["class=\"thing\"", "class=\"s\"", "class=\"p\"", "id=\"fig2-time\""] {
        assert!(page.contains(group), "{group}");
    }
    // Load cases come first, whatever their place in the file.
    let at = |name: &str| page.find(&format!("<h3>{name} ")).unwrap_or(usize::MAX);
    assert!(at("Cases") < at("Hot") && at("Hot") < at("Grid") && at("Grid") < at("Spread"));
    assert!(at("Spread") < usize::MAX);
    assert_eq!(page.matches("class=\"answer\"").count(), 4);
}

#[test]
fn the_page_asks_for_nothing_outside() {
    let case = Case::new(&scenario("-20 N*m", ""));
    case.report(&[]);
    let page = case.page();
    // The name of the format is no address that is fetched; the licence's are text.
    let page = page.replace("http://www.w3.org/2000/svg", "");
    for word in
        [" src=", "<link", "@import", "url(http", "url(\"http", "href=\"http", "<iframe", "<img"]
    {
        assert!(!page.contains(word), "{word}");
    }
    assert!(page.contains("url(data:font/woff2;base64,"));
    assert!(page.len() < 2_000_000, "{}", page.len());
    assert!(
        page.contains("color-scheme:dark")
            && page.contains("@media screen and (prefers-color-scheme:dark)")
    );
    assert!(page.contains("@page{"));
    // The data behind the run's curves is JSON that nothing can end early.
    let data = page.split("class=\"data\">").nth(1).unwrap().split("</script>").next().unwrap();
    let data: Value = serde_json::from_str(data).unwrap();
    assert!(data["panels"].as_array().unwrap().len() >= 3);
}

#[test]
fn texts_of_the_file_stay_texts() {
    let case = Case::new(&scenario("-20 N*m", ""));
    case.report(&[]);
    let page = case.page();
    for raw in ["<script>alert", "drawing </table>", "Hall <7>", "Winder <b>"] {
        assert!(!page.contains(raw), "{raw}");
    }
    assert!(page.contains("drawing &lt;/table&gt;"));
    assert!(page.contains("Winder &lt;b&gt;&amp;amp;"));
    // Every figure is named for those who cannot see it, and no id stands twice.
    assert_eq!(page.matches("role=\"img\"").count(), page.matches("aria-labelledby=\"fig").count());
    let mut ids: Vec<&str> =
        page.split(" id=\"").skip(1).filter_map(|rest| rest.split('"').next()).collect();
    let all = ids.len();
    ids.sort_unstable();
    ids.dedup();
    assert_eq!(ids.len(), all);
}

#[test]
fn a_case_that_slips_says_so_in_words_and_marks() {
    let case = Case::new(&scenario("-400 N*m", ""));
    let output = case.report(&["--format", "json"]);
    assert_eq!(output.status.code(), Some(1), "{}", told(&output));
    let summary: Value = serde_json::from_slice(&output.stdout).unwrap();
    let slips = summary["gears"]["gear"]["slips"].as_u64().unwrap();
    assert!(slips > 0);
    assert_eq!(summary["report"], "report.html");
    let page = case.page();
    assert!(page.contains("Not met: the magnetic gear slips."));
    // The requirement that fails stands first.
    let fails = page.find("<b>no_slip</b>").unwrap();
    assert!(fails < page.find("<b>fast</b>").unwrap());
    assert!(page.contains(&format!("<dt>Slips</dt><dd><b>{slips}</b>")));
    assert!(page.contains("The gear slips in this run."));
    assert!(page.contains("not a safety-rated torque limiter"));
}

#[test]
fn the_hash_is_that_of_the_text() {
    let text = scenario("-20 N*m", "");
    let case = Case::new(&text);
    case.report(&[]);
    let page = case.page();
    let shown = page.split("class=\"hash\">").nth(1).unwrap().split('<').next().unwrap();
    // sha256sum of the core utilities, where it is installed.
    let Ok(output) = Command::new("sha256sum").arg(case.folder.join("case.yaml")).output() else {
        return;
    };
    let listed = String::from_utf8(output.stdout).unwrap();
    assert_eq!(listed.split(' ').next(), Some(shown));
}

#[test]
fn folders_follow_the_rules_of_all_results() {
    let case = Case::new(&scenario("-20 N*m", ""));
    let foreign = case.folder.join("out");
    fs::create_dir_all(&foreign).unwrap();
    fs::write(foreign.join("thesis.txt"), "mine").unwrap();
    let output = case.report(&[]);
    assert_eq!(output.status.code(), Some(4), "{}", told(&output));
    assert!(told(&output).contains("left alone"));
    assert_eq!(fs::read_to_string(foreign.join("thesis.txt")).unwrap(), "mine");
    fs::remove_dir_all(&foreign).unwrap();
    for _ in 0..2 {
        assert_eq!(case.report(&[]).status.code(), Some(0));
    }
    for file in ["report.html", "summary.json", "series.csv", "events.csv"] {
        assert!(foreign.join(file).is_file(), "{file}");
    }
}

#[test]
fn the_same_file_gives_the_same_page() {
    let case = Case::new(&scenario("-20 N*m", STUDIES));
    case.report(&["--threads", "1"]);
    let first = case.page();
    // The second report takes the finished runs of the studies over.
    case.report(&["--threads", "2"]);
    assert!(first == case.page());
}

#[test]
fn faults_of_the_file_write_nothing() {
    let case = Case::new(&scenario(
        "-20 N*m",
        "studies:\n  s: { margin: { vary: bodies.none.inertia, between: [1, 2] } }\n",
    ));
    let output = case.report(&[]);
    assert_eq!(output.status.code(), Some(2), "{}", told(&output));
    assert!(!case.folder.join("out").exists());
}
