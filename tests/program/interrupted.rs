//! A run may be ended at any moment: nothing that was measured is lost or measured twice, and no process remains.
//!
//! Trusted: the uninterrupted run, and the operating system. Kills come at random moments with a printed seed; GRIDASSAY_KILLS
//! says how many (20 unless told).

use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

use rustix::process::{Pid, Signal, kill_process};
use serde_json::Value;

use crate::support;

const SEED: u64 = 20_261_201;

fn folder(name: &str) -> PathBuf {
    let folder = support::scratch().join(name);
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    folder.canonicalize().unwrap()
}

/// Claims of all four kinds about a scheme in a process of its own, a classical one, one that breaks and one that cannot be started.
fn write_claims(folder: &Path) {
    let (python, schemes) = (support::python(), support::schemes());
    let claims = format!(
        "[schemes.python]\ncommand = [{python:?}, {:?}]\n[schemes.classical]\nclassical = \"lax-wendroff\"\n\
         [schemes.short]\ncommand = [{python:?}, {:?}, \"too short\"]\n[schemes.missing]\ncommand = [\"./no-such-program\"]\n\
         [[order]]\nproblem = \"travelling-sine\"\ncells = [20, 40, 80]\ncourant = 0.7\nexpect = 1\n\
         [[order]]\nproblem = \"travelling-sine\"\ncells = [24, 48, 96]\ncourant = 0.4\nexpect = 1\n\
         [[modes]]\nequation = \"advection\"\ncourant = 0.6\nphase_speed_error_within = 0.1\n\
         [[stability]]\nequation = \"advection\"\ncourant_up_to = 1\n\
         [[invariants]]\nequation = \"advection\"\ncourant = 0.4\nhold = [\"conservation\"]\n",
        schemes.join("upwind.py"),
        schemes.join("faulty.py"),
    );
    std::fs::write(folder.join("claims.toml"), claims).unwrap();
}

fn judge(folder: &Path, out: &str, more: &[&str]) -> Child {
    let mut command = Command::new("env");
    // A shell in the background ignores SIGINT, and so do its children unless told.
    command.arg("--default-signal=INT").arg(env!("CARGO_BIN_EXE_gridassay"));
    command.args(["judge", "claims.toml", "--quiet", "--out", out]).args(more).current_dir(folder);
    command.stdin(Stdio::null()).stdout(Stdio::null()).stderr(Stdio::null()).spawn().unwrap()
}

fn signal(child: &Child, signal: Signal) {
    let _ = kill_process(Pid::from_child(child), signal);
}

/// The results file but for the lines that no two runs share.
fn lasting(path: &Path) -> String {
    let text = std::fs::read_to_string(path).unwrap();
    let mut value: Value = serde_json::from_str(&text).unwrap();
    for key in ["started", "seconds", "command_line"] {
        value["run"][key] = Value::Null;
    }
    for study in value["studies"].as_array_mut().unwrap() {
        for level in study.get_mut("levels").and_then(Value::as_array_mut).into_iter().flatten() {
            level["seconds"] = Value::Null;
        }
    }
    serde_json::to_string_pretty(&value).unwrap()
}

fn journal_lines(folder: &Path) -> Vec<String> {
    let text = std::fs::read_to_string(folder.join("out/journal.jsonl")).unwrap_or_default();
    text.split_inclusive('\n').filter(|line| line.ends_with('\n')).map(str::to_owned).collect()
}

/// Random numbers in [0, 1) by a multiplicative generator (Lehmer): only moments in time hang on it.
fn random(state: &mut u64) -> f64 {
    *state = (*state * 48_271) % 2_147_483_647;
    *state as f64 / 2_147_483_647.0
}

#[test]
fn a_run_that_is_killed_at_any_moment_is_resumed_to_the_same_results() {
    let folder = folder("interrupted");
    write_claims(&folder);
    let begun = Instant::now();
    assert_eq!(judge(&folder, "whole", &[]).wait().unwrap().code(), Some(3));
    let lasts = begun.elapsed().as_secs_f64();
    let expected = lasting(&folder.join("whole/results.json"));
    // The order of work and the number of workers leave no trace.
    assert_eq!(judge(&folder, "single", &["--workers", "1"]).wait().unwrap().code(), Some(3));
    assert_eq!(lasting(&folder.join("single/results.json")), expected);
    let kills: usize = std::env::var("GRIDASSAY_KILLS").ok().and_then(|n| n.parse().ok()).unwrap_or(20);
    let (mut state, mut done, mut within, mut runs) = (SEED, 0, 0, 0);
    println!("seed {SEED}, {kills} kills, a run lasts {lasts:.2} s");
    while done < kills {
        let _ = std::fs::remove_dir_all(folder.join("out"));
        runs += 1;
        loop {
            let before = journal_lines(&folder);
            let more: &[&str] = if before.is_empty() { &[] } else { &["--resume"] };
            let mut child = judge(&folder, "out", more);
            std::thread::sleep(Duration::from_secs_f64(random(&mut state) * lasts));
            signal(&child, Signal::KILL);
            let status = child.wait().unwrap();
            let after = journal_lines(&folder);
            assert!(after.starts_with(&before), "a resumed run keeps what was there");
            if status.code().is_some() {
                break;
            }
            done += 1;
            within += usize::from(after.len() > 1);
        }
        assert_eq!(lasting(&folder.join("out/results.json")), expected, "run {runs}");
        let mut indices: Vec<u64> = journal_lines(&folder)[1..]
            .iter()
            .map(|line| serde_json::from_str::<Value>(line).unwrap())
            .filter(|entry| entry["scheme"].get("fault").is_none())
            .map(|entry| entry["index"].as_u64().unwrap())
            .collect();
        let all = indices.len();
        indices.sort_unstable();
        indices.dedup();
        assert_eq!(indices.len(), all, "nothing is measured twice");
    }
    println!("{done} kills, {within} with something measured, {runs} runs, 0 different");
    assert!(within * 4 > done, "most kills come in the middle: {within} of {done}");
    assert!(support::gone(&folder), "{:?}", support::remaining(&folder));
}

#[test]
fn a_journal_of_other_claims_or_of_another_scheme_is_not_taken_up() {
    let folder = folder("other-journal");
    let script = std::fs::read_to_string(support::schemes().join("upwind.py")).unwrap();
    std::fs::write(folder.join("scheme.py"), &script).unwrap();
    let claims = format!(
        "[scheme]\ncommand = [{:?}, \"scheme.py\"]\n[[stability]]\nequation = \"advection\"\ncourant_up_to = 1\n",
        support::python()
    );
    std::fs::write(folder.join("claims.toml"), &claims).unwrap();
    assert_eq!(judge(&folder, "out", &[]).wait().unwrap().code(), Some(0));
    assert_eq!(judge(&folder, "out", &["--resume"]).wait().unwrap().code(), Some(0));
    std::fs::write(folder.join("scheme.py"), script + "# changed\n").unwrap();
    assert_eq!(judge(&folder, "out", &["--resume"]).wait().unwrap().code(), Some(2));
    std::fs::write(folder.join("claims.toml"), claims + "# changed\n").unwrap();
    assert_eq!(judge(&folder, "out", &["--resume"]).wait().unwrap().code(), Some(2));
    assert_eq!(judge(&folder, "nowhere", &["--resume"]).wait().unwrap().code(), Some(2));
}

#[test]
fn a_repeated_run_says_whether_anything_changed() {
    let folder = folder("repeated");
    std::fs::copy(support::schemes().join("upwind.py"), folder.join("scheme.py")).unwrap();
    let claims = format!(
        "[scheme]\ncommand = [{:?}, \"scheme.py\"]\n[[modes]]\nequation = \"advection\"\ncourant = 0.6\nphase_speed_error_within = 0.1\n",
        support::python()
    );
    std::fs::write(folder.join("claims.toml"), &claims).unwrap();
    assert_eq!(judge(&folder, "out", &[]).wait().unwrap().code(), Some(0));
    let repeat = || {
        let mut command = Command::new(env!("CARGO_BIN_EXE_gridassay"));
        let output =
            command.args(["judge", "--quiet", "--repeat", "out/results.json"]).current_dir(&folder).output().unwrap();
        let said = format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr));
        (output.status.code().unwrap(), said)
    };
    let (status, said) = repeat();
    assert!(status == 0 && said.contains("Nothing changed"), "{said}");
    // The same numbers from other bytes: the digest has changed, and the person is told.
    let script = std::fs::read_to_string(folder.join("scheme.py")).unwrap();
    std::fs::write(folder.join("scheme.py"), format!("{script}# changed\n")).unwrap();
    let (status, said) = repeat();
    assert!(status == 1 && said.contains("scheme.digest") && said.contains("1 value changed"), "{said}");
    // One last bit of one number.
    std::fs::write(
        folder.join("scheme.py"),
        script.replace("v + p[\"step\"] * r", "v + p[\"step\"] * r * (1 + 2.3e-16)"),
    )
    .unwrap();
    let (status, said) = repeat();
    assert!(status == 1 && said.contains("modes-1 modes."), "{said}");
    std::fs::write(folder.join("claims.toml"), claims + "# changed\n").unwrap();
    let (status, said) = repeat();
    assert!(status == 2 && said.contains("its SHA-256 differs"), "{said}");
}

#[test]
fn no_process_remains_when_the_harness_is_interrupted_or_killed() {
    let script = "import subprocess, sys, time\nsubprocess.Popen(['sleep', '600'], start_new_session=True)\n\
                  print('started', file=open('started', 'w'))\ntime.sleep(600)\n";
    for (name, number) in [("int", Signal::INT), ("term", Signal::TERM), ("kill", Signal::KILL)] {
        let folder = folder(&format!("signal-{name}"));
        std::fs::write(folder.join("scheme.py"), script).unwrap();
        let claims = format!(
            "[scheme]\ncommand = [{:?}, \"scheme.py\"]\n[[stability]]\nequation = \"advection\"\ncourant_up_to = 1\n",
            support::python()
        );
        std::fs::write(folder.join("claims.toml"), claims).unwrap();
        let mut child = judge(&folder, "out", &[]);
        let until = Instant::now() + Duration::from_secs(30);
        while !folder.join("started").is_file() && Instant::now() < until {
            std::thread::sleep(Duration::from_millis(20));
        }
        // Harness, guard, scheme, and the grandchild that left the session.
        assert!(support::remaining(&folder).len() >= 4, "{name}: {:?}", support::remaining(&folder));
        signal(&child, number);
        child.wait().unwrap();
        assert!(support::gone(&folder), "{name}: {:?}", support::remaining(&folder));
    }
}
