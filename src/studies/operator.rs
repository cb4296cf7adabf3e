//! The operator of a bounded problem, column by column: spectrum, abscissas, pseudospectra, and the largest growth on the way.
//!
//! Boundary data are zero, so that the rate or the step of a linear scheme is a matrix. Values that a boundary prescribes are no unknowns.

use gridassay_scheme::{
    Advance, BoundaryData, BoundaryKind, Fields, Harness, Operation, Placement, Position, SchemeError, Side,
};
use num_complex::Complex64;

use super::jitter::Jitter;
use super::layout::Layout;
use super::setting::{Numbers, Setting};
use super::{Made, Stop};
use crate::analysis::eigen::trusted_eigenvalues;
use crate::analysis::integrators::{Integrator, by_name};
use crate::analysis::matrix::Matrix;
use crate::analysis::spectrum::{pseudospectral_abscissa, spectrum, transient_growth};
use crate::claims::OperatorRequest;
use crate::host::Session;
use crate::record::{OperatorRecord, Study, TransientRecord, finite};

/// Steps over which growth on the way is looked for, in steps for one crossing of the domain at the Courant number asked for.
const CROSSINGS: f64 = 3.0;

/// Most steps that are looked at: each costs a product of matrices and a norm.
const MOST_STEPS: usize = 400;

/// Sizes of the perturbations of pseudospectra, relative to the norm of the operator.
const EPSILONS: [f64; 3] = [1e-2, 1e-4, 1e-6];

/// Deviation from linearity that is allowed, relative to the largest value.
const ALLOWED: f64 = 1e-6;

/// Measures the operator.
pub fn run(session: &mut Session, request: &OperatorRequest, seed: u64) -> Made {
    let mut record = OperatorRecord {
        equation: request.equation.clone(),
        parameters: request.parameters.clone(),
        cells: vec![request.cells],
        courant: request.courant,
        diffusion_number: request.diffusion_number,
        integrator: request.integrator.clone(),
        ..OperatorRecord::default()
    };
    let mut notes = Vec::new();
    let ended = measure(session, request, seed, &mut record, &mut notes);
    Made::new(Study::Operator(record), ended, notes)
}

fn measure(
    session: &mut Session,
    request: &OperatorRequest,
    seed: u64,
    record: &mut OperatorRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    let (setting, kinds) = bounded(session, request)?;
    record.parameters.clone_from(&setting.parameters);
    (record.courant, record.diffusion_number) = (setting.numbers.courant, setting.numbers.diffusion);
    record.step = setting.step;
    record.boundaries = kinds.iter().map(|kind| word(*kind).to_owned()).collect();
    record.operation = setting.operation.name().to_owned();
    let mut probe = Probe::new(session, setting, kinds)?;
    let matrix = probe.matrix()?;
    record.unknowns = matrix.size();
    let deviation = probe.deviation(&matrix, seed)?;
    record.deviation = finite(deviation);
    if deviation.is_nan() || deviation > ALLOWED {
        return Err(Stop::Analysis(format!(
            "the scheme is not linear in this case: the answer to a random state deviates from its matrix by {deviation:.1e} of the largest value"
        )));
    }
    analyse(&matrix, probe.setting.operation, request.integrator.as_deref(), record, notes)
}

/// The setting with the boundaries that were asked for; else with a value at the inflow and nothing at the outflow where the scheme offers
/// that, and values at both ends where it does not or where something diffuses.
fn bounded(session: &Session, request: &OperatorRequest) -> Result<(Setting, [BoundaryKind; 2]), Stop> {
    use BoundaryKind::{None as Free, Value};
    let operation = if request.integrator.is_some() { Operation::Rate } else { Operation::Advance };
    let numbers = Numbers { courant: request.courant, diffusion: request.diffusion_number };
    let with = |kinds: [BoundaryKind; 2]| {
        let (equation, fixed, cells) = (&request.equation, &request.parameters, [request.cells]);
        let setting = Setting::between(kinds, operation, session, equation, fixed, &cells, numbers)?;
        Ok((setting, kinds))
    };
    if let Some(kinds) = request.boundaries {
        return with(kinds);
    }
    let backwards = request.parameters.get("velocity").is_some_and(|a| a[0] < 0.0);
    let open = if backwards { [Free, Value] } else { [Value, Free] };
    match with(open) {
        Err(Stop::NotOffered(_)) => with([Value, Value]),
        other => other,
    }
}

fn word(kind: BoundaryKind) -> &'static str {
    match kind {
        BoundaryKind::Periodic => "periodic",
        BoundaryKind::Value => "value",
        BoundaryKind::Gradient => "gradient",
        BoundaryKind::None => "none",
    }
}

fn analyse(
    matrix: &Matrix,
    operation: Operation,
    integrator: Option<&str>,
    record: &mut OperatorRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    let whole = spectrum(matrix).map_err(analysis)?;
    record.eigenvalues = whole.eigenvalues.iter().map(|lambda| [lambda.re, lambda.im]).collect();
    let step = if operation == Operation::Rate {
        record.spectral_abscissa = finite(whole.spectral_abscissa);
        record.numerical_abscissa = finite(whole.numerical_abscissa);
        for relative in EPSILONS {
            let epsilon = relative * matrix.frobenius_norm();
            record.pseudospectral_abscissa.push((epsilon, pseudospectral_abscissa(matrix, epsilon).map_err(analysis)?));
        }
        match integrator.and_then(by_name) {
            Some(Integrator::RungeKutta(method)) => polynomial(method.coefficients(), matrix, record.step),
            _ => {
                notes.push("steps of the rate are taken by one-step integrators alone".to_owned());
                return Ok(());
            }
        }
    } else {
        matrix.clone()
    };
    let trusted = trusted_eigenvalues(&step, f64::EPSILON).map_err(analysis)?;
    let largest = trusted.iter().max_by(|a, b| a.value.norm().total_cmp(&b.value.norm()));
    record.spectral_radius = largest.and_then(|largest| finite(largest.value.norm()));
    record.radius_uncertainty = largest.and_then(|largest| finite(largest.uncertainty));
    let crossing = record.courant.map_or(1.0 / record.diffusion_number.unwrap_or(1.0), |c| 1.0 / c);
    let steps = ((CROSSINGS * crossing * record.cells[0] as f64).ceil() as usize).clamp(1, MOST_STEPS);
    let found = transient_growth(&step, steps).map_err(analysis)?;
    let (growth, at, still_growing) = (found.growth, found.step, found.still_growing);
    record.transient = finite(growth).map(|growth| TransientRecord { growth, step: at, steps, still_growing });
    Ok(())
}

/// R(dt A) by Horner's rule.
fn polynomial(coefficients: &[f64], matrix: &Matrix, step: f64) -> Matrix {
    let n = matrix.size();
    let scaled = Matrix::from_fn(n, |i, j| matrix.at(i, j) * step);
    let zero = Matrix::from_fn(n, |_, _| Complex64::ZERO);
    coefficients.iter().rev().fold(zero, |sum, a| {
        let product = &scaled * &sum;
        Matrix::from_fn(n, |i, j| product.at(i, j) + if i == j { *a } else { 0.0 })
    })
}

fn analysis(error: impl std::fmt::Display) -> Stop {
    Stop::Analysis(error.to_string())
}

/// Boundary data that are zero.
#[derive(Clone, Debug)]
struct Zero {
    fields: usize,
}

impl Harness for Zero {
    fn source(&mut self, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed("this case has no source term".to_owned()))
    }

    fn boundary(&mut self, _: f64, _: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        // One value a field: the problem has one dimension.
        let side = || vec![vec![0.0]; self.fields];
        let ghost = (0..self.fields).map(|_| vec![vec![0.0]; layers]).collect();
        Ok(BoundaryData { value: side(), gradient: side(), ghost })
    }

    fn coefficient(&mut self, name: &str, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed(format!("`{name}` does not vary in this case")))
    }
}

/// A prepared case with the places of its unknowns.
struct Probe<'a> {
    session: &'a mut Session,
    setting: Setting,
    zero: Zero,
    lengths: Vec<usize>,
    /// (level, field, place) of each unknown.
    unknowns: Vec<(usize, usize, usize)>,
}

impl<'a> Probe<'a> {
    fn new(session: &'a mut Session, setting: Setting, kinds: [BoundaryKind; 2]) -> Result<Self, Stop> {
        let mut zero = Zero { fields: setting.names.len() };
        let nodes = session.prepare(&setting.case, &mut zero)?;
        let layout = Layout::new(&setting.offer, &setting.case, &setting.names, nodes.as_ref())
            .map_err(|error| Stop::Request(error.to_string()))?;
        let lengths = layout.lengths();
        let mut unknowns = Vec::new();
        for level in 0..setting.offer.levels {
            for (field, name) in setting.names.iter().enumerate() {
                let position = match &setting.offer.placement {
                    Placement::Same(position) => *position,
                    table => table.of(name),
                };
                let on_the_ends = nodes.is_none() && matches!(position, Position::Node | Position::XFace);
                let prescribed = |end: usize| usize::from(on_the_ends && kinds[end] == BoundaryKind::Value);
                let places = prescribed(0)..lengths[field] - prescribed(1);
                unknowns.extend(places.map(|place| (level, field, place)));
            }
        }
        Ok(Self { session, setting, zero, lengths, unknowns })
    }

    /// The answer to a state of the unknowns; prescribed values are zero.
    fn answer(&mut self, values: &[f64]) -> Result<Vec<f64>, Stop> {
        let quiet: Fields = self.lengths.iter().map(|length| vec![0.0; *length]).collect();
        let mut levels = vec![quiet; self.setting.offer.levels];
        for ((level, field, place), value) in self.unknowns.iter().zip(values) {
            levels[*level][*field][*place] = *value;
        }
        let mut state = levels.remove(0);
        if self.setting.operation == Operation::Rate {
            levels = vec![self.session.rate(0.0, &state, &mut self.zero)?];
        } else {
            let step = self.setting.step;
            let request = Advance { time: 0.0, step, steps: 1, state: &mut state, earlier: &mut levels };
            self.session.advance(request, &mut self.zero)?;
            levels.insert(0, state);
        }
        Ok(self.unknowns.iter().map(|(level, field, place)| levels[*level][*field][*place]).collect())
    }

    /// The matrix, one column for each unknown.
    fn matrix(&mut self) -> Result<Matrix, Stop> {
        let n = self.unknowns.len();
        let mut columns = Vec::with_capacity(n);
        for column in 0..n {
            let mut unit = vec![0.0; n];
            unit[column] = 1.0;
            columns.push(self.answer(&unit)?);
        }
        Ok(Matrix::from_fn(n, |row, column| columns[column][row].into()))
    }

    /// Largest deviation of the answer to a random state from the matrix times that state, relative to the largest answer.
    fn deviation(&mut self, matrix: &Matrix, seed: u64) -> Result<f64, Stop> {
        let mut random = Jitter::new(seed);
        let state: Vec<f64> = (0..self.unknowns.len()).map(|_| random.uniform()).collect();
        let answer = self.answer(&state)?;
        let expected = matrix.apply(&state.iter().map(|value| Complex64::from(*value)).collect::<Vec<_>>());
        let larger = |a: f64, b: f64| if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b) };
        let size = answer.iter().map(|value| value.abs()).fold(0.0, larger);
        let off = answer.iter().zip(&expected).map(|(a, b)| (b - a).norm()).fold(0.0, larger);
        Ok(if off == 0.0 { 0.0 } else { off / size })
    }
}
