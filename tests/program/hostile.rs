//! Hostile names and paths: nothing is written outside the output folder, and no terminal or page obeys a scheme.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::process::Command;

use crate::support;

/// Every file below `folder` with its bytes, but for what is below `except`.
fn tree(folder: &Path, except: &Path, into: &mut BTreeMap<PathBuf, Vec<u8>>) {
    for entry in std::fs::read_dir(folder).unwrap().flatten() {
        let path = entry.path();
        if path == except {
            continue;
        }
        match path.is_dir() {
            true => tree(&path, except, into),
            false => drop(into.insert(path.clone(), std::fs::read(&path).unwrap())),
        }
    }
}

#[test]
fn no_name_leads_out_of_the_output_folder_or_speaks_to_the_terminal() {
    let outer = support::scratch().join("hostile");
    let _ = std::fs::remove_dir_all(&outer);
    let inner = outer.join("a/b/c");
    std::fs::create_dir_all(&inner).unwrap();
    let names = [
        "../../../evil",
        "..\\\\..\\\\evil",
        "/hostile-evil",
        "evil\\u0000x",
        "\\u001b]0;evil\\u0007\\u001b[31m",
        "<script>evil()</script>",
    ];
    let scheme = std::fs::read_to_string(support::schemes().join("upwind.py")).unwrap();
    for (number, name) in names.iter().enumerate() {
        let hostile = scheme.replace(
            "\"name\": \"upwind\", \"version\": \"1.0\"",
            &format!("\"name\": \"{name}\", \"version\": \"{name}\""),
        );
        assert_ne!(hostile, scheme);
        std::fs::write(inner.join("scheme.py"), hostile).unwrap();
        let key = name.replace("\\u0000", "");
        let claims = format!(
            "[schemes.\"{key}\"]\ncommand = [{:?}, \"scheme.py\"]\n[schemes.other]\nclassical = \"upwind\"\n\
             [[stability]]\nequation = \"advection\"\ncourant_up_to = 1\n",
            support::python()
        );
        std::fs::write(inner.join("claims.toml"), claims).unwrap();
        let out = inner.join(format!("out-{number}"));
        let (mut before, mut after) = (BTreeMap::new(), BTreeMap::new());
        tree(&outer, &out, &mut before);
        let mut command = Command::new(env!("CARGO_BIN_EXE_gridassay"));
        let output = command.args(["judge", "claims.toml", "--out"]).arg(&out).current_dir(&inner).output().unwrap();
        let said = [output.stdout, output.stderr].concat();
        let said = String::from_utf8_lossy(&said);
        assert_eq!(output.status.code(), Some(0), "{name}: {said}");
        assert!(!said.chars().any(|c| c.is_control() && c != '\n'), "{name}: {said:?}");
        tree(&outer, &out, &mut after);
        assert_eq!(before, after, "{name}");
        assert!(!Path::new("/hostile-evil").exists());
        let page = std::fs::read_to_string(out.join("index.html")).unwrap();
        assert!(!page.contains("<script>evil"), "{name}");
    }
}

#[test]
fn a_problem_outside_the_folder_is_read_and_nothing_is_written_beside_it() {
    let outer = support::scratch().join("hostile-problem");
    let _ = std::fs::remove_dir_all(&outer);
    let inner = outer.join("inner");
    std::fs::create_dir_all(&inner).unwrap();
    let problem = Path::new(env!("CARGO_MANIFEST_DIR")).join("reference-solutions/catalogue/travelling-sine.toml");
    let text = std::fs::read_to_string(problem).unwrap();
    let renamed: Vec<&str> =
        text.lines().map(|line| if line.starts_with("name") { "name = \"../../evil\"" } else { line }).collect();
    std::fs::write(outer.join("problem.toml"), renamed.join("\n")).unwrap();
    let claims = "[scheme]\nclassical = \"lax-wendroff\"\n[[order]]\nproblem = \"../problem.toml\"\ncells = [20, 40, 80]\ncourant = 0.7\nexpect = 2\n";
    std::fs::write(inner.join("claims.toml"), claims).unwrap();
    let out = inner.join("out");
    let (mut before, mut after) = (BTreeMap::new(), BTreeMap::new());
    tree(&outer, &out, &mut before);
    let mut command = Command::new(env!("CARGO_BIN_EXE_gridassay"));
    let output =
        command.args(["judge", "claims.toml", "--quiet", "--out"]).arg(&out).current_dir(&inner).output().unwrap();
    assert!(output.status.code().is_some());
    tree(&outer, &out, &mut after);
    assert_eq!(before, after, "{}", String::from_utf8_lossy(&output.stderr));
}
