//! Laws that hold for every input.

mod amounts;
mod entry_templates;
mod equilibrium;
mod page_splice;
