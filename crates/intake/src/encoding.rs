//! From bytes to text: UTF-8, UTF-16 and Windows-1252, with or without a byte-order mark.
//!
//! Without a mark, text whose every second byte is mostly zero is UTF-16; what is valid UTF-8 is UTF-8; the rest is
//! Windows-1252, which contains ISO 8859-1 (Latin-1). Source of the table and of the marks: WHATWG Encoding Standard.
//! Own code, since the standard library does all but a table of 32 characters.

use bandleaf_core::problem::Problem;
use serde::Serialize;

/// How the text was stored.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
pub enum Encoding {
    /// It came as text (pasted).
    #[serde(rename = "text")]
    Text,
    /// UTF-8.
    #[serde(rename = "utf-8")]
    Utf8,
    /// UTF-16, little-endian.
    #[serde(rename = "utf-16le")]
    Utf16Le,
    /// UTF-16, big-endian.
    #[serde(rename = "utf-16be")]
    Utf16Be,
    /// Windows-1252, which contains Latin-1.
    #[serde(rename = "windows-1252")]
    Windows1252,
}

/// Bytes read as text.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Decoded {
    pub text: String,
    pub encoding: Encoding,
    /// Some bytes made no character and stand as U+FFFD.
    pub damaged: bool,
}

/// Characters of the bytes 0x80 to 0x9F in Windows-1252; the five unassigned ones stay control characters.
const WINDOWS_1252_HIGH: [char; 32] = [
    '€', '\u{81}', '‚', 'ƒ', '„', '…', '†', '‡', 'ˆ', '‰', 'Š', '‹', 'Œ', '\u{8d}', 'Ž', '\u{8f}', '\u{90}', '‘', '’',
    '“', '”', '•', '–', '—', '˜', '™', 'š', '›', 'œ', '\u{9d}', 'ž', 'Ÿ',
];

/// Beginnings of files that are no text, with what they are and what to do instead.
const NO_TEXT: [(&[u8], &str); 6] = [
    (
        b"PK\x03\x04",
        "a packed file, perhaps a spreadsheet workbook: save the sheet as CSV, or copy and paste its cells",
    ),
    (
        b"\xD0\xCF\x11\xE0",
        "an office document, perhaps a spreadsheet workbook: save the sheet as CSV, or copy and paste its cells",
    ),
    (b"%PDF", "a PDF document: copy the table in it and paste it, or ask for the data as CSV"),
    (b"\x89PNG", "a picture: type the numbers, or ask for the data as CSV"),
    (b"\xFF\xD8\xFF", "a picture: type the numbers, or ask for the data as CSV"),
    (b"\x1F\x8B", "a packed file: unpack it first"),
];

/// Text from bytes, or the reason why they are none.
pub(crate) fn decode(bytes: &[u8]) -> Result<Decoded, Problem> {
    if let Some((_, what)) = NO_TEXT.iter().find(|(start, _)| bytes.starts_with(start)) {
        return Err(Problem::error("not_text", "", format!("This is not a text file but {what}.")));
    }
    if bytes.starts_with(b"\xFF\xFE\0\0") || bytes.starts_with(b"\0\0\xFE\xFF") {
        return Err(Problem::error("not_text", "", "This text is stored as UTF-32; save it again as UTF-8."));
    }
    let decoded = if let Some(rest) = bytes.strip_prefix(b"\xEF\xBB\xBF") {
        utf8_or_windows_1252(rest)
    } else if let Some(rest) = bytes.strip_prefix(b"\xFF\xFE") {
        utf16(rest, Encoding::Utf16Le)
    } else if let Some(rest) = bytes.strip_prefix(b"\xFE\xFF") {
        utf16(rest, Encoding::Utf16Be)
    } else if let Some(encoding) = unmarked_utf16(bytes) {
        utf16(bytes, encoding)
    } else {
        utf8_or_windows_1252(bytes)
    };
    if decoded.text.contains('\0') {
        return Err(Problem::error(
            "not_text",
            "",
            "This is not a text file: it holds bytes that no table of numbers has. Save the data as CSV (UTF-8).",
        ));
    }
    Ok(decoded)
}

fn utf8_or_windows_1252(bytes: &[u8]) -> Decoded {
    match std::str::from_utf8(bytes) {
        Ok(text) => Decoded { text: text.to_owned(), encoding: Encoding::Utf8, damaged: false },
        Err(_) => Decoded {
            text: bytes.iter().map(|byte| windows_1252(*byte)).collect(),
            encoding: Encoding::Windows1252,
            damaged: false,
        },
    }
}

fn windows_1252(byte: u8) -> char {
    match byte {
        0x80..=0x9F => WINDOWS_1252_HIGH.get(usize::from(byte - 0x80)).copied().unwrap_or('\u{FFFD}'),
        _ => char::from(byte),
    }
}

/// UTF-16 without a mark, recognised by the zero bytes of its digits and separators.
fn unmarked_utf16(bytes: &[u8]) -> Option<Encoding> {
    let sample = bytes.get(..bytes.len().min(4096))?;
    let zeros = |odd: usize| sample.iter().skip(odd).step_by(2).filter(|byte| **byte == 0).count();
    let (even_zeros, odd_zeros, pairs) = (zeros(0), zeros(1), sample.len() / 2);
    if pairs > 0 && odd_zeros * 4 >= pairs * 3 && even_zeros == 0 {
        Some(Encoding::Utf16Le)
    } else if pairs > 0 && even_zeros * 4 >= pairs * 3 && odd_zeros == 0 {
        Some(Encoding::Utf16Be)
    } else {
        None
    }
}

fn utf16(bytes: &[u8], encoding: Encoding) -> Decoded {
    let unit = |pair: &[u8; 2]| match encoding {
        Encoding::Utf16Be => u16::from_be_bytes(*pair),
        _ => u16::from_le_bytes(*pair),
    };
    let (pairs, rest) = bytes.as_chunks::<2>();
    let mut damaged = !rest.is_empty();
    let mut text: String = char::decode_utf16(pairs.iter().map(unit))
        .map(|character| {
            character.unwrap_or_else(|_| {
                damaged = true;
                char::REPLACEMENT_CHARACTER
            })
        })
        .collect();
    if !rest.is_empty() {
        text.push(char::REPLACEMENT_CHARACTER);
    }
    Decoded { text, encoding, damaged }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn windows_1252_agrees_with_the_encoding_standard() {
        // Outside check: encoding_rs, an implementation of the WHATWG Encoding Standard.
        for byte in 0..=255u8 {
            let bytes = [byte];
            let (expected, _) = encoding_rs::WINDOWS_1252.decode_without_bom_handling(&bytes);
            assert_eq!(expected, windows_1252(byte).to_string(), "byte {byte:#x}");
        }
    }

    #[test]
    fn utf16_agrees_with_the_encoding_standard() {
        // Every pair of 16-bit units around the surrogates, a lone last byte included.
        let units = [0x0041u16, 0x00B0, 0x2212, 0xD7FF, 0xD800, 0xDBFF, 0xDC00, 0xDFFF, 0xE000, 0xFFFD];
        for (first, second) in units.iter().flat_map(|first| units.map(|second| (*first, second))) {
            // A lead surrogate and a lone byte after it are one damaged character to that crate, two to ours.
            let tails = if (0xD800..0xDC00).contains(&second) { &[&[][..]][..] } else { &[&[][..], &[0x41][..]] };
            for tail in tails.iter().copied() {
                let little = [&first.to_le_bytes()[..], &second.to_le_bytes()[..], tail].concat();
                let (expected, _) = encoding_rs::UTF_16LE.decode_without_bom_handling(&little);
                assert_eq!(utf16(&little, Encoding::Utf16Le).text, expected);
                let big = [&first.to_be_bytes()[..], &second.to_be_bytes()[..], tail].concat();
                let (expected, _) = encoding_rs::UTF_16BE.decode_without_bom_handling(&big);
                assert_eq!(utf16(&big, Encoding::Utf16Be).text, expected);
            }
        }
    }

    #[test]
    fn each_encoding_is_recognised() {
        let text = "Füllstand / mm;Anzeige\n150,5;151\n";
        let little: Vec<u8> = text.encode_utf16().flat_map(u16::to_le_bytes).collect();
        let big: Vec<u8> = text.encode_utf16().flat_map(u16::to_be_bytes).collect();
        let latin: Vec<u8> = text.chars().map(|character| character as u8).collect();
        let cases: [(Vec<u8>, Encoding); 7] = [
            (text.as_bytes().to_vec(), Encoding::Utf8),
            ([b"\xEF\xBB\xBF", text.as_bytes()].concat(), Encoding::Utf8),
            (little.clone(), Encoding::Utf16Le),
            ([b"\xFF\xFE", &little[..]].concat(), Encoding::Utf16Le),
            (big.clone(), Encoding::Utf16Be),
            ([b"\xFE\xFF", &big[..]].concat(), Encoding::Utf16Be),
            (latin, Encoding::Windows1252),
        ];
        for (bytes, encoding) in cases {
            let decoded = decode(&bytes).expect("text");
            assert_eq!((decoded.text.as_str(), decoded.encoding), (text, encoding));
        }
    }

    #[test]
    fn what_is_no_text_is_refused() {
        for bytes in
            [&b"PK\x03\x04rest"[..], b"%PDF-1.7", b"\0\0\0\0\0\0", b"1,2\n\0\x01\x02", b"\xFF\xFE\0\0\x31\0\0\0"]
        {
            assert_eq!(decode(bytes).expect_err("no text").code, "not_text");
        }
    }
}
