//! A small page in the file format, sealed here by the description of the format and not by the code under test, and
//! a leaf to open.
#![allow(dead_code)]

use bandleaf_leaf::{Document, Page, Texts, press, sha256};
use serde_json::{Value, json};

pub const ZEROS: &str = "sha256:0000000000000000000000000000000000000000000000000000000000000000";

/// P0 to P6.
pub const PIECES: [&str; 7] = [
    "<!doctype html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<title>Bandleaf é</title>\n<style id=\"style\">",
    "</style>\n</head>\n<body>\n<p id=\"damaged\">This file is damaged.</p>\n<script type=\"application/json\" id=\"shell\">",
    "</script>\n<script type=\"application/json\" id=\"seal\">",
    "</script>\n<script type=\"application/json\" id=\"visit\">",
    "</script>\n<script type=\"text/plain\" id=\"wasm\">",
    "</script>\n<script id=\"program\">",
    "</script>\n</body>\n</html>",
];

pub fn escaped(json: &str) -> String {
    json.replace('<', "\\u003c").replace('\u{2028}', "\\u2028").replace('\u{2029}', "\\u2029")
}

pub fn assemble(texts: &Texts) -> String {
    let texts = [&texts.style, &texts.shell, &texts.seal, &texts.visit, &texts.wasm, &texts.program];
    let mut file = String::new();
    for (index, piece) in PIECES.iter().enumerate() {
        file.push_str(piece);
        if let Some(text) = texts.get(index) {
            file.push_str(text);
        }
    }
    file
}

/// Writes a seal value into the texts with the digest of the file; objects of the seal hold plain ASCII names, which
/// serde_json sorts as RFC 8785 does.
pub fn sealed(mut texts: Texts, mut seal: Value) -> Texts {
    seal["file"] = json!(ZEROS);
    texts.seal = escaped(&bandleaf_leaf::canonical_json(&seal).expect("plain values"));
    let digest = sha256(assemble(&texts).as_bytes());
    texts.seal = texts.seal.replacen(ZEROS, &digest, 1);
    texts
}

/// The texts of a page without a visit.
pub fn blank_texts() -> Texts {
    let texts = Texts {
        style: "p { color: green }\n".to_owned(),
        shell: escaped(&bandleaf_leaf::canonical_json(&PIECES).expect("plain values")),
        seal: String::new(),
        visit: "null".to_owned(),
        wasm: "AGFzbQEAAAA=".to_owned(),
        program: "\"use strict\";\nif (1 < 2) document.getElementById(\"damaged\").remove();\n".to_owned(),
    };
    let digests = json!({
        "shell": sha256(texts.shell.as_bytes()), "style": sha256(texts.style.as_bytes()),
        "wasm": sha256(texts.wasm.as_bytes()), "program": sha256(texts.program.as_bytes()),
        "visit": null, "report": null,
    });
    let program =
        json!({ "name": "bandleaf", "version": bandleaf_leaf::VERSION, "method": bandleaf_core::report::METHOD });
    let seal = json!({ "schema": "bandleaf.leaf.1", "program": program, "digests": digests, "report": null });
    sealed(texts, seal)
}

pub fn blank_page() -> Vec<u8> {
    assemble(&blank_texts()).into_bytes()
}

/// A visit with a note; its figures are invented.
pub fn visit(note: &str) -> Value {
    json!({
        "schema": "bandleaf.visit.1",
        "instrument": { "unit": "mm", "range": [0, 2500], "output": { "resolution": 1 } },
        "occasion": { "notes": note },
        "points": [
            { "reference": 150, "indication": [151, 150, 151] },
            { "reference": 800.5, "indication": 803 },
            { "reference": 1600, "indication": 1605 },
            { "reference": 2400, "indication": 2409 }
        ],
        "model": { "terms": ["1", "x"] },
        "ask": { "readings": [[812, 813]] }
    })
}

pub fn document(note: &str) -> Document {
    Document::from_value(visit(note)).expect("a visit")
}

pub fn leaf(note: &str) -> Vec<u8> {
    let page = Page::take_apart(&blank_page()).expect("the page");
    press(&page, &document(note)).expect("a leaf")
}

/// A leaf with a short report: three points and a constant.
pub fn small_leaf() -> Vec<u8> {
    let value = json!({
        "occasion": { "notes": "é" },
        "points": [
            { "reference": 1, "indication": 1.5 },
            { "reference": 2, "indication": 1.25 },
            { "reference": 3, "indication": 1.75 }
        ],
        "model": { "terms": ["1"] }
    });
    let page = Page::take_apart(&blank_page()).expect("the page");
    press(&page, &Document::from_value(value).expect("a visit")).expect("a leaf")
}

/// Texts and seal of a leaf.
pub fn parts(leaf: &[u8]) -> (Texts, Value) {
    let texts = Page::take_apart(leaf).expect("a leaf").texts().clone();
    let seal = serde_json::from_str(&texts.seal).expect("a seal");
    (texts, seal)
}

/// Seals a changed report into a leaf, with all digests right.
pub fn forged(leaf: &[u8], change: impl FnOnce(&mut Value)) -> Vec<u8> {
    let (texts, mut seal) = parts(leaf);
    change(&mut seal);
    let report = bandleaf_leaf::canonical_json(&seal["report"]).expect("plain values");
    seal["digests"]["report"] = json!(sha256(report.as_bytes()));
    assemble(&sealed(texts, seal)).into_bytes()
}

/// Numbers that look random: SplitMix64 (Steele, Lea, Flood 2014), so that a failing case can be repeated.
pub struct Draws(pub u64);

impl Draws {
    pub fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    pub fn below(&mut self, count: usize) -> usize {
        (self.next() % count.max(1) as u64) as usize
    }
}
