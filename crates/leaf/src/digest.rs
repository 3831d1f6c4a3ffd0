//! SHA-256 (FIPS 180-4), written as `sha256:` and 64 lower-case hexadecimal digits.

use sha2::{Digest, Sha256};

const PREFIX: &str = "sha256:";
const HEX: &[u8; 16] = b"0123456789abcdef";

/// The digest of bytes, as it stands in a seal.
pub fn sha256(bytes: &[u8]) -> String {
    written(Sha256::digest(bytes).as_slice())
}

/// The digest of texts one after the other.
pub(crate) fn sha256_of<'t>(texts: impl IntoIterator<Item = &'t str>) -> String {
    let mut hash = Sha256::new();
    for text in texts {
        hash.update(text);
    }
    written(hash.finalize().as_slice())
}

fn written(digest: &[u8]) -> String {
    let mut text = String::with_capacity(PREFIX.len() + 64);
    text.push_str(PREFIX);
    for byte in digest {
        text.push(char::from(HEX[usize::from(byte >> 4)]));
        text.push(char::from(HEX[usize::from(byte & 15)]));
    }
    text
}

/// What stands in the place of the file's own digest while that digest is computed.
pub(crate) fn blank() -> String {
    format!("{PREFIX}{}", "0".repeat(64))
}

/// A digest as a person may have copied it: with or without the prefix, in either case, with spaces around it.
/// `None` where it is no SHA-256.
pub(crate) fn from_person(text: &str) -> Option<String> {
    let text = text.trim().to_ascii_lowercase();
    let hex = text.strip_prefix(PREFIX).unwrap_or(&text).trim();
    let digits = hex.len() == 64 && hex.bytes().all(|byte| HEX.contains(&byte));
    digits.then(|| format!("{PREFIX}{hex}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn agrees_with_the_published_example() {
        // FIPS 180-4 example "abc", as published with the Secure Hash Standard.
        assert_eq!(sha256(b"abc"), "sha256:ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    }

    #[test]
    fn a_copied_digest_is_recognised() {
        let digest = sha256(b"abc");
        let bare = digest.trim_start_matches(PREFIX).to_uppercase();
        assert_eq!(from_person(&format!("  {bare} ")), Some(digest.clone()));
        assert_eq!(from_person(&digest), Some(digest));
        assert_eq!(from_person("sha256:12"), None);
        assert_eq!(from_person(&"g".repeat(64)), None);
        assert_eq!(from_person(&"é".repeat(32)), None);
    }
}
