//! The face of the charts: registered with the canvas, measured here.

use super::palette::Rgb;
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{FontDesc, FontFamily, FontStyle, TextStyle, register_font};
use plotters_backend::BackendColor;
use std::sync::Once;

/// Family name in files.
pub const FAMILY: &str = "Chart Sans";

/// Line height over em of the face (ascent 960, descent 280 of 1000): plotters names a size by the
/// line height.
pub const LINE: f64 = 1.24;

/// The regular weight for style sheets.
pub const REGULAR_WOFF2: &[u8] = include_bytes!("../fonts/ChartSans-Regular.woff2");
/// The bold weight for style sheets.
pub const BOLD_WOFF2: &[u8] = include_bytes!("../fonts/ChartSans-SemiBold.woff2");

const REGULAR: &[u8] = include_bytes!("../fonts/ChartSans-Regular.ttf");
const BOLD: &[u8] = include_bytes!("../fonts/ChartSans-SemiBold.ttf");

static REGISTERED: Once = Once::new();

/// Makes the face known to the canvas; later calls cost nothing.
pub fn register() {
    REGISTERED.call_once(|| {
        // A face that cannot be read leaves charts without text; a test holds that it can.
        let _ = register_font(FAMILY, FontStyle::Normal, REGULAR);
        let _ = register_font(FAMILY, FontStyle::Bold, BOLD);
    });
}

/// The face at `size` canvas units to the em.
fn face(size: f64, bold: bool) -> FontDesc<'static> {
    let style = if bold { FontStyle::Bold } else { FontStyle::Normal };
    FontDesc::new(FontFamily::Name(FAMILY), size * LINE, style)
}

/// What the canvas needs to set a text at `size` units to the em by its upper end.
pub fn canvas_style(size: f64, bold: bool, rgb: Rgb, side: HPos) -> TextStyle<'static> {
    register();
    TextStyle {
        font: face(size, bold),
        color: BackendColor { alpha: 1.0, rgb },
        pos: Pos::new(side, VPos::Top),
    }
}

/// Width of a text of `size` CSS pixels, px.
pub fn width(text: &str, size: f64, bold: bool) -> f64 {
    // The canvas measures in whole units, so it is asked at 1000 units to the em.
    const EM: f64 = 1000.0;
    register();
    face(EM, bold).box_size(text).map_or(0.0, |(units, _)| f64::from(units) * size / EM)
}

/// The text, cut and closed with an ellipsis where it is wider than `room` px.
pub fn fit(text: &str, size: f64, bold: bool, room: f64) -> String {
    if width(text, size, bold) <= room {
        return text.to_owned();
    }
    let mut kept: Vec<char> = text.chars().collect();
    while kept.pop().is_some() {
        let shorter: String =
            kept.iter().collect::<String>().trim_end().chars().chain(['…']).collect();
        if width(&shorter, size, bold) <= room || kept.is_empty() {
            return shorter;
        }
    }
    String::new()
}

/// Bytes in base64 (RFC 4648), for fonts and pictures within text files.
pub fn base64(bytes: &[u8]) -> String {
    const LETTERS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut text = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for group in bytes.chunks(3) {
        let mut word = 0_u32;
        for place in 0..3 {
            word = word << 8 | u32::from(group.get(place).copied().unwrap_or(0));
        }
        for place in 0..4 {
            if place <= group.len() {
                let index = (word >> (18 - 6 * place) & 63) as usize;
                text.push(LETTERS.get(index).map_or('=', |letter| char::from(*letter)));
            } else {
                text.push('=');
            }
        }
    }
    text
}

/// The two weights as `@font-face` rules with the font inside.
pub fn css() -> String {
    let mut rules = String::new();
    for (weight, bytes) in [("normal", REGULAR_WOFF2), ("bold", BOLD_WOFF2)] {
        rules.push_str(&format!(
            "@font-face{{font-family:\"{FAMILY}\";font-weight:{weight};src:url(data:font/woff2;base64,{}) format(\"woff2\")}}\n",
            base64(bytes)
        ));
    }
    rules
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_have_one_width() {
        let zero = width("0", 100.0, false);
        assert!(zero > 30.0);
        for digit in '1'..='9' {
            assert!((width(&digit.to_string(), 100.0, false) - zero).abs() < 0.2, "{digit}");
        }
        assert!((width("\u{2212}", 100.0, false) - zero).abs() < 0.2);
    }

    #[test]
    fn bold_is_a_face_of_its_own() {
        assert!(width("Speed", 100.0, true) > 1.02 * width("Speed", 100.0, false));
    }

    #[test]
    fn base64_agrees_with_the_vectors_of_rfc_4648() {
        for (plain, coded) in [
            ("", ""),
            ("f", "Zg=="),
            ("fo", "Zm8="),
            ("foo", "Zm9v"),
            ("foob", "Zm9vYg=="),
            ("fooba", "Zm9vYmE="),
            ("foobar", "Zm9vYmFy"),
        ] {
            assert_eq!(base64(plain.as_bytes()), coded);
        }
    }

    #[test]
    fn long_text_is_cut_with_an_ellipsis() {
        let cut = fit("a very long name of a shaft", 11.0, false, 60.0);
        assert!(cut.ends_with('…') && width(&cut, 11.0, false) <= 60.0);
        assert_eq!(fit("short", 11.0, false, 60.0), "short");
    }
}
