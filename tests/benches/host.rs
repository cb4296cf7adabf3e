//! What hosting costs: `cargo bench --bench host`. Every figure is a median of several runs, printed as a table.
//!
//! Share outside the scheme: 1 - (time of the same steps called directly) / (time through the route), for requests of 20 steps of first-order upwind differences.

use std::io::{Read, Write};
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

use gridassay::host::{Limits, Route, SchemeSource, Session, set_executable};
use gridassay_scheme::{Advance, BoundaryKind, Case, Grid, NoCallbacks, Parameter, Scheme, SideKinds};

#[path = "../schemes/rust/src/upwind.rs"]
mod upwind;

const STEPS: usize = 20;

fn main() {
    // `cargo test --all-targets` starts benches too, without this word: that they compile is all it asks.
    if !std::env::args().any(|argument| argument == "--bench") {
        return;
    }
    let gridassay = Path::new(env!("CARGO_BIN_EXE_gridassay"));
    set_executable(gridassay);
    let built = build();
    shares(&built);
    against_a_pipe(&built);
    start_up(gridassay);
    workers(gridassay);
}

/// The schemes of the tests, built once: the executable, beside which the library lies.
fn build() -> PathBuf {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/schemes/rust");
    let target = Path::new(env!("CARGO_MANIFEST_DIR")).join("target/test-schemes");
    let cargo = std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into());
    let mut build = Command::new(cargo);
    build.args(["build", "--release", "--quiet", "--target-dir"]).arg(&target).current_dir(&folder);
    assert!(build.status().unwrap().success());
    target.join("release")
}

fn open(route: Route) -> Session {
    Session::open(&SchemeSource { route, folder: ".".into(), limits: Limits::default() }).unwrap()
}

fn executable(built: &Path, encoding: &str) -> Session {
    let words = [built.join("serve").to_str().unwrap().to_owned(), "upwind".to_owned(), encoding.to_owned()];
    open(Route::Command(words.to_vec()))
}

fn case(cells: usize) -> Case {
    Case {
        equation: "advection".to_owned(),
        dimensions: 1,
        parameters: [("velocity".to_owned(), Parameter::Vector(vec![0.7]))].into(),
        coefficients: Vec::new(),
        grid: Grid::uniform(&[cells], &[-0.3], &[0.9]),
        boundaries: vec![[SideKinds::Same(BoundaryKind::Periodic), SideKinds::Same(BoundaryKind::Periodic)]],
        source: false,
        steady: Vec::new(),
        arrays: Default::default(),
    }
}

fn state(cells: usize) -> Vec<Vec<f64>> {
    vec![(0..cells).map(|i| (1.7 * i as f64 + 0.3).sin() / 3.0).collect()]
}

/// The median of `count` runs.
fn median(count: usize, mut run: impl FnMut()) -> Duration {
    let time = |run: &mut dyn FnMut()| {
        let begun = Instant::now();
        run();
        begun.elapsed()
    };
    let mut times: Vec<Duration> = (0..count).map(|_| time(&mut run)).collect();
    times.sort();
    times[count / 2]
}

fn request_time(session: &mut Session, cells: usize, steps: usize, count: usize) -> Duration {
    session.prepare(&case(cells), &mut NoCallbacks).unwrap();
    let mut state = state(cells);
    median(count, || {
        let request = Advance { time: 0.0, step: 0.1 / cells as f64, steps, state: &mut state, earlier: &mut [] };
        session.advance(request, &mut NoCallbacks).unwrap();
    })
}

fn direct_time(cells: usize, count: usize) -> Duration {
    let mut scheme = upwind::Upwind::default();
    scheme.prepare(&case(cells), &mut NoCallbacks).unwrap();
    let mut state = state(cells);
    median(count, || {
        let request =
            Advance { time: 0.0, step: 0.1 / cells as f64, steps: STEPS, state: &mut state, earlier: &mut [] };
        scheme.advance(request, &mut NoCallbacks).unwrap();
    })
}

fn shares(built: &Path) {
    println!("Share of wall time outside the scheme, requests of {STEPS} steps");
    println!("{:>9} {:>12} {:>12} {:>12} {:>12} {:>12}", "cells", "direct", "in process", "plugin", "text", "base64");
    let library = built.join(format!("libtest_schemes.{}", std::env::consts::DLL_EXTENSION));
    let mut routes = [
        Session::in_process(Box::new(upwind::Upwind::default())),
        open(Route::Plugin { path: library, name: Some("upwind".to_owned()) }),
        executable(built, "text"),
        executable(built, "base64"),
    ];
    for (cells, count) in [(100, 301), (10_000, 101), (100_000, 41), (1_000_000, 11)] {
        let direct = direct_time(cells, count);
        print!("{cells:>9} {:>12.1?}", direct);
        for session in &mut routes {
            let through = request_time(session, cells, STEPS, count);
            print!(" {:>10.1} %", 100.0 * (1.0 - direct.as_secs_f64() / through.as_secs_f64()));
        }
        println!();
    }
}

/// A request of no step with 10^6 values, against the same bytes through `cat` and back.
fn against_a_pipe(built: &Path) {
    let cells = 1_000_000;
    let base64 = request_time(&mut executable(built, "base64"), cells, 0, 11);
    let text = request_time(&mut executable(built, "text"), cells, 0, 11);
    let bytes = vec![b'A'; cells * 8 / 3 * 4 + 4];
    let pipe = median(11, || {
        let mut cat = Command::new("cat").stdin(Stdio::piped()).stdout(Stdio::piped()).spawn().unwrap();
        let (mut stdin, mut stdout) = (cat.stdin.take().unwrap(), cat.stdout.take().unwrap());
        std::thread::scope(|scope| {
            let bytes = &bytes;
            scope.spawn(move || stdin.write_all(bytes).unwrap());
            let mut back = Vec::with_capacity(bytes.len());
            stdout.read_to_end(&mut back).unwrap();
            assert_eq!(back.len(), bytes.len());
        });
        cat.wait().unwrap();
    });
    let times = base64.as_secs_f64() / pipe.as_secs_f64();
    println!(
        "\n10^6 values there and back: base64 {base64:.1?}, text {text:.1?}; the base64's bytes through `cat` {pipe:.1?}: {times:.1} times"
    );
}

fn start_up(gridassay: &Path) {
    let line = format!("for i in 1 2 3 4 5 6 7 8 9 10; do '{}' problems >/dev/null; done; times", gridassay.display());
    let output = Command::new("sh").args(["-c", &line]).output().unwrap();
    let text = String::from_utf8_lossy(&output.stdout).into_owned();
    println!("\nTen times `gridassay problems`, user and system CPU time: {}", text.lines().last().unwrap_or_default());
}

fn workers(gridassay: &Path) {
    let folder = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join("bench-workers");
    std::fs::create_dir_all(&folder).unwrap();
    let claim =
        "[[order]]\nproblem = \"travelling-sine\"\ncells = [512, 1024, 2048, 4096]\ncourant = 0.7\nexpect = 2\n";
    std::fs::write(folder.join("claims.toml"), format!("[scheme]\nclassical = \"lax-wendroff\"\n{}", claim.repeat(8)))
        .unwrap();
    let run = |workers: &str| {
        median(5, || {
            let mut command = Command::new(gridassay);
            command.args(["judge", "claims.toml", "--quiet", "--workers", workers]).current_dir(&folder);
            assert!(command.stdout(Stdio::null()).status().unwrap().success());
        })
    };
    let (one, two) = (run("1"), run("2"));
    println!(
        "\nEight ladders: one worker {one:.2?}, two workers {two:.2?}: {:.2} times",
        one.as_secs_f64() / two.as_secs_f64()
    );
}
