//! Answers made by hand for the tests of rendering.
