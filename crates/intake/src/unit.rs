//! Recognises unit symbols, so that "151 mm" is a number with a unit and "reference (dip tape)" a name without one.
//!
//! Symbols and prefixes: the International System of Units (SI Brochure, BIPM, tables 2 to 8), and the units in use in
//! process measurement beside it (common practice, no source).

/// Units that take SI prefixes.
const WITH_PREFIX: [&str; 42] = [
    "m", "g", "s", "A", "K", "mol", "cd", "Hz", "N", "Pa", "J", "W", "C", "V", "F", "Ω", "\u{2126}", "ohm", "S", "Wb",
    "T", "H", "lm", "lx", "Bq", "Gy", "Sv", "kat", "l", "L", "t", "bar", "eV", "VA", "var", "Wh", "Ah", "cal", "rad",
    "sr", "ppm", "gf",
];

/// Units that take none.
const PLAIN: [&str; 50] = [
    "%", "‰", "ppb", "°", "°C", "°F", "℃", "℉", "º", "ºC", "degC", "degF", "deg", "min", "h", "d", "in", "inch", "ft",
    "yd", "lb", "lbs", "lbf", "oz", "psi", "psia", "psig", "mmHg", "mmH2O", "mH2O", "cmH2O", "inH2O", "inHg", "mWC",
    "gal", "rpm", "counts", "count", "digit", "digits", "pH", "dB", "dBm", "NTU", "FNU", "PSU", "atm", "Torr", "1",
    "pt",
];

const PREFIXES: [&str; 26] = [
    "da", "Q", "R", "Y", "Z", "E", "P", "T", "G", "M", "k", "h", "d", "c", "m", "µ", "μ", "u", "n", "p", "f", "a", "z",
    "y", "r", "q",
];

/// Longest text that is looked at: no unit in use comes near.
const LONGEST: usize = 32;

/// Whether the text is a unit symbol, or units combined as in `m³/h`, `kg/m3`, `W/(m²·K)`.
pub(crate) fn is_unit(text: &str) -> bool {
    let text = text.trim();
    !text.is_empty()
        && text.len() <= LONGEST
        && text.split(['/', '·', '⋅', '*', ' ', '(', ')']).all(|factor| factor.is_empty() || is_factor(factor))
        && text.chars().any(|character| !matches!(character, '/' | '·' | '⋅' | '*' | ' ' | '(' | ')' | '1'))
}

fn is_factor(factor: &str) -> bool {
    is_symbol(factor) || {
        let stem = factor.trim_end_matches(|character: char| {
            character.is_ascii_digit()
                || matches!(character, '²' | '³' | '¹' | '⁻' | '-' | '\u{2212}' | '^' | '⁰'..='⁹')
        });
        is_symbol(stem)
    }
}

fn is_symbol(symbol: &str) -> bool {
    PLAIN.contains(&symbol)
        || WITH_PREFIX.contains(&symbol)
        || PREFIXES.iter().any(|prefix| symbol.strip_prefix(prefix).is_some_and(|rest| WITH_PREFIX.contains(&rest)))
}

/// Whether two ways to write a unit mean the same (the two micro and ohm signs, two degree signs, spaces aside).
pub(crate) fn same_unit(a: &str, b: &str) -> bool {
    let plain = |text: &str| -> String {
        text.chars()
            .filter(|character| !character.is_whitespace())
            .map(|character| match character {
                'μ' => 'µ',
                '\u{2126}' => 'Ω',
                'º' => '°',
                other => other,
            })
            .collect()
    };
    plain(a) == plain(b)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_and_other_words() {
        for unit in
            ["mm", "°C", "kPa", "m³/h", "kg/m3", "mA", "%", "W/(m²·K)", "µg/l", "1/s", "s-1", "m·s⁻¹", "mbar", "inH2O"]
        {
            assert!(is_unit(unit), "{unit}");
        }
        for word in ["", "dip tape", "up/down", "k=2", "run", "indication", "1", "/", "reference", "e3", "a", "mm;mm"] {
            assert!(!is_unit(word), "{word}");
        }
        assert!(same_unit("μm", "µm") && same_unit("m / s", "m/s") && !same_unit("mm", "cm") && !same_unit("mA", "MA"));
    }
}
