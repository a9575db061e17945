//! The report in a real browser, where one is installed: no fault in its script, values that are
//! those of the summary, a closer look that comes and goes, and a print of some pages.
//!
//! Without headless Chromium these tests say so and pass; `LODESHAFT_BROWSER` names another.

#![allow(clippy::unwrap_used, reason = "a test may stop here")]

use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// A burst makes the gear slip, then it is caught again: all kinds of marks are on the page. Our own
/// invention.
const SCENARIO: &str = "\
lodeshaft: 1
title: Winder with a burst
duration: 3 s
start: steady
bodies:
  hub: { inertia: 0.05 kg*m2, speed: 100 rad/s }
  reel: { inertia: 0.5 kg*m2 }
magnetic_gears:
  gear: { inner: hub, modulator: ground, outer: reel, pole_pairs: { inner: 4, outer: 16 }, \
pull_out: { at: outer, torque: 100 N*m }, damping: { at: outer, coefficient: 8 N*m*s/rad } }
motors:
  drive: { body: hub, law: { speed_loop: { speed: 100 rad/s, torque_limit: 60 N*m, gain: 5 N*m*s/rad, integral_time: 0.1 s } } }
loads:
  drag: { body: reel, law: { viscous: { coefficient: 0.2 N*m*s/rad } } }
  burst: { body: reel, law: { prescribed: { torque: { pulse: { start: 1 s, end: 1.06 s, base: 0 N*m, peak: -400 N*m } } } } }
";

/// Collects faults from the first line of the page on.
const WATCH: &str = "<script>window.faults=[];window.addEventListener('error',function(e){window.faults.push(e.message)});</script>";

/// Uses the first chart with data as a person would and writes down what it sees.
const PROBE: &str = r##"<script>
(function () {
  var seen = { charts: 0 }, figure = document.querySelector("script.data").closest("figure");
  document.querySelectorAll("script.data").forEach(function () { seen.charts++; });
  var sheet = figure.querySelector(".sheet"), svg = sheet.querySelector("svg"), readout = figure.querySelector(".readout");
  var frame = svg.querySelector("g.p").getAttribute("data-frame").split(" ").map(Number), wide = svg.viewBox.baseVal.width;
  function point(kind, share) {
    var box = svg.getBoundingClientRect(), x = box.left + (frame[0] + share * frame[2]) / wide * box.width;
    svg.dispatchEvent(new PointerEvent(kind, { clientX: x, clientY: box.top + 60, button: 0, pointerId: 1, bubbles: true }));
  }
  function key(name) { sheet.dispatchEvent(new KeyboardEvent("keydown", { key: name, bubbles: true, cancelable: true })); }
  function picture() { return Array.prototype.map.call(svg.querySelectorAll("g.p, g.x"), function (g) { return g.outerHTML; }).join(""); }
  function times() { return Array.prototype.map.call(svg.querySelectorAll("g.x text"), function (t) { return t.textContent; }); }
  function reach() {
    var all = [];
    svg.querySelectorAll("g.s polyline").forEach(function (line) {
      line.getAttribute("points").trim().split(/[ ]+/).forEach(function (pair) { all.push(+pair.split(",")[0]); });
    });
    return [Math.min.apply(null, all), Math.max.apply(null, all)];
  }
  seen.frame = frame;
  key("End"); seen.end = readout.textContent;
  point("pointermove", 0.3); seen.hover = readout.textContent;
  var before = picture();
  seen.times = times();
  seen.slips = svg.querySelectorAll("g.m[data-kind=slip]").length;
  point("pointerdown", 0.3); point("pointermove", 0.5); point("pointerup", 0.5);
  seen.zoomed = { times: times(), reach: reach(), changed: picture() !== before, button: !figure.querySelector(".back").hidden, slips: svg.querySelectorAll("g.m[data-kind=slip]").length };
  point("pointermove", 0.5); seen.zoomed.hover = readout.textContent;
  key("Escape"); seen.restored = picture() === before;
  key("Home"); key("+"); seen.keyed = picture() !== before;
  svg.dispatchEvent(new MouseEvent("dblclick", { bubbles: true })); seen.twice = picture() === before;
  key("+"); window.dispatchEvent(new Event("beforeprint")); seen.printed = picture() === before;
  seen.faults = window.faults;
  var told = document.createElement("pre");
  told.id = "probe";
  told.textContent = JSON.stringify(seen);
  document.body.appendChild(told);
})();
</script>"##;

/// The browser, or a word on why these tests are left out.
fn browser() -> Option<PathBuf> {
    if let Some(named) = std::env::var_os("LODESHAFT_BROWSER") {
        return Some(PathBuf::from(named));
    }
    let path = std::env::var_os("PATH").unwrap_or_default();
    let names = ["chromium", "chromium-browser", "google-chrome", "chrome"];
    let found = std::env::split_paths(&path)
        .flat_map(|folder| names.map(|name| folder.join(name)))
        .find(|file| file.is_file());
    if found.is_none() {
        let told = b"left out: no headless Chromium is installed\n";
        let _ = std::io::Write::write_all(&mut std::io::stderr(), told);
    }
    found
}

struct Bench {
    folder: PathBuf,
}

impl Bench {
    fn new(name: &str) -> Self {
        let folder = Path::new(env!("CARGO_TARGET_TMPDIR"))
            .join(format!("browser-{name}-{}", std::process::id()));
        let _ = fs::remove_dir_all(&folder);
        fs::create_dir_all(&folder).unwrap();
        fs::write(folder.join("winder.yaml"), SCENARIO).unwrap();
        Self { folder }
    }

    fn report(&self) -> (String, Value) {
        let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
            .args(["report", "winder.yaml", "--out", "out", "--quiet"])
            .current_dir(&self.folder)
            .output()
            .unwrap();
        assert!(output.status.success(), "{output:?}");
        let page = fs::read_to_string(self.folder.join("out/report.html")).unwrap();
        let summary = fs::read_to_string(self.folder.join("out/summary.json")).unwrap();
        (page, serde_json::from_str(&summary).unwrap())
    }

    /// Runs the browser on a page; what it prints, and what its console said.
    fn browse(&self, browser: &Path, page: &str, arguments: &[&str]) -> (String, String) {
        let file = self.folder.join("page.html");
        fs::write(&file, page).unwrap();
        let output = Command::new(browser)
            .args(["--headless=new", "--no-sandbox", "--disable-gpu", "--enable-logging=stderr"])
            .arg(format!("--user-data-dir={}", self.folder.join("profile").display()))
            .args(["--window-size=900,1400", "--virtual-time-budget=4000"])
            .args(arguments)
            .arg(format!("file://{}", file.display()))
            .current_dir(&self.folder)
            .stdin(Stdio::null())
            .output()
            .unwrap();
        let text = |bytes: &[u8]| String::from_utf8_lossy(bytes).into_owned();
        let console: Vec<String> = text(&output.stderr)
            .lines()
            .filter(|line| line.contains(":CONSOLE"))
            .map(str::to_owned)
            .collect();
        (text(&output.stdout), console.join("\n"))
    }

    fn probe(&self, browser: &Path, page: &str) -> (Value, String) {
        let page = page.replacen("<head>", &format!("<head>{WATCH}"), 1).replacen(
            "</body>",
            &format!("{PROBE}</body>"),
            1,
        );
        let (dom, console) = self.browse(browser, &page, &["--dump-dom"]);
        let told =
            dom.split("<pre id=\"probe\">").nth(1).and_then(|rest| rest.split("</pre>").next());
        let told =
            told.unwrap_or("null").replace("&lt;", "<").replace("&gt;", ">").replace("&amp;", "&");
        (serde_json::from_str(&told).unwrap(), console)
    }
}

impl Drop for Bench {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.folder);
    }
}

/// The number behind words of a readout.
fn figure(readout: &str, words: &str) -> f64 {
    let part = readout.split(" · ").find(|part| part.starts_with(words));
    let part = part.unwrap_or_else(|| panic!("no `{words}` in `{readout}`"));
    let number = part[words.len()..].trim().split(' ').next().unwrap();
    number.replace('\u{2212}', "-").parse().unwrap_or_else(|_| panic!("no number: {part}"))
}

fn list(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|it| it.as_f64().unwrap()).collect()
}

#[test]
fn the_page_works_as_a_person_uses_it() {
    let Some(browser) = browser() else { return };
    let bench = Bench::new("use");
    let (page, summary) = bench.report();
    let (seen, console) = bench.probe(&browser, &page);
    assert_eq!(seen["faults"], serde_json::json!([]), "{console}");
    assert_eq!(console, "", "the console is silent");
    assert!(seen["charts"].as_u64().unwrap() >= 2, "run and closer look: {seen}");

    // The readout at the end is what the summary says, to its four digits. 30/pi rpm to the rad/s.
    let end = seen["end"].as_str().unwrap();
    let wanted =
        summary["channels"]["hub.speed"]["final"].as_f64().unwrap() * 30.0 / std::f64::consts::PI;
    assert!((figure(end, "Hub") - wanted).abs() <= 1e-3 * wanted.abs(), "{end} {wanted}");
    let wanted = summary["channels"]["gear.load_angle"]["final"].as_f64().unwrap().to_degrees();
    assert!((figure(end, "Load angle") - wanted).abs() <= 0.02, "{end} {wanted}");

    // Under the pointer at three tenths of 3 s the steady start still lasts: 100 rad/s, and the drag
    // of 0.2 * 25 N m takes 5 of 100 N m, so the load angle is asin 0.05 (closed form).
    let hover = seen["hover"].as_str().unwrap();
    assert!((figure(hover, "") - 0.9).abs() < 0.01, "{hover}");
    let wanted = 3000.0 / std::f64::consts::PI;
    assert!((figure(hover, "Hub") - wanted).abs() < 1e-3 * wanted, "{hover} {wanted}");
    assert!((figure(hover, "Load angle") - 0.05_f64.asin().to_degrees()).abs() < 0.02, "{hover}");

    let zoomed = &seen["zoomed"];
    assert_eq!(zoomed["changed"], true);
    assert_eq!(zoomed["button"], true);
    let (frame, reach) = (list(&seen["frame"]), list(&zoomed["reach"]));
    assert!((reach[0] - frame[0]).abs() < 8.0, "{reach:?} {frame:?}");
    assert!((reach[1] - frame[0] - frame[2]).abs() < 8.0, "{reach:?} {frame:?}");
    let times: Vec<f64> = zoomed["times"]
        .as_array()
        .unwrap()
        .iter()
        .filter_map(|text| text.as_str().unwrap().parse().ok())
        .collect();
    assert!(
        times.len() >= 3 && times.iter().all(|time| (0.899..=1.501).contains(time)),
        "{times:?}"
    );
    assert!((figure(zoomed["hover"].as_str().unwrap(), "") - 1.2).abs() < 0.01, "{zoomed}");
    // All slips lie within, each a triangle at the edge of the load angle and one in the strip.
    assert_eq!(zoomed["slips"], 2 * summary["gears"]["gear"]["slips"].as_u64().unwrap());
    assert_eq!(seen["restored"], true, "Escape brings the whole run back");
    assert_eq!(seen["keyed"], true, "+ looks closer");
    assert_eq!(seen["twice"], true, "so does a double click");
    assert_eq!(seen["printed"], true, "paper shows the whole run");
}

#[test]
fn a_faulty_page_is_found_out() {
    let Some(browser) = browser() else { return };
    let bench = Bench::new("fault");
    let (page, _) = bench.report();
    let broken = page.replace("</main>", "</main><script>nothing.of.this.kind();</script>");
    let (seen, console) = bench.probe(&browser, &broken);
    assert_eq!(seen["faults"].as_array().unwrap().len(), 1, "{seen}");
    assert!(console.contains("nothing is not defined"), "{console}");
}

#[test]
fn it_prints_on_a_few_pages() {
    let Some(browser) = browser() else { return };
    let bench = Bench::new("print");
    let (page, _) = bench.report();
    let paper = bench.folder.join("paper.pdf");
    let target = format!("--print-to-pdf={}", paper.display());
    bench.browse(&browser, &page, &["--no-pdf-header-footer", &target]);
    let bytes = fs::read(&paper).expect("the print is there");
    assert!(bytes.starts_with(b"%PDF-"));
    let count = |word: &[u8]| bytes.windows(word.len()).filter(|window| *window == word).count();
    let pages = count(b"/Type /Page\n") + count(b"/Type /Page/") + count(b"/Type /Page ");
    assert!((3..=14).contains(&pages), "{pages} pages");
    assert!((30_000..3_000_000).contains(&bytes.len()), "{} bytes", bytes.len());
}
