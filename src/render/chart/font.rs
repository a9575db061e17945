//! The face of the charts: measured and outlined here, so that both formats set the same widths.

use ab_glyph::{Font, FontRef, OutlinedGlyph, PxScale, point};
use std::sync::LazyLock;

/// Family name in files.
pub const FAMILY: &str = "Chart Sans";

/// Line height over em of the face (ascent 960, descent 280 of 1000): plotters names a size by the
/// line height.
pub const LINE: f64 = 1.24;

/// The regular weight for style sheets.
pub const REGULAR_WOFF2: &[u8] = include_bytes!("../fonts/ChartSans-Regular.woff2");
/// The bold weight for style sheets.
pub const BOLD_WOFF2: &[u8] = include_bytes!("../fonts/ChartSans-SemiBold.woff2");

/// Regular and bold; a face that cannot be read would leave charts without text, and a test holds
/// that both can.
static FACES: LazyLock<[Option<FontRef<'static>>; 2]> = LazyLock::new(|| {
    [
        FontRef::try_from_slice(include_bytes!("../fonts/ChartSans-Regular.ttf")).ok(),
        FontRef::try_from_slice(include_bytes!("../fonts/ChartSans-SemiBold.ttf")).ok(),
    ]
});

fn face(bold: bool) -> Option<&'static FontRef<'static>> {
    let [regular, heavy] = &*FACES;
    if bold { heavy.as_ref() } else { regular.as_ref() }
}

/// Advance of a letter over the em.
fn advance(face: &FontRef<'static>, letter: char) -> f64 {
    let units = face.units_per_em().unwrap_or(1000.0);
    f64::from(face.h_advance_unscaled(face.glyph_id(letter)) / units)
}

/// Width of a text of `size` CSS pixels, px; without kerning, as the files are written.
pub fn width(text: &str, size: f64, bold: bool) -> f64 {
    face(bold).map_or(0.0, |face| text.chars().map(|letter| size * advance(face, letter)).sum())
}

/// The outlines of a text whose em is `size` canvas units, from a point on the baseline on.
pub fn outlines(text: &str, size: f64, bold: bool, [x, y]: [f64; 2]) -> Vec<OutlinedGlyph> {
    let Some(face) = face(bold) else { return Vec::new() };
    let mut along = x;
    text.chars()
        .filter_map(|letter| {
            let place = point(along as f32, y as f32);
            along += size * advance(face, letter);
            let scale = PxScale::from((size * LINE) as f32);
            face.outline_glyph(face.glyph_id(letter).with_scale_and_position(scale, place))
        })
        .collect()
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
