//! Worked examples with printed results; the source stands in each case of the fixture. Printed figures are compared to
//! half of their last digit, the same figures from exact arithmetic to 1e-10.

use bandleaf_tests::fixture::Fixture;

fn check(example: &str) {
    Fixture::load("published.json").only(example).check();
}

/// JCGM 100:2008, Annex H.3, both as published and turned round.
#[test]
fn thermometer_line_of_the_gum() {
    check("gum_h3");
}

/// ISO/TS 28037:2010, clause 6.
#[test]
fn line_with_equal_known_uncertainties() {
    check("iso28037_equal");
}

/// ISO/TS 28037:2010, clause 6.
#[test]
fn line_with_unequal_known_uncertainties() {
    check("iso28037_unequal");
}

/// Eurachem/CITAC Guide CG 4, third edition, example A5.
#[test]
fn cadmium_by_absorption() {
    check("eurachem_a5");
}

/// NIST/SEMATECH e-Handbook, section 4.6.1.
#[test]
fn load_cell_read_back() {
    check("nist_loadcell_inverse");
}

/// J. N. Miller and J. C. Miller, Statistics and Chemometrics for Analytical Chemistry, chapter 5.
#[test]
fn fluorescein_read_back() {
    check("miller_fluorescein");
}

/// M. Clyde et al., An Introduction to Bayesian Thinking, sections 4.1 to 4.3.
#[test]
fn conjugate_update_of_a_constant() {
    check("tthm_normal_gamma");
}

/// P. D. Hoff, A First Course in Bayesian Statistical Methods, sections 9.1 and 9.2.
#[test]
fn conjugate_update_of_four_coefficients() {
    check("hoff_gprior");
}
