//! The guide's examples, run; and what is made from the commands' own definitions.

use clap::{CommandFactory, Parser};
use gridassay::commands::Program;
use gridassay_reference::problem::Problem;

use crate::{blocks, folder, gridassay, read};

const PAGES: [&str; 5] = ["scheme", "claims", "problem", "dossier", "ci"];

fn page(name: &str) -> String {
    read(&format!("src/guide/{name}.md"))
}

#[test]
fn every_claims_file_of_the_guide_is_upheld_on_the_scheme_of_readme() {
    let scheme = blocks(&read("README.md"), "python").remove(0);
    let examples = blocks(&page("claims"), "toml");
    assert_eq!(examples.len(), 2);
    for (number, example) in examples.iter().enumerate() {
        let folder = folder(&format!("claims-{number}"));
        std::fs::write(folder.join("my_scheme.py"), &scheme).unwrap();
        std::fs::write(folder.join("claims.toml"), example).unwrap();
        let output = gridassay(&folder, &["judge", "claims.toml", "--quiet"]);
        assert!(
            output.status.success(),
            "{}{}",
            String::from_utf8_lossy(&output.stdout),
            String::from_utf8_lossy(&output.stderr)
        );
    }
}

#[test]
fn every_problem_of_the_guide_is_one_and_its_residual_or_source_was_checked() {
    let examples = blocks(&page("problem"), "toml");
    assert_eq!(examples.len(), 2);
    let folder = folder("problems");
    for (number, example) in examples.iter().enumerate() {
        let name = format!("problem-{number}.toml");
        std::fs::write(folder.join(&name), example).unwrap();
        let problem = Problem::resolve(&name, &folder).unwrap_or_else(|error| panic!("{error}"));
        assert_eq!(problem.has_source(), example.contains("derived"), "{}", problem.name());
    }
    // What the page says of wrong files is so: another speed in the solution than in the equation is no solution.
    let wrong = examples[1].replace("x - velocity*t", "x - 0.7*t");
    std::fs::write(folder.join("wrong.toml"), wrong).unwrap();
    assert!(Problem::resolve("wrong.toml", &folder).is_err());
}

#[test]
fn every_command_of_the_guide_is_one() {
    let mut commands = 0;
    for name in PAGES {
        let page = page(name);
        for line in blocks(&page, "sh").iter().chain(&blocks(&page, "yaml")).flat_map(|block| block.lines()) {
            let line = line.trim_start().trim_start_matches("- ").trim_start_matches("run: ");
            if line.starts_with("gridassay ") {
                Program::try_parse_from(shlex::split(line).unwrap()).unwrap_or_else(|error| panic!("{line}: {error}"));
                commands += 1;
            }
        }
    }
    assert!(commands >= 10, "only {commands} commands");
}

#[test]
fn completions_and_manual_pages_hold_every_command() {
    let folder = folder("manual");
    assert!(gridassay(&folder, &["manual", "pages"]).status.success());
    let completions = String::from_utf8(gridassay(&folder, &["completions", "bash"]).stdout).unwrap();
    for command in Program::command().get_subcommands() {
        let name = command.get_name();
        assert!(completions.contains(name), "{name}");
        let page = std::fs::read_to_string(folder.join(format!("pages/gridassay-{name}.1"))).unwrap();
        assert!(page.contains(".SH SYNOPSIS"), "{name}");
    }
}
