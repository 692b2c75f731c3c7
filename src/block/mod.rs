//! Text of a fence to a problem and its source map.
