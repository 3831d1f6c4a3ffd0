//! Leaves of released versions: every later version must open them, and none of their bytes may ever change.

use bandleaf_leaf::{Outcome, verify};
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

/// Name and digest of every leaf in the collection. Entries are added, never changed.
const COLLECTION: [(&str, &str); 2] = [
    ("header-tank-0.1.0.html", "sha256:9db6071c372d51edd6aeeffbee185c4b7c8a5b3ef1dc7b63dd572abb3a98bab5"),
    ("transmitter-0.1.0.html", "sha256:67084e8b3367496b78eafd1e8dba0c45b97528fc19d7a8b4b081385eff1c1727"),
];

fn frozen() -> BTreeMap<String, Vec<u8>> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("frozen");
    let files = fs::read_dir(folder).expect("the frozen collection").map(|entry| entry.expect("a file").path());
    files
        .filter(|path| path.extension().is_some_and(|e| e == "html"))
        .map(|path| {
            let name = path.file_name().expect("a name").to_string_lossy().into_owned();
            (name, fs::read(&path).expect("a leaf"))
        })
        .collect()
}

#[test]
fn the_collection_is_complete() {
    let names: Vec<String> = frozen().into_keys().collect();
    assert_eq!(names, COLLECTION.map(|(name, _)| name.to_owned()));
}

#[test]
fn every_frozen_leaf_opens_with_its_numbers() {
    let files = frozen();
    for (name, digest) in COLLECTION {
        let verification = verify(&files[name], Some(digest));
        assert_eq!(verification.expected, Some(true), "{name}: the digest is another");
        assert!(verification.holds(), "{name}: {}", verification.sentence());
        let opened = verification.opened.unwrap_or_else(|problem| panic!("{name}: {problem}"));
        let accepted = [Outcome::Identical, Outcome::Same, Outcome::EarlierMethod];
        assert!(accepted.contains(&opened.outcome), "{name}: {}", opened.sentence);
        assert!(opened.document.is_some_and(|d| d.visit().is_ok_and(|v| v.points.len() > 5)), "{name}: no visit");
    }
}
