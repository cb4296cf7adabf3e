//! Claims in a solver's own tests: one readable expression, and a failure that shows the ladder.
//!
//! ```
//! # use gridassay::scheme::{Advance, Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
//! # #[derive(Default)]
//! # struct MyUpwind { velocity: f64, spacing: f64 }
//! # impl Scheme for MyUpwind {
//! #     fn describe(&self) -> Description {
//! #         let offer = Offer::new("advection", &[Operation::Advance]).with_parameter("velocity", [Some(0.0), None]);
//! #         Description::new("my-upwind", "1.0", vec![offer])
//! #     }
//! #     fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
//! #         (self.velocity, self.spacing) = (case.vector("velocity")?[0], case.grid.spacing(0));
//! #         Ok(None)
//! #     }
//! #     fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
//! #         let courant = self.velocity * request.step / self.spacing;
//! #         for _ in 0..request.steps {
//! #             let old = request.state[0].clone();
//! #             for j in 0..old.len() {
//! #                 request.state[0][j] -= courant * (old[j] - old[(j + old.len() - 1) % old.len()]);
//! #             }
//! #         }
//! #         Ok(())
//! #     }
//! # }
//! use gridassay::expect;
//!
//! // A test of a solver: MyUpwind implements gridassay::scheme::Scheme.
//! expect(MyUpwind::default()).on("travelling-sine").cells(&[80, 160, 320, 640, 1280]).courant(0.7).order(1.0);
//! expect(MyUpwind::default()).stable_up_to_courant("advection", 1.0);
//!
//! // A false claim panics, and the message shows the ladder.
//! let failed = std::panic::catch_unwind(|| {
//!     expect(MyUpwind::default()).on("travelling-sine").cells(&[80, 160, 320, 640, 1280]).courant(0.7).order(2.0);
//! });
//! let message = *failed.unwrap_err().downcast::<String>().unwrap();
//! assert!(message.contains("refuted") && message.contains("1280"), "{message}");
//! ```

use std::path::Path;

use gridassay_reference::problem::Problem;
use gridassay_scheme::Scheme;

use super::attempt::{Attempt, Place, attempt_order, attempt_stability};
use crate::claims::{
    DEFAULT_TOLERANCE, OrderClaim, OrderRequest, StabilityClaim, StabilityRequest, StepSize, default_step_power,
    in_proportion,
};
use crate::dossier::terminal;
use crate::host::Session;
use crate::record::{Parameters, Refinement, StepNumber, Verdict};

/// What is expected of `scheme`; see the module for an example.
pub fn expect(scheme: impl Scheme + 'static) -> Expectation {
    Expectation {
        session: Session::in_process(Box::new(scheme)),
        problem: None,
        cells: None,
        step: None,
        refine: Refinement::SpaceTime,
        time_order: None,
        norm: "l2".to_owned(),
        tolerance: DEFAULT_TOLERANCE,
    }
}

/// An expectation in the making. The last call states the claim: it returns where the claim is upheld and panics otherwise.
#[must_use = "an expectation states nothing before its last call, such as `order`"]
pub struct Expectation {
    session: Session,
    problem: Option<Problem>,
    cells: Option<Vec<usize>>,
    step: Option<StepSize>,
    refine: Refinement,
    time_order: Option<f64>,
    norm: String,
    tolerance: f64,
}

impl Expectation {
    /// On a problem of the catalogue, or on a problem file relative to the current folder.
    ///
    /// # Panics
    /// There is no such problem.
    pub fn on(mut self, problem: &str) -> Self {
        self.problem = Some(Problem::resolve(problem, Path::new(".")).unwrap_or_else(|error| panic!("{error}")));
        self
    }

    /// With parameters that replace the problem's.
    ///
    /// # Panics
    /// No problem yet, or parameters that it does not have.
    pub fn parameters(mut self, parameters: &Parameters) -> Self {
        let problem = self.problem.take().expect("`parameters` comes after `on`");
        self.problem = Some(problem.with_parameters(parameters).unwrap_or_else(|error| panic!("{error}")));
        self
    }

    /// On this ladder of cells in x, coarse to fine; without it the ladder is chosen and lengthened.
    pub fn cells(mut self, cells: &[usize]) -> Self {
        self.cells = Some(cells.to_vec());
        self
    }

    /// With this Courant number on the coarsest level.
    pub fn courant(mut self, courant: f64) -> Self {
        self.step = Some(StepSize::Courant(courant));
        self
    }

    /// With this diffusion number on the coarsest level; the step then falls as h^2.
    pub fn diffusion_number(mut self, number: f64) -> Self {
        self.step = Some(StepSize::DiffusionNumber(number));
        self
    }

    /// Refined in space, with a step that keeps an error in time of order `time_order` below.
    pub fn in_space(mut self, time_order: f64) -> Self {
        self.refine = Refinement::Space;
        self.time_order = Some(time_order);
        self
    }

    /// Refined in time alone, on the coarsest grid.
    pub fn in_time(mut self) -> Self {
        self.refine = Refinement::Time;
        self
    }

    /// In the norm `l1`, `l2` (default) or `linf`.
    pub fn norm(mut self, norm: &str) -> Self {
        self.norm = norm.to_owned();
        self
    }

    /// With this tolerance instead of 0.1.
    pub fn tolerance(mut self, tolerance: f64) -> Self {
        self.tolerance = tolerance;
        self
    }

    /// Claims an order of accuracy.
    ///
    /// # Panics
    /// The claim is refuted or undecided; the message says why and shows the ladder.
    #[track_caller]
    pub fn order(mut self, expect: f64) {
        let problem = self.problem.take().expect("an order is claimed on a problem: call `on` first");
        let dimensions = problem.dimensions();
        let claim = OrderClaim {
            request: OrderRequest {
                velocity_is_open: true,
                cells: self.cells.map(|cells| cells.iter().map(|x| in_proportion(*x, dimensions)).collect()),
                step: self.step,
                refine: self.refine,
                step_power: default_step_power(self.refine, self.step, expect, self.time_order),
                final_time: problem.final_time(),
                operation: None,
                problem,
            },
            norm: self.norm,
            field: None,
            expect,
            tolerance: self.tolerance,
        };
        settle(attempt_order(&mut self.session, &claim, PLACE), &format!("order {expect}"));
    }

    /// Claims that every Courant number up to `up_to` is stable for `equation`.
    ///
    /// # Panics
    /// The claim is refuted or undecided; the message says why.
    #[track_caller]
    pub fn stable_up_to_courant(mut self, equation: &str, up_to: f64) {
        let claim = stability_claim(equation, StepNumber::Courant, up_to);
        settle(attempt_stability(&mut self.session, &claim, PLACE), &format!("stable up to Courant number {up_to}"));
    }

    /// Claims that every diffusion number up to `up_to` is stable for `equation`.
    ///
    /// # Panics
    /// The claim is refuted or undecided; the message says why.
    #[track_caller]
    pub fn stable_up_to_diffusion_number(mut self, equation: &str, up_to: f64) {
        let claim = stability_claim(equation, StepNumber::DiffusionNumber, up_to);
        settle(attempt_stability(&mut self.session, &claim, PLACE), &format!("stable up to diffusion number {up_to}"));
    }
}

const PLACE: Place<'static> = Place { id: "claim-1", scheme: "scheme", seed: 1 };

fn stability_claim(equation: &str, number: StepNumber, up_to: f64) -> StabilityClaim {
    let request = StabilityRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        number: Some(number),
        held: None,
        scan_to: (2.0 * up_to).max(4.0),
        integrator: None,
        map_to: None,
    };
    StabilityClaim { request, up_to, exactly: false }
}

#[track_caller]
fn settle(attempt: Attempt, claim: &str) {
    if attempt.judgement.verdict == Verdict::Upheld {
        return;
    }
    let shown: Vec<String> = attempt.studies.iter().map(|study| terminal::study_text(study, false)).collect();
    let decided_by =
        attempt.judgement.decided_by.map_or_else(String::new, |by| format!("\nwhat would decide it: {by}"));
    let (word, reason) = (attempt.judgement.verdict.word(), attempt.judgement.reason);
    panic!("the claim `{claim}` is {word}: {reason}{decided_by}\n{}", shown.join("\n"));
}
