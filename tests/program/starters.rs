//! Every starter works as it is written out: built with the real compilers, judged, all claims upheld.
//!
//! Trusted: Lax-Wendroff differences are of second order and stable up to Courant number 1 (Lax and Wendroff 1960); the claims say so.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use crate::support;

/// A fresh folder of this name, which is not there yet.
fn absent(name: &str) -> PathBuf {
    let folder = support::scratch().join(name);
    let _ = std::fs::remove_dir_all(&folder);
    folder
}

fn said(output: &Output) -> String {
    format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr))
}

fn starter(language: &str, folder: &Path) -> Output {
    Command::new(env!("CARGO_BIN_EXE_gridassay")).arg("starter").arg(language).arg(folder).output().unwrap()
}

/// The search path with the program, and with the Python that has NumPy, in front.
fn path() -> String {
    let program = Path::new(env!("CARGO_BIN_EXE_gridassay")).parent().unwrap().to_owned();
    let python = PathBuf::from(support::python()).parent().map(Path::to_path_buf).unwrap_or_default();
    format!("{}:{}:{}", program.display(), python.display(), std::env::var("PATH").unwrap())
}

fn works(language: &str) {
    let folder = absent(&format!("starter-{language}"));
    let written = starter(language, &folder);
    assert!(written.status.success(), "{language}: {}", said(&written));
    for file in ["README.md", "claims.toml", ".gitlab-ci.yml", ".github/workflows/claims.yml"] {
        assert!(folder.join(file).is_file(), "{language}: {file}");
    }
    let judged =
        Command::new("sh").args(["judge.sh", "--quiet"]).current_dir(&folder).env("PATH", path()).output().unwrap();
    assert_eq!(judged.status.code(), Some(0), "{language}: {}", said(&judged));
    assert!(said(&judged).contains("All 4 claims are upheld."), "{language}: {}", said(&judged));
    // A mistake in the scheme must be seen: half of the second difference is left out.
    let source = ["scheme.py", "scheme.c", "scheme.cpp", "scheme.f90", "src/lib.rs"].map(|name| folder.join(name));
    let source = source.iter().find(|path| path.is_file()).unwrap();
    let text = std::fs::read_to_string(source).unwrap();
    let wrong = text.replace("- 0.5 * c * c *", "- 0.25 * c * c *").replace("- 0.5d0 * c**2 *", "- 0.25d0 * c**2 *");
    assert_ne!(text, wrong, "{language}: the mistake is not seeded");
    std::fs::write(source, wrong).unwrap();
    let judged =
        Command::new("sh").args(["judge.sh", "--quiet"]).current_dir(&folder).env("PATH", path()).output().unwrap();
    assert_eq!(judged.status.code(), Some(1), "{language}: {}", said(&judged));
    // Nothing is overwritten, and a folder that holds one of the files gets none of them.
    let before = std::fs::read(source).unwrap();
    let again = starter(language, &folder);
    assert_eq!(again.status.code(), Some(2), "{language}");
    assert!(said(&again).contains("nothing was written"), "{}", said(&again));
    assert_eq!(std::fs::read(source).unwrap(), before);
}

#[test]
fn the_python_starter_works() {
    works("python");
}

#[test]
fn the_numpy_starter_works() {
    works("python-numpy");
}

#[test]
fn the_c_starter_works() {
    works("c");
}

#[test]
fn the_cpp_starter_works() {
    works("cpp");
}

#[test]
fn the_fortran_starter_works() {
    works("fortran");
}

#[test]
fn the_rust_starter_works() {
    works("rust");
}

#[test]
fn the_conversation_of_the_page_is_one() {
    let folder = absent("starter-conversation");
    assert!(starter("conversation", &folder).status.success());
    let page = std::fs::read_to_string(folder.join("conversation.md")).unwrap();
    let lines =
        |sign: &str| page.lines().filter_map(|line| line.strip_prefix(sign)).map(str::to_owned).collect::<Vec<_>>();
    let (asked, answered) = (lines("> {"), lines("< {"));
    assert_eq!((asked.len(), answered.len()), (3, 3));
    // A scheme of the tests is asked the page's questions and gives the page's numbers.
    let input = asked.iter().map(|line| format!("{{{line}\n")).collect::<String>();
    let file = folder.join("asked");
    std::fs::write(&file, input).unwrap();
    let output = Command::new(support::python())
        .arg(support::schemes().join("upwind.py"))
        .stdin(std::fs::File::open(file).unwrap())
        .output()
        .unwrap();
    let value = |text: &str| serde_json::from_str::<serde_json::Value>(text).unwrap();
    let given: Vec<_> = String::from_utf8(output.stdout).unwrap().lines().map(value).collect();
    let printed: Vec<_> = answered.iter().map(|line| value(&format!("{{{line}"))).collect();
    assert_eq!(given[1..], printed[1..]);
}
