//! Coverage by simulation in small: 2 000 visits a scenario and 4 standard errors. The program `coverage` does it with
//! 20 000 and 3.

use bandleaf_tests::simulate::{Counts, PLACES, Scenario, scenarios, standard_errors};

const VISITS: usize = 2_000;
const READ_EVERY: usize = 4;
const ALLOWED: f64 = 4.0;

#[track_caller]
fn near(held: usize, of: usize, what: &str, scenario: &Scenario) {
    let off = standard_errors(held, of);
    assert!(libm::fabs(off) < ALLOWED, "{what}: {held} of {of} held, {off:.1} standard errors off, {scenario:?}");
}

fn check(scenario: &Scenario) {
    let Counts { curve, indication, value, read } = scenario.run();
    for k in 0..PLACES.len() {
        near(curve[k], VISITS, "curve", scenario);
        near(indication[k], VISITS, "new indication", scenario);
    }
    near(value.iter().sum(), read.iter().sum(), "value", scenario);
}

fn check_all(shape: &str) {
    let chosen: Vec<Scenario> = scenarios(VISITS, READ_EVERY)
        .into_iter()
        .filter(|scenario| scenario.shape == shape && scenario.is_well_determined())
        .collect();
    assert_eq!(chosen.len(), 2);
    chosen.iter().for_each(check);
}

#[test]
fn lines_with_little_noise() {
    check_all("line");
}

#[test]
fn bent_lines_with_little_noise() {
    check_all("quadratic");
}
