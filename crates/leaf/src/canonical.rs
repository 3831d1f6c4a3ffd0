//! Canonical bytes: RFC 8785 (JSON Canonicalization Scheme). Only these bytes are ever hashed.

use bandleaf_core::problem::Problem;
use serde::Serialize;

/// The canonical JSON text of anything: fields sorted, numbers as ECMAScript writes them (every number passes through
/// f64, −0 becomes 0), no spaces. Refuses NaN and infinities, which JSON cannot say.
pub fn canonical_json<T: Serialize>(value: &T) -> Result<String, Problem> {
    serde_json_canonicalizer::to_string(value).map_err(|error| {
        Problem::error(
            "not_json",
            "",
            format!("This cannot be written as JSON ({error}): please report it with the visit."),
        )
    })
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
        assert!(canonical_json(&f64::NAN).is_err());
        assert!(canonical_json(&f64::INFINITY).is_err());
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
