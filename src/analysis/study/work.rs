//! Spreads runs over threads and gathers what they found, in the order asked for.
//!
//! Threads take the next run from a counter and hand results over through a channel, so that
//! nothing is locked on the way. A result depends on its run alone: any number of threads
//! gives the same table.

use super::outcome::{Layout, Outcome};
use super::spec::Varied;
use super::trial::{self, Asked, Spent};
use crate::scenario::Tables;
use crate::tree::Node;
use std::collections::BTreeMap;
use std::num::NonZeroUsize;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::sync::mpsc;
use std::time::{Duration, Instant};

/// Keeps finished runs, so that a study that is stopped can go on later.
pub trait Keep {
    /// Takes a finished run with its number.
    ///
    /// # Errors
    /// Why it could not be kept, in words; the study ends then.
    fn keep(&mut self, number: usize, row: &Row) -> Result<(), String>;
}

/// Is told how far a study has come.
pub trait Watch {
    /// `done` of `total` runs are finished; `total` may grow. `kept` of them were known before.
    fn at(&mut self, done: usize, kept: usize, total: usize);
}

/// Keeps nothing.
#[derive(Clone, Copy, Debug)]
pub struct Forget;

impl Keep for Forget {
    fn keep(&mut self, _number: usize, _row: &Row) -> Result<(), String> {
        Ok(())
    }
}

/// Watches nothing.
#[derive(Clone, Copy, Debug)]
pub struct Blind;

impl Watch for Blind {
    fn at(&mut self, _done: usize, _kept: usize, _total: usize) {}
}

/// Why a study ended before its answer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Stop {
    /// Asked from outside.
    Interrupted,
    /// A finished run could not be kept.
    NotKept(String),
    /// There is none, in words.
    NoAnswer(String),
}

/// A run of a study: what was changed, and what came of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Its part in the study, or the name of its case.
    pub label: String,
    /// The varied numbers, SI.
    pub values: Vec<f64>,
    /// Run at a tenth of the tolerance.
    pub sharper: bool,
    /// What it found.
    pub outcome: Outcome,
}

/// A run to be made.
#[derive(Clone, Debug)]
pub struct Task<'t> {
    /// Its part in the study, or the name of its case.
    pub label: String,
    /// The varied numbers, SI, in the order of the study's.
    pub values: Vec<f64>,
    /// The whole tree of a case; `None`: the file with the numbers set.
    pub tree: Option<&'t Node>,
    /// At a tenth of the tolerance.
    pub sharper: bool,
}

impl Task<'_> {
    /// A run with numbers set.
    pub fn at(label: &str, values: Vec<f64>) -> Self {
        Self { label: label.to_owned(), values, tree: None, sharper: false }
    }
}

/// What the runs of a study cost.
#[derive(Clone, Copy, Debug, Default)]
pub struct Cost {
    /// Runs made now, without those known before.
    pub runs: usize,
    /// Threads at work.
    pub threads: usize,
    /// From the first run to the last.
    pub elapsed: Duration,
    /// Sum over threads: reading and building.
    pub preparing: Duration,
    /// Sum over threads: integrating.
    pub integrating: Duration,
}

/// How a study's runs are made.
pub struct Setting<'a> {
    /// The file without its studies.
    pub base: &'a Node,
    /// Tables of the file.
    pub tables: &'a Tables,
    /// Number of threads; `None`: one a processor.
    pub threads: Option<usize>,
    /// Set from outside to end the study.
    pub interrupt: &'a AtomicBool,
    /// Runs finished earlier, by number.
    pub known: BTreeMap<usize, Outcome>,
    /// Keeps finished runs.
    pub keep: &'a mut dyn Keep,
    /// Is told how far the study has come.
    pub watch: &'a mut dyn Watch,
}

/// The runs of one study.
pub struct Work<'a, 's> {
    setting: &'s mut Setting<'a>,
    varied: Vec<Varied>,
    /// What is asked of every run.
    pub layout: Layout,
    /// All runs so far in the order asked for.
    pub rows: Vec<Row>,
    /// What they cost.
    pub cost: Cost,
    kept: usize,
    expected: usize,
}

impl<'a, 's> Work<'a, 's> {
    /// Begins the runs of a study that varies these numbers; about `expected` of them.
    pub fn new(
        setting: &'s mut Setting<'a>,
        varied: Vec<Varied>,
        layout: Layout,
        expected: usize,
    ) -> Self {
        Self { setting, varied, layout, rows: Vec::new(), cost: Cost::default(), kept: 0, expected }
    }

    /// What a sharper run takes a tenth of: the tolerance, or the step with rk4.
    pub fn sharper_setting(&self) -> &'static str {
        match self.setting.base.get("solver").and_then(|solver| solver.get("method")) {
            Some(Node::Text(method)) if method == "rk4" => "step",
            _ => "tolerance",
        }
    }

    /// Makes runs and returns the number of the first; those known before are not repeated.
    ///
    /// # Errors
    /// [`Stop`] when not all of them could be made.
    pub fn batch(&mut self, tasks: &[Task<'_>]) -> Result<usize, Stop> {
        let first = self.rows.len();
        let mut outcomes: Vec<Option<Outcome>> =
            (first..first + tasks.len()).map(|number| self.setting.known.remove(&number)).collect();
        let missing: Vec<usize> =
            (0..tasks.len()).filter(|place| outcomes[*place].is_none()).collect();
        self.kept += tasks.len() - missing.len();
        self.expected = self.expected.max(first + tasks.len());
        let mut stopped = None;
        if !missing.is_empty() {
            stopped = self.make(first, tasks, &missing, &mut outcomes);
        }
        if outcomes.iter().any(Option::is_none) {
            return Err(stopped.unwrap_or(Stop::Interrupted));
        }
        self.rows.extend(
            tasks.iter().zip(outcomes).filter_map(|(task, outcome)| Some(row(task, outcome?))),
        );
        if let Some(stop) = stopped {
            return Err(stop);
        }
        self.setting.watch.at(self.rows.len(), self.kept, self.expected);
        Ok(first)
    }

    fn make(
        &mut self,
        first: usize,
        tasks: &[Task<'_>],
        missing: &[usize],
        outcomes: &mut [Option<Outcome>],
    ) -> Option<Stop> {
        let threads = self.setting.threads.unwrap_or_else(processors).clamp(1, missing.len());
        let asked = Asked { layout: &self.layout, interrupt: self.setting.interrupt };
        let (base, tables, varied) = (self.setting.base, self.setting.tables, &self.varied);
        let next = AtomicUsize::new(0);
        let stop = AtomicBool::new(false);
        let start = Instant::now();
        let mut stopped = None;
        let mut done = tasks.len() - missing.len();
        let (sender, receiver) = mpsc::channel::<(usize, Outcome, Spent)>();
        std::thread::scope(|scope| {
            for _ in 0..threads {
                let (sender, next, stop, asked) = (sender.clone(), &next, &stop, &asked);
                scope.spawn(move || {
                    let mut tables = tables.clone();
                    while !stop.load(Ordering::Relaxed) && !asked.interrupt.load(Ordering::Relaxed)
                    {
                        let turn = next.fetch_add(1, Ordering::Relaxed);
                        let Some(&place) = missing.get(turn) else { break };
                        let Some(task) = tasks.get(place) else { break };
                        let tree = changed(base, varied, task);
                        let found = trial::run(&tree, task.sharper, &mut tables, asked);
                        let Some((outcome, spent)) = found else { break };
                        if sender.send((place, outcome, spent)).is_err() {
                            break;
                        }
                    }
                });
            }
            drop(sender);
            for (place, outcome, spent) in receiver {
                self.cost.preparing += spent.preparing;
                self.cost.integrating += spent.integrating;
                self.cost.runs += 1;
                if stopped.is_none()
                    && let Some(task) = tasks.get(place)
                    && let Err(reason) =
                        self.setting.keep.keep(first + place, &row(task, outcome.clone()))
                {
                    stop.store(true, Ordering::Relaxed);
                    stopped = Some(Stop::NotKept(reason));
                }
                if let Some(slot) = outcomes.get_mut(place) {
                    *slot = Some(outcome);
                }
                done += 1;
                self.setting.watch.at(first + done, self.kept, self.expected);
            }
        });
        self.cost.elapsed += start.elapsed();
        self.cost.threads = self.cost.threads.max(threads);
        stopped
    }
}

fn processors() -> usize {
    std::thread::available_parallelism().map_or(1, NonZeroUsize::get)
}

fn row(task: &Task<'_>, outcome: Outcome) -> Row {
    Row { label: task.label.clone(), values: task.values.clone(), sharper: task.sharper, outcome }
}

/// The tree of a run.
fn changed<'t>(base: &Node, varied: &[Varied], task: &Task<'t>) -> std::borrow::Cow<'t, Node> {
    if let Some(tree) = task.tree {
        return std::borrow::Cow::Borrowed(tree);
    }
    let mut tree = base.clone();
    for (varied, value) in varied.iter().zip(&task.values) {
        varied.set(&mut tree, *value);
    }
    std::borrow::Cow::Owned(tree)
}
