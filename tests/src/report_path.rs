//! Places in a report: `fit.terms[0].estimate`, `checks[check=lack_of_fit].p`, `readings[0].solutions.length`.

use serde_json::Value;

/// The entry at a path; `None` where there is none. A last part `length` is the length of a list.
pub fn find(report: &Value, path: &str) -> Option<Value> {
    let mut here = report;
    for part in path.split('.') {
        if let (Value::Array(list), "length") = (here, part) {
            return Some(Value::from(list.len()));
        }
        let (name, mut rest) = part.split_at(part.find('[').unwrap_or(part.len()));
        here = here.get(name)?;
        while let Some(inside) = rest.strip_prefix('[') {
            let (selector, after) = inside.split_once(']')?;
            here = select(here, selector)?;
            rest = after;
        }
    }
    Some(here.clone())
}

/// An entry of a list by its index, or by `key=text`.
fn select<'a>(list: &'a Value, selector: &str) -> Option<&'a Value> {
    match selector.split_once('=') {
        Some((key, text)) => list.as_array()?.iter().find(|entry| entry.get(key).and_then(Value::as_str) == Some(text)),
        None => list.get(selector.parse::<usize>().ok()?),
    }
}

/// The number at a path; `None` where there is none.
pub fn number(report: &Value, path: &str) -> Option<f64> {
    find(report, path)?.as_f64()
}

/// Every number in a report with its path, in the order of the document. Checks are named, not counted, so that a new
/// one moves no path.
pub fn numbers(report: &Value) -> Vec<(String, f64)> {
    let mut found = Vec::new();
    collect(report, String::new(), &mut found);
    found
}

fn collect(value: &Value, path: String, found: &mut Vec<(String, f64)>) {
    match value {
        Value::Number(number) => found.extend(number.as_f64().map(|number| (path, number))),
        Value::Array(list) => {
            for (index, entry) in list.iter().enumerate() {
                let selector = match entry.get("check").and_then(Value::as_str) {
                    Some(check) => format!("[check={check}]"),
                    None => format!("[{index}]"),
                };
                collect(entry, format!("{path}{selector}"), found);
            }
        }
        Value::Object(fields) => {
            for (name, entry) in fields {
                let dot = if path.is_empty() { "" } else { "." };
                collect(entry, format!("{path}{dot}{name}"), found);
            }
        }
        Value::Null | Value::Bool(_) | Value::String(_) => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn finds_by_name_index_and_key() {
        let report = json!({"a": {"b": [[1.5, 2.0]]}, "checks": [{"check": "x", "p": 0.25}]});
        assert_eq!(number(&report, "a.b[0][1]"), Some(2.0));
        assert_eq!(number(&report, "checks[check=x].p"), Some(0.25));
        assert_eq!(find(&report, "a.b.length"), Some(json!(1)));
        assert_eq!(find(&report, "a.b[0][2]"), None);
        assert_eq!(find(&report, "a.c"), None);
    }

    #[test]
    fn every_number_is_found_again_at_its_path() {
        let report = json!({"a": [1.0, {"b": 2.0}], "checks": [{"check": "x", "p": 0.25}, {"check": "y", "p": 0.5}]});
        let all = numbers(&report);
        assert_eq!(all.len(), 4);
        assert!(all.iter().all(|(path, value)| number(&report, path) == Some(*value)));
    }
}
