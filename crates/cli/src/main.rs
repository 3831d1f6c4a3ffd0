//! The command `bandleaf`: the same appraisal for scripts and for the tests.
//!
//! Results go to standard output only. What cannot be used ends with status 2 and one line on standard error.

mod appraise;
mod arguments;
mod files;
mod press;
mod read;
mod refusal;
mod table;
mod verify;
mod words;

use arguments::Command;
use refusal::Refusal;
use std::io::{ErrorKind, Write};
use std::process::ExitCode;

/// What a command prints, and the refusal that it may end with all the same.
struct Outcome {
    printed: String,
    refusal: Option<Refusal>,
}

impl From<String> for Outcome {
    fn from(printed: String) -> Outcome {
        Outcome { printed, refusal: None }
    }
}

fn main() -> ExitCode {
    let outcome = arguments::from_command_line().and_then(run);
    let (printed, refusal) = match outcome {
        Ok(outcome) => (outcome.printed, outcome.refusal),
        Err(refusal) => (String::new(), Some(refusal)),
    };
    let refusal = match print(&printed) {
        Ok(()) => refusal,
        Err(refused) => Some(refused),
    };
    match refusal {
        None => ExitCode::SUCCESS,
        Some(refusal) => {
            // Nobody is left to tell when standard error is closed too.
            let _ = writeln!(std::io::stderr(), "{refusal}");
            ExitCode::from(2)
        }
    }
}

fn run(command: Command) -> Result<Outcome, Refusal> {
    match command {
        Command::Help => Ok(arguments::HELP.to_owned().into()),
        Command::Version => Ok(format!("bandleaf {}\n", bandleaf_leaf::VERSION).into()),
        Command::Appraise(arguments) => appraise::run(&arguments),
        Command::Press(arguments) => press::run(&arguments).map(Outcome::from),
        Command::Read(arguments) => read::run(&arguments).map(Outcome::from),
        Command::Verify(arguments) => verify::run(&arguments),
    }
}

/// Writes to standard output; a reader that has closed it has seen enough.
fn print(text: &str) -> Result<(), Refusal> {
    let mut output = std::io::stdout().lock();
    match output.write_all(text.as_bytes()).and_then(|()| output.flush()) {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => {
            Err(Refusal::new(format!("The result could not be written ({error}): look where standard output goes.")))
        }
        _ => Ok(()),
    }
}
