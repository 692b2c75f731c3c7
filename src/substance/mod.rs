//! The constants library and its look-up.
