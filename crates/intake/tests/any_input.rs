//! Random input: numbers come back to the bit, garbage never panics, nothing that is reported is out of place.
//! Seeded: every run sees the same cases.

use bandleaf_intake::{Decimal, OneOrMany, Options, parse_cell, parse_cell_with, read_bytes, read_text};

/// xorshift64*, S. Vigna, "An experimental exploration of Marsaglia's xorshift generators, scrambled", 2016.
struct Generator(u64);

impl Generator {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        self.0.wrapping_mul(0x2545_F491_4F6C_DD1D)
    }

    fn below(&mut self, bound: usize) -> usize {
        (self.next() >> 33) as usize % bound
    }

    fn pick<'a, T>(&mut self, items: &'a [T]) -> &'a T {
        &items[self.below(items.len())]
    }

    /// Any finite double: half of them of everyday size.
    fn double(&mut self) -> f64 {
        loop {
            let bits = self.next();
            let value = if self.below(2) == 0 {
                f64::from_bits(bits)
            } else {
                (bits >> 11) as f64 / 9_007_199_254_740_992.0 * *self.pick(&[1.0, 1e3, 1e6, -250.0])
            };
            if value.is_finite() {
                return value;
            }
        }
    }
}

/// The value as text, written in full or with an exponent.
fn written(value: f64, scientific: bool) -> String {
    if scientific { format!("{value:e}") } else { value.to_string() }
}

/// Groups of three before the decimal mark.
fn grouped(text: &str, separator: &str) -> String {
    let (sign, rest) = text.strip_prefix('-').map_or(("", text), |rest| ("-", rest));
    let (whole, fraction) =
        rest.split_once('.').map_or((rest, String::new()), |(whole, fraction)| (whole, format!(".{fraction}")));
    let digits: Vec<char> = whole.chars().collect();
    let mut out = String::new();
    for (index, digit) in digits.iter().enumerate() {
        if index > 0 && (digits.len() - index).is_multiple_of(3) {
            out.push_str(separator);
        }
        out.push(*digit);
    }
    format!("{sign}{out}{fraction}")
}

#[test]
fn random_doubles_come_back_to_the_bit() {
    let mut generator = Generator(20_260_504);
    for round in 0..20_000 {
        let value = generator.double();
        let point = written(value, round % 3 == 0);
        let comma = point.replace('.', ",").replace('-', "\u{2212}");
        for (text, decimal) in [(&point, Decimal::Point), (&comma, Decimal::Comma)] {
            let cell = parse_cell_with(text, Some(decimal));
            assert_eq!(cell.value.map(f64::to_bits), Some(value.to_bits()), "{text}");
        }
    }
}

#[test]
fn random_columns_come_back_to_the_bit_with_every_separator() {
    let mut generator = Generator(7);
    for round in 0..300 {
        // A first cell that leaves no doubt about the decimal mark.
        let mut values = vec![0.5];
        values.extend((0..8).map(|_| generator.double()));
        let separator = *generator.pick(&["", " ", "\u{2009}", "\u{202F}", "\u{A0}", "'", "\u{2019}"]);
        let comma = round % 2 == 0;
        let cell = |value: &f64| {
            let text = grouped(&value.to_string(), separator);
            if comma { text.replace('.', ",") } else { text }
        };
        let rows: String = values.iter().map(|value| format!("{};{}\n", cell(value), cell(value))).collect();
        let intake = read_text(&format!("reference;indication\n{rows}"), &Options::default());
        let bits = |value: f64| value.to_bits();
        let references: Vec<Option<u64>> = intake.points.iter().map(|point| point.reference.map(bits)).collect();
        assert_eq!(references, values.iter().map(|value| Some(bits(*value))).collect::<Vec<_>>(), "{rows}");
        for (point, value) in intake.points.iter().zip(&values) {
            assert_eq!(point.indication, Some(OneOrMany::One(*value)));
            assert_eq!(point.typed.reference, Some(cell(value)));
        }
    }
}

const PIECES: [&str; 54] = [
    "0",
    "1",
    "12",
    "345",
    "1,234",
    "1.234",
    "0,5",
    "-",
    "\u{2212}",
    "+",
    "e",
    "E5",
    "e400",
    ",",
    ".",
    ";",
    "\t",
    " ",
    "  ",
    "\n",
    "\r",
    "\r\n",
    "\"",
    "'",
    "’",
    "\u{2009}",
    "\u{A0}",
    "\u{FEFF}",
    "reference",
    "indication 1",
    "indication 2",
    "x",
    "y",
    "as found",
    "as left",
    "up",
    "note",
    "temperature",
    "/",
    "[",
    "]",
    "(",
    ")",
    "mm",
    "°C",
    "%",
    "n/a",
    "NaN",
    "#REF!",
    "sep=;\n",
    "\0",
    "U (k=2)",
    "\u{1F41F}",
    "Data:",
];

fn garbage_text(generator: &mut Generator) -> String {
    let length = generator.below(60);
    (0..length).map(|_| *generator.pick(&PIECES)).collect()
}

fn random_options(generator: &mut Generator) -> Options {
    let json = *generator.pick(&[
        "{}",
        r#"{ "header": true }"#,
        r#"{ "header": false, "decimal": "comma" }"#,
        r#"{ "delimiter": "space", "columns": { "reference": 0, "indication": [1, 1, 900] } }"#,
        r#"{ "delimiter": "none", "columns": { "reference": "1" } }"#,
        r#"{ "columns": { "reference": "x", "indication": "y", "influences": ["temperature"] }, "decimals": [{ "column": "x", "decimal": "point" }] }"#,
        r#"{ "influence_names": ["temperature", ""], "columns": { "influences": { "a": 18446744073709551615 } } }"#,
    ]);
    serde_json::from_str(json).expect("options")
}

/// What holds for every answer.
fn check(intake: &bandleaf_intake::Intake, input: &str) {
    assert!(intake.points.is_empty() || intake.questions.is_empty(), "{input:?}");
    assert!(intake.questions.iter().all(|question| !question.choices.is_empty()), "{input:?}");
    for problem in &intake.problems {
        let sentence = &problem.sentence;
        assert!(sentence.ends_with('.') && sentence.len() < 1500 && !sentence.contains('\n'), "{input:?}: {sentence}");
    }
    for point in &intake.points {
        let values: Vec<f64> = match &point.indication {
            None => vec![],
            Some(OneOrMany::One(value)) => vec![*value],
            Some(OneOrMany::Many(values)) => values.clone(),
        };
        assert!(
            values.iter().chain(&point.reference).chain(point.influences.values()).all(|value| value.is_finite()),
            "{input:?}"
        );
        let unread = point.reference.is_none() && point.typed.reference.is_some();
        assert!(!unread || !intake.problems.is_empty(), "{input:?}");
    }
    serde_json::to_string(intake).expect("JSON");
}

#[test]
fn garbage_never_panics() {
    let mut generator = Generator(1);
    for _ in 0..5_000 {
        let options = random_options(&mut generator);
        let text = garbage_text(&mut generator);
        check(&read_text(&text, &options), &text);
        check(&read_bytes(text.as_bytes(), &options), &text);
        let cell = parse_cell(&text);
        assert!(cell.value.is_none_or(f64::is_finite) && (cell.value.is_none() || cell.problem.is_none()), "{text:?}");
    }
}

#[test]
fn random_bytes_never_panic() {
    let mut generator = Generator(2);
    for round in 0..3_000 {
        let length = generator.below(200);
        let mut bytes: Vec<u8> = (0..length).map(|_| generator.next() as u8).collect();
        if round % 2 == 0 {
            // Damage a text instead: cut it, and turn some bytes over.
            bytes = garbage_text(&mut generator).encode_utf16().flat_map(u16::to_le_bytes).collect();
            bytes.truncate(bytes.len().saturating_sub(generator.below(3)));
            for _ in 0..generator.below(3).min(bytes.len()) {
                let at = generator.below(bytes.len());
                bytes[at] ^= 1 << generator.below(8);
            }
        }
        let options = random_options(&mut generator);
        check(&read_bytes(&bytes, &options), &format!("{bytes:?}"));
    }
}
