//! The canonical form of a document, and its digest.

use sha2::{Digest, Sha256};

/// The canonical form of a well-formed JSON text: white space outside strings is removed; the
/// order of members and the text of numbers and strings are kept, since `4.80` is not `4.8`.
pub fn canonical(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut in_string = false;
    let mut escaped = false;
    let mut kept_from = 0;
    for (at, byte) in text.bytes().enumerate() {
        if in_string {
            if escaped {
                escaped = false;
            } else if byte == b'\\' {
                escaped = true;
            } else if byte == b'"' {
                in_string = false;
            }
        } else if byte == b'"' {
            in_string = true;
        } else if matches!(byte, b' ' | b'\t' | b'\n' | b'\r') {
            if kept_from < at {
                out.push_str(text.get(kept_from..at).unwrap_or_default());
            }
            kept_from = at + 1;
        }
    }
    out.push_str(text.get(kept_from..).unwrap_or_default());
    out
}

/// The SHA-256 (FIPS 180-4) of some bytes, as 64 lower-case hexadecimal digits.
pub fn sha256_hex(bytes: &[u8]) -> String {
    let digit = |nibble: u8| char::from(b"0123456789abcdef"[usize::from(nibble & 0xf)]);
    Sha256::digest(bytes).iter().flat_map(|&byte| [digit(byte >> 4), digit(byte)]).collect()
}
