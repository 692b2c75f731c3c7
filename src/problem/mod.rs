//! What is asked, in types.
