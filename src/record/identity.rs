//! Checked names: of a notebook, a page or attachment, a label, a signer, and single lines of text.

use std::fmt;

use super::lines::{ValueFault, check_single_line};

macro_rules! checked_text {
    ($(#[$doc:meta])* $name:ident, $check:expr) => {
        $(#[$doc])*
        #[derive(Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub struct $name(String);

        impl $name {
            /// Checks the text.
            ///
            /// # Errors
            ///
            /// [`ValueFault`] for a text that this name cannot have.
            pub fn new(text: &str) -> Result<Self, ValueFault> {
                check_single_line(text)?;
                $check(text)?;
                Ok(Self(text.to_owned()))
            }

            /// The text as written.
            pub fn as_str(&self) -> &str {
                &self.0
            }
        }

        impl fmt::Display for $name {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str(&self.0)
            }
        }

        impl fmt::Debug for $name {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                fmt::Debug::fmt(&self.0, f)
            }
        }
    };
}

checked_text!(
    /// The identity of a notebook: 64 or 128 random bits as 16 or 32 lower-case hexadecimal digits.
    NotebookId,
    notebook
);
checked_text!(
    /// The label of a block: lower-case letters, digits and hyphens, as the block language has it.
    Label,
    label
);
checked_text!(
    /// Who signs, as the roster names them: lower-case letters, digits, and `.`, `-`, `_`, `@` between them.
    ///
    /// Lower case, since the register is a file of this name and some file systems cannot tell the cases apart; no
    /// `*`, `?`, `!` or comma, since allowed-signers lines read those as patterns.
    SignerName,
    signer
);
checked_text!(
    /// A file of the notebook: relative, forward slashes, no step upwards, no `#` (which separates a label).
    NotebookPath,
    path
);
checked_text!(
    /// A single line of text without blanks at its ends and without characters that do not show.
    TextLine,
    |_: &str| Ok::<(), ValueFault>(())
);

impl NotebookId {
    /// The identity made of random bytes that the caller drew.
    #[must_use]
    pub fn of_random(bytes: [u8; 16]) -> Self {
        let digit = |nibble: u8| char::from_digit(u32::from(nibble), 16);
        let digits = bytes.iter().flat_map(|byte| [byte >> 4, byte & 15]);
        Self(digits.filter_map(digit).collect())
    }
}

fn notebook(text: &str) -> Result<(), ValueFault> {
    let hexadecimal = |byte: u8| byte.is_ascii_digit() || (b'a'..=b'f').contains(&byte);
    let fits = matches!(text.len(), 16 | 32) && text.bytes().all(hexadecimal);
    fits.then_some(()).ok_or(ValueFault::Notebook)
}

fn label(text: &str) -> Result<(), ValueFault> {
    let known = |byte: u8| byte.is_ascii_lowercase() || byte.is_ascii_digit() || byte == b'-';
    text.bytes()
        .all(known)
        .then_some(())
        .ok_or(ValueFault::Label)
}

fn signer(text: &str) -> Result<(), ValueFault> {
    let plain = |byte: u8| byte.is_ascii_lowercase() || byte.is_ascii_digit();
    let known = |byte: u8| plain(byte) || b".-_@".contains(&byte);
    let ends = text.bytes().next().is_some_and(plain) && text.bytes().last().is_some_and(plain);
    let fits = ends && text.len() <= 64 && text.bytes().all(known);
    fits.then_some(()).ok_or(ValueFault::Signer)
}

fn path(text: &str) -> Result<(), ValueFault> {
    let step = |step: &str| !matches!(step, "" | "." | "..");
    let fits = text.split('/').all(step) && !text.contains(['\\', '#', ':']);
    fits.then_some(()).ok_or(ValueFault::Path)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_the_trade_are_taken() {
        assert!(NotebookId::new("5f1c9d0e7a2b4c68").is_ok());
        assert!(Label::new("rb-118").is_ok());
        assert!(SignerName::new("bench.analyst").is_ok());
        assert!(NotebookPath::new("readings/run 17.csv").is_ok());
        assert_eq!(NotebookId::of_random([0xab; 16]).as_str(), "ab".repeat(16));
    }

    #[test]
    fn names_that_lead_elsewhere_are_refused() {
        for text in [
            "../a.md", "/a.md", "a//b", "a/./b", "c:/a", "a\\b", "a#b", "",
        ] {
            assert!(NotebookPath::new(text).is_err(), "{text}");
        }
        for text in ["*", "a,b", "Anna", ".a", "a.", "a b", "a!"] {
            assert!(SignerName::new(text).is_err(), "{text}");
        }
        assert!(NotebookId::new("5F1C9D0E7A2B4C68").is_err());
        assert!(Label::new("RB").is_err());
    }
}
