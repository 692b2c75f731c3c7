//! The `ionfolio` program.

fn main() {}
