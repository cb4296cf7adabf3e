//! A claims file as resolved: every default filled in, every name looked up.

use std::collections::BTreeMap;
use std::path::PathBuf;
use std::time::Duration;

use gridassay_reference::problem::Problem;
use gridassay_scheme::{BoundaryKind, Operation};

use crate::record::{ClaimsRecord, Invariant, Parameters, Refinement, StepNumber};

/// What a claims file asks for, ready to run.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The claims file, where there was one.
    pub claims_file: Option<ClaimsRecord>,
    /// The folder that relative paths are relative to, and that scheme processes run in.
    pub folder: PathBuf,
    /// The schemes by name.
    pub schemes: BTreeMap<String, SchemeChoice>,
    /// Seed of every random state.
    pub seed: u64,
    /// The claims, in the order of the file within each kind, one for each scheme that it is about.
    pub claims: Vec<Claim>,
}

/// How a scheme is reached.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SchemeChoice {
    /// The command line of an executable, a library, or a classical scheme.
    pub route: RouteChoice,
    /// The longest time for one request; `None`: the contract's default.
    pub time_limit: Option<Duration>,
    /// The longest time for start-up; `None`: the contract's default.
    pub start_limit: Option<Duration>,
    /// The most memory in bytes; `None`: no limit.
    pub memory_limit: Option<u64>,
    /// The longest message in bytes; `None`: the host's default.
    pub message_limit: Option<u64>,
    /// The most processes at once; `None`: no limit.
    pub process_limit: Option<u32>,
}

/// The three ways to hand a scheme in.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum RouteChoice {
    /// An executable that converses in JSON.
    Command(Vec<String>),
    /// A shared library or a plugin crate's folder.
    Plugin {
        /// Its path.
        path: PathBuf,
        /// Which scheme of a library that carries several.
        name: Option<String>,
    },
    /// A classical scheme of that name.
    Classical(String),
}

impl SchemeChoice {
    /// A scheme reached by `route` within the default limits.
    pub fn new(route: RouteChoice) -> Self {
        let (time_limit, start_limit, memory_limit, message_limit, process_limit) = (None, None, None, None, None);
        Self { route, time_limit, start_limit, memory_limit, message_limit, process_limit }
    }
}

/// A claim about one scheme.
#[derive(Clone, Debug)]
pub struct Claim {
    /// Its kind and number: `order-1`.
    pub id: String,
    /// The key of [`Plan::schemes`].
    pub scheme: String,
    /// Where it stands in the claims file, from 1; `None` where there is no file.
    pub line: Option<usize>,
    /// What is claimed.
    pub kind: ClaimKind,
}

/// The kinds of claim.
#[derive(Clone, Debug)]
pub enum ClaimKind {
    /// An order of accuracy.
    Order(OrderClaim),
    /// Amplification factors.
    Modes(ModesClaim),
    /// Stable steps.
    Stability(StabilityClaim),
    /// What the scheme keeps.
    Invariants(InvariantsClaim),
    /// The operator of a bounded problem.
    Operator(OperatorClaim),
}

/// What to measure for the operator of a bounded problem in one dimension.
#[derive(Clone, Debug)]
pub struct OperatorRequest {
    /// The equation's name.
    pub equation: String,
    /// Parameters that the person fixed.
    pub parameters: Parameters,
    /// Cells.
    pub cells: usize,
    /// a dt / h.
    pub courant: Option<f64>,
    /// nu dt / h^2.
    pub diffusion_number: Option<f64>,
    /// Kinds of boundary at the lower and the upper end; `None`: the harness's choice.
    pub boundaries: Option<[BoundaryKind; 2]>,
    /// A time integrator that takes the steps with the scheme's rate; `None`: the scheme's own steps are probed.
    pub integrator: Option<String>,
}

/// Claims about the operator of a bounded problem.
#[derive(Clone, Debug)]
pub struct OperatorClaim {
    /// What to measure.
    pub request: OperatorRequest,
    /// Bound on the spectral radius of a step.
    pub spectral_radius_at_most: Option<f64>,
    /// Bound on the largest growth of the Euclidean norm on the way.
    pub transient_growth_at_most: Option<f64>,
}

/// What to measure for an order of accuracy.
#[derive(Clone, Debug)]
pub struct OrderRequest {
    /// The problem with its parameters.
    pub problem: Problem,
    /// Whether the person left the velocity open, so that both signs may be tried.
    pub velocity_is_open: bool,
    /// The ladder, cells in each direction, coarse to fine; `None`: the harness chooses and lengthens it.
    pub cells: Option<Vec<Vec<usize>>>,
    /// The step on the coarsest level; `None` for steady problems, or for the problem's own choice.
    pub step: Option<StepSize>,
    /// What is refined.
    pub refine: Refinement,
    /// The step falls as this power of the cell width.
    pub step_power: f64,
    /// Where the run ends.
    pub final_time: f64,
    /// The operation that takes the problem to its end; `None`: the first of `advance`, `march` and `rate` that is offered.
    pub operation: Option<Operation>,
}

/// A step on the coarsest level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum StepSize {
    /// a dt / h.
    Courant(f64),
    /// nu dt / h^2.
    DiffusionNumber(f64),
    /// dt itself.
    Step(f64),
}

/// A claimed order of accuracy.
#[derive(Clone, Debug)]
pub struct OrderClaim {
    /// What to measure.
    pub request: OrderRequest,
    /// `l1`, `l2` or `linf`.
    pub norm: String,
    /// The field that is judged; `None`: every field.
    pub field: Option<String>,
    /// The claimed order.
    pub expect: f64,
    /// How far below it the observed order may lie.
    pub tolerance: f64,
}

/// What to measure for amplification factors.
#[derive(Clone, Debug)]
pub struct ModesRequest {
    /// The equation's name.
    pub equation: String,
    /// Parameters that the person fixed.
    pub parameters: Parameters,
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// a dt / h.
    pub courant: Option<f64>,
    /// nu dt / h^2.
    pub diffusion_number: Option<f64>,
    /// Whether each wavenumber is tried by itself even where the scheme is linear: the approximate dispersion relation of Pirozzoli (2006).
    pub mode_by_mode: bool,
}

/// Claims about amplification factors.
#[derive(Clone, Debug)]
pub struct ModesClaim {
    /// What to measure.
    pub request: ModesRequest,
    /// Bound on |phase-speed ratio - 1|.
    pub phase_speed_error_within: Option<f64>,
    /// Bound on the error of |G| in one step.
    pub damping_error_within: Option<f64>,
    /// Cells per wavelength from which on these bounds hold.
    pub from_points_per_wavelength: f64,
    /// The claimed G as a formula.
    pub symbol: Option<String>,
    /// The claimed order of the departure from the equation at small wavenumbers.
    pub formal_order: Option<usize>,
}

/// What to measure for stable steps.
#[derive(Clone, Debug)]
pub struct StabilityRequest {
    /// The equation's name.
    pub equation: String,
    /// Parameters that the person fixed.
    pub parameters: Parameters,
    /// Which number is varied; `None`: the one that the equation has.
    pub number: Option<StepNumber>,
    /// The other number, held fixed.
    pub held: Option<f64>,
    /// How far the scan goes.
    pub scan_to: f64,
    /// A time integrator that takes the steps with the scheme's rate, by its name in [`crate::analysis::integrators::NAMES`]; `None`: the
    /// scheme's own steps.
    pub integrator: Option<String>,
    /// Where the equation has both numbers: a map of their plane up to this diffusion number, and up to `scan_to` in the Courant number.
    pub map_to: Option<f64>,
}

/// A claimed stable range.
#[derive(Clone, Debug)]
pub struct StabilityClaim {
    /// What to measure.
    pub request: StabilityRequest,
    /// Every number up to this one is stable.
    pub up_to: f64,
    /// Whether nothing beyond it is.
    pub exactly: bool,
}

/// What to measure for invariants.
#[derive(Clone, Debug)]
pub struct InvariantsRequest {
    /// The equation's name.
    pub equation: String,
    /// Parameters that the person fixed.
    pub parameters: Parameters,
    /// Cells in each direction; `None`: generic numbers, in every number of dimensions that is offered.
    pub cells: Option<Vec<usize>>,
    /// Courant number of the fastest signal; `None`: the harness's choice.
    pub courant: Option<f64>,
    /// nu dt / h^2; `None`: the harness's choice.
    pub diffusion_number: Option<f64>,
    /// Which invariants to try, in the order of [`Invariant::ALL`].
    pub invariants: Vec<Invariant>,
    /// Relative figures up to this one count as held; 0: rounding alone.
    pub tolerance: f64,
}

/// Claimed invariants: every one of the request's holds.
#[derive(Clone, Debug)]
pub struct InvariantsClaim {
    /// What to measure.
    pub request: InvariantsRequest,
}
