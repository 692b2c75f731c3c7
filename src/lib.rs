//! `ionfolio` computes, documents, signs and verifies solution equilibria in a laboratory's notebook pages.
//!
//! Data flows one way:
//!
//! ```text
//! page ──fence──► block ──Problem──► solution ──Answer──► report ──bytes──► record
//!  ▲               │                   │                                     │
//!  │           yaml, substance      equilibrium                              │
//!  └───────────────────────── splice, wired by procedure ◄───────────────────┘
//! ```
//!
//! Invariants:
//!
//! - `equilibrium` allocates nothing in its inner loop, reads no clock, file or environment, and fails only
//!   by a small closed enum.
//! - `record` never sees a pH: it signs named byte strings.
//! - `page` never interprets what a fence contains.
//! - Nothing below `cli` prints. Nothing below `procedure` reads a clock, a random source, an environment
//!   variable or a key.
//! - Text positions stop at `block`; above it an input has an `InputId`, and the source map turns it back
//!   into a span.

pub mod block;
pub mod cli;
pub mod equilibrium;
pub mod notebook;
pub mod page;
pub mod problem;
pub mod procedure;
pub mod quantity;
pub mod record;
pub mod report;
pub mod solution;
pub mod substance;
pub mod text;
pub mod yaml;
