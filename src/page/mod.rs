//! A Markdown page as bytes: finding fences and results, splicing.
//!
//! [`Page::read`] takes the bytes of a page and finds, by the rules of `CommonMark`,
//!
//! - its [`Block`]s: every fence whose first word is `equilibrium`, in lists and quotations too,
//! - its [`Region`]s: the results that stand between two comments at the start of a line,
//! - what is wrong with either, as diagnostics.
//!
//! [`Page::with`] puts replacements into the page and copies every other byte. What to put where is worked out by
//! [`Page::placing`] for a new or refreshed result, [`Page::marking`] for one that is superseded or withdrawn, and
//! [`Page::removing`]. The law that holds them together: removing the results that were put into a page gives back the
//! page byte for byte.
//!
//! This module never interprets what a fence or a result contains; it does not know what a label means.
//!
//! ```
//! use ionfolio::page::{Page, Written};
//!
//! let bytes = b"# Rinse\n\n```equilibrium\nlabel: rb-118\n```\nGood.\n".to_vec();
//! let page = Page::read(bytes.clone()).unwrap();
//! let block = &page.blocks()[0];
//! assert_eq!(block.content().text(), "label: rb-118\n");
//!
//! let written = Written::draft("rb-118", "**pH 7.20**\n").unwrap();
//! let with_result = page.with(vec![page.placing(block, &written).unwrap()]).unwrap();
//! let page = Page::read(with_result).unwrap();
//! assert_eq!(page.results()[0].answer().text(), "**pH 7.20**\n");
//! assert_eq!(page.without_results(), bytes);
//! ```

mod anatomy;
mod comment;
mod fence;
mod line_ending;
mod markdown;
mod pairing;
mod placing;
mod reading;
mod region;
mod signed_question;
mod splice;
mod written;

pub use comment::Mark;
pub use fence::Block;
pub use placing::PlacingError;
pub use reading::{PAGE_LIMIT, Page, PageError};
pub use region::{Fenced, Region};
pub use splice::{Edit, SpliceError};
pub use written::{Written, WrittenError};
