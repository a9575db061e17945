//! Writes drawings to look at, where the environment asks for it.

use lodeshaft::render::chart::drawing::Drawing;
use lodeshaft::render::chart::palette::{Theme, dark_rules};
use std::path::PathBuf;

/// Writes the drawing as SVG and PNG into the folder that `CHART_GALLERY` names, if it does.
pub fn show(drawing: &Drawing, name: &str) {
    let Some(folder) = std::env::var_os("CHART_GALLERY").map(PathBuf::from) else { return };
    std::fs::create_dir_all(&folder).unwrap();
    let write = |ending: &str, bytes: &[u8]| {
        std::fs::write(folder.join(format!("{name}{ending}")), bytes).unwrap();
    };
    let start = std::time::Instant::now();
    let svg = drawing.to_svg(1.0);
    let svg_time = start.elapsed();
    let start = std::time::Instant::now();
    let png = drawing.to_png(2.0).unwrap();
    println!(
        "{name}: svg {} kB in {svg_time:?}, png {} kB in {:?}",
        svg.len() / 1000,
        png.len() / 1000,
        start.elapsed()
    );
    write(".svg", svg.as_bytes());
    write(".png", &png);
    write("-grey.png", &drawing.to_png_in(2.0, Theme::Grey).unwrap());
    write("-dark.png", &drawing.to_png_in(2.0, Theme::Dark).unwrap());
    let page = format!(
        "<!doctype html><meta charset=utf-8><style>{}body{{background:#12181F}}{}</style><figure>{}</figure>",
        lodeshaft::render::chart::font::css(),
        dark_rules("figure"),
        drawing.to_inline_svg(name)
    );
    write("-dark.html", page.as_bytes());
}
