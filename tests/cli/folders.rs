//! Folders of results: replaced as a whole, never mixed, never another's.

use super::bench::{Bench, json, names};

#[test]
fn a_folder_with_something_else_in_it_is_refused_and_left_alone() {
    let bench = Bench::new("foreign");
    std::fs::create_dir(bench.path("mine")).unwrap();
    bench.write("mine/thesis.txt", "years of work");
    bench.write("mine/summary.json", "{}");
    let told = bench.run(&["run", "small.yaml", "--out", "mine"]);
    assert_eq!(told.status, Some(4), "{told:?}");
    assert!(told.err.starts_with("error: `mine` holds files"), "{}", told.err);
    assert!(told.err.contains("hint: name another folder with --out"), "{}", told.err);
    assert_eq!(names(&bench.path("mine")), ["summary.json", "thesis.txt"]);
    assert_eq!(bench.read("mine/thesis.txt"), "years of work");
    assert_eq!(names(&bench.folder), ["mine", "small.yaml"], "no hidden rest");
}

#[test]
fn a_result_of_ours_is_replaced_as_a_whole() {
    let bench = Bench::new("replaced");
    assert_eq!(bench.run(&["run", "small.yaml"]).status, Some(0));
    let before = names(&bench.path("output/small"));
    bench.write("output/small/stale.svg", "old");
    let told = bench.run(&["run", "small.yaml", "--set", "duration=0.1 s"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    assert_eq!(names(&bench.path("output/small")), before, "the stale file is gone");
    assert_eq!(json(&bench.read("output/small/summary.json"))["end_time"], 0.1);
    assert_eq!(names(&bench.path("output")), ["small"], "no hidden rest");
}

#[test]
fn an_empty_folder_and_a_deep_one_are_taken() {
    let bench = Bench::new("empty");
    std::fs::create_dir(bench.path("empty")).unwrap();
    for out in ["empty", "a/b/c", "./d/../e"] {
        let told = bench.run(&["run", "small.yaml", "--out", out]);
        assert_eq!(told.status, Some(0), "{out}: {told:?}");
        assert!(bench.path(out).join("summary.json").exists(), "{out}");
    }
}

#[test]
fn a_file_or_a_place_that_cannot_be_written_ends_with_4() {
    let bench = Bench::new("unwritable");
    bench.write("taken", "a file");
    for out in ["taken", "taken/below", "/proc/lodeshaft", "/"] {
        let told = bench.run(&["run", "small.yaml", "--out", out]);
        assert_eq!(told.status, Some(4), "{out}: {told:?}");
        assert!(told.err.contains("error: "), "{out}: {}", told.err);
        assert!(told.out.is_empty(), "{out}");
    }
    assert_eq!(bench.read("taken"), "a file");
}

#[test]
fn the_same_run_gives_the_same_bytes() {
    let bench = Bench::new("bytes");
    let all = |bench: &Bench| {
        names(&bench.path("output/small"))
            .iter()
            .filter(|name| bench.path("output/small").join(name).is_file())
            .map(|name| std::fs::read(bench.path("output/small").join(name)).unwrap())
            .collect::<Vec<_>>()
    };
    bench.run(&["run", "small.yaml"]);
    let first = all(&bench);
    assert!(first.len() > 3);
    bench.run(&["run", "small.yaml"]);
    assert!(first == all(&bench));
}

#[test]
fn runs_at_the_same_time_do_not_mix() {
    let bench = Bench::new("at_once");
    for _ in 0..4 {
        let children: Vec<_> = ["0.1 s", "0.2 s", "0.3 s"]
            .into_iter()
            .map(|duration| {
                let set = format!("duration={duration}");
                let arguments = ["run", "small.yaml", "--no-charts", "--set", &set];
                bench.command(&arguments).spawn().unwrap()
            })
            .collect();
        for child in children {
            let output = child.wait_with_output().unwrap();
            assert_eq!(output.status.code(), Some(0), "{output:?}");
        }
        let end = json(&bench.read("output/small/summary.json"))["end_time"].as_f64().unwrap();
        let series = bench.read("output/small/series.csv");
        let last: f64 = series.lines().last().unwrap().split(',').next().unwrap().parse().unwrap();
        assert!((end - last).abs() < 1e-12, "{end} {last}");
        assert_eq!(names(&bench.path("output")), ["small"], "no hidden rest");
    }
}
