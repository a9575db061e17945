//! The figures of several runs side by side.

use crate::results::{
    ChannelResult, ClutchResult, GearResult, MotorResult, RequirementResult, RunResult,
};

/// A figure of one run.
#[derive(Clone, Debug, PartialEq)]
pub enum Found {
    /// A number in SI.
    Number(f64),
    /// A count.
    Count(i64),
    /// A verdict or a state.
    Word(&'static str),
}

impl Found {
    /// The figure as a number; words have none.
    pub fn number(&self) -> Option<f64> {
        match self {
            Self::Number(value) => Some(*value),
            Self::Count(count) => Some(*count as f64),
            Self::Word(_) => None,
        }
    }
}

/// One figure in all runs.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// Where it stands in `summary.json`, dotted.
    pub path: String,
    /// Of what, for people: a requirement, a gear, a channel, a motor; empty for the run.
    pub of: String,
    /// What it is, for people.
    pub what: &'static str,
    /// The channel whose unit for people it has; empty for none.
    pub channel: String,
    /// SI unit, `1` for plain numbers, empty for words.
    pub unit: &'static str,
    /// What a change is measured against: the size of the channel, else of the figure.
    pub size: f64,
    /// The value of each run; `None`: it has none.
    pub values: Vec<Option<Found>>,
}

impl Figure {
    /// True when a run has another word, none where others have one, or a number that is off by
    /// more than a share of the figure's size.
    pub fn differs(&self, share: f64) -> bool {
        self.values.windows(2).any(|pair| match (&pair[0], &pair[1]) {
            (Some(one), Some(two)) => match (one.number(), two.number()) {
                (Some(a), Some(b)) => (a - b).abs() > share * self.size,
                _ => one != two,
            },
            (None, None) => false,
            _ => true,
        })
    }

    /// How much each run is off the first, as a share of the first; `None` where that says nothing.
    pub fn changes(&self) -> Vec<Option<f64>> {
        let first = self.values.first().and_then(Option::as_ref).and_then(Found::number);
        self.values
            .iter()
            .map(|value| {
                let (first, value) = (first?, value.as_ref()?.number()?);
                // Larger in magnitude is more, also where the sign is negative.
                let change = (value - first) / first;
                // A change of what is nothing but rounding is no change.
                (change.is_finite() && first.abs() > 1e-9 * self.size).then_some(change)
            })
            .collect()
    }
}

/// A figure before it is looked up in each run.
struct Question<'q> {
    path: String,
    of: String,
    what: &'static str,
    channel: String,
    unit: &'static str,
    size: f64,
    ask: &'q dyn Fn(&RunResult) -> Option<Found>,
}

/// Every figure of every run.
pub fn figures(results: &[&RunResult]) -> Vec<Figure> {
    let mut figures = Vec::new();
    let mut put = |question: Question<'_>| {
        let values: Vec<Option<Found>> = results.iter().map(|it| (question.ask)(it)).collect();
        if values.iter().all(Option::is_none) {
            return;
        }
        let largest =
            values.iter().flatten().filter_map(Found::number).fold(0.0_f64, |a, b| a.max(b.abs()));
        figures.push(Figure {
            path: question.path,
            of: question.of,
            what: question.what,
            channel: question.channel,
            unit: question.unit,
            size: question.size.max(largest),
            values,
        });
    };
    for name in names(results, |it| it.requirements.iter().map(|one| one.name.as_str()).collect()) {
        requirement(results, name, &mut put);
    }
    for name in names(results, |it| it.gears.iter().map(|one| one.name.as_str()).collect()) {
        gear(name, &mut put);
    }
    for name in names(results, |it| it.motors.iter().map(|one| one.name.as_str()).collect()) {
        motor(name, &mut put);
    }
    for name in names(results, |it| it.clutches.iter().map(|one| one.name.as_str()).collect()) {
        clutch(name, &mut put);
    }
    for name in names(results, |it| it.channels.iter().map(|one| one.name.as_str()).collect()) {
        channel(results, name, &mut put);
    }
    whole_run(&mut put);
    figures
}

/// Names of things in any run, in the order of the first that has them.
fn names<'r>(
    results: &[&'r RunResult],
    of: impl Fn(&'r RunResult) -> Vec<&'r str>,
) -> Vec<&'r str> {
    let mut names: Vec<&str> = Vec::new();
    for result in results {
        for name in of(result) {
            if !names.contains(&name) {
                names.push(name);
            }
        }
    }
    names
}

fn requirement(results: &[&RunResult], name: &str, put: &mut dyn FnMut(Question<'_>)) {
    let find = |it: &RunResult| -> Option<RequirementResult> {
        it.requirements.iter().find(|one| one.name == name).cloned()
    };
    let Some(known) = results.iter().find_map(|it| find(it)) else { return };
    put(Question {
        path: format!("requirements.{name}.met"),
        of: name.to_owned(),
        what: "verdict",
        channel: String::new(),
        unit: "",
        size: 0.0,
        ask: &|it| {
            Some(Found::Word(match find(it)?.met {
                Some(true) => "met",
                Some(false) => "not met",
                None => "not judged",
            }))
        },
    });
    put(Question {
        path: format!("requirements.{name}.value"),
        of: name.to_owned(),
        what: "found",
        channel: known.of.clone(),
        unit: known.unit,
        size: 0.0,
        ask: &|it| find(it)?.value.map(Found::Number),
    });
}

fn gear(name: &str, put: &mut dyn FnMut(Question<'_>)) {
    let mut of = |key: &str,
                  what,
                  unit,
                  channel: &str,
                  ask: &dyn Fn(&GearResult) -> Option<Found>| {
        put(Question {
            path: format!("gears.{name}.{key}"),
            of: name.to_owned(),
            what,
            channel: if channel.is_empty() { String::new() } else { format!("{name}.{channel}") },
            unit,
            size: if unit == "rad" || unit == "1" && channel == "pull_out_share" {
                1.0
            } else {
                0.0
            },
            ask: &|it| ask(it.gears.iter().find(|one| one.name == name)?),
        });
    };
    of("slips", "slips", "1", "", &|it| Some(Found::Count(i64::from(it.slips))));
    of("net_slips", "slips forward less backward", "1", "", &|it| {
        Some(Found::Count(i64::from(it.net_slips)))
    });
    of("state_at_end", "state at the end", "", "", &|it| Some(Found::Word(it.state_at_end.word())));
    of("resynchronised_at", "in step again", "s", "", &|it| {
        it.resynchronised_at.map(Found::Number)
    });
    of("peak_pull_out_share", "largest share of pull-out", "1", "pull_out_share", &|it| {
        Some(Found::Number(it.peak_pull_out_share))
    });
    of("peak_load_angle", "largest load angle", "rad", "load_angle", &|it| {
        Some(Found::Number(it.peak_load_angle))
    });
    of("final_load_angle", "load angle at the end", "rad", "load_angle", &|it| {
        Some(Found::Number(it.final_load_angle))
    });
    of("slipping_time", "time slipping", "s", "", &|it| Some(Found::Number(it.slipping_time)));
    of("time_past_peak", "time past the peak", "s", "", &|it| {
        Some(Found::Number(it.time_past_peak))
    });
}

fn motor(name: &str, put: &mut dyn FnMut(Question<'_>)) {
    let mut of = |key: &str, what, unit, ask: &dyn Fn(&MotorResult) -> Option<f64>| {
        put(Question {
            path: format!("motors.{name}.{key}"),
            of: name.to_owned(),
            what,
            channel: String::new(),
            unit,
            size: 0.0,
            ask: &|it| ask(it.motors.iter().find(|one| one.name == name)?).map(Found::Number),
        });
    };
    of("run_up_time", "95 % of synchronous speed", "s", &|it| it.run_up_time);
    of("rotor_heat", "rotor heat", "J", &|it| it.rotor_heat);
}

fn clutch(name: &str, put: &mut dyn FnMut(Question<'_>)) {
    let mut of = |key: &str, what, unit, ask: &dyn Fn(&ClutchResult) -> f64| {
        put(Question {
            path: format!("clutches.{name}.{key}"),
            of: name.to_owned(),
            what,
            channel: String::new(),
            unit,
            size: 0.0,
            ask: &|it| Some(Found::Number(ask(it.clutches.iter().find(|one| one.name == name)?))),
        });
    };
    of("slips", "times it began to slip", "1", &|it| f64::from(it.slips));
    of("heat", "heat", "J", &|it| it.heat);
}

fn channel(results: &[&RunResult], name: &str, put: &mut dyn FnMut(Question<'_>)) {
    let mut size = 0.0_f64;
    let mut unit = "1";
    for one in results.iter().flat_map(|it| &it.channels).filter(|one| one.name == name) {
        unit = one.unit;
        // A channel that never had a value has its extremes crossed.
        if one.max >= one.min {
            size = size.max(one.min.abs()).max(one.max.abs());
        }
    }
    let mut of = |key: &str, what, ask: &dyn Fn(&ChannelResult) -> f64| {
        put(Question {
            path: format!("channels.{name}.{key}"),
            of: name.to_owned(),
            what,
            channel: name.to_owned(),
            unit,
            size,
            ask: &|it| {
                let one = it.channels.iter().find(|one| one.name == name)?;
                let value = ask(one);
                (one.max >= one.min && value.is_finite()).then_some(Found::Number(value))
            },
        });
    };
    of("min", "lowest", &|it| it.min);
    of("max", "highest", &|it| it.max);
    of("final", "at the end", &|it| it.last);
}

fn whole_run(put: &mut dyn FnMut(Question<'_>)) {
    let mut of = |path: &str, what, unit, ask: &dyn Fn(&RunResult) -> Found| {
        put(Question {
            path: path.to_owned(),
            of: String::new(),
            what,
            channel: String::new(),
            unit,
            size: 0.0,
            ask: &|it| Some(ask(it)),
        });
    };
    of("completed", "completed", "", &|it| Found::Word(if it.completed { "yes" } else { "no" }));
    of("end_time", "end of the run", "s", &|it| Found::Number(it.end_time));
    of("energy.supplied", "energy supplied", "J", &|it| Found::Number(it.energy.supplied));
    of("energy.absorbed", "energy absorbed", "J", &|it| Found::Number(it.energy.absorbed));
    of("energy.lost", "energy lost", "J", &|it| Found::Number(it.energy.lost));
}

#[cfg(test)]
mod tests {
    use super::*;

    fn figure(size: f64, values: Vec<Option<Found>>) -> Figure {
        Figure {
            path: String::new(),
            of: String::new(),
            what: "",
            channel: String::new(),
            unit: "1",
            size,
            values,
        }
    }

    #[test]
    fn a_change_is_measured_against_the_first_run() {
        let number = |value| Some(Found::Number(value));
        let one = figure(4.0, vec![number(-4.0), number(-3.0), None]);
        assert_eq!(one.changes(), [Some(0.0), Some(-0.25), None]);
        assert!(one.differs(0.3), "the third has none");
        let near = figure(100.0, vec![number(1e-12), number(-2e-12)]);
        assert!(!near.differs(1e-9));
        assert_eq!(near.changes(), [None, None], "both are rounding");
    }

    #[test]
    fn words_differ_or_not() {
        let two = |a, b| figure(0.0, vec![Some(Found::Word(a)), Some(Found::Word(b))]);
        assert!(two("met", "not met").differs(1.0));
        assert!(!two("met", "met").differs(0.0));
    }
}
