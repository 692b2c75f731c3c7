//! The folder: settings, people, a laboratory's own constants, pages, attachments, safe replacement of a file.
//!
//! A notebook is a folder with `ionfolio.yaml` and pages below it, in any folders; without that file a page stands alone, with defaults. This
//! module reads and writes files and knows nothing of what they mean: defaults, constants and records are read by whoever knows them.

mod attachment;
mod lock;
mod page_file;
mod pages;
mod people;
mod replace;
mod settings;

pub use attachment::{AttachmentError, attachment};
pub use lock::{Lock, LockError};
pub use page_file::{FileError, read_page};
pub use pages::{PageList, pages_below};
pub use people::{People, Person};
pub use replace::{ReplaceError, create, replace};
pub use settings::{Notebook, Policy, SETTINGS_FILE, SettingsError};
