//! Reading and writing files: sizes are checked before reading, and a file is written whole or not at all.

use crate::refusal::Refusal;
use std::fs::{self, File, OpenOptions};
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};

/// The bytes of a file, if it is not larger than `most`.
pub fn read(path: &Path, most: u64) -> Result<Vec<u8>, Refusal> {
    let unreadable = |error: io::Error| {
        Refusal::new(format!("{}: this file cannot be read ({error}): check its name and place.", path.display()))
    };
    let file = File::open(path).map_err(unreadable)?;
    let facts = file.metadata().map_err(unreadable)?;
    if facts.is_dir() {
        return Err(Refusal::new(format!("{}: this is a folder: name a file in it.", path.display())));
    }
    let too_large = || {
        Refusal::new(format!(
            "{}: this file is larger than {} megabytes, more than is read: check that it is the right one, or split it.",
            path.display(),
            most / 1_000_000
        ))
    };
    if facts.len() > most {
        return Err(too_large());
    }
    let mut bytes = Vec::new();
    // A pipe has no size to look at beforehand.
    file.take(most + 1).read_to_end(&mut bytes).map_err(unreadable)?;
    if bytes.len() as u64 > most { Err(too_large()) } else { Ok(bytes) }
}

/// Writes a file beside its place and moves it there when it is whole.
pub fn write(path: &Path, bytes: &[u8]) -> Result<(), Refusal> {
    let part = beside(path);
    let written = write_new(&part, bytes).and_then(|()| fs::rename(&part, path));
    written.map_err(|error| {
        // Nothing is left to do about a part that cannot be removed either.
        let _ = fs::remove_file(&part);
        Refusal::new(format!("{}: this file cannot be written ({error}): choose another place.", path.display()))
    })
}

fn write_new(part: &Path, bytes: &[u8]) -> io::Result<()> {
    let mut file = OpenOptions::new().write(true).create_new(true).open(part)?;
    file.write_all(bytes)?;
    file.sync_all()
}

/// A name in the same folder that nobody else uses.
fn beside(path: &Path) -> PathBuf {
    let mut name = path.file_name().unwrap_or_default().to_owned();
    name.push(format!(".part-{}", std::process::id()));
    path.with_file_name(name)
}
