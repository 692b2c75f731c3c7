//! Laws that hold for every input.

mod amounts;
mod equilibrium;
mod page_splice;
