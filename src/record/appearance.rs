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

/// Elements that open HTML at the beginning of a line, whatever follows (`CommonMark` 0.31, HTML blocks 1 and 6;
/// recalled).
const ELEMENTS: [&str; 66] = [
    "address",
    "article",
    "aside",
    "base",
    "basefont",
    "blockquote",
    "body",
    "caption",
    "center",
    "col",
    "colgroup",
    "dd",
    "details",
    "dialog",
    "dir",
    "div",
    "dl",
    "dt",
    "fieldset",
    "figcaption",
    "figure",
    "footer",
    "form",
    "frame",
    "frameset",
    "h1",
    "h2",
    "h3",
    "h4",
    "h5",
    "h6",
    "head",
    "header",
    "hr",
    "html",
    "iframe",
    "legend",
    "li",
    "link",
    "main",
    "menu",
    "menuitem",
    "nav",
    "noframes",
    "ol",
    "optgroup",
    "option",
    "p",
    "param",
    "pre",
    "script",
    "search",
    "section",
    "style",
    "summary",
    "table",
    "tbody",
    "td",
    "textarea",
    "tfoot",
    "th",
    "thead",
    "title",
    "tr",
    "track",
    "ul",
];

/// Names of character references whose characters do not show (HTML Living Standard; recalled).
const HIDDEN_NAMES: [(&str, char); 18] = [
    ("shy", '\u{ad}'),
    ("ZeroWidthSpace", '\u{200b}'),
    ("NegativeVeryThinSpace", '\u{200b}'),
    ("NegativeThinSpace", '\u{200b}'),
    ("NegativeMediumSpace", '\u{200b}'),
    ("NegativeThickSpace", '\u{200b}'),
    ("zwnj", '\u{200c}'),
    ("zwj", '\u{200d}'),
    ("lrm", '\u{200e}'),
    ("rlm", '\u{200f}'),
    ("NoBreak", '\u{2060}'),
    ("ApplyFunction", '\u{2061}'),
    ("af", '\u{2061}'),
    ("InvisibleTimes", '\u{2062}'),
    ("it", '\u{2062}'),
    ("InvisibleComma", '\u{2063}'),
    ("ic", '\u{2063}'),
    ("NewLine", '\n'),
];

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
/// and their ends without attributes, and links between angle brackets. A character reference counts if the character
/// that a viewer puts in its place would.
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
        let rest = text.get(at + character.len_utf8()..).unwrap_or_default();
        let plain = match character {
            '\n' | '\t' => true,
            '\r' => rest.starts_with('\n'),
            _ => !character.is_control() && !is_hidden(character),
        };
        if !plain {
            found.push(Disguise::Character { at, character });
        }
        let before = text.get(..at).unwrap_or_default();
        if character == '<' && (is_markup(rest) || begins_line(before) && opens_element(rest)) {
            found.push(Disguise::Markup { at });
        }
        if character == '&'
            && let Some(character) = referred(rest)
            && (character.is_control() || is_hidden(character))
        {
            found.push(Disguise::Character { at, character });
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
    !HARMLESS.contains(&name) && !is_link(inside)
}

/// Whether nothing stands before it on its line but blanks and the marks of lists and quotations.
fn begins_line(before: &str) -> bool {
    let line = before.rsplit('\n').next().unwrap_or_default();
    line.chars().all(|c| {
        c.is_whitespace() || c.is_ascii_digit() || matches!(c, '>' | '-' | '*' | '+' | '.' | ')')
    })
}

/// Whether a viewer takes what follows `<` as HTML up to the next empty line, though no `>` follows in the text: what
/// stands there would be read as attributes and not be shown.
fn opens_element(rest: &str) -> bool {
    let bare = rest.strip_prefix('/').unwrap_or(rest);
    let end = bare
        .find(|c: char| !c.is_ascii_alphanumeric())
        .unwrap_or(bare.len());
    let (name, after) = bare.split_at_checked(end).unwrap_or_default();
    let parted = after.is_empty() || after.starts_with(|c: char| c.is_whitespace() || c == '/');
    parted
        && ELEMENTS
            .iter()
            .any(|element| element.eq_ignore_ascii_case(name))
}

/// Whether what stands between angle brackets is a link: a scheme, `://` and no blank (`CommonMark` 0.31, autolinks).
fn is_link(inside: &str) -> bool {
    let Some((scheme, _)) = inside.split_once("://") else {
        return false;
    };
    let known = |c: char| c.is_ascii_alphanumeric() || matches!(c, '+' | '.' | '-');
    (2..=32).contains(&scheme.len())
        && scheme.chars().all(known)
        && !inside.contains(|c: char| c.is_whitespace() || c == '<')
}

/// The character that a viewer puts in the place of the reference that follows `&`, if it is one by number or one of
/// the names of hidden characters.
fn referred(rest: &str) -> Option<char> {
    let (name, _) = rest.split_once(';')?;
    if let Some((_, character)) = HIDDEN_NAMES.iter().find(|(known, _)| *known == name) {
        return Some(*character);
    }
    let digits = name.strip_prefix('#')?;
    let number = match digits.strip_prefix(['x', 'X']) {
        Some(hexadecimal) => u32::from_str_radix(hexadecimal, 16),
        None => digits.parse(),
    };
    char::from_u32(number.ok()?)
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

    #[test]
    fn an_element_that_is_left_open_swallows_what_follows() {
        for text in [
            "<div hidden\npH 7.20\n\nmore\n",
            "</DIV\nx\n",
            "<Style\n",
            "<p/",
            "- > <ul\n",
        ] {
            assert_eq!(
                disguises(text.as_bytes()),
                [Disguise::Markup {
                    at: text.find('<').unwrap()
                }],
                "{text}"
            );
        }
        assert_eq!(
            disguises(b"c(Pb) <LOD, Na <Li or x <y\n<LOD; p <0.05 &c; R&D\n"),
            [],
            "less-than signs of a laboratory"
        );
        let script = disguises(b"<a/href=javascript://x>");
        assert_eq!(script, [Disguise::Markup { at: 0 }]);
    }

    #[test]
    fn a_reference_to_a_hidden_character_hides_as_well() {
        for (text, character) in [
            ("&#x202e;", '\u{202e}'),
            ("&#8238;", '\u{202e}'),
            ("&#X200B;", '\u{200b}'),
            ("&rlm;", '\u{200f}'),
            ("&#13;", '\r'),
        ] {
            let found = disguises(text.as_bytes());
            assert_eq!(found, [Disguise::Character { at: 0, character }], "{text}");
        }
        let shown = "&#39; &lt; &amp;#x202e; &nbsp; &#8239; &rlm &#xd800;";
        assert_eq!(disguises(shown.as_bytes()), []);
    }
}
