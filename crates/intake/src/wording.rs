//! Pieces of sentences: places, quoted cells, lists.

/// Longest part of a cell that is quoted in a sentence, in characters.
const LONGEST_QUOTED: usize = 40;

/// A text in one line, cut where it is long.
pub(crate) fn shortened(text: &str) -> String {
    let plain = |character: char| {
        if character.is_control() { ' ' } else { character }
    };
    let mut characters = text.chars();
    let start: String = characters.by_ref().take(LONGEST_QUOTED).map(plain).collect();
    if characters.next().is_some() { format!("{start}…") } else { start }
}

/// A cell's text in quotation marks, in one line, cut where it is long.
pub(crate) fn quoted(text: &str) -> String {
    format!("\"{}\"", shortened(text))
}

/// `column "indication"`, or `column 2` where it has no name.
pub(crate) fn column_label(index: usize, name: &str) -> String {
    if name.is_empty() { format!("column {}", index + 1) } else { format!("column {}", quoted(name)) }
}

/// The same sentence with a capital first letter.
pub(crate) fn capital(sentence: &str) -> String {
    let mut characters = sentence.chars();
    match characters.next() {
        Some(first) => first.to_uppercase().chain(characters).collect(),
        None => String::new(),
    }
}

/// "a", "a and b", "a, b and c"; long lists are cut.
pub(crate) fn listed(items: &[String]) -> String {
    const MOST: usize = 12;
    match items {
        [] => String::new(),
        [one] => one.clone(),
        _ if items.len() > MOST => {
            let first: Vec<&str> = items.iter().take(MOST).map(String::as_str).collect();
            format!("{} and {} more", first.join(", "), items.len() - MOST)
        }
        [first @ .., last] => format!("{} and {last}", first.join(", ")),
    }
}
