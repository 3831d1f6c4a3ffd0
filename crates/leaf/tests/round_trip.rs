//! A visit that went into a leaf comes out of it unchanged, and pressed again gives the same bytes, whatever text is in it.

mod common;

use bandleaf_leaf::{Document, Outcome, Page, open, press};
use common::{Draws, blank_page, document, leaf, visit};
use serde_json::{Value, json};

/// Presses, opens, presses from the leaf itself, and compares everything.
fn assert_round_trip(document: &Document) {
    let page = Page::take_apart(&blank_page()).expect("the page");
    let leaf = press(&page, document).expect("a leaf");
    let opened_page = Page::take_apart(&leaf).expect("the leaf comes apart");
    assert_eq!(opened_page.assemble(), leaf);
    let opened = open(&opened_page);
    assert_eq!(opened.outcome, Outcome::Identical, "{}", opened.sentence);
    let extracted = opened.document.expect("the visit");
    assert_eq!(&extracted, document);
    assert_eq!(press(&opened_page, &extracted).expect("a leaf again"), leaf);
    assert_eq!(Page::from_texts(opened_page.texts().clone()).expect("from its elements").assemble(), leaf);
}

#[test]
fn nasty_texts_come_back() {
    let long = "ü<b>&amp; ".repeat(100_000);
    for note in [
        "",
        "</script>",
        "</SCRIPT ><script>alert(1)</script>",
        "<!--",
        "--><![CDATA[ ]]> </style></html>",
        "\u{2028}\u{2029}\u{feff}\u{0}\u{1f}\u{7f}\u{85}",
        "\\u003c \\ \" ' ` ${x}",
        "line\r\nline\rline\n\ttab",
        "𝛍 = 1 µm, 😀, e\u{301}",
        "<script type=\"application/json\" id=\"shell\">",
        long.as_str(),
    ] {
        assert_round_trip(&document(note));
    }
}

#[test]
fn fields_nobody_knows_are_kept_and_hashed() {
    let mut value = visit("");
    value["laboratory's own"] = json!({ "nested": [1, "two", null, { "</script>": -0.0 }] });
    let with = Document::from_value(value).expect("a visit");
    assert_round_trip(&with);
    assert_ne!(with.digest(), document("").digest());
    assert!(with.canonical().contains("laboratory's own"));
}

/// A JSON value with any characters and numbers, not deeper than `depth`.
fn any_value(draws: &mut Draws, depth: usize) -> Value {
    match draws.below(if depth == 0 { 4 } else { 6 }) {
        0 => Value::Null,
        1 => Value::Bool(draws.below(2) == 0),
        2 => any_number(draws),
        3 => Value::String(any_text(draws)),
        4 => (0..draws.below(5)).map(|_| any_value(draws, depth - 1)).collect(),
        _ => {
            let fields = (0..draws.below(5)).map(|_| (any_text(draws), any_value(draws, depth - 1)));
            Value::Object(fields.collect())
        }
    }
}

fn any_number(draws: &mut Draws) -> Value {
    loop {
        let value = match draws.below(3) {
            0 => draws.next() as i64 as f64,
            1 => draws.below(2_000_000) as f64 / 1000.0 - 1000.0,
            _ => f64::from_bits(draws.next()),
        };
        if value.is_finite() {
            return json!(value);
        }
    }
}

fn any_text(draws: &mut Draws) -> String {
    const PIECES: [&str; 14] =
        ["</script", ">", "<!--", "-->", "\u{2028}", "\u{2029}", "\0", "\u{fffd}", "\\", "\"", "\r", "\n", "é", "x"];
    let any_character = |draws: &mut Draws| char::from_u32(draws.below(0x11_0000) as u32).unwrap_or('\u{fffd}');
    (0..draws.below(8))
        .map(|_| match draws.below(2) {
            0 => PIECES[draws.below(PIECES.len())].to_owned(),
            _ => any_character(draws).to_string(),
        })
        .collect()
}

#[test]
fn any_document_comes_back() {
    let mut draws = Draws(20_260_504);
    for _ in 0..300 {
        let mut value = visit(&any_text(&mut draws));
        value["unknown"] = any_value(&mut draws, 4);
        value["record"] = json!({ any_text(&mut draws): any_value(&mut draws, 2) });
        let document = Document::from_value(value).expect("a visit");
        assert_eq!(Document::parse(document.canonical().as_bytes()).as_ref(), Ok(&document));
        assert_round_trip(&document);
    }
}

#[test]
fn a_leaf_takes_another_visit() {
    let first = leaf("one");
    let page = Page::take_apart(&first).expect("a leaf");
    let second = press(&page, &document("two")).expect("a leaf");
    assert_eq!(second, leaf("two"));
}
