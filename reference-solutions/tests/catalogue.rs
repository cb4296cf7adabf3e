//! The catalogue against SymPy and mpmath.
//!
//! Trusted: `catalogue/check.py`, which reads the problem files by itself, writes the equations once more, computes residuals with 50
//! digits, and solves Riemann problems, series, Cole-Hopf and characteristics by other methods. The program's values, slopes and
//! sources at random points are compared with what it finds.
//!
//! `GRIDASSAY_PYTHON` names a Python (3.11 or later) that has SymPy; without it `python3` is used. Without SymPy these tests fail:
//! a check that was not made is no success.

use std::fmt::Write as _;
use std::io::Write as _;
use std::path::Path;
use std::process::{Command, Stdio};

use gridassay_reference::problem::{Problem, Quantity};

/// Points a problem.
const POINTS: usize = 5;

/// A fixed sequence of numbers in [0, 1): a linear congruence (Knuth's MMIX constants).
struct Random(u64);

impl Random {
    fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }
}

fn python() -> String {
    std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".to_string())
}

/// The program's values at random points, one JSON object. `{:?}` writes an f64 so that it reads back to the same bits.
fn evaluated(name: &str) -> String {
    let problem = Problem::named(name).unwrap_or_else(|error| panic!("{name}: {error}"));
    let mut random = Random(name.bytes().fold(17, |seed: u64, byte| seed.wrapping_mul(31) + u64::from(byte)));
    let mut points = Vec::new();
    for _ in 0..POINTS {
        let mut between = |low: f64, high: f64| low + (high - low) * (0.02 + 0.96 * random.unit());
        let at: Vec<f64> = problem.lower().iter().zip(problem.upper()).map(|(l, u)| between(*l, *u)).collect();
        let time = between(problem.start_time(), problem.final_time());
        let value = |quantity: Quantity<'_>| {
            let slices: Vec<&[f64]> = at.iter().map(std::slice::from_ref).collect();
            let mut out = [0.0];
            problem.evaluate(quantity, time, &slices, &mut out).unwrap_or_else(|error| panic!("{name}: {error}"));
            out[0]
        };
        let fields = 0..problem.fields().len();
        let values: Vec<f64> = fields.clone().map(|field| value(Quantity::Value(field))).collect();
        let axes = || 0..problem.dimensions();
        let slopes: Vec<f64> = fields
            .clone()
            .flat_map(|field| axes().map(move |axis| (field, axis)))
            .map(|(field, axis)| value(Quantity::Derivative { field, axis }))
            .collect();
        let sources: Vec<f64> = fields.map(|field| value(Quantity::Source(field))).collect();
        points.push(format!(
            "{{\"at\": {at:?}, \"time\": {time:?}, \"values\": {values:?}, \"slopes\": {slopes:?}, \"sources\": {sources:?}}}"
        ));
    }
    format!("{{\"name\": \"{name}\", \"points\": [{}]}}", points.join(", "))
}

/// Runs the checker on lines; its output and whether it found no fault.
fn checked(lines: &str) -> (String, bool) {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut child = Command::new(python())
        .arg(root.join("tests/catalogue/check.py"))
        .arg(root.join("catalogue"))
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap_or_else(|error| {
            panic!("{} does not start ({error}): set GRIDASSAY_PYTHON to a Python with SymPy", python())
        });
    child.stdin.take().expect("it is piped").write_all(lines.as_bytes()).expect("the checker reads its input");
    let output = child.wait_with_output().expect("the checker ends");
    let text = String::from_utf8_lossy(&output.stdout).into_owned() + &String::from_utf8_lossy(&output.stderr);
    (text, output.status.success())
}

#[test]
fn every_solution_satisfies_its_equation_and_is_evaluated_right() {
    let mut lines = String::new();
    for name in Problem::catalogue() {
        writeln!(lines, "{}", evaluated(name)).expect("a text takes all that is written");
    }
    let (text, good) = checked(&lines);
    assert!(good, "{text}");
    println!("{text}");
}

/// The checker sees a value, a slope and a source that are wrong in the tenth digit.
#[test]
fn the_checker_finds_planted_faults() {
    let line = evaluated("manufactured-euler-1d");
    for key in ["values", "slopes", "sources"] {
        let start = line.find(&format!("\"{key}\": [")).expect("the key is there") + key.len() + 5;
        let end = start + line[start..].find([',', ']']).expect("a number ends");
        let number: f64 = line[start..end].parse().expect("a number");
        let planted = format!("{}{:?}{}", &line[..start], number * (1.0 + 1e-10), &line[end..]);
        let (text, good) = checked(&planted);
        assert!(!good && text.contains("the program has"), "{key}: {text}");
    }
}
