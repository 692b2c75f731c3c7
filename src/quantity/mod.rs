//! Numbers with units and uncertainty, as a laboratory writes them.
