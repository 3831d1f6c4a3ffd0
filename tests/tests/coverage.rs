//! Coverage by simulation in small: 2 000 visits a scenario and 4 standard errors. The program `coverage` does it with
//! 20 000 and 3.

use bandleaf_tests::simulate::{PLACES, Scenario, WELL_DETERMINED, scenarios, standard_errors};

const VISITS: usize = 2_000;
const ALLOWED: f64 = 4.0;

fn check(scenario: &Scenario) {
    let counts = scenario.run();
    let off = |held: usize| standard_errors(held, VISITS);
    for (k, share) in PLACES.into_iter().enumerate() {
        let x = scenario.place(share);
        assert!(
            libm::fabs(off(counts.curve[k])) < ALLOWED,
            "curve at {x}: {} of {VISITS}, {scenario:?}",
            counts.curve[k]
        );
        let held = counts.indication[k];
        assert!(
            libm::fabs(off(held)) < ALLOWED,
            "indication at {x}: {held} of {VISITS}, {scenario:?}"
        );
        if scenario.slope_uncertainty(x) < WELL_DETERMINED {
            let held = counts.value[k];
            assert!(
                libm::fabs(off(held)) < ALLOWED,
                "value at {x}: {held} of {VISITS}, {scenario:?}"
            );
        }
    }
}

#[test]
fn lines_with_little_noise() {
    scenarios(VISITS)
        .iter()
        .filter(|s| s.shape == "line" && s.noise == 1.0)
        .for_each(check);
}

#[test]
fn bent_lines_with_little_noise() {
    scenarios(VISITS)
        .iter()
        .filter(|s| s.shape == "quadratic" && s.noise == 1.0)
        .for_each(check);
}
