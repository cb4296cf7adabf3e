//! `greet` says of every right scheme that nothing is wrong, and of every wrong one what is.
//!
//! Trusted: the schemes of the tests, whose mistakes are seeded.

use std::process::Command;

use crate::support;

fn greet(arguments: &[&str]) -> (i32, String) {
    let mut command = Command::new(env!("CARGO_BIN_EXE_gridassay"));
    let output = command.arg("greet").args(arguments).current_dir(support::schemes()).output().unwrap();
    let said = format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr));
    (output.status.code().unwrap(), said)
}

#[test]
fn a_right_scheme_is_greeted_and_told_what_it_can_take() {
    for arguments in ["upwind.py", "upwind.py base64"] {
        let (status, said) = greet(&["--command", &format!("{} {arguments}", support::python())]);
        assert_eq!(status, 0, "{said}");
        for words in [
            "it is `upwind`",
            "each was answered as the contract asks",
            "modes and stability: of `advection`",
            "travelling-sine",
        ] {
            assert!(said.contains(words), "`{words}` is not in: {said}");
        }
    }
}

#[test]
fn every_classical_scheme_is_greeted_without_complaint() {
    for name in gridassay_classical::names() {
        let (status, said) = greet(&["--classical", name]);
        assert_eq!(status, 0, "{name}: {said}");
    }
}

#[test]
fn what_is_wrong_is_named_with_its_remedy() {
    // (what is changed in the scheme of the tests, into what, what is said)
    let table = [
        ("read(p[\"state\"][\"u\"]), p", "read(p[\"state\"][\"u\"])[1:], p", "11 values where 12 are needed"),
        (
            "{\"state\": {\"u\": write(u)}}",
            "{\"state\": {\"w\": write(u)}}",
            "has `w`, which is not asked for; expected: `u`",
        ),
        (
            "u[j] - (u[j - 1] if j else inflow)",
            "u[j] - (u[j - 1] if j else inflow) + random.random()",
            "asked the same twice",
        ),
        ("for n in range(p[\"steps\"])", "for n in range(1)", "two steps in one request"),
        ("if case[\"source\"] else slope", "if False else slope", "it never asks for the source term"),
        ("\"advance\", \"rate\"]", "\"advance\", \"rate\", \"solve\"]", "left with exit status 1"),
        ("\"boundaries\": [\"periodic\", \"value\", \"none\"]", "\"boundaries\": [\"periodic\", \"vlaue\"]", "vlaue"),
    ];
    let scheme = std::fs::read_to_string(support::schemes().join("upwind.py")).unwrap();
    for (number, (from, to, words)) in table.iter().enumerate() {
        let wrong = scheme.replacen(from, to, 1).replacen("import array", "import random, array", 1);
        assert!(wrong.contains(to), "{from}");
        let file = support::scratch().join(format!("greeted-{number}.py"));
        std::fs::write(&file, wrong).unwrap();
        let (status, said) = greet(&["--command", &format!("{} {}", support::python(), file.display())]);
        assert_eq!(status, 3, "{to}: {said}");
        assert!(said.contains(words) && said.contains('✗'), "`{words}` is not in: {said}");
    }
}

#[test]
fn what_cannot_be_started_is_a_wrong_request() {
    assert_eq!(greet(&["--command", "./no-such-program"]).0, 2);
    assert_eq!(greet(&["--classical", "no-such-scheme"]).0, 2);
}
