//! What is kept for people beside the program: the guide, the schemas for editors, the sample dossier, completions and manual pages.
//!
//! Trusted: nothing but the program as it is today, and a JSON Schema validator from outside. A changed word in either place turns this red.

mod editors;
mod pages;
mod sample;

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// A file of the project.
fn kept(path: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(path)
}

fn read(path: &str) -> String {
    std::fs::read_to_string(kept(path)).unwrap_or_else(|error| panic!("{path}: {error}"))
}

/// An empty folder.
fn folder(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("guide").join(name);
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

/// The blocks of a page in `language`.
fn blocks(page: &str, language: &str) -> Vec<String> {
    let begin = format!("```{language}\n");
    page.split(&begin).skip(1).map(|rest| rest.split("```").next().unwrap().to_owned()).collect()
}

fn gridassay(folder: &Path, arguments: &[&str]) -> Output {
    let mut command = Command::new(env!("CARGO_BIN_EXE_gridassay"));
    command.args(arguments).current_dir(folder).env_remove("GITHUB_ACTIONS").output().unwrap()
}
