//! Problem to answer, with budget, shortcuts and assumptions.
//!
//! Turns what was stated into totals of components, has them solved, and works out what the task asks for. Knows no
//! Markdown, no text positions, no files; its only randomness is a named generator with a stated seed.

pub mod answer;
