//! README shows what the program prints: its own scheme and claims are written out and judged, its commands are run.
//!
//! Trusted: nothing but the text itself. A changed word in either place turns this red.

use std::path::Path;
use std::process::Command;

fn readme() -> String {
    std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md")).unwrap()
}

/// The text of the first block that begins with `start` (its language and what follows).
fn block(readme: &str, start: &str) -> String {
    let begin = readme.find(&format!("```{start}")).unwrap_or_else(|| panic!("README has no block {start:?}"));
    let inside = &readme[begin + 3..];
    let inside = &inside[inside.find('\n').unwrap() + 1..];
    inside[..inside.find("```").unwrap()].to_owned()
}

/// Runs a line as a shell would, with `gridassay` and `python3` on the path.
fn run(folder: &Path, line: &str) -> String {
    let program = Path::new(env!("CARGO_BIN_EXE_gridassay")).parent().unwrap().to_owned();
    let path = format!("{}:{}", program.display(), std::env::var("PATH").unwrap());
    let output = Command::new("sh")
        .args(["-c", line])
        .current_dir(folder)
        .env("PATH", path)
        .env_remove("GITHUB_ACTIONS")
        .output()
        .unwrap();
    assert!(output.stderr.is_empty(), "{line}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

#[test]
fn the_first_own_scheme_is_judged_as_printed_and_every_command_runs() {
    let readme = readme();
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("readme");
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    std::fs::write(folder.join("my_scheme.py"), block(&readme, "python")).unwrap();
    std::fs::write(folder.join("claims.toml"), block(&readme, "toml")).unwrap();
    let mut commands = 0;
    for console in readme.split("```console\n").skip(1) {
        let console = &console[..console.find("```").unwrap()];
        let (line, shown) = console.strip_prefix("$ ").unwrap().split_once('\n').unwrap();
        assert_eq!(run(&folder, line), shown, "{line}");
        commands += 1;
    }
    for line in readme.lines().filter(|line| line.starts_with("gridassay ")) {
        assert!(!run(&folder, line).is_empty(), "{line}");
        commands += 1;
    }
    assert!(commands >= 6, "README shows commands");
}
