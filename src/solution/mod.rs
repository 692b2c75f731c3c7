//! Problem to answer, with budget, shortcuts and assumptions.
