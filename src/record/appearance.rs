//! Characters and markup that make a text look different from what was signed.

/// What makes a text look different.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, thiserror::Error)]
pub enum Disguise {
    /// An invisible, direction-turning or control character.
    #[error("U+{:04X} at byte {at}, which does not show as what it is", u32::from(*character))]
    Character {
        /// Byte at which it stands.
        at: usize,
        /// The character.
        character: char,
    },
    /// HTML, which a viewer may act upon instead of showing.
    #[error("HTML at byte {at}, which a viewer may act upon instead of showing it")]
    Markup {
        /// Byte at which it begins.
        at: usize,
    },
    /// The text is not UTF-8.
    #[error("bytes from {at} on that are not UTF-8")]
    NotText {
        /// The first byte that is not.
        at: usize,
    },
}

/// Elements that change the look of letters only.
const HARMLESS: [&str; 3] = ["sub", "sup", "br"];

/// Whether a character is invisible or turns the direction of reading, so that a reader does not see what is signed.
///
/// The default-ignorable code points and bidirectional controls of the Unicode Character Database (recalled), the line
/// and paragraph separators, and the blank braille pattern. No-break and thin spaces show as blanks and are not among
/// them.
#[must_use]
pub(super) fn is_hidden(character: char) -> bool {
    matches!(
        character,
        '\u{ad}'
            | '\u{34f}'
            | '\u{61c}'
            | '\u{115f}'..='\u{1160}'
            | '\u{17b4}'..='\u{17b5}'
            | '\u{180b}'..='\u{180f}'
            | '\u{200b}'..='\u{200f}'
            | '\u{2028}'..='\u{202e}'
            | '\u{2060}'..='\u{206f}'
            | '\u{2800}'
            | '\u{3164}'
            | '\u{fe00}'..='\u{fe0f}'
            | '\u{feff}'
            | '\u{ffa0}'
            | '\u{fff0}'..='\u{fffb}'
            | '\u{1bca0}'..='\u{1bca3}'
            | '\u{1d173}'..='\u{1d17a}'
            | '\u{e0000}'..='\u{e0fff}'
    )
}

/// Everything in a text of many lines that makes it look different from what it is.
///
/// Tab and line ends are as expected; a CR counts unless an LF follows. HTML counts, but for `<sub>`, `<sup>`, `<br>`
/// and their ends without attributes, and links between angle brackets.
#[must_use]
pub fn disguises(bytes: &[u8]) -> Vec<Disguise> {
    let text = match std::str::from_utf8(bytes) {
        Ok(text) => text,
        Err(error) => {
            return vec![Disguise::NotText {
                at: error.valid_up_to(),
            }];
        }
    };
    let mut found = Vec::new();
    for (at, character) in text.char_indices() {
        let plain = match character {
            '\n' | '\t' => true,
            '\r' => bytes.get(at + 1) == Some(&b'\n'),
            _ => !character.is_control() && !is_hidden(character),
        };
        if !plain {
            found.push(Disguise::Character { at, character });
        }
        if character == '<' && is_markup(text.get(at + 1..).unwrap_or_default()) {
            found.push(Disguise::Markup { at });
        }
    }
    found
}

/// Whether what follows `<` makes it HTML.
fn is_markup(rest: &str) -> bool {
    if !rest.starts_with(|c: char| c.is_ascii_alphabetic() || matches!(c, '/' | '!' | '?')) {
        return false;
    }
    if rest.starts_with("!--") {
        return true;
    }
    let Some((inside, _)) = rest.split_once('>') else {
        return false;
    };
    let name = inside
        .trim_start_matches('/')
        .trim_end_matches('/')
        .trim_end();
    let link = inside.contains("://") && !inside.contains(char::is_whitespace);
    !HARMLESS.contains(&name) && !link
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn laboratory_text_is_plain() {
        let text = "5 µL ± 0,1\u{a0}µL\tpH < 7 and 3 > 2, H<sub>2</sub>O<br/>\r\n<https://example.org/a>\n";
        assert_eq!(disguises(text.as_bytes()), []);
    }

    #[test]
    fn what_hides_is_found_at_its_byte() {
        let character = |at, character| Disguise::Character { at, character };
        assert_eq!(
            disguises("µ\u{202e}".as_bytes()),
            [character(2, '\u{202e}')]
        );
        assert_eq!(disguises(b"a\rb"), [character(1, '\r')]);
        assert_eq!(disguises(b"a<!-- b"), [Disguise::Markup { at: 1 }]);
        let spans = disguises(b"<span style='display:none'>9</span>");
        assert_eq!(
            spans,
            [Disguise::Markup { at: 0 }, Disguise::Markup { at: 28 }]
        );
        assert_eq!(disguises(b"ab\xff"), [Disguise::NotText { at: 2 }]);
    }
}
