//! The built command, as a script uses it.

#[path = "../../leaf/tests/common/mod.rs"]
mod common;

use serde_json::{Value, json};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// A folder of its own for each test.
struct Folder(PathBuf);

impl Folder {
    fn new(test: &str) -> Folder {
        let path = std::env::temp_dir().join(format!("bandleaf-{test}-{}", std::process::id()));
        fs::create_dir_all(&path).expect("a folder for the test");
        Folder(path)
    }

    fn file(&self, name: &str, content: impl AsRef<[u8]>) -> PathBuf {
        let path = self.0.join(name);
        fs::write(&path, content).expect("a file for the test");
        path
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.0);
    }
}

fn bandleaf<I: AsRef<std::ffi::OsStr>>(arguments: impl IntoIterator<Item = I>) -> Output {
    Command::new(env!("CARGO_BIN_EXE_bandleaf")).args(arguments).output().expect("the command runs")
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).expect("UTF-8")
}

/// Standard output of a run that went well.
#[track_caller]
fn printed(output: &Output) -> String {
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert!(output.stderr.is_empty(), "{}", text(&output.stderr));
    text(&output.stdout)
}

/// The one line on standard error of a run that was refused.
#[track_caller]
fn refused(output: &Output) -> String {
    assert_eq!(output.status.code(), Some(2), "{}", text(&output.stdout));
    let said = text(&output.stderr);
    assert!(said.ends_with('\n') && said.trim_end().lines().count() == 1, "{said:?}");
    said
}

fn path(path: &Path) -> &str {
    path.to_str().expect("a plain name")
}

/// A straight line worked out by hand, no source. Points (1, 3), (2, 5), (3, 7), (4, 9.5),
/// (5, 10.5): x̄ = 3, ȳ = 7, Sxx = 10, Sxy = 19.5, so b = 1.95 and a = 1.15.
const TABLE: &str = "level / mm;shown / mm\n1;3\n2;5\n3;7\n4;9,5\n5;10,5\n";

#[test]
fn a_table_gives_the_line_known_by_hand() {
    let folder = Folder::new("table");
    let table = folder.file("points.csv", TABLE);
    let arguments = ["appraise", path(&table), "--reference", "level", "--indication", "shown", "--terms", "1, x"];
    let json = [&arguments[..], &["--reading", "7", "--reading", "8,5", "--json"]].concat();
    let output = bandleaf(json);
    let report: Value = serde_json::from_str(&printed(&output)).expect("JSON");
    let estimate = |index: usize| report["fit"]["terms"][index]["estimate"].as_f64().expect("a number");
    assert!((estimate(0) - 1.15).abs() < 1e-14 && (estimate(1) - 1.95).abs() < 1e-14, "{report}");
    assert_eq!(report["units"]["input"], "mm");
    assert_eq!(report["readings"].as_array().map(Vec::len), Some(2));
    assert_eq!(report["readings"][1]["indications"], json!([8.5]));

    let people = printed(&bandleaf(arguments));
    assert!(people.contains("a = 1.1") && people.contains("± ") && people.contains("3 degrees of freedom"), "{people}");
}

#[test]
fn columns_may_be_numbers_and_repeats() {
    let folder = Folder::new("columns");
    let table = folder.file("points.csv", "1,3,3.5\n2,5,5.5\n3,7,7.5\n");
    let output = bandleaf([
        "appraise",
        path(&table),
        "--reference",
        "1",
        "--indication",
        "2",
        "--indication",
        "3",
        "--terms",
        "1,x",
        "--json",
    ]);
    let report: Value = serde_json::from_str(&printed(&output)).expect("JSON");
    assert_eq!(report["fit"]["points_used"], 6);
    assert_eq!(report["fit"]["terms"][1]["estimate"], json!(2));
}

#[test]
fn influences_become_variables_of_the_terms() {
    let folder = Folder::new("influences");
    let rows: String = (0..8).map(|k| format!("{k},{},{}\n", k * 2 + (k % 3) * 10 + k % 2, k % 3)).collect();
    let table = folder.file("points.csv", format!("reference,indication,temperature / °C\n{rows}"));
    let output = bandleaf([
        "appraise",
        path(&table),
        "--reference",
        "reference",
        "--indication",
        "indication",
        "--influence",
        "temperature",
        "--terms",
        "1, x, temperature",
        "--json",
    ]);
    let report: Value = serde_json::from_str(&printed(&output)).expect("JSON");
    assert_eq!(report["fit"]["terms"][2]["term"], "temperature");
    let slope = report["fit"]["terms"][2]["estimate"].as_f64().expect("a number");
    assert!((slope - 10.0).abs() < 0.5, "{slope}");
}

#[test]
fn a_cell_that_cannot_be_read_is_refused() {
    let folder = Folder::new("cell");
    let table = folder.file("points.csv", "reference,indication\n1,3\n2,broken\n3,7\n4,9\n");
    let said = refused(&bandleaf([
        "appraise",
        path(&table),
        "--reference",
        "reference",
        "--indication",
        "indication",
        "--terms",
        "1, x",
    ]));
    assert!(said.contains("broken") && said.contains("Row 3"), "{said}");
    let said = refused(&bandleaf(["appraise", path(&table), "--reference", "reference", "--indication", "indication"]));
    assert!(said.contains("--terms"), "{said}");
    let said = refused(&bandleaf([
        "appraise",
        path(&table),
        "--reference",
        "depth",
        "--indication",
        "indication",
        "--terms",
        "1, x",
    ]));
    assert!(said.contains("depth"), "{said}");
}

#[test]
fn an_ambiguous_column_is_asked_about() {
    let folder = Folder::new("ambiguous");
    let table = folder.file("points.csv", "reference;indication\n1;1,234\n2;2,345\n3;3,456\n");
    let arguments = [
        "appraise",
        path(&table),
        "--reference",
        "reference",
        "--indication",
        "indication",
        "--terms",
        "1,x",
        "--json",
    ];
    assert!(refused(&bandleaf(arguments)).contains("--decimal comma"));
    let answered = [&arguments[..], &["--decimal", "comma"]].concat();
    let report: Value = serde_json::from_str(&printed(&bandleaf(answered))).expect("JSON");
    assert_eq!(report["points"][0]["indication"], json!(1.234));
}

#[test]
fn a_visit_that_gives_no_fit_ends_with_two() {
    let folder = Folder::new("no-fit");
    let visit = folder.file("visit.json", r#"{"points":[{"reference":1,"indication":2}],"model":{"terms":["1","x"]}}"#);
    let output = bandleaf(["appraise", path(&visit), "--json"]);
    let said = refused(&output);
    let report: Value = serde_json::from_str(&text(&output.stdout)).expect("the report all the same");
    assert_eq!(report["fit"], Value::Null);
    let error = report["messages"][0]["sentence"].as_str().expect("a sentence");
    assert!(said.contains(error), "{said}");
    let output = bandleaf(["appraise", path(&visit)]);
    refused(&output);
    assert!(output.stdout.is_empty());
}

#[test]
fn what_is_no_visit_is_refused() {
    let folder = Folder::new("no-visit");
    for (name, content, word) in [
        ("broken.json", &b"{\"points\": [1,\n}"[..], "line 2"),
        ("large.json", b"{\"points\": [{\"reference\": 1e400}]}", "too large"),
        ("text.json", b"{\"points\": [{\"indication\": \"12,5\"}]}", "Point 1, indication"),
        ("leaf.html", b"<!doctype html><html></html>", "bandleaf read"),
        ("table.csv", b"1,2\n3,4\n", "--reference"),
        ("empty.json", b"", "cut short"),
        ("list.json", b"[]", "not a visit"),
    ] {
        let file = folder.file(name, content);
        let said = refused(&bandleaf(["appraise", path(&file)]));
        assert!(said.contains(name) && said.contains(word), "{said}");
    }
    assert!(refused(&bandleaf(["appraise", "nowhere.json"])).contains("nowhere.json"));
    assert!(refused(&bandleaf(["appraise", path(&folder.0)])).contains("folder"));
}

#[test]
fn a_file_of_300_megabytes_is_refused_by_its_size() {
    let folder = Folder::new("large");
    let file = folder.0.join("large.json");
    fs::File::create(&file).and_then(|file| file.set_len(300_000_000)).expect("a file that takes no room");
    assert!(refused(&bandleaf(["appraise", path(&file)])).contains("megabytes"));
    assert!(refused(&bandleaf(["verify", path(&file)])).contains("megabytes"));
}

/// A pressed leaf and the page it came from.
fn pressed(folder: &Folder) -> PathBuf {
    let page = folder.file("page.html", common::blank_page());
    let visit = folder.file("visit.json", common::visit("a note").to_string());
    let leaf = folder.0.join("leaf.html");
    let said = printed(&bandleaf(["press", path(&visit), "--out", path(&leaf), "--page", path(&page)]));
    assert!(said.contains("digest sha256:"), "{said}");
    leaf
}

#[test]
fn press_verify_and_read_go_together() {
    let folder = Folder::new("press");
    let leaf = pressed(&folder);
    assert_eq!(fs::read(&leaf).expect("the leaf"), common::leaf("a note"));
    let left: Vec<_> =
        fs::read_dir(&folder.0).expect("the folder").map(|entry| entry.expect("an entry").file_name()).collect();
    assert_eq!(left.len(), 3, "a part was left behind: {left:?}");

    let verified = printed(&bandleaf(["verify", path(&leaf)]));
    assert!(verified.contains("Identical") && verified.contains("who made it"), "{verified}");
    let digest =
        verified.lines().find_map(|line| line.strip_prefix("digest of the leaf  ")).expect("a digest").to_owned();
    assert!(printed(&bandleaf(["verify", path(&leaf), "--expect", &digest])).contains("is the expected one"));
    let other = bandleaf(["verify", path(&leaf), "--expect", &digest.replace('a', "b").replace('1', "2")]);
    assert!(refused(&other).contains("another leaf"));

    let value = printed(&bandleaf(["read", path(&leaf), "812", "813,0"]));
    let report: Value =
        serde_json::from_str(&printed(&bandleaf(["appraise", path(&folder.0.join("visit.json")), "--json"])))
            .expect("JSON");
    let display = report["readings"][0]["value"]["display"].as_str().expect("a display");
    assert!(value.starts_with("812, 813 mm: ") && value.contains(display), "{value}");
}

#[test]
fn pressing_from_a_leaf_replaces_its_visit() {
    let folder = Folder::new("again");
    let leaf = pressed(&folder);
    let other = folder.file("other.json", common::visit("another note").to_string());
    printed(&bandleaf(["press", path(&other), "--out", path(&leaf), "--page", path(&leaf)]));
    assert_eq!(fs::read(&leaf).expect("the leaf"), common::leaf("another note"));
}

#[test]
fn an_altered_leaf_gives_no_value() {
    let folder = Folder::new("altered");
    let leaf = pressed(&folder);
    let content = fs::read_to_string(&leaf).expect("the leaf").replace("\"indication\":1605", "\"indication\":1606");
    let altered = folder.file("altered.html", content);
    let output = bandleaf(["read", path(&altered), "812"]);
    assert!(refused(&output).contains("visit"));
    assert!(output.stdout.is_empty());
    let output = bandleaf(["verify", path(&altered)]);
    assert!(refused(&output).contains("visit"));
    let shown = text(&output.stdout);
    assert!(shown.contains("visit    CHANGED") && shown.contains("wasm     consistent"), "{shown}");
    assert!(
        refused(&bandleaf(["read", path(&folder.file("cut.html", &common::leaf("")[..2000])), "1"]))
            .contains("cut short")
    );
}

#[test]
fn readings_are_read_as_people_write_them() {
    let folder = Folder::new("readings");
    let leaf = pressed(&folder);
    let leaf = path(&leaf);
    assert!(printed(&bandleaf(["read", leaf, "-12"])).starts_with("-12 mm: "));
    assert!(refused(&bandleaf(["read", leaf, "abc"])).contains("abc"));
    assert!(refused(&bandleaf(["read", leaf])).contains("reading"));
    assert!(refused(&bandleaf(["read", leaf, "812", "--influence", "temperature=15"])).contains("temperature"));
    assert!(refused(&bandleaf(["read", leaf, "812", "--influence", "temperature"])).contains("temperature=15"));
    let page = folder.file("blank.html", common::blank_page());
    assert!(refused(&bandleaf(["read", path(&page), "812"])).contains("without a visit"));
}

#[test]
fn the_command_line_explains_itself() {
    let help = printed(&bandleaf(["--help"]));
    for word in ["appraise", "press", "read", "verify", "--expect", "--influence"] {
        assert!(help.contains(word), "{word}");
    }
    assert!(printed(&bandleaf(["--version"])).starts_with("bandleaf "));
    assert!(refused(&bandleaf::<&str>([])).contains("appraise"));
    assert!(refused(&bandleaf(["improve"])).contains("improve"));
    assert!(refused(&bandleaf(["appraise", "a.json", "--colour"])).contains("--colour"));
    assert!(refused(&bandleaf(["appraise", "a.json", "b.json"])).contains("b.json"));
    assert!(refused(&bandleaf(["press", "a.json"])).contains("--out"));
}

#[test]
fn a_reader_that_closes_early_is_no_error() {
    let folder = Folder::new("pipe");
    let visit = folder.file("visit.json", common::visit("").to_string());
    let mut child = Command::new(env!("CARGO_BIN_EXE_bandleaf"))
        .args(["appraise", path(&visit), "--json"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the command runs");
    drop(child.stdout.take());
    let output = child.wait_with_output().expect("it ends");
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert!(output.stderr.is_empty(), "{}", text(&output.stderr));
}

#[test]
fn a_leaf_that_cannot_be_written_is_refused() {
    let folder = Folder::new("unwritable");
    let page = folder.file("page.html", common::blank_page());
    let visit = folder.file("visit.json", common::visit("").to_string());
    let out = folder.0.join("no such folder").join("leaf.html");
    let said = refused(&bandleaf(["press", path(&visit), "--out", path(&out), "--page", path(&page)]));
    assert!(said.contains("cannot be written"), "{said}");
}
