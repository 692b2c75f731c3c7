//! The law of the page: what was put in and taken out again leaves every byte as it was.
#![expect(clippy::unwrap_used, reason = "a test may stop where it cannot go on")]

use ionfolio::page::{Mark, Page, Region, Written};
use proptest::prelude::*;

/// Stretches of Markdown that pages are put together from, each a whole number of lines.
const STRETCHES: &[&str] = &[
    "# Rinse\n",
    "text directly after\n",
    "\n",
    "\n\n",
    " \t \n",
    "```equilibrium\nlabel: a\n```\n",
    "~~~~ equilibrium  x\nlabel: µ\n~~~\n~~~~~\n",
    "  ```equilibrium\n  label: a\n  ```   \n",
    "> ```equilibrium\n> label: a\n>\n> ```\n",
    "> ```equilibrium\n> label: a\n> ```\nlazy?\n",
    "- item\n\n  ```equilibrium\n  label: a\n\n  ```\n  more\n",
    "1. > ```equilibrium\n   > a: b\n   > ```\n2. next\n",
    "* ```equilibrium\n  a\n  ```\n* ```equilibrium\n  b\n  ```\n",
    "- ```equilibrium\n  never closed\n",
    "```text\n<!-- ionfolio result shown -->\n<!-- ionfolio end shown -->\n```\n",
    "<!-- a remark\n```equilibrium\nno: block\n```\n-->\n",
    "<div>\n<b>x</b>\n</div>\n",
    "    indented\n",
    "| a | b |\n| - | - |\n| 1 | 2 |\n",
    "Title\n===\n",
    "***\n",
    "[x]: y\n",
    "trailing blanks   \n",
    "- a\n- b\n",
];

const ANSWERS: &[&str] = &[
    "**pH 7.20**\n",
    "x\n\n| a | b |\n| - | - |\n| 1 | 2 |\n",
    "- a list\n- to the end\n",
    "> quoted\n",
    "text\n\n```constants\n- substance: µ\n```\n",
    "x\n\n\n",
];

const QUESTIONS: &[&str] = &[
    "",
    "label: a\n\n  b: c\n",
    "```\n````signed-question a\n",
    "<!-- ionfolio end b-0 -->\n",
];

/// A page of random stretches with one of the line endings, or both, with or without byte order mark and last newline.
fn pages() -> impl Strategy<Value = String> {
    let stretch = (prop::sample::select(STRETCHES), 0_u8..3);
    (
        prop::collection::vec(stretch, 0..12),
        any::<bool>(),
        any::<bool>(),
        0_u8..3,
    )
        .prop_map(|(stretches, mark, newline, style)| {
            let mut page = String::from(if mark { "\u{feff}" } else { "" });
            for (stretch, own_style) in stretches {
                let crlf = if style == 2 {
                    own_style == 0
                } else {
                    style == 1
                };
                page.push_str(&if crlf {
                    stretch.replace('\n', "\r\n")
                } else {
                    stretch.to_owned()
                });
            }
            if !newline && page.ends_with('\n') {
                page.pop();
                page.truncate(page.trim_end_matches('\r').len());
            }
            page
        })
}

fn read(bytes: Vec<u8>) -> Page {
    Page::read(bytes).unwrap()
}

/// What the closed blocks hold; one that the end of the page ends holds a line more when something follows it.
fn contents(page: &Page) -> Vec<String> {
    let closed = page.blocks().iter().filter(|block| block.is_closed());
    closed
        .map(|block| block.content().text().to_owned())
        .collect()
}

fn with_results(page: &Page, written: &dyn Fn(usize) -> Option<Written>) -> Vec<u8> {
    let closed = page
        .blocks()
        .iter()
        .enumerate()
        .filter(|(_, block)| block.is_closed());
    let edits =
        closed.filter_map(|(index, block)| Some(page.placing(block, &written(index)?).unwrap()));
    page.with(edits.collect()).unwrap()
}

fn text(region: &Region) -> (String, String) {
    (region.label().to_owned(), region.answer().text().to_owned())
}

const LETTERS: &[u8] = b"`~>-* \t\r\n\r\nequilibrium<!-- ionfolio result a -->\0";

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn taking_the_results_out_gives_back_every_byte(
        page in pages(),
        choices in prop::collection::vec((any::<bool>(), 0..ANSWERS.len()), 16),
    ) {
        let before = read(page.clone().into_bytes());
        prop_assert_eq!(before.results().len(), 0);
        let written = |round: usize| {
            let choices = &choices;
            move |index: usize| {
                let (chosen, answer) = choices[index % choices.len()];
                let answer = ANSWERS[(answer + round) % ANSWERS.len()];
                (chosen || round > 0).then(|| Written::draft(&format!("b-{index}"), answer).unwrap())
            }
        };
        let mut bytes = page.clone().into_bytes();
        for round in 0..3 {
            let current = read(bytes);
            bytes = with_results(&current, &written(round));
            let after = read(bytes.clone());
            prop_assert_eq!(contents(&after), contents(&before));
            prop_assert_eq!(after.without_results(), page.as_bytes());
            prop_assert_eq!(with_results(&after, &written(round)), bytes.clone());
            let closed = before.blocks().iter().enumerate().filter(|(_, block)| block.is_closed());
            let mut expected: Vec<_> = closed
                .filter_map(|(index, _)| written(round)(index))
                .map(|one| (one.label().to_owned(), one.answer().to_owned()))
                .collect();
            let mut found: Vec<_> = after.results().iter().map(text).collect();
            expected.sort();
            found.sort();
            prop_assert_eq!(found, expected);
        }
    }

    #[test]
    fn a_marked_result_goes_with_its_notice(
        page in pages(),
        twice in any::<bool>(),
        question in prop::sample::select(QUESTIONS),
    ) {
        let before = read(page.clone().into_bytes());
        let all = |index: usize| Written::draft(&format!("b-{index}"), "x\n").ok();
        let mut current = read(with_results(&before, &all));
        for mark in [Mark::Superseded, if twice { Mark::Superseded } else { Mark::Withdrawn }] {
            let edits = current.results().iter().map(|region| current.marking(region, mark, "by `c`", question).unwrap());
            current = read(current.with(edits.collect()).unwrap());
            prop_assert!(current.results().iter().all(|region| region.mark() == Some(mark)));
            let kept = |region: &Region| region.question().map(|fence| fence.content.text().to_owned());
            prop_assert!(current.results().iter().all(|region| kept(region).as_deref() == Some(question)));
            prop_assert_eq!(contents(&current), contents(&before));
            prop_assert_eq!(current.without_results(), page.as_bytes());
        }
        let again = |index: usize| Written::draft(&format!("b-{index}"), "y\n").ok();
        let renewed = read(with_results(&current, &again));
        prop_assert_eq!(renewed.results().len(), 2 * current.results().len());
        prop_assert_eq!(renewed.without_results(), page.as_bytes());
    }

    #[test]
    fn no_bytes_break_the_reader_and_every_place_lies_in_the_page(
        bytes in prop::collection::vec(prop::sample::select(LETTERS), 0..80),
        parts in prop::collection::vec(prop::sample::select(&[
            "<!-- ionfolio result a -->\n", "<!-- ionfolio end a -->\n", "<!-- ionfolio result b superseded -->\r\n",
            "```record\n", "```\n", "```act\n", "\n", "```equilibrium\n", "> ", "- ", "\r", "x\n", "<!--\n", "-->\n",
        ][..]), 0..20),
    ) {
        for page in [String::from_utf8(bytes).unwrap(), parts.concat()] {
            let read = read(page.clone().into_bytes());
            let spans = read.diagnostics().iter().flat_map(|found| found.labels().iter().map(|label| label.span));
            let spans = spans.chain(read.blocks().iter().flat_map(|block| [block.span(), block.content().span()]));
            let spans = spans.chain(read.results().iter().flat_map(|region| [region.span(), region.answer().span()]));
            for span in spans {
                prop_assert!(span.of(&page).is_some(), "{:?}", span);
            }
            read.without_results();
        }
    }
}
