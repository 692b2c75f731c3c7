//! Names of plots: a result that takes another's place has plots of its own, so that what was signed before keeps its files.

use crate::page::Page;
use crate::record::Statement;
use crate::report::Rendered;

/// Which result of its label one is, counted from 1: one more than those that were sealed and are superseded or withdrawn.
pub(super) fn generation(page: &Page, label: &str) -> usize {
    let marked = page.results().iter().filter(|region| {
        region.label() == label && region.mark().is_some() && region.record().is_some()
    });
    1 + marked.count()
}

/// Which result of its label a sealed one was, by the names of the files that it signed; at most `latest`.
pub(super) fn sealed_generation(
    rendered: &Rendered,
    statement: &Statement,
    latest: usize,
) -> usize {
    let signed = |name: &str| {
        let mut files = statement.attachments.iter();
        files.any(|file| file.name.as_str().rsplit('/').next() == Some(name))
    };
    let mut plots = rendered.attachments.iter();
    let Some(plot) = plots.next() else {
        return 1;
    };
    (1..=latest)
        .find(|generation| signed(&numbered_name(&plot.file_name, *generation)))
        .unwrap_or(1)
}

/// The same answer with the plots of the result of that number; the first keeps the plain names.
pub(super) fn numbered(mut rendered: Rendered, generation: usize) -> Rendered {
    for plot in &mut rendered.attachments {
        let name = numbered_name(&plot.file_name, generation);
        let (before, after) = (format!("({})", plot.file_name), format!("({name})"));
        rendered.markdown = rendered.markdown.replace(&before, &after);
        plot.file_name = name;
    }
    rendered
}

fn numbered_name(name: &str, generation: usize) -> String {
    match name.strip_suffix(".svg") {
        Some(stem) if generation > 1 => format!("{stem}-{generation}.svg"),
        _ => name.to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::Attachment;

    #[test]
    fn the_first_keeps_its_names_and_later_ones_have_their_own() {
        let first = Rendered {
            markdown: "![curve](a-curve.svg)\n".to_owned(),
            attachments: vec![Attachment {
                file_name: "a-curve.svg".to_owned(),
                bytes: Vec::new(),
            }],
            headline: String::new(),
        };
        assert_eq!(numbered(first.clone(), 1), first);
        let second = numbered(first, 2);
        assert_eq!(second.markdown, "![curve](a-curve-2.svg)\n");
        assert_eq!(second.attachments[0].file_name, "a-curve-2.svg");
    }
}
