//! Laws that hold for every input.

mod amounts;
mod arbitrary_solution;
mod entry_templates;
mod equilibrium;
mod high_precision;
mod page_splice;
