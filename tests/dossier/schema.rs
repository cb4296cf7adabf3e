//! The JSON Schema in reports/: what the program's own types say today, and what its results keep to, by a validator from outside.

use std::path::Path;
use std::process::Command;

use gridassay::record::{Results, write_text};

use crate::{dossier, sample};

const SCHEMA: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/reports/results.schema.json");

/// Reads a schema and results files, and prints what is wrong with them.
const VALIDATE: &str = "
import json, sys, jsonschema
validator = jsonschema.Draft202012Validator(json.load(open(sys.argv[1])))
jsonschema.Draft202012Validator.check_schema(validator.schema)
for path in sys.argv[2:]:
    for error in validator.iter_errors(json.load(open(path))):
        print(path, error.json_path, error.message)
";

/// `UPDATE_SCHEMA=1 cargo test --test dossier schema` writes the file.
#[test]
fn the_schema_is_what_the_types_say() {
    let mut today = serde_json::to_string_pretty(&schemars::schema_for!(Results)).unwrap();
    today.push('\n');
    if std::env::var_os("UPDATE_SCHEMA").is_some() {
        write_text(Path::new(SCHEMA), &today).unwrap();
    }
    let kept = std::fs::read_to_string(SCHEMA).unwrap_or_default();
    assert!(
        kept == today,
        "reports/results.schema.json is not current: UPDATE_SCHEMA=1 cargo test --test dossier schema"
    );
}

/// What the validator says of `files`; `None` where there is no Python with jsonschema, as `tests/run` installs it.
fn faults(files: &[&Path]) -> Option<String> {
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".into());
    let has = Command::new(&python).args(["-c", "import jsonschema"]).output().is_ok_and(|out| out.status.success());
    assert!(has || std::env::var_os("CI").is_none(), "CI needs Python's jsonschema");
    if !has {
        return None;
    }
    let output = Command::new(python).args(["-c", VALIDATE, SCHEMA]).args(files).output().unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    Some(String::from_utf8(output.stdout).unwrap())
}

#[test]
fn results_keep_to_the_schema_and_a_spoilt_file_does_not() {
    let files: Vec<_> =
        [("one", sample::one_scheme()), ("many", sample::many_schemes(4)), ("hostile", sample::hostile())]
            .into_iter()
            .map(|(name, results)| dossier(&format!("schema-{name}"), &results).join("results.json"))
            .collect();
    let paths: Vec<_> = files.iter().map(|path| path.as_path()).collect();
    let Some(found) = faults(&paths) else { return };
    assert_eq!(found, "");
    let text = std::fs::read_to_string(&files[0]).unwrap();
    let spoilt = files[0].with_file_name("spoilt.json");
    std::fs::write(&spoilt, text.replace("\"seed\": 20251", "\"seed\": \"many\"")).unwrap();
    assert!(faults(&[&spoilt]).unwrap().contains("$.run.seed"));
}
