//! What the tests of the host share: where schemes are, cases, and a harness whose answers are formulas.

use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::OnceLock;
use std::time::Duration;

use gridassay::host::{Limits, Route, SchemeSource, set_executable};
use gridassay_scheme::{
    BoundaryData, BoundaryKind, Case, Fields, Grid, Harness, Parameter, SchemeError, Side, SideKinds,
};

/// The folder of the schemes of the tests.
pub fn schemes() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/schemes")
}

/// The Python that runs schemes: GRIDASSAY_PYTHON, or python3.
pub fn python() -> String {
    std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".to_owned())
}

/// A folder for what the tests build.
pub fn scratch() -> PathBuf {
    let folder = PathBuf::from(env!("CARGO_TARGET_TMPDIR"));
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

/// A scheme by its route, with limits short enough for a test and long enough for a busy machine.
pub fn source(route: Route) -> SchemeSource {
    set_executable(Path::new(env!("CARGO_BIN_EXE_gridassay")));
    let limits = Limits { start: Duration::from_secs(60), request: Duration::from_secs(60), ..Limits::default() };
    SchemeSource { route, folder: schemes(), limits }
}

/// An executable with arguments.
pub fn command(words: &[&str]) -> Route {
    Route::Command(words.iter().map(|word| (*word).to_owned()).collect())
}

/// The Rust schemes of the tests as an executable, built once.
pub fn rust_executable() -> String {
    static BUILT: OnceLock<String> = OnceLock::new();
    let build = || {
        let folder = schemes().join("rust");
        let cargo = std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into());
        // Named, since CARGO_TARGET_DIR would send what is built elsewhere.
        let target = folder.join("../../../target/test-schemes");
        let mut build = Command::new(cargo);
        build.args(["build", "--release", "--quiet", "--target-dir"]).arg(&target).current_dir(&folder);
        let status = build.status().unwrap();
        assert!(status.success(), "the test schemes do not build");
        let built = target.join("release/serve").canonicalize().unwrap();
        built.to_str().unwrap().to_owned()
    };
    BUILT.get_or_init(build).clone()
}

/// The Rust schemes of the tests as a plugin crate's folder.
pub fn rust_plugin(name: &str) -> Route {
    Route::Plugin { path: "rust".into(), name: Some(name.to_owned()) }
}

/// Compiles C text or a C file of the tests to a shared library.
pub fn c_library(file: &Path, flags: &[&str]) -> PathBuf {
    static NEXT: std::sync::atomic::AtomicUsize = std::sync::atomic::AtomicUsize::new(0);
    let number = NEXT.fetch_add(1, std::sync::atomic::Ordering::Relaxed);
    let stem = file.file_stem().unwrap().to_str().unwrap();
    let library = scratch().join(format!("lib{stem}-{}-{number}.so", std::process::id()));
    let include = Path::new(env!("CARGO_MANIFEST_DIR")).join("schemes/contract/include");
    // Contracting a multiplication and an addition into one rounding would change last bits.
    let mut cc = Command::new("cc");
    cc.args(["-std=c11", "-O2", "-Wall", "-Wextra", "-ffp-contract=off", "-shared", "-fPIC", "-I"]);
    let status = cc.arg(include).arg(file).args(flags).arg("-o").arg(&library).status().unwrap();
    assert!(status.success(), "{} does not compile", file.display());
    library
}

/// A library file as a route.
pub fn plugin(path: PathBuf) -> Route {
    Route::Plugin { path, name: None }
}

/// Advection in one direction.
pub fn advection(cells: usize, velocity: f64, boundaries: [BoundaryKind; 2], source: bool) -> Case {
    Case {
        equation: "advection".to_owned(),
        dimensions: 1,
        parameters: [("velocity".to_owned(), Parameter::Vector(vec![velocity]))].into(),
        coefficients: Vec::new(),
        grid: Grid::uniform(&[cells], &[-0.3], &[0.9]),
        boundaries: vec![boundaries.map(SideKinds::Same)],
        source,
        steady: Vec::new(),
        arrays: Default::default(),
    }
}

/// Advection on a periodic grid.
pub fn periodic(cells: usize) -> Case {
    advection(cells, 0.7, [BoundaryKind::Periodic; 2], false)
}

/// A state of generic numbers: no two alike, no round ones.
pub fn state(lengths: &[usize]) -> Fields {
    let value = |field: usize, index: usize| (1.7 * index as f64 + 0.3 + field as f64).sin() / 3.0;
    lengths.iter().enumerate().map(|(field, length)| (0..*length).map(|i| value(field, i)).collect()).collect()
}

/// A harness whose answers are formulas of everything that was asked.
#[derive(Clone, Debug)]
pub struct Formulas {
    /// How many values each field has.
    pub lengths: Vec<usize>,
}

impl Harness for Formulas {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let own = |(field, length): (usize, &usize)| {
            (0..*length).map(|i| (time + 0.11 * i as f64 + field as f64).cos()).collect::<Vec<f64>>()
        };
        let at = |(field, points): (usize, &[Vec<f64>])| {
            let value = |i: usize| points.iter().enumerate().map(|(axis, x)| (axis as f64 + 1.3) * x[i]).sum::<f64>();
            (0..points[0].len()).map(|i| (time + value(i) + field as f64).cos()).collect::<Vec<f64>>()
        };
        let fields = self.lengths.iter().enumerate();
        Ok(match points {
            None => fields.map(own).collect(),
            Some(points) => fields.map(|(field, _)| at((field, points))).collect(),
        })
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        if time > 1000.0 {
            return Err(SchemeError::Failed("the solution ends at time 1000".to_owned()));
        }
        let value =
            |field: usize, layer: usize| (time + side as usize as f64 + 0.37 * field as f64 + layer as f64).sin();
        let fields = 0..self.lengths.len();
        Ok(BoundaryData {
            value: fields.clone().map(|field| vec![value(field, 0), value(field, 7)]).map(|v| self.along(v)).collect(),
            gradient: fields.clone().map(|field| self.along(vec![value(field, 8), value(field, 9)])).collect(),
            ghost: fields.map(|field| (1..=layers).map(|k| self.along(vec![value(field, k); 2])).collect()).collect(),
        })
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let count = points.map_or(self.lengths[0], |points| points[0].len());
        let component = |k: usize| (0..count).map(|i| (time + 0.2 * i as f64 + k as f64).sin()).collect();
        match name {
            "wind" => Ok((0..2).map(component).collect()),
            "bed" => Ok(vec![component(5)]),
            _ => Err(SchemeError::Failed(format!("`{name}` does not vary in this case"))),
        }
    }
}

impl Formulas {
    /// In one dimension a side has one value; the formulas give two for more.
    fn along(&self, mut values: Vec<f64>) -> Vec<f64> {
        if self.lengths.len() == 1 {
            values.truncate(1);
        }
        values
    }
}

/// The processes that run in `folder`.
pub fn remaining(folder: &Path) -> Vec<String> {
    let entries = std::fs::read_dir("/proc").unwrap().flatten();
    let here = entries.filter(|entry| std::fs::read_link(entry.path().join("cwd")).is_ok_and(|cwd| cwd == folder));
    here.map(|entry| {
        let words = std::fs::read(entry.path().join("cmdline")).unwrap_or_default();
        String::from_utf8_lossy(&words).replace('\0', " ")
    })
    .collect()
}

/// Whether no process runs in `folder`, now or soon.
pub fn gone(folder: &Path) -> bool {
    let until = std::time::Instant::now() + Duration::from_secs(20);
    while !remaining(folder).is_empty() && std::time::Instant::now() < until {
        std::thread::sleep(Duration::from_millis(20));
    }
    remaining(folder).is_empty()
}
