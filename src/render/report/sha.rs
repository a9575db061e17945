//! The hash of a text (SHA-256, FIPS 180-4), by which a reader can tell the file again.

use sha2::{Digest, Sha256};
use std::fmt::Write as _;

/// SHA-256 of bytes in hexadecimal digits.
pub fn sha256(bytes: &[u8]) -> String {
    let mut text = String::new();
    for byte in Sha256::digest(bytes) {
        let _ = write!(text, "{byte:02x}");
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Example of FIPS 180-2, appendix B.1: the message "abc".
    #[test]
    fn the_example_of_the_standard() {
        assert_eq!(
            sha256(b"abc"),
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
        );
    }
}
