//! The style sheet of the page: light, dark on screens only, print.

use crate::render::chart::{font, palette};

const RULES: &str = include_str!("style.css");

/// Colours of the page in the dark; charts have rules of their own.
const DARK: &str = ":root{--ink:#E6EBF0;--sub:#A3AFBC;--axis:#6F7C8A;--grid:#2A343F;--paper:#12181F;--wash:#19212A;--slip:#FF5F85;--met:#5AD6C0;--inner:#6A9FF5;color-scheme:dark}";

/// All rules, with the font inside; `running` is the head of each printed page.
pub fn css(running: &str) -> String {
    format!(
        "{}:root{{--running:\"{}\"}}\n{RULES}@media screen and (prefers-color-scheme:dark){{\n{DARK}\n{}}}\n",
        font::css(),
        css_text(running),
        palette::dark_rules("figure")
    )
}

/// A text within quotes of a style sheet: everything but plain letters is written by its number.
fn css_text(text: &str) -> String {
    text.chars()
        .map(|letter| {
            if letter.is_ascii_alphanumeric() || letter == ' ' {
                letter.to_string()
            } else if letter.is_control() {
                " ".to_owned()
            } else {
                format!("\\{:06X}", u32::from(letter))
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_breaks_out_of_a_quoted_text() {
        assert_eq!(css_text("a\"</style>"), "a\\000022\\00003C\\00002Fstyle\\00003E");
    }
}
