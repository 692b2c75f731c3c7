//! A file that belongs to an answer and lies beside its page.

/// A plot, to be written beside the page and hashed into the record.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Attachment {
    /// Its name in the page's folder: ASCII letters, digits, hyphens, points and underscores only.
    pub file_name: String,
    /// Its bytes, an SVG document in UTF-8.
    pub bytes: Vec<u8>,
}

/// The name of a plot's file: page, label and kind, so that two pages of one folder never share a file.
pub(super) fn file_name(page: &str, label: &str, kind: &str) -> String {
    let file = page.rsplit(['/', '\\']).next().unwrap_or(page);
    let stem = file.strip_suffix(".md").unwrap_or(file);
    let plain: String = stem
        .chars()
        .map(|c| match c {
            c if c.is_ascii_alphanumeric() => c,
            '_' | '.' => c,
            _ => '-',
        })
        .collect();
    let stem = plain.trim_start_matches(['.', '-']);
    if stem.is_empty() {
        format!("{label}-{kind}.svg")
    } else {
        format!("{stem}-{label}-{kind}.svg")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_name_never_leaves_the_folder_or_needs_escaping() {
        for (page, name) in [
            ("rinse/2026-11-03.md", "2026-11-03-a-curve.svg"),
            ("a page (2).md", "a-page--2--a-curve.svg"),
            ("../../..", "a-curve.svg"),
            ("", "a-curve.svg"),
            ("µ.md", "a-curve.svg"),
        ] {
            assert_eq!(file_name(page, "a", "curve"), name);
        }
    }
}
