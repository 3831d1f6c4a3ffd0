//! Canonical bytes: RFC 8785 (JSON Canonicalization Scheme). Only these bytes are ever hashed.
//!
//! Written here and held against the standard's examples and against the crate of that purpose, whose way of writing
//! (and whose tables for writing numbers) would take some 70 KB of the page.

use bandleaf_core::problem::Problem;
use serde::Serialize;
use serde_json::{Map, Value};

/// The canonical JSON text of anything: fields sorted, numbers as ECMAScript writes them (every number passes through
/// f64, −0 becomes 0), no spaces. Numbers that JSON cannot say are `null`.
pub fn canonical_json<T: Serialize>(value: &T) -> Result<String, Problem> {
    Ok(canonical_text(&value_of(value)?))
}

/// Anything as a JSON value.
pub(crate) fn value_of<T: Serialize>(value: &T) -> Result<Value, Problem> {
    serde_json::to_value(value).map_err(|error| {
        let sentence = format!("This cannot be written as JSON ({error}): please report it with the visit.");
        Problem::error("not_json", "", sentence)
    })
}

/// The canonical JSON text of a value.
pub fn canonical_text(value: &Value) -> String {
    let mut text = String::new();
    write(value, &mut text);
    text
}

fn write(value: &Value, text: &mut String) {
    match value {
        Value::Null => text.push_str("null"),
        Value::Bool(true) => text.push_str("true"),
        Value::Bool(false) => text.push_str("false"),
        Value::Number(number) => {
            // Every JSON number that this program holds is a finite f64, or a whole number that passes through one.
            text.push_str(&number_text(number.as_f64().unwrap_or_default()));
        }
        Value::String(string) => write_string(string, text),
        Value::Array(entries) => {
            text.push('[');
            for (index, entry) in entries.iter().enumerate() {
                if index > 0 {
                    text.push(',');
                }
                write(entry, text);
            }
            text.push(']');
        }
        Value::Object(fields) => write_object(fields, text),
    }
}

/// A number as ECMAScript writes it (ECMA-262, Number::toString, radix 10): the shortest digits that give the same f64,
/// with an exponent from 1e21 upwards and below 1e-6. −0 is `0`; what is no finite number is `null`.
pub fn number_text(value: f64) -> String {
    if !value.is_finite() {
        return "null".to_owned();
    }
    let sign = if value < 0.0 { "-" } else { "" };
    let (digits, exponent) = shortest(value.abs());
    sign.to_owned() + &placed(&digits, exponent)
}

/// The shortest digits of a number that is not negative and its decimal exponent; of two that are equally near the even
/// one, as ECMAScript wants, where the standard library takes the larger.
fn shortest(value: f64) -> (String, i32) {
    let (digits, exponent) = parts(&format!("{value:e}"));
    // Only 16 digits and more can leave a choice. No f64 comes nearer to the middle between two of them than some 1e-36
    // of itself without lying there, so 60 digits more tell a middle.
    let odd = digits.bytes().last().is_some_and(|digit| digit % 2 == 1);
    if odd && digits.len() >= 16 {
        let (exact, _) = parts(&format!("{value:.*e}", digits.len() + 60));
        let (lower, rest) = exact.split_at(digits.len());
        if lower < digits.as_str() && rest.strip_prefix('5').is_some_and(|rest| rest.bytes().all(|digit| digit == b'0'))
        {
            return (lower.to_owned(), exponent);
        }
    }
    (digits, exponent)
}

/// The digits and the exponent of `d.ddde±n`.
fn parts(scientific: &str) -> (String, i32) {
    let (mantissa, exponent) = scientific.split_once('e').unwrap_or((scientific, "0"));
    (mantissa.replace('.', ""), exponent.parse().unwrap_or_default())
}

/// Digits `d`, `ddd` … of d.dd × 10^exponent with point and exponent where ECMAScript has them.
fn placed(digits: &str, exponent: i32) -> String {
    let count = digits.len();
    match usize::try_from(exponent) {
        Ok(exponent) if exponent <= 20 && exponent + 1 >= count => {
            digits.to_owned() + &"0".repeat(exponent + 1 - count)
        }
        Ok(exponent) if exponent <= 20 => {
            let (whole, rest) = digits.split_at(exponent + 1);
            format!("{whole}.{rest}")
        }
        Err(_) if exponent >= -6 => format!("0.{}{digits}", "0".repeat((-exponent - 1) as usize)),
        _ => {
            let (first, rest) = digits.split_at(1);
            let point = if rest.is_empty() { "" } else { "." };
            let sign = if exponent < 0 { '-' } else { '+' };
            format!("{first}{point}{rest}e{sign}{}", exponent.unsigned_abs())
        }
    }
}

fn write_object(fields: &Map<String, Value>, text: &mut String) {
    let mut sorted: Vec<(&String, &Value)> = fields.iter().collect();
    sorted.sort_by(|(a, _), (b, _)| a.encode_utf16().cmp(b.encode_utf16()));
    text.push('{');
    for (index, (name, value)) in sorted.into_iter().enumerate() {
        if index > 0 {
            text.push(',');
        }
        write_string(name, text);
        text.push(':');
        write(value, text);
    }
    text.push('}');
}

fn write_string(string: &str, text: &mut String) {
    const HEX: [char; 16] = ['0', '1', '2', '3', '4', '5', '6', '7', '8', '9', 'a', 'b', 'c', 'd', 'e', 'f'];
    text.push('"');
    for character in string.chars() {
        match character {
            '"' => text.push_str("\\\""),
            '\\' => text.push_str("\\\\"),
            '\u{8}' => text.push_str("\\b"),
            '\u{c}' => text.push_str("\\f"),
            '\n' => text.push_str("\\n"),
            '\r' => text.push_str("\\r"),
            '\t' => text.push_str("\\t"),
            '\0'..='\u{1f}' => {
                let code = character as usize;
                text.push_str(if code < 16 { "\\u000" } else { "\\u001" });
                text.push(HEX[code % 16]);
            }
            other => text.push(other),
        }
    }
    text.push('"');
}

/// The same text as it may stand in an HTML element: nothing in it can end the element, open a comment, or be taken
/// for a line end by a script. The canonical bytes come back by parsing and writing canonically again.
pub(crate) fn element_text(canonical: &str) -> String {
    let mut text = String::with_capacity(canonical.len());
    for character in canonical.chars() {
        match character {
            '<' => text.push_str("\\u003c"),
            '\u{2028}' => text.push_str("\\u2028"),
            '\u{2029}' => text.push_str("\\u2029"),
            other => text.push(other),
        }
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::{Value, json};

    #[test]
    fn writes_the_example_of_the_standard() {
        // RFC 8785, 3.2.2 and 3.2.4: sample input and its canonical form.
        let input = r#"{
            "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],
            "string": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
            "literals": [null, true, false]
        }"#;
        let value: Value = serde_json::from_str(input).expect("the example is JSON");
        let expected = "{\"literals\":[null,true,false],\"numbers\":[333333333.3333333,1e+30,4.5,0.002,1e-27],\
                        \"string\":\"€$\\u000f\\nA'B\\\"\\\\\\\\\\\"/\"}";
        assert_eq!(canonical_json(&value).as_deref(), Ok(expected));
    }

    #[test]
    fn sorts_by_utf16_as_the_standard_says() {
        // RFC 8785, 3.2.3: the expected order of this example.
        let value = json!({"\u{20ac}": "Euro Sign", "\r": "Carriage Return", "\u{fb33}": "Hebrew Letter Dalet With Dagesh",
            "1": "One", "\u{1F600}": "Emoji: Grinning Face", "\u{80}": "Control", "\u{f6}": "Latin Small Letter O With Diaeresis"});
        let text = canonical_json(&value).expect("plain values");
        let mut at = 0;
        for word in ["Carriage Return", "One", "Control", "Latin Small", "Euro", "Grinning", "Hebrew"] {
            let found = text.find(word).expect("every value is written");
            assert!(found >= at, "{word} comes too early");
            at = found;
        }
    }

    #[test]
    fn writes_the_numbers_of_the_standard() {
        // RFC 8785, appendix B: IEEE 754 bits and the text they become.
        for (bits, text) in [
            (0x0000_0000_0000_0000_u64, "0"),
            (0x8000_0000_0000_0000, "0"),
            (0x0000_0000_0000_0001, "5e-324"),
            (0x8000_0000_0000_0001, "-5e-324"),
            (0x7fef_ffff_ffff_ffff, "1.7976931348623157e+308"),
            (0x4340_0000_0000_0000, "9007199254740992"),
            (0xc340_0000_0000_0000, "-9007199254740992"),
            (0x4430_0000_0000_0000, "295147905179352830000"),
            (0x44b5_2d02_c7e1_4af5, "9.999999999999997e+22"),
            (0x44b5_2d02_c7e1_4af6, "1e+23"),
            (0x44b5_2d02_c7e1_4af7, "1.0000000000000001e+23"),
            (0x444b_1ae4_d6e2_ef4e, "999999999999999700000"),
            (0x444b_1ae4_d6e2_ef4f, "999999999999999900000"),
            (0x444b_1ae4_d6e2_ef50, "1e+21"),
            (0x3eb0_c6f7_a0b5_ed8c, "9.999999999999997e-7"),
            (0x3eb0_c6f7_a0b5_ed8d, "0.000001"),
            (0x41b3_de43_5555_5553, "333333333.3333332"),
            (0xbecb_f647_612f_3696, "-0.0000033333333333333333"),
        ] {
            assert_eq!(canonical_json(&f64::from_bits(bits)).as_deref(), Ok(text));
        }
    }

    /// SplitMix64 (Steele, Lea, Flood 2014).
    fn next(state: &mut u64) -> u64 {
        *state = state.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let z = (*state ^ (*state >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        let z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    #[test]
    fn agrees_with_the_crate_of_that_purpose() {
        let mut state = 1_u64;
        for _ in 0..20_000 {
            let bits = next(&mut state);
            let codes = [(next(&mut state) % 0x11_0000) as u32, (next(&mut state) % 0x80) as u32];
            let text: String = codes.iter().filter_map(|code| char::from_u32(*code)).collect();
            let value =
                json!({ text.clone(): f64::from_bits(bits), "whole": bits, "signed": bits as i64, "k": [text] });
            let expected = serde_json_canonicalizer::to_string(&value).expect("plain values");
            assert_eq!(canonical_text(&value), expected);
        }
    }

    #[test]
    fn writes_numbers_as_that_crate_does() {
        let same = |value: f64| {
            let expected = serde_json_canonicalizer::to_string(&value).expect("a number");
            assert_eq!(number_text(value), expected);
        };
        let mut state = 2_u64;
        for _ in 0..200_000 {
            let bits = next(&mut state);
            // Any number at all.
            let any = f64::from_bits(bits);
            if any.is_finite() {
                same(any);
            }
            // Quarters and eighths between 2^49 and 2^51, most of which lie in the middle between two shortest texts.
            let whole = (bits >> 13) as f64;
            same(whole + 0.25);
            same(whole / 2.0 + 0.375);
            // Numbers as they are typed and computed in a visit.
            same((bits % 2_000_000) as f64 / 1000.0 - 1000.0);
            same((bits % 20_000) as f64 * 1e18);
            same((bits % 20_000) as f64 * 1e-9);
        }
        // Whole numbers above 2^53 by twos, fours and so on, which have middles of their own.
        for shift in 0..12 {
            for step in 0..2_000_u64 {
                same(((1_u64 << 53) + 5 * step) as f64 * (1_u64 << shift) as f64);
            }
        }
    }

    #[test]
    fn element_text_cannot_leave_its_element() {
        let nasty = "</script><!--\u{2028}\u{2029}<";
        let canonical = canonical_json(&nasty).expect("a string");
        let text = element_text(&canonical);
        assert!(!text.contains(['<', '\u{2028}', '\u{2029}']));
        assert_eq!(serde_json::from_str::<String>(&text).ok().as_deref(), Some(nasty));
    }
}
