//! What a person wrote, made harmless in Markdown and HTML, and the guard over a whole answer.

/// The text as it can stand inside a line of Markdown, a table cell included, and mean only itself.
///
/// Line breaks become spaces; other control characters and those that reorder or hide text are shown by their code
/// points. What could open a list, heading or quotation is escaped where it begins the text.
pub(super) fn markdown(text: &str) -> String {
    let line = single_line(text);
    let mut escaped = String::with_capacity(line.len());
    let mut characters = line.chars().peekable();
    while let Some(c) = characters.next() {
        let next = characters.peek().copied().unwrap_or(' ');
        match c {
            '\\' | '`' | '*' | '_' | '[' | ']' | '|' | '~' | '$' => {
                escaped.push('\\');
                escaped.push(c);
            }
            '<' if next.is_ascii_alphabetic() || matches!(next, '/' | '!' | '?') => {
                escaped.push_str("&lt;");
            }
            '&' if next.is_ascii_alphabetic() || next == '#' => escaped.push_str("&amp;"),
            _ => escaped.push(c),
        }
    }
    guard_start(&escaped)
}

/// The text in one line, with hidden characters shown; for the record's `result:` line.
pub(super) fn single_line(text: &str) -> String {
    let mut line = String::with_capacity(text.len());
    for c in text.trim().chars() {
        match c {
            '\n' | '\r' | '\t' | '\u{2028}' | '\u{2029}' | '\u{85}' => line.push(' '),
            c if c.is_control() || hides(c) => {
                line.push_str("(U+");
                line.push_str(&code_point(c));
                line.push(')');
            }
            c => line.push(c),
        }
    }
    line.trim().to_owned()
}

/// The code point of a character, as Unicode writes it: `202E`.
fn code_point(c: char) -> String {
    format!("{:04X}", u32::from(c))
}

/// Text and attribute values of XML.
pub(super) fn xml(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for c in single_line(text).chars() {
        match c {
            '&' => escaped.push_str("&amp;"),
            '<' => escaped.push_str("&lt;"),
            '>' => escaped.push_str("&gt;"),
            '"' => escaped.push_str("&quot;"),
            '\'' => escaped.push_str("&#39;"),
            '\u{fffe}' | '\u{ffff}' => {}
            c => escaped.push(c),
        }
    }
    escaped
}

/// The first line of an answer that would be taken for part of a record, or for a question, as its number from 1.
///
/// No line may open a fence whose first word is `record`, `act` or `equilibrium`, nor hold a comment of the program; this
/// holds for whatever a replaced template does.
pub(super) fn reserved_line(answer: &str) -> Option<usize> {
    answer
        .lines()
        .position(|line| opens_reserved_fence(line) || holds_comment(line))
        .map(|index| index + 1)
}

/// Trailing blanks off, blank lines single, one line feed at the end; what stands in the last fence keeps its bytes.
pub(super) fn tidied(rendered: &str) -> String {
    let mut tidy = String::with_capacity(rendered.len());
    let mut fenced = false;
    let mut blank = true;
    for line in rendered.lines() {
        let line = if fenced { line } else { line.trim_end() };
        if line.starts_with("```") {
            fenced = !fenced;
        }
        if !fenced && line.is_empty() {
            if !blank {
                tidy.push('\n');
            }
            blank = true;
            continue;
        }
        blank = false;
        tidy.push_str(line);
        tidy.push('\n');
    }
    let end = tidy.trim_end().len();
    tidy.truncate(end);
    tidy.push('\n');
    tidy
}

fn opens_reserved_fence(line: &str) -> bool {
    let bare = line.trim_start_matches([' ', '\t', '>']);
    let word = bare
        .strip_prefix("```")
        .map(|rest| rest.trim_start_matches('`'))
        .or_else(|| {
            bare.strip_prefix("~~~")
                .map(|rest| rest.trim_start_matches('~'))
        })
        .and_then(|info| info.split_whitespace().next());
    word.is_some_and(|word| {
        ["record", "act", "equilibrium"]
            .iter()
            .any(|reserved| word.eq_ignore_ascii_case(reserved))
    })
}

fn holds_comment(line: &str) -> bool {
    line.match_indices("<!--").any(|(at, opening)| {
        line.get(at + opening.len()..).is_some_and(|rest| {
            rest.trim_start()
                .get(.."ionfolio".len())
                .is_some_and(|word| word.eq_ignore_ascii_case("ionfolio"))
        })
    })
}

/// Characters that reorder, join or hide text.
fn hides(c: char) -> bool {
    matches!(
        c,
        '\u{200b}'..='\u{200f}'
            | '\u{202a}'..='\u{202e}'
            | '\u{2060}'..='\u{206f}'
            | '\u{feff}'
            | '\u{61c}'
            | '\u{ad}'
            | '\u{fff9}'..='\u{fffb}'
            | '\u{e0000}'..='\u{e007f}'
    )
}

/// Escapes what opens a list, heading, quotation or setext underline at the start of a line.
fn guard_start(text: &str) -> String {
    let digits = text.chars().take_while(char::is_ascii_digit).count();
    let after = text.chars().nth(digits);
    if (1..=9).contains(&digits) && matches!(after, Some('.' | ')')) {
        let ends = text.chars().nth(digits + 1).is_none_or(|c| c == ' ');
        if ends {
            let number: String = text.chars().take(digits).collect();
            let rest: String = text.chars().skip(digits).collect();
            return format!("{number}\\{rest}");
        }
    }
    match text.chars().next() {
        Some('-' | '+' | '#' | '>' | '=' | ':') => format!("\\{text}"),
        _ => text.to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hostile_strings_mean_only_themselves() {
        for (written, escaped) in [
            ("lot K-2291", "lot K-2291"),
            ("a|b", "a\\|b"),
            (
                "x\n```record\nionfolio record 1",
                "x \\`\\`\\`record ionfolio record 1",
            ),
            ("<!-- ionfolio end a -->", "&lt;!-- ionfolio end a -->"),
            ("<script>", "&lt;script>"),
            ("pH < 7", "pH < 7"),
            ("&lt;b>", "&amp;lt;b>"),
            ("[x](javascript:y)", "\\[x\\](javascript:y)"),
            ("# heading", "\\# heading"),
            ("1. item", "1\\. item"),
            ("2.20 is kept", "2.20 is kept"),
            ("ab\u{202e}cd", "ab(U+202E)cd"),
            ("bell\u{7}", "bell(U+0007)"),
        ] {
            assert_eq!(markdown(written), escaped);
        }
    }

    #[test]
    fn reserved_lines_are_found_wherever_they_hide() {
        for line in [
            "```record",
            "  ````act x",
            "~~~ Record",
            "> ```act",
            "```equilibrium",
            "text <!-- ionfolio result a -->",
            "<!--ionfolio end a",
        ] {
            assert_eq!(reserved_line(&format!("fine\n{line}\n")), Some(2), "{line}");
        }
        assert_eq!(
            reserved_line("the record\n```constants\n```\n<!-- a -->\n"),
            None
        );
    }

    #[test]
    fn a_tidied_page_has_no_trailing_blanks() {
        let tidy = tidied("\n\na  \n\n\n\nb\n```x\nkept  \n\n\n```\n\n");
        assert_eq!(tidy, "a\n\nb\n```x\nkept  \n\n\n```\n");
    }
}
