//! Record and act lines, digest, signature, roster, chain, verification.
