//! Coverage by simulation, as a Markdown table: `coverage [VISITS]` (20 000 a scenario where nothing is said).
//!
//! Ends with status 1 where an interval that has to hold the truth with 95 % is more than 3 standard errors off.

use bandleaf_tests::simulate::{Counts, PLACES, STATED, Scenario, scenarios, standard_errors};
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
    let scenarios = scenarios(visits, 1);
    let counts = run_all(&scenarios);
    println!("{visits} visits a scenario, {} % stated, flat prior, noise unknown, range 0 to 100.", STATED * 100.0);
    println!(
        "A value is read back from one new indication, at the places in turn. In brackets: standard errors of the"
    );
    println!(
        "simulation; the marks, at most {ALLOWED} of them, are the curve and the new indication everywhere, and the value at"
    );
    println!("all places together where u(slope)/slope is below 5 %.\n");
    println!("| shape | n | noise | seed | x | u(slope)/slope | curve | new indication | value | read |");
    println!("|---|---|---|---|---|---|---|---|---|---|");
    let failed: usize = scenarios.iter().zip(&counts).map(|(scenario, counts)| print(scenario, counts)).sum();
    println!("\n{failed} marks failed.");
    if failed == 0 { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}

/// Runs the scenarios on two threads; each is a sequence of its own, so that threads change no number.
fn run_all(scenarios: &[Scenario]) -> Vec<Counts> {
    let half = |first: usize| move || scenarios.iter().skip(first).step_by(2).map(Scenario::run).collect::<Vec<_>>();
    let (even, odd) = std::thread::scope(|scope| {
        let other = scope.spawn(half(1));
        (half(0)(), other.join().expect("the other half ran"))
    });
    let (mut even, mut odd) = (even.into_iter(), odd.into_iter());
    (0..scenarios.len()).filter_map(|i| if i % 2 == 0 { even.next() } else { odd.next() }).collect()
}

/// Prints the rows of a scenario; the number of marks that failed.
fn print(scenario: &Scenario, counts: &Counts) -> usize {
    let mut failed = 0;
    let mut marked = |held: usize, of: usize| {
        let missed = libm::fabs(standard_errors(held, of)) > ALLOWED;
        failed += usize::from(missed);
        format!("{}{}", share(held, of), if missed { " **failed**" } else { "" })
    };
    let Scenario { shape, points, noise, seed, visits, .. } = scenario;
    for (k, place) in PLACES.into_iter().enumerate() {
        let x = scenario.place(place);
        println!(
            "| {shape} | {points} | {noise} | {seed} | {x} | {:.1} % | {} | {} | {} | {} |",
            100.0 * scenario.slope_uncertainty(x),
            marked(counts.curve[k], *visits),
            marked(counts.indication[k], *visits),
            share(counts.value[k], counts.read[k]),
            counts.read[k],
        );
    }
    if scenario.is_well_determined() {
        let (held, of) = (counts.value.iter().sum(), counts.read.iter().sum());
        println!("| {shape} | {points} | {noise} | {seed} | all | | | | {} | {of} |", marked(held, of));
    }
    failed
}

fn share(held: usize, of: usize) -> String {
    format!("{:.2} % ({:+.1})", 100.0 * held as f64 / of as f64, standard_errors(held, of))
}
