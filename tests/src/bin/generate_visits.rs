//! Writes generated visits, one JSON document a line: `generate_visits N OUT.jsonl`.

use bandleaf_tests::generate;
use std::io::Write;
use std::process::ExitCode;

fn main() -> ExitCode {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let parsed = match arguments.as_slice() {
        [count, path] => count.parse::<u64>().ok().map(|count| (count, path)),
        _ => None,
    };
    let Some((count, path)) = parsed else {
        eprintln!("usage: generate_visits N OUT.jsonl");
        return ExitCode::from(2);
    };
    match write(count, path) {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => {
            eprintln!("{path}: {error}");
            ExitCode::from(2)
        }
    }
}

fn write(count: u64, path: &str) -> std::io::Result<()> {
    let mut file = std::io::BufWriter::new(std::fs::File::create(path)?);
    for visit in generate::visits(count) {
        writeln!(file, "{visit}")?;
    }
    file.flush()
}
