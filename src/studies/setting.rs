//! The periodic setting of a Fourier study: grid, parameters and step from Courant and diffusion numbers.

use gridassay_scheme::{BoundaryKind, Case, Grid, GridKind, NoCallbacks, Nodes, Offer, Operation, SideKinds};

use super::selection::{Need, choose};
use super::{Stop, case};
use crate::host::Session;
use crate::record::Parameters;

/// Lower corner and lengths of the periodic box: generic numbers, since a domain that begins at zero or has unit length hides
/// wrong origins and forgotten factors.
const LOWER: [f64; 3] = [-0.37, 0.21, -0.58];
const LENGTH: [f64; 3] = [1.7, 1.3, 2.1];

/// The numbers that measure the step.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Numbers {
    /// max over directions of |a_d| dt / h_d.
    pub courant: Option<f64>,
    /// max over directions of nu dt / h_d^2.
    pub diffusion: Option<f64>,
}

/// A periodic case with its step, ready to be prepared.
#[derive(Clone, Debug)]
pub struct Setting {
    /// The case.
    pub case: Case,
    /// The offer that takes it.
    pub offer: Offer,
    /// The names of the fields.
    pub names: Vec<String>,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// The step.
    pub step: f64,
    /// The numbers as realised; both where the equation has both.
    pub numbers: Numbers,
    /// What the scheme is asked for: `advance`, or the `rate` of a semi-discrete scheme.
    pub operation: Operation,
}

impl Setting {
    /// The setting of `equation` on `cells` at `numbers`, with the person's `fixed` parameters; the others are generic. The scheme is asked
    /// for steps.
    ///
    /// # Errors
    /// Numbers that do not go with the equation, or a scheme without a fitting offer.
    pub fn new(
        session: &Session,
        equation: &str,
        fixed: &Parameters,
        cells: &[usize],
        numbers: Numbers,
    ) -> Result<Self, Stop> {
        Self::asking_for(Operation::Advance, session, equation, fixed, cells, numbers)
    }

    /// The same, with the scheme asked for `operation`: `advance` or `rate`. A rate has one time level, whatever the steps have.
    ///
    /// # Errors
    /// As [`Setting::new`].
    pub fn asking_for(
        operation: Operation,
        session: &Session,
        equation: &str,
        fixed: &Parameters,
        cells: &[usize],
        numbers: Numbers,
    ) -> Result<Self, Stop> {
        Self::between([BoundaryKind::Periodic; 2], operation, session, equation, fixed, cells, numbers)
    }

    /// The same between boundaries of these kinds at the lower and the upper end of every direction.
    ///
    /// # Errors
    /// As [`Setting::new`].
    pub fn between(
        kinds: [BoundaryKind; 2],
        operation: Operation,
        session: &Session,
        equation: &str,
        fixed: &Parameters,
        cells: &[usize],
        numbers: Numbers,
    ) -> Result<Self, Stop> {
        if let Some(offer) = session.description().offers.first()
            && session.description().offers.iter().all(|offer| offer.equation != equation)
        {
            return Err(Stop::NotOffered(format!("the scheme offers `{}`, not `{equation}`", offer.equation)));
        }
        let dimensions = cells.len();
        let upper: Vec<f64> = (0..dimensions).map(|axis| LOWER[axis] + LENGTH[axis]).collect();
        let grid = Grid::uniform(cells, &LOWER[..dimensions], &upper);
        let (parameters, step, numbers) = resolve(equation, fixed, &grid, numbers)?;
        let mut case = case::periodic(equation, &parameters, grid);
        case.boundaries.fill(kinds.map(SideKinds::Same));
        let need = Need {
            equation,
            dimensions,
            operations: &[operation],
            boundaries: &kinds,
            source: false,
            coefficients: &[],
            parameters: &parameters,
            cells,
            grid: GridKind::Uniform,
        };
        let (offer, _) = choose(session.description(), &need).map_err(Stop::NotOffered)?;
        let names = case::fields(offer, dimensions, None);
        let levels = if operation == Operation::Rate { 1 } else { offer.levels };
        let offer = Offer { levels, ..offer.clone() };
        Ok(Self { offer, names, case, parameters, step, numbers, operation })
    }

    /// Asks the scheme to prepare the case; answers the nodes of a cell where it has several.
    ///
    /// # Errors
    /// The scheme refused or failed.
    pub fn prepare(&self, session: &mut Session) -> Result<Option<Nodes>, Stop> {
        Ok(session.prepare(&self.case, &mut NoCallbacks)?)
    }
}

/// The number of cells nearest above `wanted` that the scheme's rule for `equation` admits.
pub fn admitted(session: &Session, equation: &str, wanted: usize) -> usize {
    let rule = session.description().offers.iter().find(|offer| offer.equation == equation).map(|offer| offer.cells);
    let rule = rule.unwrap_or_default();
    let multiple = rule.multiple.max(1);
    wanted.max(rule.minimum).div_ceil(multiple) * multiple
}

/// Parameters, step and realised numbers.
fn resolve(
    equation: &str,
    fixed: &Parameters,
    grid: &Grid,
    numbers: Numbers,
) -> Result<(Parameters, f64, Numbers), Stop> {
    let mut parameters = generic_parameters(equation, grid.dimensions());
    for (name, values) in fixed {
        let Some(known) = parameters.get(name) else {
            let names: Vec<&str> = parameters.keys().map(String::as_str).collect();
            return Err(Stop::Request(format!("`{equation}` has no parameter `{name}`; it has {}", names.join(", "))));
        };
        if known.len() != values.len() {
            let message = format!("`{name}` has {} component(s) here, not {}", known.len(), values.len());
            return Err(Stop::Request(message));
        }
        parameters.insert(name.clone(), values.clone());
    }
    let crossings = crossings(equation, &parameters, grid);
    let spreading_of = |nu: f64| (0..grid.dimensions()).map(|axis| nu / grid.spacing(axis).powi(2)).fold(0.0, f64::max);
    let spreading = parameters.get("diffusivity").map(|nu| spreading_of(nu[0])).filter(|rate| *rate > 0.0);
    let step = match (numbers.courant, numbers.diffusion, crossings, spreading) {
        (Some(courant), _, Some(rate), _) => courant / rate,
        (None, Some(number), _, Some(rate)) => number / rate,
        (Some(_), _, None, _) => {
            return Err(Stop::Request(format!(
                "`courant` is given, but nothing moves in `{equation}`; give `diffusion_number`"
            )));
        }
        (_, Some(_), _, None) => {
            return Err(Stop::Request(format!(
                "`diffusion_number` is given, but nothing diffuses in `{equation}`; give `courant`"
            )));
        }
        (None, None, _, _) => {
            return Err(Stop::Request("no step is given; give `courant` or `diffusion_number`".to_owned()));
        }
    };
    if let (Some(_), Some(number)) = (numbers.courant, numbers.diffusion) {
        // Both numbers at once: the step follows from the speed, so the diffusivity follows from the step.
        if !parameters.contains_key("diffusivity") {
            return Err(Stop::Request(format!("`diffusion_number` is given, but nothing diffuses in `{equation}`")));
        }
        if fixed.contains_key("diffusivity") {
            let message =
                "`courant`, `diffusion_number` and `diffusivity` cannot all be given: two of them fix the third";
            return Err(Stop::Request(message.to_owned()));
        }
        parameters.insert("diffusivity".to_owned(), vec![number / (step * spreading_of(1.0))]);
    }
    let spreading = parameters.get("diffusivity").map(|nu| spreading_of(nu[0]));
    let realised = Numbers {
        courant: numbers.courant.or(crossings.map(|rate| rate * step)),
        diffusion: numbers.diffusion.or(spreading.map(|rate| rate * step)),
    };
    Ok((parameters, step, realised))
}

/// max over directions of (signal speed) / h_d; `None` where nothing moves.
fn crossings(equation: &str, parameters: &Parameters, grid: &Grid) -> Option<f64> {
    let sound = if equation == "acoustics" { parameters["sound_speed"][0] } else { 0.0 };
    let velocity = parameters.get("velocity")?;
    let rate =
        (0..grid.dimensions()).map(|axis| (velocity[axis].abs() + sound) / grid.spacing(axis)).fold(0.0, f64::max);
    (rate > 0.0).then_some(rate)
}

/// Generic parameters: unit values would hide powers of them, and equal components would hide exchanged ones.
pub fn generic_parameters(equation: &str, dimensions: usize) -> Parameters {
    let velocity = ("velocity", [0.83, 0.59, 0.71][..dimensions].to_vec());
    let diffusivity = ("diffusivity", vec![0.0371]);
    let pairs = match equation {
        "advection" => vec![velocity],
        "diffusion" => vec![diffusivity],
        "advection_diffusion" => vec![velocity, diffusivity],
        "acoustics" => vec![("velocity", vec![0.0; dimensions]), ("density", vec![1.31]), ("sound_speed", vec![0.77])],
        "dispersion" => vec![("dispersion", vec![0.0137])],
        _ => Vec::new(),
    };
    pairs.into_iter().map(|(name, values)| (name.to_owned(), values)).collect()
}
