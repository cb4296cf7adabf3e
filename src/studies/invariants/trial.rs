//! The settings of a study of invariants: a periodic box, generic parameters, every sign of the velocity that is offered.

use gridassay_scheme::{BoundaryKind, Case, CellRule, Description, Grid, GridKind, Nodes, Offer, Operation};

use super::parameters::{self, Motion};
use crate::claims::InvariantsRequest;
use crate::host::Session;
use crate::record::{InvariantSetting, Parameters};
use crate::studies::cellwise::Cellwise;
use crate::studies::layout::Layout;
use crate::studies::selection::{Need, choose};
use crate::studies::setting::Numbers;
use crate::studies::{Stop, case};

/// Lower corner and lengths of the box: generic numbers, and different ones in each direction.
const LOWER: [f64; 3] = [-0.37, 0.21, -0.58];
const LENGTH: [f64; 3] = [1.7, 1.3, 2.1];

/// Cells by number of dimensions: small, since every step is looked at, and different in each direction.
const CELLS: [&[usize]; 3] = [&[37], &[14, 11], &[8, 7, 9]];

/// The fewest and the most steps of a run.
const STEPS: [f64; 2] = [24.0, 160.0];

/// A case with its step.
#[derive(Clone, Debug)]
pub struct Trial {
    /// Its number among the settings of the record.
    pub setting: usize,
    /// The case.
    pub case: Case,
    /// The offer that takes it.
    pub offer: Offer,
    /// The operation by which steps are taken: `advance`, or `rate`.
    pub operation: Operation,
    /// The names of the fields.
    pub names: Vec<String>,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// The sign of the motion in each direction.
    pub signs: Vec<f64>,
    /// The step.
    pub step: f64,
    /// How many steps a run takes.
    pub steps: usize,
    /// The numbers as realised.
    pub numbers: Numbers,
}

/// What is known of a case once it is prepared.
#[derive(Clone, Debug)]
pub struct Prepared {
    /// Where the values sit and what they stand for.
    pub layout: Layout,
    /// Which values belong to which cell.
    pub cellwise: Cellwise,
    /// The several nodes of a cell, where it has them.
    pub nodes: Option<Nodes>,
}

/// All settings that the scheme offers.
///
/// # Errors
/// A sentence for each setting that is not offered, where none is.
pub fn trials(session: &Session, request: &InvariantsRequest) -> Result<Vec<Trial>, Stop> {
    let description = session.description();
    let dimensions: Vec<usize> = match &request.cells {
        Some(cells) => vec![cells.len()],
        None => (1..=3).filter(|d| has_dimensions(description, &request.equation, *d)).collect(),
    };
    let (mut trials, mut refusal) = (Vec::<Trial>::new(), None);
    for d in dimensions {
        for signs in parameters::signs(&request.equation, d, &request.parameters) {
            match Trial::new(description, request, &signs) {
                Ok(trial) if trials.iter().any(|known| trial.repeats(known)) => {}
                Ok(mut trial) => {
                    trial.setting = trials.len();
                    trials.push(trial);
                }
                Err(stop) => refusal = refusal.or(Some(stop)),
            }
        }
    }
    if trials.is_empty() {
        let nothing = || Stop::NotOffered(format!("the scheme does not offer `{}`", request.equation));
        return Err(refusal.unwrap_or_else(nothing));
    }
    Ok(trials)
}

fn has_dimensions(description: &Description, equation: &str, dimensions: usize) -> bool {
    let fits = |offer: &Offer| offer.equation == equation && offer.dimensions.contains(&dimensions);
    description.offers.iter().any(fits)
}

impl Trial {
    /// The setting with motion along `signs`.
    fn new(description: &Description, request: &InvariantsRequest, signs: &[f64]) -> Result<Self, Stop> {
        let (equation, dimensions) = (request.equation.as_str(), signs.len());
        let mut refusal = None;
        for offer in description.offers.iter().filter(|offer| offer.equation == equation) {
            let cells = match &request.cells {
                Some(cells) => cells.clone(),
                None => CELLS[dimensions - 1].iter().map(|cells| admissible(*cells, offer.cells)).collect(),
            };
            let parameters = parameters::within(offer, dimensions, &request.parameters, signs)?;
            let upper: Vec<f64> = (0..dimensions).map(|axis| LOWER[axis] + LENGTH[axis]).collect();
            let grid = Grid::uniform(&cells, &LOWER[..dimensions], &upper);
            let built = parameters::step(request, &parameters, &grid).and_then(|motion| {
                let case = case::periodic(equation, &motion.parameters, grid);
                Self::of_case(description, case, &motion, signs)
            });
            match built {
                Ok(trial) => return Ok(trial),
                Err(stop) => refusal = refusal.or(Some(stop)),
            }
        }
        Err(refusal.unwrap_or_else(|| Stop::NotOffered(format!("the scheme does not offer `{equation}`"))))
    }

    fn of_case(description: &Description, case: Case, motion: &Motion, signs: &[f64]) -> Result<Self, Stop> {
        let (offer, operation) = offer_for(description, &case, &motion.parameters)?;
        let most = case.grid.cells.iter().copied().max().unwrap_or(1) as f64;
        // A signal must have the time to reach every cell, else a bad one among them is never felt.
        let crossing = motion.numbers.courant.map_or(STEPS[0], |courant| (1.3 * most / courant).ceil());
        Ok(Self {
            setting: 0,
            names: case::fields(&offer, case.dimensions, None),
            case,
            offer,
            operation,
            parameters: motion.parameters.clone(),
            signs: signs.to_vec(),
            step: motion.step,
            steps: crossing.clamp(STEPS[0], STEPS[1]) as usize,
            numbers: motion.numbers,
        })
    }

    /// The same setting with other parameters and another grid, with the same step; its number stays.
    ///
    /// # Errors
    /// A sentence, where the scheme does not offer it.
    pub fn twin(&self, session: &Session, parameters: Parameters, grid: Grid) -> Result<Self, Stop> {
        let mut case = case::periodic(&self.case.equation, &parameters, grid);
        case.coefficients.clone_from(&self.case.coefficients);
        self.with_case(session, case, parameters)
    }

    /// The same setting with another case.
    ///
    /// # Errors
    /// A sentence, where the scheme does not offer it.
    pub fn with_case(&self, session: &Session, case: Case, parameters: Parameters) -> Result<Self, Stop> {
        let (offer, operation) = offer_for(session.description(), &case, &parameters)?;
        let names = case::fields(&offer, case.dimensions, None);
        Ok(Self { case, offer, operation, names, parameters, ..self.clone() })
    }

    /// Whether `other` is the same setting: signs differ, but nothing that they govern.
    fn repeats(&self, other: &Self) -> bool {
        let has_motion = parameters::states_move(&self.case.equation);
        self.case == other.case && (!has_motion || self.signs == other.signs)
    }

    /// Number of cells.
    pub fn cell_count(&self) -> usize {
        self.case.grid.cells.iter().product()
    }

    /// What is known once the case is prepared with these nodes.
    ///
    /// # Errors
    /// A cell of several values without nodes.
    pub fn prepared(&self, nodes: Option<Nodes>) -> Result<Prepared, Stop> {
        let layout = Layout::new(&self.offer, &self.case, &self.names, nodes.as_ref()).map_err(Stop::Request)?;
        let cellwise = Cellwise::new(&self.offer, nodes.as_ref(), &self.case.grid.cells);
        Ok(Prepared { layout, cellwise, nodes })
    }

    /// The setting as it stands in the record.
    pub fn record(&self) -> InvariantSetting {
        InvariantSetting {
            cells: self.case.grid.cells.clone(),
            parameters: self.parameters.clone(),
            signs: self.signs.clone(),
            operation: self.operation.name().to_owned(),
            step: self.step,
            steps: self.steps,
            courant: self.numbers.courant,
            diffusion_number: self.numbers.diffusion,
        }
    }
}

fn offer_for(description: &Description, case: &Case, parameters: &Parameters) -> Result<(Offer, Operation), Stop> {
    let need = Need {
        equation: &case.equation,
        dimensions: case.dimensions,
        operations: &[Operation::Advance, Operation::Rate],
        boundaries: &[BoundaryKind::Periodic],
        source: false,
        coefficients: &case.coefficients,
        parameters,
        cells: &case.grid.cells,
        grid: case.grid.kind(),
    };
    let (offer, operation) = choose(description, &need).map_err(Stop::NotOffered)?;
    Ok((offer.clone(), operation))
}

/// The least number of cells from `cells` on that the rule admits.
fn admissible(cells: usize, rule: CellRule) -> usize {
    cells.max(rule.minimum).next_multiple_of(rule.multiple.max(1))
}

/// Whether some offer takes this kind of grid for `equation`.
pub fn offers_grid(description: &Description, equation: &str, kind: GridKind) -> bool {
    description.offers.iter().any(|offer| offer.equation == equation && offer.grids.contains(&kind))
}
