//! The file format, shared by the page and every leaf:
//!
//! ```text
//! FILE = P0 style P1 shell P2 seal P3 visit P4 wasm P5 program P6
//! ```
//!
//! The six texts are what stands in the raw-text elements of those names. The shell is a JSON list of the seven pieces
//! P0 to P6 around them, so that a running page can put its own file together again from its elements, without
//! writing out the document tree (which extensions and the program itself change). No piece holds the shell's own
//! text, so the list can hold them all. Line ends are LF; the last byte is the `>` of `</html>`.

use crate::document::json;
use crate::readable::typed;
use bandleaf_core::problem::Problem;

/// How the shell element begins; the first place where this stands in a file is the shell.
const SHELL_OPENING: &str = "<script type=\"application/json\" id=\"shell\">";

/// How the elements end that hold data or program.
const SCRIPT_CLOSING: &str = "</script>";

/// What makes a text file a web page, for telling apart what is no page at all from one that was damaged.
const PAGE_OPENING: &str = "<!doctype html>";

/// How every file ends.
const PAGE_CLOSING: &str = "</html>";

/// The largest file that is read.
pub const MOST_BYTES: u64 = 200_000_000;

/// The texts of the six elements.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Texts {
    /// The style sheet.
    pub style: String,
    /// The seven pieces around the texts, as a JSON list.
    pub shell: String,
    /// The digests and the report's numbers, as JSON.
    pub seal: String,
    /// The visit as JSON; `null` in a blank page.
    pub visit: String,
    /// The WebAssembly, deflated and in base64.
    pub wasm: String,
    /// The program that runs the page.
    pub program: String,
}

/// A page or leaf, taken apart.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Page {
    pieces: [String; 7],
    texts: Texts,
}

impl Page {
    /// Takes a file apart. What comes out, assembled again, is the file to the byte; anything else is refused.
    pub fn take_apart(bytes: &[u8]) -> Result<Page, Problem> {
        if bytes.len() as u64 > MOST_BYTES {
            return Err(not_ours("It is far larger than any leaf."));
        }
        let file = std::str::from_utf8(bytes).map_err(|_| not_ours("It is not UTF-8 text."))?;
        let (before, rest) = file.split_once(SHELL_OPENING).ok_or_else(|| without_shell(file))?;
        if file.contains('\r') {
            return Err(damaged("line_ends", "its line ends were changed, as some mail and transfer programs do"));
        }
        let (shell, rest) = rest.split_once(SCRIPT_CLOSING).ok_or_else(cut_short)?;
        let pieces = pieces(shell)?;
        let [head, to_shell, to_seal, to_visit, to_wasm, to_program, tail] = &pieces;

        let style = before
            .strip_prefix(head.as_str())
            .and_then(|rest| rest.strip_suffix(to_shell.strip_suffix(SHELL_OPENING)?))
            .ok_or_else(|| frame_changed("before the shell"))?;
        let mut rest = Rest { at: SCRIPT_CLOSING, text: rest };
        rest.pass(to_seal, "between shell and seal")?;
        let seal = rest.element()?;
        rest.pass(to_visit, "between seal and visit")?;
        let visit = rest.element()?;
        rest.pass(to_wasm, "between visit and wasm")?;
        let wasm = rest.element()?;
        rest.pass(to_program, "between wasm and program")?;
        let program = rest.element()?;
        rest.pass(tail, "after the program")?;
        if !rest.text.is_empty() {
            return Err(damaged("added_after_end", "something was added after its end"));
        }

        let texts = Texts {
            style: style.to_owned(),
            shell: shell.to_owned(),
            seal: seal.to_owned(),
            visit: visit.to_owned(),
            wasm: wasm.to_owned(),
            program: program.to_owned(),
        };
        texts.stay_inside()?;
        Ok(Page { pieces, texts })
    }

    /// Takes the texts of a page's elements. Assembled, they must come apart into the same texts again.
    pub fn from_texts(texts: Texts) -> Result<Page, Problem> {
        let pieces = pieces(&texts.shell)?;
        let page = Page { pieces, texts };
        if Page::take_apart(&page.assemble())? != page {
            return Err(frame_changed("around one of the elements"));
        }
        Ok(page)
    }

    /// The same page with another visit and seal.
    pub(crate) fn with(&self, seal: String, visit: String) -> Page {
        Page { pieces: self.pieces.clone(), texts: Texts { seal, visit, ..self.texts.clone() } }
    }

    /// The file, to the byte.
    pub fn assemble(&self) -> Vec<u8> {
        self.parts(&self.texts.seal).concat().into_bytes()
    }

    /// The file piece by piece, with this text as its seal.
    pub(crate) fn parts<'p>(&'p self, seal: &'p str) -> [&'p str; 13] {
        let [p0, p1, p2, p3, p4, p5, p6] = &self.pieces;
        let Texts { style, shell, seal: _, visit, wasm, program } = &self.texts;
        [p0, style, p1, shell, p2, seal, p3, visit, p4, wasm, p5, program, p6]
    }

    /// The texts of its elements.
    pub fn texts(&self) -> &Texts {
        &self.texts
    }
}

impl Texts {
    /// Refuses texts that a browser would end earlier than this format does.
    fn stay_inside(&self) -> Result<(), Problem> {
        let in_script = [&self.shell, &self.seal, &self.visit, &self.wasm, &self.program];
        let leaves = in_script.iter().any(|text| holds(text, "</script") || text.contains("<!--"));
        if leaves || holds(&self.style, "</style") || self.style.contains("<!--") {
            return Err(damaged("leaves_element", "one of its parts holds text that would end its element early"));
        }
        Ok(())
    }
}

/// Whether a text holds the needle (in lower case) in any mixture of cases.
fn holds(text: &str, needle: &str) -> bool {
    text.match_indices('<').any(|(at, _)| {
        text.as_bytes().get(at..at + needle.len()).is_some_and(|found| found.eq_ignore_ascii_case(needle.as_bytes()))
    })
}

/// What is still to be taken apart: `at` (the closing tag that was just passed over), then `text`.
struct Rest<'f> {
    at: &'static str,
    text: &'f str,
}

impl<'f> Rest<'f> {
    /// Passes over a piece of the frame, which begins with the closing tag.
    fn pass(&mut self, piece: &str, place: &str) -> Result<(), Problem> {
        let after = piece.strip_prefix(self.at).and_then(|piece| self.text.strip_prefix(piece));
        self.text =
            after.ok_or_else(|| if self.text.len() < piece.len() { cut_short() } else { frame_changed(place) })?;
        Ok(())
    }

    /// The text up to the next closing tag.
    fn element(&mut self) -> Result<&'f str, Problem> {
        let (text, rest) = self.text.split_once(SCRIPT_CLOSING).ok_or_else(cut_short)?;
        self.text = rest;
        Ok(text)
    }
}

/// The seven pieces in the shell.
fn pieces(shell: &str) -> Result<[String; 7], Problem> {
    let changed = || damaged("shell_changed", "its shell was changed");
    let list = json(shell).map_err(|_| changed())?;
    let pieces: Vec<String> = typed(&list).map_err(|_| changed())?;
    pieces.try_into().map_err(|_| changed())
}

fn without_shell(file: &str) -> Problem {
    let start = file.get(..PAGE_OPENING.len()).unwrap_or_default();
    if file.trim().is_empty() {
        not_ours("It is empty.")
    } else if start.eq_ignore_ascii_case(PAGE_OPENING) {
        not_ours("It is a web page, but has no leaf in it or was damaged at its beginning.")
    } else {
        not_ours("It is not a web page of this program.")
    }
}

fn not_ours(reason: &str) -> Problem {
    let sentence = format!("This file is no leaf and no page of Bandleaf; choose another file. {reason}");
    Problem::error("not_a_leaf", "", sentence)
}

fn cut_short() -> Problem {
    let sentence = format!("This leaf was cut short (it does not reach {PAGE_CLOSING}): get the whole file again.");
    Problem::error("cut_short", "", sentence)
}

fn frame_changed(place: &str) -> Problem {
    damaged("frame_changed", &format!("its frame was changed {place}"))
}

fn damaged(code: &str, how: &str) -> Problem {
    Problem::error(code, "", format!("This leaf is not as it was pressed: {how}. Get an unchanged copy."))
}
