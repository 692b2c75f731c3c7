//! Laws that hold for every input.

mod equilibrium;
