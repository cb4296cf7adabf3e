//! Questions to a Python with the general libraries that the tests compare with.

use std::io::Write;
use std::process::{Command, Stdio};

/// Runs a script of the tests folder; a Python without its libraries is a failure, not a reason to skip.
pub fn ask(script: &str, input: &str) -> String {
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".into());
    let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(script);
    let mut child = Command::new(&python)
        .arg(path)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .unwrap_or_else(|error| panic!("{python} does not start: {error}; set GRIDASSAY_PYTHON"));
    child.stdin.take().unwrap().write_all(input.as_bytes()).unwrap();
    let output = child.wait_with_output().unwrap();
    let report = String::from_utf8_lossy(&output.stdout).into_owned();
    assert!(output.status.success(), "{python} needs NumPy, SymPy and mpmath; it reported:\n{report}");
    println!("{report}");
    report
}
