//! Coverage by simulation, as a Markdown table: `coverage [VISITS]` (20 000 a scenario where nothing is said).
//!
//! Ends with status 1 where an interval that has to hold the truth with 95 % is more than 3 standard errors off.

use bandleaf_tests::simulate::{
    Counts, PLACES, STATED, Scenario, WELL_DETERMINED, scenarios, standard_errors,
};
use std::process::ExitCode;

/// Standard errors of the simulation that are allowed.
const ALLOWED: f64 = 3.0;

fn main() -> ExitCode {
    let visits = match std::env::args().nth(1).map(|text| text.parse::<usize>()) {
        None => 20_000,
        Some(Ok(visits)) if visits > 0 => visits,
        Some(_) => {
            eprintln!("usage: coverage [VISITS]");
            return ExitCode::from(2);
        }
    };
    let scenarios = scenarios(visits);
    let counts = run_all(&scenarios);
    println!(
        "{visits} visits a scenario, {} % stated, flat prior, noise unknown.",
        STATED * 100.0
    );
    println!(
        "In brackets: standard errors of the simulation. n: points. No mark: no claim is made there.\n"
    );
    println!(
        "| shape | n | noise | seed | x | u(slope)/slope | curve | new indication | value read back | mark |"
    );
    println!("|---|---|---|---|---|---|---|---|---|---|");
    let failed: usize = scenarios
        .iter()
        .zip(&counts)
        .map(|(scenario, counts)| print(scenario, counts))
        .sum();
    println!("\n{failed} marks failed.");
    if failed == 0 {
        ExitCode::SUCCESS
    } else {
        ExitCode::FAILURE
    }
}

/// Runs the scenarios on two threads; each is a sequence of its own, so that threads change no number.
fn run_all(scenarios: &[Scenario]) -> Vec<Counts> {
    let half = |first: usize| {
        move || {
            scenarios
                .iter()
                .skip(first)
                .step_by(2)
                .map(Scenario::run)
                .collect::<Vec<_>>()
        }
    };
    let (even, odd) = std::thread::scope(|scope| {
        let other = scope.spawn(half(1));
        (half(0)(), other.join().expect("the other half ran"))
    });
    let (mut even, mut odd) = (even.into_iter(), odd.into_iter());
    (0..scenarios.len())
        .filter_map(|i| if i % 2 == 0 { even.next() } else { odd.next() })
        .collect()
}

/// Prints the rows of a scenario; the number of marks that failed.
fn print(scenario: &Scenario, counts: &Counts) -> usize {
    let mut failures = 0;
    for (k, share) in PLACES.into_iter().enumerate() {
        let x = scenario.place(share);
        let slope = scenario.slope_uncertainty(x);
        let off = |held: usize| standard_errors(held, scenario.visits);
        let shown = |held: usize| {
            format!(
                "{:.2} % ({:+.1})",
                100.0 * held as f64 / scenario.visits as f64,
                off(held)
            )
        };
        let mut marked = vec![counts.curve[k], counts.indication[k]];
        if slope < WELL_DETERMINED {
            marked.push(counts.value[k]);
        }
        let missed = marked
            .iter()
            .filter(|held| libm::fabs(off(**held)) > ALLOWED)
            .count();
        failures += missed;
        let value_mark = if slope < WELL_DETERMINED {
            "all"
        } else {
            "curve, indication"
        };
        println!(
            "| {} | {} | {} | {} | {x} | {:.1} % | {} | {} | {} | {value_mark}{} |",
            scenario.shape,
            scenario.points,
            scenario.noise,
            scenario.seed,
            100.0 * slope,
            shown(counts.curve[k]),
            shown(counts.indication[k]),
            shown(counts.value[k]),
            if missed == 0 { "" } else { ": failed" },
        );
    }
    failures
}
