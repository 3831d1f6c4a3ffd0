//! The model's definitions evaluated in multiple precision, independently of this program. Closed forms to
//! max(1e-10, 20 × the change of the exact result when its inputs are rounded to doubles); places on the value axis to
//! 1e-6 of the value's standard uncertainty.

use bandleaf_tests::fixture::Fixture;

fn check(case: &str) {
    Fixture::load("oracle.json").only(case).check();
}

#[test]
fn flat_prior_line_with_replicates() {
    check("A-scale-line");
}

#[test]
fn flat_prior_far_from_the_origin() {
    check("A-counter-ill-scaled");
}

#[test]
fn flat_prior_quadratic_through_means() {
    check("A-thermo-quadratic-means");
}

#[test]
fn known_unequal_uncertainties() {
    check("B-weighted-flat");
}

#[test]
fn shrinkage_with_known_noise() {
    check("B-shrinkage-a-b");
}

#[test]
fn conjugate_line() {
    check("C-scale-line");
}

#[test]
fn conjugate_with_fewer_points_than_terms() {
    check("C-two-points");
}

#[test]
fn value_from_a_good_line() {
    check("F-good-line");
}

#[test]
fn value_from_a_slope_near_zero() {
    check("F-weak-slope");
}

#[test]
fn value_with_two_modes() {
    check("F-two-modes");
}
