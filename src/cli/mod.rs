//! Arguments, exit status, terminal.
