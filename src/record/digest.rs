//! SHA-256 digests: of lines, with CR LF read as LF, and of files as they stand.

use std::borrow::Cow;
use std::fmt;

use sha2::{Digest as _, Sha256};

use super::lines::ValueFault;

/// What every printed digest begins with.
const PREFIX: &str = "sha256:";

/// A SHA-256 digest (FIPS 180-4), printed as `sha256:` and 64 lower-case hexadecimal digits.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Digest([u8; 32]);

impl Digest {
    /// The digest of lines of text: each CR LF is read as LF, and nothing else is touched.
    ///
    /// Version control may change line endings without changing what was signed. A lone CR stays; text that is to
    /// be sealed may not hold one.
    #[must_use]
    pub fn of_lines(bytes: &[u8]) -> Self {
        Self::of_file(&with_line_feeds(bytes))
    }

    /// The digest of a file, byte for byte, as `sha256sum` prints it.
    #[must_use]
    pub fn of_file(bytes: &[u8]) -> Self {
        Self(Sha256::digest(bytes).into())
    }

    /// Whether this is the digest of the file, or of the same text file with the other line ending.
    ///
    /// An attachment is recorded as it stands, so that `sha256sum` alone can check it; a checkout that rewrote its
    /// line endings changed no reading. A file with a NUL byte is not text and must agree byte for byte.
    #[must_use]
    pub fn agrees_with_file(&self, bytes: &[u8]) -> bool {
        if *self == Self::of_file(bytes) {
            return true;
        }
        if bytes.contains(&0) {
            return false;
        }
        let with_lf = with_line_feeds(bytes);
        *self == Self::of_file(&with_lf) || *self == Self::of_file(&with_carriage_returns(&with_lf))
    }

    /// Reads the printed form.
    ///
    /// # Errors
    ///
    /// [`ValueFault::Digest`] for anything but `sha256:` and 64 lower-case hexadecimal digits.
    pub fn parse(text: &str) -> Result<Self, ValueFault> {
        let digits = text.strip_prefix(PREFIX).ok_or(ValueFault::Digest)?;
        if digits.len() != 64 {
            return Err(ValueFault::Digest);
        }
        let mut bytes = [0; 32];
        for (byte, pair) in bytes.iter_mut().zip(digits.as_bytes().chunks_exact(2)) {
            *byte = match pair {
                [high, low] => nibble(*high)? << 4 | nibble(*low)?,
                _ => return Err(ValueFault::Digest),
            };
        }
        Ok(Self(bytes))
    }
}

fn nibble(digit: u8) -> Result<u8, ValueFault> {
    match digit {
        b'0'..=b'9' => Ok(digit - b'0'),
        b'a'..=b'f' => Ok(digit - b'a' + 10),
        _ => Err(ValueFault::Digest),
    }
}

impl fmt::Display for Digest {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(PREFIX)?;
        self.0.iter().try_for_each(|byte| write!(f, "{byte:02x}"))
    }
}

impl fmt::Debug for Digest {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, f)
    }
}

/// The bytes with each CR LF read as LF.
pub(super) fn with_line_feeds(bytes: &[u8]) -> Cow<'_, [u8]> {
    if !bytes.windows(2).any(|pair| pair == b"\r\n") {
        return Cow::Borrowed(bytes);
    }
    let mut read = Vec::with_capacity(bytes.len());
    let mut rest = bytes.iter().peekable();
    while let Some(byte) = rest.next() {
        if *byte != b'\r' || rest.peek() != Some(&&b'\n') {
            read.push(*byte);
        }
    }
    Cow::Owned(read)
}

fn with_carriage_returns(bytes: &[u8]) -> Vec<u8> {
    let mut written = Vec::with_capacity(bytes.len());
    for byte in bytes {
        if *byte == b'\n' {
            written.push(b'\r');
        }
        written.push(*byte);
    }
    written
}

#[cfg(test)]
mod tests {
    use super::*;

    // FIPS 180-4 example "abc", as printed by sha256sum.
    const ABC: &str = "sha256:ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";

    #[test]
    fn abc_has_the_published_digest() {
        assert_eq!(Digest::of_file(b"abc").to_string(), ABC);
        assert_eq!(Digest::parse(ABC), Ok(Digest::of_file(b"abc")));
    }

    #[test]
    fn only_cr_lf_is_read_as_lf() {
        assert_eq!(Digest::of_lines(b"a\r\nb\r\n"), Digest::of_file(b"a\nb\n"));
        assert_eq!(
            Digest::of_lines(b"a\rb\r\r\n"),
            Digest::of_file(b"a\rb\r\n")
        );
        assert_ne!(Digest::of_lines(b"a \n"), Digest::of_lines(b"a\n"));
    }

    #[test]
    fn a_text_file_agrees_with_either_line_ending_and_a_binary_one_does_not() {
        let exported = Digest::of_file(b"x,y\r\n1,2\r\n");
        assert!(exported.agrees_with_file(b"x,y\n1,2\n"));
        assert!(Digest::of_file(b"x,y\n1,2\n").agrees_with_file(b"x,y\r\n1,2\r\n"));
        assert!(!exported.agrees_with_file(b"x,y\n1,3\n"));
        assert!(!Digest::of_file(b"\0\r\n").agrees_with_file(b"\0\n"));
    }

    #[test]
    fn other_spellings_of_a_digest_are_refused() {
        for text in ["", "sha256:", &ABC.to_uppercase(), "sha256:00", "md5:00"] {
            assert_eq!(Digest::parse(text), Err(ValueFault::Digest), "{text}");
        }
    }
}
