//! Colours by role: which side of the gear, and lost grip; nothing else is told by colour.

use std::fmt::Write as _;

/// A colour by what it stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Ink {
    /// The page.
    Paper,
    /// Load angle, limits, modes, titles.
    Ink,
    /// Labels and units.
    Sub,
    /// Axes and second curves.
    Axis,
    /// Grid lines.
    Grid,
    /// The inner side, strokes and text.
    Inner,
    /// The outer side, strokes and fills.
    Outer,
    /// The outer side, text.
    OuterText,
    /// The modulator side, strokes and fills.
    Modulator,
    /// The modulator side, text.
    ModulatorText,
    /// Slip, lost grip, not met; always with a shape or a word.
    Slip,
    /// Band past the law's peaks.
    PastPeak,
    /// Allowed range, pull-out band, caught region.
    Allowed,
    /// Met, but near the limit (maps).
    Near,
    /// A few slips (maps).
    FewSlips,
    /// Some slips (maps).
    SomeSlips,
    /// Many slips (maps).
    ManySlips,
    /// Bars of signals, operating ranges.
    Signal,
    /// Quiet ground of plates.
    Wash,
}

/// Red, green, blue.
pub type Rgb = (u8, u8, u8);

/// Light on paper or light on dark.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Theme {
    /// Ink on white, for paper and for files.
    #[default]
    Light,
    /// For screens that are dark.
    Dark,
    /// The light theme without colour, to prove that no meaning hangs on hue.
    Grey,
}

/// Role, its colour on white, its colour on dark. No two roles share a colour on white: style
/// sheets find a role by it.
const TABLE: [(Ink, u32, u32); 19] = [
    (Ink::Paper, 0xFFFFFF, 0x12181F),
    (Ink::Ink, 0x1C2733, 0xE6EBF0),
    (Ink::Sub, 0x55606E, 0xA3AFBC),
    (Ink::Axis, 0x8A94A0, 0x6F7C8A),
    (Ink::Grid, 0xE4E8ED, 0x2A343F),
    (Ink::Inner, 0x173F82, 0x6A9FF5),
    (Ink::Outer, 0xCC7A00, 0xF7C766),
    (Ink::OuterText, 0x9A5B00, 0xF7C767),
    (Ink::Modulator, 0x12897B, 0x5AD6C0),
    (Ink::ModulatorText, 0x0B6F63, 0x5AD6C1),
    (Ink::Slip, 0xB8143F, 0xFF5F85),
    (Ink::PastPeak, 0xF8E1E6, 0x40222C),
    (Ink::Allowed, 0xD8E6F2, 0x1D3147),
    (Ink::Near, 0xEAF1F8, 0x182838),
    (Ink::FewSlips, 0xFADBE2, 0x4A2531),
    (Ink::SomeSlips, 0xEBBAC7, 0x6B2C40),
    (Ink::ManySlips, 0xDC8AA0, 0x983A56),
    (Ink::Signal, 0xC9D0D8, 0x44515F),
    (Ink::Wash, 0xF5F7F9, 0x19212A),
];

impl Ink {
    fn pair(self) -> (u32, u32) {
        TABLE.iter().find(|row| row.0 == self).map_or((0, 0xFFFFFF), |row| (row.1, row.2))
    }

    /// The colour in a theme.
    pub fn rgb(self, theme: Theme) -> Rgb {
        let (light, dark) = self.pair();
        match theme {
            Theme::Light => split(light),
            Theme::Dark => split(dark),
            Theme::Grey => grey(split(light)),
        }
    }

    /// The colour on white as `#RRGGBB`, the handle for style sheets.
    pub fn hex(self) -> String {
        format!("#{:06X}", self.pair().0)
    }
}

fn split(colour: u32) -> Rgb {
    let [_, red, green, blue] = colour.to_be_bytes();
    (red, green, blue)
}

/// Luma of ITU-R BT.601, as grey printers and viewers use it.
fn grey((red, green, blue): Rgb) -> Rgb {
    let luma = 0.299 * f64::from(red) + 0.587 * f64::from(green) + 0.114 * f64::from(blue);
    let value = luma.round() as u8;
    (value, value, value)
}

/// Style rules that turn charts inside elements of `selector` dark; the caller wraps them in a
/// media query.
pub fn dark_rules(selector: &str) -> String {
    let mut rules = String::new();
    for (_, light, dark) in TABLE {
        for property in ["fill", "stroke"] {
            let _ =
                write!(rules, "{selector} [{property}=\"#{light:06X}\"]{{{property}:#{dark:06X}}}");
        }
        rules.push('\n');
    }
    rules
}

/// Which member of a magnetic gear a thing turns with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Side {
    /// With the inner member (couplings: with a).
    Inner,
    /// With the outer member (couplings: with b).
    Outer,
    /// With the modulator.
    Modulator,
    /// With none of them.
    Other,
}

impl Side {
    /// For strokes and fills.
    pub fn ink(self) -> Ink {
        match self {
            Self::Inner => Ink::Inner,
            Self::Outer => Ink::Outer,
            Self::Modulator => Ink::Modulator,
            Self::Other => Ink::Sub,
        }
    }

    /// For text, with more contrast.
    pub fn text(self) -> Ink {
        match self {
            Self::Outer => Ink::OuterText,
            Self::Modulator => Ink::ModulatorText,
            side => side.ink(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Contrast ratio of WCAG 2.1 (relative luminance with 0.05 flare).
    fn contrast(a: Rgb, b: Rgb) -> f64 {
        let luminance = |(red, green, blue): Rgb| {
            let part = |channel: u8| {
                let share = f64::from(channel) / 255.0;
                if share <= 0.040_45 { share / 12.92 } else { ((share + 0.055) / 1.055).powf(2.4) }
            };
            0.2126 * part(red) + 0.7152 * part(green) + 0.0722 * part(blue)
        };
        let (one, two) = (luminance(a), luminance(b));
        (one.max(two) + 0.05) / (one.min(two) + 0.05)
    }

    #[test]
    fn each_role_has_a_colour_of_its_own_on_white() {
        for (place, row) in TABLE.iter().enumerate() {
            assert!(TABLE.iter().skip(place + 1).all(|other| other.1 != row.1), "{row:?}");
        }
    }

    #[test]
    fn text_colours_reach_the_contrast_of_wcag_aa() {
        let text = [Ink::Ink, Ink::Sub, Ink::Inner, Ink::OuterText, Ink::ModulatorText, Ink::Slip];
        for theme in [Theme::Light, Theme::Dark] {
            for ink in text {
                let ratio = contrast(ink.rgb(theme), Ink::Paper.rgb(theme));
                assert!(ratio >= 4.5, "{ink:?} {theme:?} {ratio}");
            }
        }
    }

    #[test]
    fn graphics_reach_the_contrast_of_wcag_for_shapes() {
        for theme in [Theme::Light, Theme::Dark] {
            for ink in [Ink::Inner, Ink::Outer, Ink::Modulator, Ink::Slip] {
                assert!(contrast(ink.rgb(theme), Ink::Paper.rgb(theme)) >= 3.0, "{ink:?}");
            }
        }
    }

    #[test]
    fn dark_rules_name_every_role() {
        let rules = dark_rules("figure");
        assert!(rules.contains("figure [fill=\"#173F82\"]{fill:#6A9FF5}"));
        assert_eq!(rules.lines().count(), TABLE.len());
    }
}
