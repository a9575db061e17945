//! Damaged files are refused or read, but never bring the reader down.

use lodeshaft::scenario::load_text;
use std::path::Path;

/// A small linear congruential generator (Knuth's constants, from memory): the same damage each run.
struct Dice(u64);

impl Dice {
    fn roll(&mut self, below: usize) -> usize {
        self.0 =
            self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 33) as usize % below.max(1)
    }
}

/// Pieces that hurt: signs of YAML, odd numbers, odd units.
const SHARDS: [&str; 24] = [
    "{", "}", "[", "]", ":", "- ", "#", "&a ", "*a", "!x ", "\t", "\n", "  ", "'", "\"", "~",
    ".nan", "-.inf", "1e400", "-1", "0", "\u{b7}", "ground", "1e-7 kg",
];

fn damage(text: &str, dice: &mut Dice) -> String {
    let mut letters: Vec<char> = text.chars().collect();
    for _ in 0..=dice.roll(3) {
        let at = dice.roll(letters.len());
        match dice.roll(4) {
            0 => {
                let end = (at + 1 + dice.roll(12)).min(letters.len());
                letters.drain(at..end);
            }
            1 => {
                let shard = SHARDS[dice.roll(SHARDS.len())];
                letters.splice(at..at, shard.chars());
            }
            2 => {
                let shard = SHARDS[dice.roll(SHARDS.len())];
                let end = (at + shard.chars().count()).min(letters.len());
                letters.splice(at..end, shard.chars());
            }
            _ => {
                let from = dice.roll(letters.len());
                let end = (from + dice.roll(60)).min(letters.len());
                let piece: Vec<char> = letters[from..end].to_vec();
                letters.splice(at..at, piece);
            }
        }
        if letters.is_empty() {
            break;
        }
    }
    letters.into_iter().collect()
}

/// The most memory that this process has had, where the system tells.
fn most_memory() -> String {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("VmHWM:"));
    line.map_or_else(|| "memory unknown".to_owned(), |most| format!("at most {}", most.trim()))
}

/// `LODESHAFT_FUZZ_ROUNDS` and `LODESHAFT_FUZZ_SEED` make it longer and other.
#[test]
fn a_damaged_file_never_panics_and_every_fault_prints() {
    let mut texts: Vec<String> = Vec::new();
    for folder in ["tests/accepted", "tests/rejected"] {
        let mut files: Vec<_> = std::fs::read_dir(folder)
            .unwrap()
            .map(|entry| entry.unwrap().path())
            .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
            .collect();
        files.sort();
        texts.extend(files.iter().map(|file| std::fs::read_to_string(file).unwrap()));
    }
    let number = |name: &str, usual: u64| {
        std::env::var(name).ok().and_then(|text| text.parse().ok()).unwrap_or(usual)
    };
    let mut dice = Dice(number("LODESHAFT_FUZZ_SEED", 11));
    let rounds = number("LODESHAFT_FUZZ_ROUNDS", 4000) as usize;
    let (mut refused, begun) = (0, std::time::Instant::now());
    let mut longest = std::time::Duration::ZERO;
    for round in 0..rounds {
        let clock = std::time::Instant::now();
        // Every other time the first file, which is sound and knows every section.
        let text = damage(&texts[if round % 2 == 0 { 0 } else { round % texts.len() }], &mut dice);
        if let Err(failure) = load_text("damaged", Path::new("tests/rejected"), &text, &[]) {
            refused += 1;
            let said = failure.render();
            assert!(said.starts_with("error: ") || said.starts_with("warning: "), "{said}");
        }
        longest = longest.max(clock.elapsed());
    }
    println!(
        "{rounds} damaged files in {:.0} s, the longest {:.3} s, {refused} refused, {}",
        begun.elapsed().as_secs_f64(),
        longest.as_secs_f64(),
        most_memory()
    );
    assert!(longest.as_secs() < 60, "a damaged file held the reader up for {longest:?}");
    assert!(refused > rounds / 4, "only {refused} of {rounds} damaged files were refused");
}
