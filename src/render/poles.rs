//! The table of pole-pair choices.

use super::json::named;
use super::number::json;
use super::shown;
use super::table::{Table, wrap};
use super::text::WIDTH;
use super::train::six_ratios;
use crate::analysis::poles::{Held, PolePairs};
use crate::quantity::format_number;
use serde_json::Value;

/// A ratio asked for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wish {
    /// Its magnitude.
    pub ratio: f64,
    /// The member that is held.
    pub held: Held,
    /// Relative tolerance.
    pub tolerance: f64,
    /// Most pole pairs of the outer rotor.
    pub most: u32,
}

impl Wish {
    fn deviation(&self, choice: PolePairs) -> f64 {
        choice.ratio(self.held).abs() / self.ratio - 1.0
    }
}

/// What is to be said about a choice; empty for a good one.
pub fn remarks(choice: PolePairs) -> Vec<&'static str> {
    let mut list = Vec::new();
    if choice.has_whole_ratio() {
        list.push("whole ratio: strongest ripple");
    } else if choice.cogging_factor() > 2 {
        list.push("strong ripple");
    }
    if choice.symmetry() == 1 {
        list.push("pull to one side");
    }
    list
}

/// The choices as a table with its legend.
pub fn text(wish: &Wish, choices: &[PolePairs]) -> String {
    let (pair, held) = match wish.held {
        Held::Modulator => ("inner : outer", "modulator"),
        Held::Outer => ("inner : modulator", "outer rotor"),
        Held::Inner => ("outer : modulator", "inner rotor"),
    };
    let sense = if wish.held == Held::Modulator { "opposite senses" } else { "the same sense" };
    let mut text = wrap(
        "",
        &format!(
            "Pole pairs for {pair} = {} within {}, {held} held ({sense}), up to {} pole pairs",
            format_number(wish.ratio, 6),
            shown::percent(wish.tolerance),
            wish.most
        ),
        WIDTH,
    );
    text.push('\n');
    let mut table = Table::new(">>>>>>>>>>>>>>");
    table.row([
        "inner", "outer", "pieces", "off", "i:o", "o:i", "i:m", "m:i", "o:m", "m:o", "ripple i",
        "ripple o", "factor", "",
    ]);
    for choice in choices {
        let number = |value: f64| format_number(value, 4);
        let (io, im, om) =
            (choice.ratio(Held::Modulator), choice.ratio(Held::Outer), choice.ratio(Held::Inner));
        let [inner, outer] = choice.ripple_orders();
        table.row([
            &choice.inner.to_string(),
            &choice.outer.to_string(),
            &choice.pieces().to_string(),
            &signed_percent(wish.deviation(*choice)),
            &number(io),
            &number(1.0 / io),
            &number(im),
            &number(1.0 / im),
            &number(om),
            &number(1.0 / om),
            &inner.to_string(),
            &outer.to_string(),
            &choice.cogging_factor().to_string(),
            &remarks(*choice).iter().map(|text| mark(text)).collect::<String>(),
        ]);
    }
    text.push_str(&table.text(2));
    text.push('\n');
    for line in [
        "i:o is the speed of the inner over that of the outer rotor with the modulator held, i:m with \
         the outer, o:m with the inner rotor held; o:i, m:i and m:o are driven the other way.",
        "ripple i and o: order of the torque ripple per turn of that rotor against the modulator, \
         LCM(2 x pole pairs, pieces). factor: 2 x pole pairs x pieces / LCM, the same for both; 1 is best.",
        "R: whole ratio, the strongest ripple. r: factor above 2, strong ripple. U: no rotational \
         symmetry, so the magnetic pull does not balance and loads the bearings.",
    ] {
        text.push_str(&wrap("  ", line, WIDTH));
    }
    text
}

fn mark(remark: &str) -> &'static str {
    match remark {
        "whole ratio: strongest ripple" => "R",
        "strong ripple" => "r",
        _ => "U",
    }
}

fn signed_percent(share: f64) -> String {
    if share.abs() < 5e-6 {
        return "0".to_owned();
    }
    format!("{:+.2} %", 100.0 * share)
}

/// The choices for machines.
pub fn to_json(wish: &Wish, choices: &[PolePairs]) -> Value {
    let list = choices.iter().map(|choice| {
        let [inner, outer] = choice.ripple_orders();
        named([
            ("inner_pole_pairs", Value::from(choice.inner)),
            ("outer_pole_pairs", Value::from(choice.outer)),
            ("modulator_pieces", Value::from(choice.pieces())),
            ("ratio", json(choice.ratio(wish.held))),
            ("deviation", json(wish.deviation(*choice))),
            ("ratios", six_ratios(*choice)),
            ("ripple_order_inner", Value::from(inner)),
            ("ripple_order_outer", Value::from(outer)),
            ("cogging_factor", Value::from(choice.cogging_factor())),
            ("symmetry", Value::from(choice.symmetry())),
            ("remarks", Value::from(remarks(*choice))),
        ])
    });
    named([("choices", Value::Array(list.collect()))])
}
