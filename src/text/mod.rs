//! Places in a text, and what is wrong there.
