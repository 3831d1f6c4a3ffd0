//! `press`: a page and a visit become a leaf.

use crate::arguments::Press;
use crate::files;
use crate::refusal::Refusal;
use bandleaf_leaf::{Document, MOST_BYTES, Page, page, verify};
use std::path::{Path, PathBuf};

include!(concat!(env!("OUT_DIR"), "/page.rs"));

/// The name of the page as it is built.
const PAGE_NAME: &str = "bandleaf.html";

/// Writes the leaf and prints its digest.
pub fn run(arguments: &Press) -> Result<String, Refusal> {
    let name = arguments.file.display().to_string();
    let bytes = files::read(&arguments.file, MOST_BYTES)?;
    let document = Document::parse(&bytes).map_err(|problem| Refusal::of_file(&name, &problem))?;
    let page = page_to_use(arguments.page.as_deref())?;
    let leaf = bandleaf_leaf::press(&page, &document).map_err(|problem| Refusal::of_file(&name, &problem))?;
    files::write(&arguments.out, &leaf)?;
    let digest = verify(&leaf, None).digest.unwrap_or_default();
    Ok(format!("{}: pressed, digest {digest}\n", arguments.out.display()))
}

/// The page that was named, else the one inside this binary, else the one beside it.
fn page_to_use(named: Option<&Path>) -> Result<Page, Refusal> {
    match (named, CARRIED) {
        (Some(path), _) => page_from(path),
        (None, Some(bytes)) => take_apart(bytes, "the page inside this program"),
        (None, None) => match beside().filter(|path| path.is_file()) {
            Some(path) => page_from(&path),
            None => Err(Refusal::new(format!(
                "This program was built without a page and finds no {PAGE_NAME} beside it: name one with --page {PAGE_NAME}."
            ))),
        },
    }
}

fn page_from(path: &Path) -> Result<Page, Refusal> {
    take_apart(&files::read(path, page::MOST_BYTES)?, &path.display().to_string())
}

fn take_apart(bytes: &[u8], name: &str) -> Result<Page, Refusal> {
    Page::take_apart(bytes).map_err(|problem| Refusal::of_file(name, &problem))
}

fn beside() -> Option<PathBuf> {
    Some(std::env::current_exe().ok()?.with_file_name(PAGE_NAME))
}
