//! Whatever happens to the bytes of a leaf is noticed, and nothing panics.

mod common;

use bandleaf_leaf::{Outcome, Page, open, press, verify};
use common::{Draws, assemble, blank_page, document, forged, leaf, parts, small_leaf};
use serde_json::json;

#[test]
fn every_flipped_bit_is_noticed() {
    for file in [small_leaf(), blank_page()] {
        assert!(verify(&file, None).holds());
        let mut changed = file.clone();
        for at in 0..file.len() {
            for bit in [0, 5, 7] {
                changed[at] = file[at] ^ (1 << bit);
                let verification = verify(&changed, None);
                assert!(!verification.holds(), "bit {bit} of byte {at} was flipped: {}", verification.sentence());
            }
            changed[at] = file[at];
        }
    }
}

#[test]
fn every_byte_left_out_or_added_is_noticed() {
    let file = small_leaf();
    for at in 0..file.len() {
        let mut shorter = file.clone();
        shorter.remove(at);
        assert!(!verify(&shorter, None).holds(), "byte {at} is missing");
        let mut longer = file.clone();
        longer.insert(at, b' ');
        assert!(!verify(&longer, None).holds(), "a space was added at {at}");
    }
    let mut longer = file.clone();
    longer.push(b'\n');
    let verification = verify(&longer, None);
    assert!(!verification.holds());
    assert!(verification.sentence().contains("after its end"), "{}", verification.sentence());
}

#[test]
fn a_leaf_cut_short_anywhere_is_noticed() {
    let file = small_leaf();
    for length in 0..file.len() {
        assert!(!verify(&file[..length], None).holds(), "cut at {length}");
    }
    let most = verify(&file[..file.len() - 20], None);
    assert!(most.sentence().contains("cut short"), "{}", most.sentence());
}

#[test]
fn no_bytes_make_it_panic() {
    let mut draws = Draws(7);
    let file = leaf("note");
    for _ in 0..3000 {
        let mut bytes = file.clone();
        for _ in 0..=draws.below(20) {
            let (from, to) = (draws.below(bytes.len()), draws.below(bytes.len()));
            let piece: Vec<u8> = bytes[from.min(to)..from.max(to)].iter().take(200).copied().collect();
            let at = draws.below(bytes.len());
            bytes.splice(at..at, piece);
        }
        assert!(!verify(&bytes, None).holds() || bytes == file);
        let garbage: Vec<u8> = (0..draws.below(400)).map(|_| draws.next() as u8).collect();
        assert!(!verify(&garbage, None).holds());
    }
}

#[test]
fn the_changed_section_is_named() {
    let file = leaf("a note");
    let (texts, _) = parts(&file);
    for section in ["style", "wasm", "program", "visit"] {
        let mut changed = texts.clone();
        match section {
            "style" => changed.style.push(' '),
            "wasm" => changed.wasm.insert(0, 'A'),
            "program" => changed.program.push(' '),
            _ => changed.visit = changed.visit.replace("a note", "b note"),
        }
        let page = Page::from_texts(changed).expect("it still has the form of a leaf");
        let opened = open(&page);
        assert_eq!(opened.outcome, Outcome::Altered);
        assert_eq!(opened.changed_sections, [section, "file"]);
        assert!(opened.sentence.contains(section), "{}", opened.sentence);
        assert!(!opened.may_be_read());
        assert_eq!(press(&page, &document("")).is_ok(), section == "visit", "{section}");
    }
}

#[test]
fn a_visit_written_otherwise_is_altered() {
    let (mut texts, _) = parts(&leaf(""));
    texts.visit = texts.visit.replace("800.5", "8005e-1");
    let opened = open(&Page::from_texts(texts).expect("a leaf"));
    assert_eq!((opened.outcome, opened.changed_sections), (Outcome::Altered, vec!["visit", "file"]));
}

#[test]
fn a_shell_that_does_not_fit_is_refused() {
    let (mut texts, _) = parts(&leaf(""));
    texts.shell = texts.shell.replace("damaged", "harmless");
    // Such a file agrees with its own shell; the seal knows better.
    let opened = open(&Page::from_texts(texts.clone()).expect("a frame"));
    assert_eq!(opened.changed_sections, ["shell", "file"]);
    // The file as it would lie on disk does not agree with its shell at all.
    assert!(Page::take_apart(assemble(&texts).as_bytes()).is_err());
}

#[test]
fn a_text_that_would_end_its_element_is_refused() {
    let (texts, _) = parts(&leaf(""));
    for program in ["a</SCRIPT b", "<!-- x", "x</script>y"] {
        let changed = bandleaf_leaf::Texts { program: program.to_owned(), ..texts.clone() };
        assert!(Page::from_texts(changed).is_err(), "{program}");
    }
    assert!(Page::from_texts(bandleaf_leaf::Texts { style: "</Style>".to_owned(), ..texts.clone() }).is_err());
    assert!(Page::from_texts(bandleaf_leaf::Texts { style: "a\r\nb".to_owned(), ..texts }).is_err());
}

#[test]
fn changed_line_ends_are_said() {
    let file = String::from_utf8(leaf("")).expect("text").replace('\n', "\r\n");
    let sentence = verify(file.as_bytes(), None).sentence();
    assert!(sentence.contains("line ends"), "{sentence}");
}

#[test]
fn what_is_no_leaf_is_told_from_a_damaged_one() {
    for (bytes, word) in [
        (&b""[..], "empty"),
        (b"   \n", "empty"),
        (b"<!DOCTYPE html><html><body>Hello</body></html>", "web page"),
        (b"%PDF-1.7", "not a web page"),
        (b"\xff\xfe<\0", "UTF-8"),
    ] {
        let sentence = verify(bytes, None).sentence();
        assert!(sentence.contains("no leaf") && sentence.contains(word), "{sentence}");
    }
}

#[test]
fn a_report_changed_and_sealed_again_differs() {
    let file = leaf("");
    let changed = forged(&file, |seal| {
        let estimate = &mut seal["report"]["fit"]["terms"][0]["estimate"];
        *estimate = json!(estimate.as_f64().expect("a number") + 1.0);
    });
    let verification = verify(&changed, None);
    let opened = verification.opened.as_ref().expect("a leaf");
    assert_eq!(opened.outcome, Outcome::Differs);
    assert_eq!(opened.differing_field.as_deref(), Some("fit.terms[0].estimate"));
    assert!(!verification.holds() && !opened.may_be_read());
    assert!(verification.sections.iter().all(|section| section.consistent));
}
