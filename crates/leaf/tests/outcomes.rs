//! What opening a leaf can say besides "altered".

mod common;

use bandleaf_core::report::METHOD;
use bandleaf_leaf::{Document, Opened, Outcome, Page, open, press, report, verify};
use common::{blank_page, document, forged, leaf, parts, visit};
use serde_json::{Value, json};

fn opened(file: &[u8]) -> Opened {
    open(&Page::take_apart(file).expect("a leaf"))
}

/// Moves the first coefficient by a share of its uncertainty.
fn moved(seal: &mut Value, share: f64) {
    let term = &mut seal["report"]["fit"]["terms"][0];
    let uncertainty = term["standard_uncertainty"].as_f64().expect("an uncertainty");
    let estimate = term["estimate"].as_f64().expect("an estimate");
    let step = (uncertainty * share).max(estimate.abs() * 4e-16);
    term["estimate"] = json!(estimate + step);
}

#[test]
fn a_blank_page_is_blank() {
    let opened = opened(&blank_page());
    assert_eq!((opened.outcome, opened.document.is_none()), (Outcome::Blank, true));
    assert!(!opened.may_be_read());
    assert!(verify(&blank_page(), None).holds());
}

#[test]
fn a_leaf_is_identical() {
    let opened = opened(&leaf("note"));
    assert_eq!(opened.outcome, Outcome::Identical);
    assert!(opened.may_be_read() && opened.differing_field.is_none() && opened.changed_sections.is_empty());
    assert_eq!(opened.document, Some(document("note")));
}

#[test]
fn within_the_uncertainty_is_the_same() {
    let file = forged(&leaf(""), |seal| moved(seal, 1e-10));
    let opened = opened(&file);
    assert_eq!(opened.outcome, Outcome::Same, "{}", opened.sentence);
    assert!(opened.may_be_read());
    assert_eq!(self::opened(&forged(&leaf(""), |seal| moved(seal, 2e-9))).outcome, Outcome::Differs);
}

#[test]
fn an_earlier_method_is_named() {
    let file = forged(&leaf(""), |seal| {
        seal["program"]["method"] = json!(METHOD - 1);
        seal["report"]["program"]["method"] = json!(METHOD - 1);
        moved(seal, 0.1);
    });
    let opened = opened(&file);
    assert_eq!(opened.outcome, Outcome::EarlierMethod);
    assert!(opened.may_be_read());
    assert!(opened.sentence.contains(&format!("method {}", METHOD - 1)), "{}", opened.sentence);
}

#[test]
fn an_earlier_method_with_the_same_numbers_is_identical() {
    let file = forged(&leaf(""), |seal| {
        seal["program"]["method"] = json!(METHOD - 1);
        seal["report"]["program"]["method"] = json!(METHOD - 1);
    });
    assert_eq!(opened(&file).outcome, Outcome::Identical);
}

#[test]
fn a_newer_program_is_said() {
    let newer = forged(&leaf(""), |seal| {
        seal["program"]["version"] = json!("999.0.0");
        seal["report"]["fit"]["terms"][0]["estimate"] = json!(1e9);
    });
    let opened = opened(&newer);
    assert_eq!(opened.outcome, Outcome::NewerProgram);
    assert_eq!(opened.differing_field.as_deref(), Some("fit.terms[0].estimate"));
    assert!(opened.document.is_some() && !opened.may_be_read());
    assert!(opened.sentence.contains("999.0.0"), "{}", opened.sentence);

    let alike = self::opened(&forged(&leaf(""), |seal| seal["program"]["version"] = json!("999.0.0")));
    assert_eq!(alike.outcome, Outcome::NewerProgram);
    assert!(alike.may_be_read());
}

#[test]
fn a_newer_form_is_said() {
    let file = forged(&leaf(""), |seal| seal["schema"] = json!("bandleaf.leaf.2"));
    let opened = opened(&file);
    assert_eq!(opened.outcome, Outcome::NewerProgram);
    assert!(opened.sentence.contains("bandleaf.leaf.2") && !opened.may_be_read());
}

#[test]
fn the_expected_digest_decides() {
    let file = leaf("");
    let digest = verify(&file, None).digest.expect("a digest");
    assert_eq!(verify(&file, Some(&digest)).expected, Some(true));
    assert!(verify(&file, Some(digest.trim_start_matches("sha256:"))).holds());
    let other = verify(&leaf("other"), Some(&digest));
    assert_eq!(other.expected, Some(false));
    assert!(!other.holds() && other.sentence().contains("another leaf"), "{}", other.sentence());
    assert!(!verify(&file, Some("nonsense")).holds());
    assert_eq!(verify(b"", Some(&digest)).expected, Some(false));
}

#[test]
fn the_seal_says_what_the_format_says() {
    let file = leaf("<note>");
    let (texts, seal) = parts(&file);
    // The visit's digest is that of its canonical bytes, not of the escaped text in the element.
    assert_eq!(seal["digests"]["visit"], json!(document("<note>").digest()));
    assert!(texts.visit.contains("\\u003cnote>"));
    let numbers = &seal["report"];
    assert_eq!(numbers["visit_digest"], seal["digests"]["visit"]);
    assert!(numbers.get("curve").is_none() && numbers["program"].get("version").is_none());
    assert!(!texts.seal.contains("\"sentence\"") && !texts.seal.contains("\"display"));
    let whole = serde_json::to_value(report(&document("<note>")).expect("a report")).expect("plain values");
    assert_eq!(numbers["fit"]["points_used"], whole["fit"]["points_used"]);
    assert_eq!(whole["visit_digest"], seal["digests"]["visit"]);
}

#[test]
fn a_visit_that_cannot_be_read_is_not_pressed() {
    let mut value = visit("");
    value["points"][1]["indication"] = json!("803,5");
    let document = Document::from_value(value).expect("a document");
    let page = Page::take_apart(&blank_page()).expect("the page");
    let problem = press(&page, &document).expect_err("text in a number field");
    assert_eq!(problem.place, "points[1].indication");
}

#[test]
fn a_page_of_another_method_is_not_used() {
    let file = forged(&leaf(""), |seal| seal["program"]["method"] = json!(METHOD + 1));
    let page = Page::take_apart(&file).expect("a leaf");
    assert_eq!(press(&page, &document("")).expect_err("another method").code, "other_method");
}
