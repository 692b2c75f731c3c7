//! The uses, as functions: compute, check, seal, verify and the rest.
