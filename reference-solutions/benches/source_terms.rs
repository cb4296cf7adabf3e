//! The source of the compressible Navier-Stokes equations in 2-D, side by side in one run: deriving and emitting it against SymPy,
//! and evaluating it at 10^6 points on one thread against the emitted C compiled by gcc -O3 -march=native.
//!
//! Times are processor times of the one thread that works, so that other work on the machine distorts them little. Needs gcc, and a Python with SymPy in GRIDASSAY_PYTHON (default python3). The solution is that of Roy, Nelson, Smith and Ober
//! (2004), subsonic; for the time loop with two of its terms made to oscillate.

use std::path::{Path, PathBuf};
use std::process::Command;

use gridassay_reference::equation::{Equation, Parameters, Solution};
use gridassay_reference::expression::{Expression, Input, Kind, Plan, Program, Scope};
use gridassay_reference::writer::{Language, Listing, source_listing};

const POINTS: usize = 1_000_000;
const SIDE: usize = 1000;
const TIMES: [f64; 5] = [0.1, 0.2, 0.3, 0.4, 0.5];

const STEADY: [(&str, &str); 4] = [
    ("density", "1 + 0.1*sin(0.75*pi*x) + 0.15*cos(pi*y) + 0.08*cos(1.25*pi*x*y)"),
    ("velocity_x", "70 + 4*sin(5/3*pi*x) - 12*cos(1.5*pi*y) + 7*cos(0.6*pi*x*y)"),
    ("velocity_y", "90 - 20*cos(1.5*pi*x) + 4*sin(pi*y) - 11*cos(0.9*pi*x*y)"),
    ("pressure", "1e5 - 0.3e5*cos(pi*x) + 0.2e5*sin(1.25*pi*y) - 0.25e5*sin(0.75*pi*x*y)"),
];

const UNSTEADY: [(&str, &str); 4] = [
    ("density", "1 + 0.1*sin(0.75*pi*x)*cos(2*t) + 0.15*cos(pi*y) + 0.08*cos(1.25*pi*x*y)"),
    ("velocity_x", "70 + 4*sin(5/3*pi*x) - 12*cos(1.5*pi*y)*sin(3*t) + 7*cos(0.6*pi*x*y)"),
    ("velocity_y", "90 - 20*cos(1.5*pi*x) + 4*sin(pi*y) - 11*cos(0.9*pi*x*y)*exp(-t)"),
    ("pressure", "1e5 - 0.3e5*cos(pi*x) + 0.2e5*sin(1.25*pi*y) - 0.25e5*sin(0.75*pi*x*y)*cos(t)"),
];

fn listing(texts: &[(&str, &str)]) -> Listing {
    let scope = Scope::new(["x", "y", "t"]);
    let solution: Solution =
        texts.iter().map(|(name, text)| (name.to_string(), Expression::parse(text, &scope).unwrap())).collect();
    let parameters: Parameters = [("gamma", 1.4), ("gas_constant", 287.0), ("viscosity", 10.0), ("prandtl", 1.0)]
        .map(|(name, value)| (name.to_string(), vec![value.into()]))
        .into();
    let equation = Equation::named("navier_stokes").unwrap();
    source_listing(&equation, 2, &parameters, &solution, &[]).unwrap()
}

fn program(texts: &[(&str, &str)]) -> Program {
    let sources: Vec<Expression> = listing(texts).outputs.into_iter().map(|output| output.expression).collect();
    Program::new(&sources, &["x", "y", "t"]).unwrap()
}

/// Nanoseconds that this thread has spent on a processor; Linux tells.
fn processor_time() -> f64 {
    let text = std::fs::read_to_string("/proc/thread-self/schedstat").expect("the benchmark runs on Linux");
    text.split_whitespace().next().and_then(|number| number.parse().ok()).expect("schedstat begins with a number")
}

/// Nanoseconds of the shortest of some runs: other work on the machine only ever makes a run longer.
fn shortest(mut work: impl FnMut()) -> f64 {
    let once = |()| {
        let start = processor_time();
        work();
        processor_time() - start
    };
    [(); 9].map(once).into_iter().fold(f64::INFINITY, f64::min)
}

/// Nanoseconds a point of the emitted C over the same points: the shortest of nine sweeps.
fn gcc_nanoseconds(texts: &[(&str, &str)]) -> f64 {
    let code = listing(texts).write(Language::C).unwrap();
    let call = if texts == UNSTEADY { "source(x[i], y[i], 0.1 * (sweep + 1), s)" } else { "source(x[i], y[i], s)" };
    let main = format!(
        "#include <stdio.h>\n#include <stdlib.h>\n#include <time.h>\nint main(void)\n{{\n    int n = {POINTS};\n    \
         double *x = malloc(n * sizeof *x), *y = malloc(n * sizeof *y), *out = malloc(4 * n * sizeof *out);\n    double best = 1e9;\n    \
         for (int i = 0; i < n; i++) {{ x[i] = (i % {SIDE} + 0.5) / {SIDE}; y[i] = (i / {SIDE} + 0.5) / {SIDE}; }}\n    \
         for (int sweep = 0; sweep < 9; sweep++) {{\n        struct timespec a, b;\n        clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &a);\n        \
         for (int i = 0; i < n; i++) {{\n            double s[4];\n            {call};\n            \
         for (int k = 0; k < 4; k++) out[k * n + i] = s[k];\n        }}\n        clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &b);\n        \
         double t = (b.tv_sec - a.tv_sec) * 1e9 + (b.tv_nsec - a.tv_nsec);\n        if (t < best) best = t;\n    }}\n    \
         printf(\"%.17g %g\\n\", best / n, out[n / 3]);\n    return 0;\n}}\n"
    );
    let folder = folder();
    std::fs::write(folder.join("bench.c"), format!("#define _POSIX_C_SOURCE 199309L\n{code}{main}")).unwrap();
    let built = Command::new("gcc")
        .current_dir(&folder)
        .args(["-O3", "-march=native", "-o", "bench", "bench.c", "-lm"])
        .status()
        .expect("gcc is needed");
    assert!(built.success());
    let output = Command::new(folder.join("bench")).output().unwrap();
    String::from_utf8(output.stdout).unwrap().split_whitespace().next().unwrap().parse().unwrap()
}

fn folder() -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("bench");
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

/// Seconds and operations of SymPy for derivative, common sub-expressions and C.
fn sympy() -> (f64, usize, usize) {
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("benches/source_terms.py");
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".into());
    let output = Command::new(&python).arg(script).output().expect("Python is needed");
    assert!(output.status.success(), "{python}: {}", String::from_utf8_lossy(&output.stderr));
    let text = String::from_utf8(output.stdout).unwrap();
    let numbers: Vec<f64> = text.split_whitespace().map(|number| number.parse().unwrap()).collect();
    (numbers[0], numbers[1] as usize, numbers[2] as usize)
}

fn main() {
    let (seconds, before, after) = sympy();
    // A hundred times: the processor time of one would be lost in the clock's ticks.
    let derived = || (0..100).for_each(|_| drop(std::hint::black_box(listing(&STEADY).write(Language::C).unwrap())));
    let own = shortest(derived) / 100.0;
    println!("\nderive and emit:    SymPy {seconds:.3} s, {before} operations, {after} after sharing");
    println!(
        "                    Gridassay {:.5} s, {} after sharing: {:.0} times faster",
        own * 1e-9,
        program(&STEADY).operations(),
        seconds / (own * 1e-9)
    );
    let grid: Vec<f64> = (0..SIDE).map(|i| (i as f64 + 0.5) / SIDE as f64).collect();
    let x: Vec<f64> = (0..POINTS).map(|i| grid[i % SIDE]).collect();
    let y: Vec<f64> = (0..POINTS).map(|i| grid[i / SIDE]).collect();
    let mut out = vec![vec![0.0; POINTS]; 4 * TIMES.len()];
    let mut slices: Vec<&mut [f64]> = out.iter_mut().map(Vec::as_mut_slice).collect();
    for (name, texts) in [("steady", &STEADY), ("unsteady", &UNSTEADY)] {
        let gcc = gcc_nanoseconds(texts);
        println!("{name}: emitted C, gcc -O3 -march=native: {gcc:.1} ns a point");
        let program = program(texts);
        let points = [Input::Points(&x), Input::Points(&y), Input::Scalar(0.1)];
        let lines = [Input::Axis(&grid), Input::Axis(&grid), Input::Scalar(0.1)];
        for (what, inputs) in [("scattered points", &points), ("Cartesian grid", &lines)] {
            let kinds: Vec<Kind> = inputs.iter().map(Input::kind).collect();
            let plan = Plan::new(&program, &kinds);
            let own = shortest(|| plan.evaluate(inputs, &mut slices[..4])) / POINTS as f64;
            println!("    {what}, one time: {own:.1} ns, {:.2} of gcc's", own / gcc);
            let plan = Plan::with_times(&program, &kinds, 2);
            let own = shortest(|| plan.evaluate_at_times(inputs, &TIMES, &mut slices)) / (POINTS * TIMES.len()) as f64;
            println!("    {what}, {} times: {own:.1} ns, {:.2} of gcc's", TIMES.len(), own / gcc);
        }
    }
}
