//! A comparison as one page that needs nothing beside it.

use super::{Side, figures};
use crate::render::chart::drawing::Drawing;
use crate::render::chart::number::words;
use crate::render::chart::run_data::run_data;
use crate::render::chart::run_input::RunChart;
use crate::render::report::figures::tidy;
use crate::render::report::html::{Figures, HtmlTable, escape, paragraph, rich, verdict};
use crate::render::report::{SCRIPT, samples, style};

/// The page; each drawing with the chart that it shows.
pub fn page(side: &Side<'_>, charts: &[(RunChart, Drawing)]) -> String {
    let title = format!("Comparison of {} runs", side.origins.len());
    let mut body = format!(
        "<header>\n<p class=\"document\">Drivetrain comparison</p>\n<h1>{title}</h1>\n{}</header>\n",
        runs(side)
    );
    let mut numbered = Figures::default();
    let sections = [
        ("What was asked", inputs(side)),
        ("What was found", answers(side)),
        ("The runs over time", over_time(charts, &mut numbered)),
    ];
    for (place, (name, html)) in sections.into_iter().enumerate() {
        let number = place + 1;
        body.push_str(&format!(
            "<section id=\"section-{number}\" aria-labelledby=\"heading-{number}\">\n\
             <h2 id=\"heading-{number}\"><span class=\"number\">{number}</span>{name}</h2>\n{html}</section>\n"
        ));
    }
    for note in side.notes {
        body.push_str(&paragraph(&format!("Note: {}", rich(note))));
    }
    format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n\
         <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n\
         <meta name=\"color-scheme\" content=\"light dark\">\n<title>{title}</title>\n<style>\n{}</style>\n</head>\n\
         <body>\n<main>\n{body}<p class=\"foot\">{} · a calculation, not a certificate</p>\n</main>\n<script>\n{SCRIPT}</script>\n</body>\n</html>\n",
        style::css(&title),
        concat!("lodeshaft ", env!("CARGO_PKG_VERSION")),
    )
}

fn runs(side: &Side<'_>) -> String {
    let mut table = HtmlTable::new("<<<<", &["Run", "From", "Set from outside", "Requirements"]);
    for origin in side.origins {
        let sets: Vec<String> = origin
            .sets
            .iter()
            .map(|(path, value)| format!("<code>{} = {}</code>", escape(path), escape(value)))
            .collect();
        let kept = if origin.kept { "results in " } else { "" };
        table.row([
            format!("<b>{}</b>", escape(&origin.name)),
            format!("{kept}<code>{}</code>", escape(&origin.from)),
            sets.join("<br>"),
            verdict(origin.met),
        ]);
    }
    table.html()
}

fn heads<'a>(side: &'a Side<'_>, first: &[&'a str]) -> Vec<&'a str> {
    let names = side.origins.iter().map(|origin| origin.name.as_str());
    first.iter().copied().chain(names).collect()
}

fn inputs(side: &Side<'_>) -> String {
    if side.comparison.inputs.is_empty() {
        return paragraph("The inputs are the same.");
    }
    let sides = format!("<{}", ">".repeat(side.origins.len()));
    let mut table = HtmlTable::new(&sides, &heads(side, &["Input"]));
    for input in &side.comparison.inputs {
        let values = input.values.iter().map(|value| {
            value.as_deref().map_or_else(|| "–".to_owned(), |value| escape(&tidy(value)))
        });
        // A long path may break behind a part, not within a word.
        let path = format!("<code>{}</code>", escape(&input.path).replace('.', ".<wbr>"));
        table.row(std::iter::once(path).chain(values));
    }
    table.html()
}

fn answers(side: &Side<'_>) -> String {
    let told = figures::told(side.comparison);
    let rest = figures::rest_sentence(side.comparison, "`compare.csv` beside this page");
    if told.is_empty() {
        return paragraph(&format!("No answer differs notably. {}", rich(&rest)));
    }
    let shown = side.shown();
    let sides = format!("<<{}", ">".repeat(side.origins.len()));
    let mut table = HtmlTable::new(&sides, &heads(side, &["Of", "Figure"]));
    let mut before = "";
    for figure in told {
        let of = if figure.of == before { String::new() } else { name(&figure.of) };
        before = &figure.of;
        let values = figure.values.iter().zip(figure.changes()).map(|(value, change)| {
            let value = match figures::value(figure, value.as_ref(), shown).as_str() {
                "met" => verdict(Some(true)),
                "NOT MET" => verdict(Some(false)),
                "not judged" => verdict(None),
                text => escape(&tidy(text)),
            };
            match figures::change(change) {
                none if none.is_empty() => value,
                change => {
                    let change = change.replace('-', "\u{2212}").replace(' ', "\u{a0}");
                    format!("{value}<br><small>{change}</small>")
                }
            }
        });
        let cells = [of, escape(figure.what)].into_iter().chain(values);
        table.row(cells);
    }
    let first = side.origins.first().map_or("", |origin| origin.name.as_str());
    format!(
        "{}{}{}",
        paragraph(&format!("Changes are against <b>{}</b>.", escape(first))),
        table.html(),
        paragraph(&rich(&rest))
    )
}

fn name(of: &str) -> String {
    if of.contains('.') { format!("<code>{}</code>", escape(of)) } else { escape(&words(of)) }
}

fn over_time(charts: &[(RunChart, Drawing)], numbered: &mut Figures) -> String {
    let html: String = charts
        .iter()
        .map(|(chart, drawing)| {
            let data = run_data(chart);
            let caption = format!(
                "{}. Colour tells the member a curve turns with, the line the run.",
                chart.title
            );
            numbered.with_data(drawing, &escape(&caption), &samples(chart), Some(&data))
        })
        .collect();
    if html.is_empty() { paragraph("No charts were drawn.") } else { html }
}
