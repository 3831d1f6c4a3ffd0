//! Writes the golden values anew. Run it on purpose only: a number that moves means a new version of the method.

use bandleaf_tests::golden::{self, Golden};
use std::process::ExitCode;

fn main() -> ExitCode {
    let all: Vec<Golden> = golden::visits()
        .into_iter()
        .map(|(name, visit)| Golden { name, numbers: golden::numbers(&visit), visit })
        .collect();
    let written = serde_json::to_string_pretty(&all)
        .map_err(std::io::Error::other)
        .and_then(|text| std::fs::write(golden::path(), text + "\n"));
    match written {
        Ok(()) => {
            let numbers: usize = all.iter().map(|golden| golden.numbers.len()).sum();
            println!("{} visits, {numbers} numbers: {}", all.len(), golden::path().display());
            ExitCode::SUCCESS
        }
        Err(error) => {
            eprintln!("{error}");
            ExitCode::from(2)
        }
    }
}
