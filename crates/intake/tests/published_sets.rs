//! The NIST calibration sets, as they stand: NIST StRD, linear regression, public domain.

use bandleaf_intake::{OneOrMany, Options, read_bytes, read_text};

const NORRIS: &str = include_str!("fixtures/norris.csv");
const PONTIUS: &str = include_str!("fixtures/pontius.csv");

/// Every pair of the file, taken apart as simply as can be.
fn plain(text: &str) -> Vec<(f64, f64)> {
    let pair = |line: &str| line.split_once(',').map(|(x, y)| (x.parse().expect("x"), y.trim().parse().expect("y")));
    text.lines().skip(1).filter_map(pair).collect()
}

fn read(text: &str) -> Vec<(f64, f64)> {
    let intake = read_bytes(text.as_bytes(), &Options::default());
    assert_eq!(intake.questions, []);
    let pair = |point: &bandleaf_intake::Point| match (point.reference, &point.indication) {
        (Some(reference), Some(OneOrMany::One(indication))) => (reference, *indication),
        _ => panic!("a point is not whole: {point:?}"),
    };
    intake.points.iter().map(pair).collect()
}

#[test]
fn norris_and_pontius_as_they_stand() {
    // Sizes: NIST StRD, 36 observations of Norris and 40 of Pontius.
    for (text, size) in [(NORRIS, 36), (PONTIUS, 40)] {
        assert_eq!(read(text).len(), size);
        assert_eq!(read(text), plain(text));
    }
}

#[test]
fn the_same_in_the_columns_of_the_original() {
    // In the original layout y stands before x, in columns filled with spaces under a line "Data:  y  x".
    for text in [NORRIS, PONTIUS] {
        let rows: String = plain(text).iter().map(|(x, y)| format!("{y:>14} {x:>12}\n")).collect();
        assert_eq!(read(&format!("Data:       y              x\n{rows}")), plain(text));
        let swapped: Vec<(f64, f64)> = plain(text).iter().map(|(x, y)| (*y, *x)).collect();
        let headless = read_text(&rows, &Options::default());
        assert!(headless.problems.iter().any(|problem| problem.code == "columns_in_order"));
        assert_eq!(read(&rows), swapped);
    }
}

#[test]
fn the_same_with_decimal_commas() {
    for text in [NORRIS, PONTIUS] {
        let german = text.replace(',', ";").replace('.', ",");
        assert_eq!(read(&german), plain(text));
    }
}
