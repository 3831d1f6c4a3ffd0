//! Classical least squares with Student-t intervals: statsmodels and SciPy, figures frozen by scripts/freeze_classical.py.

use bandleaf_tests::fixture::Fixture;

fn check(case: &str) {
    Fixture::load("classical.json").only(case).check();
}

#[test]
fn body_fat_by_four_shapes() {
    check("body fat");
}

#[test]
fn several_explanatory_quantities() {
    check("bird extinction");
}

#[test]
fn means_of_unequal_numbers_of_indications() {
    check("transmitter");
}

#[test]
fn reference_from_indication() {
    check("reference from indication");
}
