//! Laws that hold for every input.

mod equilibrium;
mod page_splice;
