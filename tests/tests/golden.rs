//! Golden values: later work shows with them that it moved nothing, to the last bit.

use bandleaf_tests::golden::{self, Golden};
use bandleaf_tests::{outline, report_path, visit};

#[test]
fn every_stored_number_has_its_bits() {
    let text = std::fs::read_to_string(golden::path()).expect("the golden values are in the repository");
    let all: Vec<Golden> = serde_json::from_str(&text).expect("the golden values are JSON");
    assert_eq!(all.len(), 20);
    let mut moved = Vec::new();
    for golden in &all {
        assert!(!golden.numbers.is_empty(), "{} has no numbers", golden.name);
        let report = outline(&visit(golden.visit.clone()));
        for stored in &golden.numbers {
            let now = report_path::number(&report, &stored.path);
            if now.map(golden::bits).as_ref() != Some(&stored.bits) {
                moved.push(format!("{}: {} was {}, is {now:?}", golden.name, stored.path, stored.decimal));
            }
        }
    }
    assert!(moved.is_empty(), "{} numbers moved:\n{}", moved.len(), moved.join("\n"));
}
