//! Every package that is built in is recorded with its licence and what is known against it.
//!
//! `tests/packages.tsv` is the record; the licences are those that the packages state. Advisories
//! are those of the `RustSec` database of 21 August 2026, matched by version. No network is
//! needed: a package that comes, goes or changes its version makes the test fail until somebody
//! has looked at it and recorded it:
//!
//! 1. `cargo metadata --format-version 1` tells name, version and licence;
//! 2. <https://rustsec.org> tells advisories; one that only says "unmaintained" may stay, with its
//!    number in the last column; any other is a reason to change the package.

use std::collections::BTreeMap;

/// Licences of which one must be open to choose: none asks more than its own text beside a copy.
const OPEN: [&str; 9] = [
    "MIT",
    "Apache-2.0",
    "Zlib",
    "0BSD",
    "BSD-2-Clause",
    "BSL-1.0",
    "Unlicense",
    "Unicode-3.0",
    "Apache-2.0 WITH LLVM-exception",
];

/// Name and version of every package in the lock file but our own.
fn locked() -> Vec<(String, String)> {
    let text = include_str!("../Cargo.lock");
    let value = |line: &str| line.split('"').nth(1).map(str::to_owned);
    let mut found = Vec::new();
    for block in text.split("[[package]]").skip(1) {
        let of = |key: &str| {
            block.lines().find(|line| line.starts_with(&format!("{key} = "))).and_then(value)
        };
        let (Some(name), Some(version)) = (of("name"), of("version")) else {
            panic!("a package without name or version: {block}");
        };
        if name != env!("CARGO_PKG_NAME") {
            assert!(
                block.contains("registry+https://github.com/rust-lang/crates.io-index"),
                "{name} does not come from crates.io"
            );
            found.push((name, version));
        }
    }
    found.sort();
    found
}

/// Rows of the record.
fn recorded() -> Vec<[&'static str; 4]> {
    let text = include_str!("packages.tsv");
    text.lines()
        .skip(1)
        .map(|line| {
            let cells: Vec<&str> = line.split('\t').collect();
            <[&str; 4]>::try_from(cells).unwrap_or_else(|_| panic!("four cells: {line}"))
        })
        .collect()
}

/// True when a licence expression can be met with open licences alone.
fn is_open(expression: &str) -> bool {
    let plain = expression.replace('/', " OR ").replace(['(', ')'], "");
    plain.split(" AND ").all(|part| part.split(" OR ").any(|one| OPEN.contains(&one.trim())))
}

#[test]
fn every_package_is_recorded_and_no_other() {
    let locked = locked();
    assert!(locked.len() > 50, "{} packages found", locked.len());
    let recorded: Vec<(String, String)> = recorded()
        .iter()
        .map(|[name, version, ..]| ((*name).to_owned(), (*version).to_owned()))
        .collect();
    let missing: Vec<_> = locked.iter().filter(|package| !recorded.contains(package)).collect();
    let gone: Vec<_> = recorded.iter().filter(|package| !locked.contains(package)).collect();
    assert!(
        missing.is_empty() && gone.is_empty(),
        "to be recorded in tests/packages.tsv: {missing:?}; to be taken out: {gone:?}"
    );
}

#[test]
fn every_licence_is_open() {
    assert!(!is_open("GPL-3.0-only") && !is_open("MIT AND GPL-2.0-only"));
    assert!(is_open("GPL-2.0-only OR MIT") && is_open("Unlicense/MIT"));
    for [name, version, licence, _] in recorded() {
        assert!(is_open(licence), "{name} {version}: {licence}");
    }
}

#[test]
fn nothing_worse_than_unmaintained_is_known() {
    let mut known = BTreeMap::new();
    for [name, version, _, advisory] in recorded() {
        if !advisory.is_empty() {
            assert!(
                advisory.starts_with("RUSTSEC-") && advisory.ends_with("(unmaintained)"),
                "{name} {version}: {advisory}"
            );
            known.insert(name, advisory);
        }
    }
    // More than a handful would be a reason to look for others.
    assert!(known.len() < 5, "{known:?}");
}
