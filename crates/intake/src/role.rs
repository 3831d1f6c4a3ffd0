//! What a column is, from the words of its heading. General words of the trade; common practice, no source.

use serde::Serialize;

/// What a column is taken for.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Role {
    /// Value of the measurement standard.
    Reference,
    /// What the instrument showed.
    Indication,
    /// An influence quantity, by name.
    Influence(String),
    /// Standard uncertainty of the reference value.
    ReferenceUncertainty,
    /// Standard uncertainty of the indication.
    IndicationUncertainty,
    /// Standard uncertainty of the error that the points of one setting share.
    SettingUncertainty,
    /// Number of indications of which only the mean is known.
    Repeats,
    /// Direction of approach.
    Approach,
    /// As found or as left.
    State,
    /// When the point was taken.
    Time,
    /// Free text.
    Note,
}

/// As found or as left.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum State {
    /// Before any adjustment.
    AsFound,
    /// After it.
    AsLeft,
}

/// From which side a point was approached.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Approach {
    /// Rising.
    Up,
    /// Falling.
    Down,
}

/// How plainly a name says what the column is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) enum Strength {
    Weak,
    Strong,
}

/// What the words of a heading say.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Meaning {
    Is(Role, Strength),
    /// The row's own number.
    Ordinal,
    /// An expanded uncertainty, which no field of a point holds.
    ExpandedUncertainty,
    /// An uncertainty that does not say of what.
    SomeUncertainty,
    /// Computed from the others: an error, a deviation.
    Derived,
    Unknown,
}

/// A heading's name, understood as far as it can be.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Understood {
    pub meaning: Meaning,
    /// The words without numbers, state and direction: equal for columns that are repeats of each other.
    pub base: String,
    /// There is nothing in the name but words of its role.
    pub pure: bool,
    /// It is a mean of other columns, perhaps.
    pub averaged: bool,
    pub state: Option<State>,
    pub approach: Option<Approach>,
}

const REFERENCE: [&str; 14] = [
    "reference",
    "references",
    "ref",
    "standard",
    "std",
    "true",
    "target",
    "master",
    "référence",
    "referenz",
    "referenzwert",
    "sollwert",
    "soll",
    "étalon",
];
const REFERENCE_WEAK: [&str; 10] =
    ["applied", "input", "setpoint", "set", "known", "nominal", "expected", "ideal", "dip", "x"];
const INDICATION: [&str; 20] = [
    "indication",
    "ind",
    "indications",
    "indicated",
    "reading",
    "readings",
    "shown",
    "shows",
    "display",
    "displayed",
    "output",
    "response",
    "measured",
    "observed",
    "anzeige",
    "anzeigewert",
    "istwert",
    "ist",
    "ablesung",
    "messwert",
];
const INDICATION_WEAK: [&str; 11] =
    ["instrument", "gauge", "signal", "run", "trial", "measurement", "repeat", "sensor", "uut", "dut", "y"];
/// Words with an output that is wanted, not shown.
const WANTED: [&str; 4] = ["nominal", "expected", "ideal", "calculated"];
const UNCERTAINTY: [&str; 5] = ["uncertainty", "uncertainties", "unsicherheit", "messunsicherheit", "incertitude"];
const DERIVED: [&str; 22] = [
    "error",
    "errors",
    "deviation",
    "dev",
    "difference",
    "diff",
    "delta",
    "correction",
    "residual",
    "sd",
    "stdev",
    "tolerance",
    "limit",
    "mpe",
    "max",
    "min",
    "range",
    "spread",
    "abweichung",
    "fehler",
    "écart",
    "erreur",
];
const ORDINAL: [&str; 10] = ["no", "nr", "number", "point", "row", "id", "index", "test", "pos", "n"];
const NOTE: [&str; 9] =
    ["note", "notes", "comment", "comments", "remark", "remarks", "bemerkung", "kommentar", "remarque"];
const TIME: [&str; 8] = ["time", "date", "timestamp", "datetime", "datum", "zeit", "uhrzeit", "heure"];
const MEAN: [&str; 6] = ["mean", "average", "avg", "averaged", "mittelwert", "moyenne"];
const UP: [&str; 8] = ["up", "rising", "increasing", "upscale", "ascending", "upward", "upwards", "steigend"];
const DOWN: [&str; 8] =
    ["down", "falling", "decreasing", "downscale", "descending", "downward", "downwards", "fallend"];
/// Words that say nothing about the role.
const FILLING: [&str; 12] =
    ["value", "values", "of", "the", "wert", "valeur", "first", "second", "third", "instrument", "in", "at"];

/// The words of a name in lower case; digits, capitals inside a word and everything else divide.
pub(crate) fn words(name: &str) -> Vec<String> {
    let mut words: Vec<String> = Vec::new();
    let mut before: Option<char> = None;
    for character in name.chars() {
        let divides = before.is_none_or(|before| {
            !before.is_alphanumeric()
                || before.is_numeric() != character.is_numeric()
                || (before.is_lowercase() && character.is_uppercase())
        });
        if character.is_alphanumeric() {
            if divides {
                words.push(String::new());
            }
            if let Some(word) = words.last_mut() {
                word.extend(character.to_lowercase());
            }
        }
        before = Some(character);
    }
    words
}

/// What a heading's name says.
pub(crate) fn understand(name: &str) -> Understood {
    let mut words = words(name);
    let state = take_state(&mut words);
    let approach = match (has(&words, &UP), has(&words, &DOWN)) {
        (true, false) => Some(Approach::Up),
        (false, true) => Some(Approach::Down),
        _ => None,
    };
    let averaged = has(&words, &MEAN);
    let bare: Vec<&str> = words
        .iter()
        .map(String::as_str)
        .filter(|word| !word.chars().all(char::is_numeric) && !is_in(word, &UP) && !is_in(word, &DOWN))
        .filter(|word| !matches!(*word, "st" | "nd" | "rd" | "th"))
        .collect();
    let meaning = match meaning(name, &words, &bare) {
        Meaning::Unknown if bare.is_empty() && (state.is_some() || approach.is_some()) => {
            Meaning::Is(Role::Indication, Strength::Weak)
        }
        meaning => meaning,
    };
    let role_words = [&REFERENCE[..], &REFERENCE_WEAK, &INDICATION, &INDICATION_WEAK, &FILLING];
    let pure = bare.iter().all(|word| role_words.iter().any(|list| is_in(word, list)));
    Understood { meaning, base: bare.join(" "), pure, averaged, state, approach }
}

fn meaning(name: &str, words: &[String], bare: &[&str]) -> Meaning {
    let any = |list: &[&str]| bare.iter().any(|word| is_in(word, list));
    if name.trim() == "#" || (!bare.is_empty() && bare.iter().all(|word| is_in(word, &ORDINAL))) {
        return Meaning::Ordinal;
    }
    if let Some(meaning) = uncertainty(name, words, bare) {
        return meaning;
    }
    if any(&["approach", "direction", "richtung"]) && !any(&INDICATION) {
        return Meaning::Is(Role::Approach, Strength::Strong);
    }
    if any(&["repeats", "replicates"]) || (any(&["number", "no"]) && any(&["readings", "indications", "repeats"])) {
        return Meaning::Is(Role::Repeats, Strength::Strong);
    }
    if any(&DERIVED) {
        return Meaning::Derived;
    }
    if any(&NOTE) {
        return Meaning::Is(Role::Note, Strength::Strong);
    }
    if bare == ["state"] || bare == ["condition"] {
        return Meaning::Is(Role::State, Strength::Strong);
    }
    if any(&REFERENCE) {
        return Meaning::Is(Role::Reference, Strength::Strong);
    }
    if any(&INDICATION) {
        let wanted = any(&WANTED);
        return if wanted { Meaning::Derived } else { Meaning::Is(Role::Indication, Strength::Strong) };
    }
    if any(&TIME) {
        return Meaning::Is(Role::Time, Strength::Strong);
    }
    if any(&REFERENCE_WEAK) {
        return Meaning::Is(Role::Reference, Strength::Weak);
    }
    if any(&INDICATION_WEAK) { Meaning::Is(Role::Indication, Strength::Weak) } else { Meaning::Unknown }
}

/// "standard uncertainty of the reference", "u(indication)"; "U" and "k = 2" speak of an expanded uncertainty.
fn uncertainty(name: &str, words: &[String], bare: &[&str]) -> Option<Meaning> {
    let symbol = name.trim_start().starts_with(['u', 'U']) && bare.first() == Some(&"u");
    if !symbol && !bare.iter().any(|word| is_in(word, &UNCERTAINTY)) {
        return None;
    }
    let factor =
        words.windows(2).any(|pair| matches!(pair, [k, digits] if k == "k" && digits.chars().all(char::is_numeric)));
    if factor || bare.contains(&"expanded") || (symbol && name.trim_start().starts_with('U')) {
        return Some(Meaning::ExpandedUncertainty);
    }
    let standard_first =
        bare.windows(2).any(|pair| matches!(pair, ["standard" | "std", next] if is_in(next, &UNCERTAINTY)));
    let of = |list: &[&str]| {
        bare.iter().filter(|word| is_in(word, list)).count() > usize::from(standard_first && list.contains(&"standard"))
    };
    let role = if bare.contains(&"setting") {
        Role::SettingUncertainty
    } else if of(&REFERENCE) || bare.contains(&"x") {
        Role::ReferenceUncertainty
    } else if of(&INDICATION) || bare.contains(&"y") {
        Role::IndicationUncertainty
    } else {
        return Some(Meaning::SomeUncertainty);
    };
    Some(Meaning::Is(role, Strength::Strong))
}

/// Takes "as found" or "as left" out of the words.
fn take_state(words: &mut Vec<String>) -> Option<State> {
    let at = words.windows(2).position(|pair| matches!(pair, [a, b] if a == "as" && (b == "found" || b == "left")))?;
    let state = if words.get(at + 1).is_some_and(|word| word == "found") { State::AsFound } else { State::AsLeft };
    words.drain(at..at + 2);
    Some(state)
}

/// A cell of the column "approach".
pub(crate) fn approach_of(cell: &str) -> Option<Approach> {
    let lower = cell.to_lowercase();
    if is_in(&lower, &UP) || matches!(lower.as_str(), "↑" | "+" | "↗" | "u" | "auf") {
        Some(Approach::Up)
    } else if is_in(&lower, &DOWN) || matches!(lower.as_str(), "↓" | "-" | "\u{2212}" | "↘" | "d" | "ab") {
        Some(Approach::Down)
    } else {
        None
    }
}

/// A cell of the column "state".
pub(crate) fn state_of(cell: &str) -> Option<State> {
    match words(cell).iter().map(String::as_str).collect::<Vec<_>>().as_slice() {
        ["as", "found"] | ["found"] | ["before"] => Some(State::AsFound),
        ["as", "left"] | ["left"] | ["after"] => Some(State::AsLeft),
        _ => None,
    }
}

fn is_in(word: &str, list: &[&str]) -> bool {
    list.contains(&word)
}

fn has(words: &[String], list: &[&str]) -> bool {
    words.iter().any(|word| is_in(word, list))
}

#[cfg(test)]
mod tests {
    use super::*;
    use Strength::{Strong, Weak};

    #[test]
    fn names_of_the_trade() {
        let is = Meaning::Is;
        let cases = [
            ("Reference", is(Role::Reference, Strong)),
            ("ref. value", is(Role::Reference, Strong)),
            ("STANDARD reading", is(Role::Reference, Strong)),
            ("trueLevel", is(Role::Reference, Strong)),
            ("x", is(Role::Reference, Weak)),
            ("set point", is(Role::Reference, Weak)),
            ("indication 2", is(Role::Indication, Strong)),
            ("2nd reading", is(Role::Indication, Strong)),
            ("transmitter_output", is(Role::Indication, Strong)),
            ("as left", is(Role::Indication, Weak)),
            ("y", is(Role::Indication, Weak)),
            ("nominal output", Meaning::Derived),
            ("error of indication", Meaning::Derived),
            ("std dev", Meaning::Derived),
            ("No.", Meaning::Ordinal),
            ("standard uncertainty", Meaning::SomeUncertainty),
            ("standard uncertainty of the standard", is(Role::ReferenceUncertainty, Strong)),
            ("u(indication)", is(Role::IndicationUncertainty, Strong)),
            ("U(reference)", Meaning::ExpandedUncertainty),
            ("reference uncertainty (k=2)", Meaning::ExpandedUncertainty),
            ("setting uncertainty", is(Role::SettingUncertainty, Strong)),
            ("approach", is(Role::Approach, Strong)),
            ("remarks", is(Role::Note, Strong)),
            ("number of readings", is(Role::Repeats, Strong)),
            ("temperature", Meaning::Unknown),
        ];
        for (name, expected) in cases {
            assert_eq!(understand(name).meaning, expected, "{name}");
        }
    }

    #[test]
    fn repeats_states_and_directions() {
        assert_eq!(understand("indication 1").base, understand("Indication-2").base);
        assert_eq!(understand("1st reading").base, understand("2nd reading").base);
        assert_ne!(understand("reading").base, understand("output").base);
        assert_eq!(understand("indication as found").state, Some(State::AsFound));
        assert_eq!(understand("reading up").approach, Some(Approach::Up));
        assert_eq!(understand("reading (falling)").approach, Some(Approach::Down));
        assert!(
            understand("mean reading").averaged
                && understand("reference").pure
                && !understand("reference temperature").pure
        );
        assert_eq!((approach_of("↓"), state_of("as_left")), (Some(Approach::Down), Some(State::AsLeft)));
    }
}
