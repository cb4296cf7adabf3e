//! The JSON Schemas by which editors complete claims files and problem files: current, and what the files of the project keep to.

use std::process::Command;

use gridassay::claims::file::ClaimsFile;

use crate::{blocks, folder, kept, read};

/// Reads a schema and TOML files, and prints what is wrong with them.
const VALIDATE: &str = "
import json, sys, tomllib, jsonschema
validator = jsonschema.Draft202012Validator(json.load(open(sys.argv[1])))
jsonschema.Draft202012Validator.check_schema(validator.schema)
for path in sys.argv[2:]:
    for error in validator.iter_errors(tomllib.load(open(path, 'rb'))):
        print(path, error.json_path, error.message)
";

/// `UPDATE_SCHEMA=1 cargo test --test guide schema` writes the file.
#[test]
fn the_schema_of_claims_files_is_what_the_types_say() {
    let mut today = serde_json::to_string_pretty(&schemars::schema_for!(ClaimsFile)).unwrap();
    today.push('\n');
    let path = kept("reports/claims.schema.json");
    if std::env::var_os("UPDATE_SCHEMA").is_some() {
        std::fs::write(&path, &today).unwrap();
    }
    let current = std::fs::read_to_string(&path).unwrap_or_default() == today;
    assert!(current, "reports/claims.schema.json is not current: UPDATE_SCHEMA=1 cargo test --test guide schema");
}

/// What the validator says; `None` where there is no Python with jsonschema, as `tests/run` installs it.
fn faults(schema: &str, files: &[std::path::PathBuf]) -> Option<String> {
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".into());
    let has = Command::new(&python).args(["-c", "import jsonschema"]).output().is_ok_and(|out| out.status.success());
    assert!(has || std::env::var_os("CI").is_none(), "CI needs Python's jsonschema");
    if !has {
        return None;
    }
    let output = Command::new(python).args(["-c", VALIDATE]).arg(kept(schema)).args(files).output().unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    Some(String::from_utf8(output.stdout).unwrap())
}

/// The blocks of a guide's page as files, the last one with a key that does not exist.
fn written(page: &str) -> (Vec<std::path::PathBuf>, std::path::PathBuf) {
    let folder = folder(&format!("editors-{page}"));
    let examples = blocks(&read(&format!("src/guide/{page}.md")), "toml");
    let write = |(number, text): (usize, &String)| {
        let path = folder.join(format!("{number}.toml"));
        std::fs::write(&path, text).unwrap();
        path
    };
    let files = examples.iter().enumerate().map(write).collect();
    let spoilt = folder.join("spoilt.toml");
    std::fs::write(&spoilt, format!("misspelt = 1\n{}", examples[0])).unwrap();
    (files, spoilt)
}

#[test]
fn claims_files_keep_to_their_schema_and_a_spoilt_one_does_not() {
    let (mut files, spoilt) = written("claims");
    files.extend(["schemes/classical/claims.toml", "reports/sample/claims.toml"].map(kept));
    let Some(found) = faults("reports/claims.schema.json", &files) else { return };
    assert_eq!(found, "");
    assert!(faults("reports/claims.schema.json", &[spoilt]).unwrap().contains("misspelt"));
}

/// The schema of problem files is written by hand: every problem of the catalogue keeps to it, and its keys are those of the reader.
#[test]
fn problem_files_keep_to_their_schema_and_a_spoilt_one_does_not() {
    let schema: serde_json::Value = serde_json::from_str(&read("reports/problem.schema.json")).unwrap();
    let reader = read("reference-solutions/src/problem/file.rs");
    for key in schema["properties"].as_object().unwrap().keys() {
        assert!(reader.contains(&format!("    pub {key}: ")), "the reader of problem files knows no key `{key}`");
    }
    let (mut files, spoilt) = written("problem");
    let catalogue = std::fs::read_dir(kept("reference-solutions/catalogue")).unwrap();
    files.extend(catalogue.map(|entry| entry.unwrap().path()));
    assert!(files.len() > 50);
    let Some(found) = faults("reports/problem.schema.json", &files) else { return };
    assert_eq!(found, "");
    assert!(faults("reports/problem.schema.json", &[spoilt]).unwrap().contains("misspelt"));
}
