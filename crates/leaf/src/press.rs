//! Pressing: a page and a visit become a leaf.

use crate::canonical::element_text;
use crate::document::Document;
use crate::page::Page;
use crate::report::Appraised;
use crate::seal::{SCHEMA, Seal, changed_program_parts, file_digest};
use bandleaf_core::problem::Problem;
use bandleaf_core::report::METHOD;

/// The bytes of the leaf: the page's own program with this visit and a new seal. The page may be blank or a leaf; its
/// program must be as it was built, and compute by the same method as this one.
pub fn press(page: &Page, document: &Document) -> Result<Vec<u8>, Problem> {
    let old =
        Seal::read(&page.texts().seal).filter(|seal| seal.schema() == SCHEMA).ok_or_else(|| changed(&["seal"]))?;
    let parts = changed_program_parts(page.texts(), &old);
    if !parts.is_empty() {
        return Err(changed(&parts));
    }
    if old.method() != Some(u64::from(METHOD)) {
        let sentence = format!(
            "The page computes by method {} and this program by method {METHOD}: use a page of the same version.",
            old.method().unwrap_or_default()
        );
        return Err(Problem::error("other_method", "", sentence));
    }
    let numbers = Appraised::new(document)?.numbers()?;
    let seal = Seal::new(page, old.program(), &document.digest(), numbers);
    let visit = element_text(document.canonical());
    let leaf = page.with(seal.text(), visit.clone());
    let sealed = seal.with_file(&file_digest(&leaf, &seal));
    Ok(page.with(sealed.text(), visit).assemble())
}

fn changed(parts: &[&str]) -> Problem {
    let sentence = format!(
        "The page is not as it was built ({} changed), so no leaf is pressed from it: take an unchanged copy of the page.",
        parts.join(", ")
    );
    Problem::error("page_changed", "", sentence)
}
