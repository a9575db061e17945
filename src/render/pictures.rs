//! Drawings as files: how big, how fine, and what they were made of.

use super::chart::axes::Sheet;
use super::chart::drawing::Drawing;
use super::chart::plane_tables::Columns;
use super::chart::run;
use super::chart::run_input::RunChart;
use std::fs;
use std::io;
use std::path::Path;

/// A drawing with what it was made of.
#[derive(Clone, Debug)]
pub struct Picture {
    /// The drawing.
    pub drawing: Drawing,
    /// The curves of a chart over time.
    pub chart: Option<RunChart>,
    /// Figures behind any other chart: heads with units, then rows.
    pub table: Option<Columns>,
}

impl Picture {
    /// A chart over time on a sheet.
    pub fn over_time(chart: RunChart, sheet: Sheet) -> Self {
        let chart = RunChart { sheet, ..chart };
        Self { drawing: run::run_chart(&chart), chart: Some(chart), table: None }
    }
}

/// How charts are written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Print {
    /// Size in CSS pixels of which type and strokes are part.
    pub sheet: Sheet,
    /// Everything this much larger: 1 for a page, more for what is seen from afar.
    pub enlarged: f64,
    /// Pixels of a PNG for each CSS pixel.
    pub scale: f64,
}

impl Default for Print {
    fn default() -> Self {
        Self { sheet: Sheet::PAGE, enlarged: 1.0, scale: 2.0 }
    }
}

impl Print {
    /// The size by its name, `page` or `slide`, or as `WIDTHxHEIGHT` in CSS pixels.
    ///
    /// # Errors
    /// What is wrong with the words.
    pub fn sized(self, words: &str) -> Result<Self, String> {
        match words {
            "page" => Ok(Self { sheet: Sheet::PAGE, enlarged: 1.0, ..self }),
            "slide" => Ok(Self { sheet: Sheet::SLIDE, enlarged: 1.35, ..self }),
            _ => {
                let told = || {
                    format!(
                        "`{words}` is no size: page, slide, or for example 900x600 (480 to 2400 wide, 150 to 2400 high)"
                    )
                };
                let (width, height) = words.split_once('x').ok_or_else(told)?;
                let side = |text: &str, least: f64| {
                    let length = text.trim().parse::<f64>().ok()?;
                    (least..=2400.0).contains(&length).then_some(length)
                };
                match (side(width, 480.0), side(height, 150.0)) {
                    (Some(width), Some(height)) => {
                        let sheet = Sheet { width, height: Some(height) };
                        Ok(Self { sheet, enlarged: 1.0, ..self })
                    }
                    _ => Err(told()),
                }
            }
        }
    }
}

/// Writes drawings as SVG and PNG into a folder and returns the names of the files.
///
/// # Errors
/// The fault of the disk, or of drawing.
pub fn write(folder: &Path, drawings: &[&Drawing], print: Print) -> io::Result<Vec<String>> {
    let mut names = Vec::new();
    let scale = print.scale * print.enlarged;
    let pictures: Vec<_> = std::thread::scope(|scope| {
        let threads: Vec<_> =
            drawings.iter().map(|drawing| scope.spawn(move || drawing.to_png(scale))).collect();
        threads.into_iter().map(std::thread::ScopedJoinHandle::join).collect()
    });
    for (drawing, picture) in drawings.iter().zip(pictures) {
        let name = format!("{}.svg", drawing.id);
        fs::write(folder.join(&name), drawing.to_svg(print.enlarged))?;
        names.push(name);
        if let Ok(Ok(bytes)) = picture {
            let name = format!("{}.png", drawing.id);
            fs::write(folder.join(&name), bytes)?;
            names.push(name);
        }
    }
    Ok(names)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sizes_are_names_or_two_lengths() {
        let print = Print::default();
        assert_eq!(print.sized("page"), Ok(print));
        // A slide of 960 by 540 CSS pixels: 960/1.35 wide, enlarged.
        let slide = print.sized("slide").unwrap();
        assert!((slide.sheet.width * slide.enlarged - 960.0).abs() < 1e-9);
        let own = print.sized("900x600").unwrap().sheet;
        assert_eq!((own.width, own.height), (900.0, Some(600.0)));
        for wrong in ["", "poster", "900", "900x", "10x600", "900x1e9", "NaNxNaN"] {
            assert!(print.sized(wrong).is_err(), "{wrong}");
        }
    }
}
