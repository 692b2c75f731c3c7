//! Numerics of chemical equilibrium: tableau in, certified answer out.
