//! The sample dossier in `reports/sample/` is what the program makes today of the claims file beside it: times aside, and rounding of the
//! last digits, which belongs to the machine.
//!
//! `UPDATE_SAMPLE=1 cargo test --test guide sample` makes it again.

use gridassay::dossier::write_dossier;
use gridassay::record::{read_results, write_results};
use serde_json::Value;

use crate::{folder, gridassay, kept, read};

/// What differs from run to run.
const TIMES: [&str; 3] = ["seconds", "started", "command_line"];

/// Where `today` differs from `kept`. Numbers may differ by a share of 1e-9, or by 1e-11 where they are small beside one: G is of the
/// size of one and carries a few hundred roundings.
fn differences(path: &str, kept: &Value, today: &Value, out: &mut Vec<String>) {
    match (kept, today) {
        (Value::Object(a), Value::Object(b)) => {
            for key in a.keys().chain(b.keys().filter(|key| !a.contains_key(*key))) {
                if !TIMES.contains(&key.as_str()) {
                    differences(
                        &format!("{path}.{key}"),
                        &a.get(key).cloned().unwrap_or_default(),
                        &b.get(key).cloned().unwrap_or_default(),
                        out,
                    );
                }
            }
        }
        (Value::Array(a), Value::Array(b)) if a.len() == b.len() => {
            a.iter().zip(b).enumerate().for_each(|(i, (a, b))| differences(&format!("{path}[{i}]"), a, b, out));
        }
        (Value::Number(a), Value::Number(b)) => {
            let (a, b) = (a.as_f64().unwrap(), b.as_f64().unwrap());
            let same = (a - b).abs() <= 1e-11 + 1e-9 * a.abs();
            if !same {
                out.push(format!("{path}: {a} is kept, {b} is made"));
            }
        }
        _ if kept == today => {}
        _ => out.push(format!("{path}: {kept} is kept, {today} is made")),
    }
}

#[test]
fn the_sample_is_what_the_program_makes_today() {
    let made = folder("sample");
    let arguments = ["judge", "claims.toml", "--quiet", "--out", made.to_str().unwrap()];
    let output = gridassay(&kept("reports/sample"), &arguments);
    assert_eq!(output.status.code(), Some(1), "{}", String::from_utf8_lossy(&output.stderr));
    let mut results = read_results(&made.join("results.json")).unwrap();
    // The folder of this test is no part of the sample.
    results.run.command_line = ["gridassay", "judge", "claims.toml"].map(Into::into).to_vec();
    if std::env::var_os("UPDATE_SAMPLE").is_some() {
        write_results(&kept("reports/sample/results.json"), &results).unwrap();
    }
    let value = |text: &str| serde_json::from_str::<Value>(text).unwrap();
    let mut found = Vec::new();
    let today = serde_json::to_value(&results).unwrap();
    differences("results", &value(&read("reports/sample/results.json")), &today, &mut found);
    assert!(
        found.is_empty(),
        "{}: UPDATE_SAMPLE=1 cargo test --test guide sample",
        found[..found.len().min(9)].join("\n")
    );
    the_pages_are_made_of_the_results();
}

/// Word for word: a page holds nothing but its results.
fn the_pages_are_made_of_the_results() {
    let results = read_results(&kept("reports/sample/results.json")).unwrap();
    let drawn = folder("sample-pages");
    write_dossier(&drawn, &results).unwrap();
    for file in ["index.html", "summary.md"] {
        let today = std::fs::read(drawn.join(file)).unwrap();
        let path = kept("reports/sample").join(file);
        if std::env::var_os("UPDATE_SAMPLE").is_some() {
            std::fs::write(&path, &today).unwrap();
        }
        assert!(
            std::fs::read(path).unwrap_or_default() == today,
            "{file}: UPDATE_SAMPLE=1 cargo test --test guide sample"
        );
    }
}
