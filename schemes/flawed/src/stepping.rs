//! Mistakes in what stands around a scheme: counts of steps, sizes of steps, precision, and memory of what was asked
//! before.

use gridassay_classical::advection::one_step::{lax_wendroff, periodic_advection};
use gridassay_classical::numerics::flux_form::{periodic_fluxes, subtract_divergence};
use gridassay_classical::one_step::OneStep;
use gridassay_classical::registry::boxed;
use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

/// Lax-Wendroff that reckons its Courant number once and never again, or counts its steps over all requests.
struct Remembers {
    /// Every how manieth step is halved; 0: none, but the first Courant number is kept.
    every: usize,
    number_of_unit_step: f64,
    first_courant: Option<f64>,
    steps: usize,
    flux: Vec<f64>,
}

impl Remembers {
    fn new(every: usize) -> Self {
        Self { every, number_of_unit_step: 0.0, first_courant: None, steps: 0, flux: Vec::new() }
    }
}

impl OneStep for Remembers {
    fn name(&self) -> String {
        "remembers".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![periodic_advection(&[Operation::Advance], 4)]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.number_of_unit_step = case.scalar("velocity")? / case.grid.spacing(0);
        self.flux = vec![0.0; case.grid.cells[0]];
        Ok(None)
    }

    fn step(
        &mut self,
        _: f64,
        step: f64,
        state: &mut [Vec<f64>],
        _: &mut [Fields],
        _: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        self.steps += 1;
        let courant = self.number_of_unit_step * step;
        let courant = match self.every {
            0 => *self.first_courant.get_or_insert(courant),
            every if self.steps.is_multiple_of(every) => 0.5 * courant,
            _ => courant,
        };
        periodic_fluxes(&lax_wendroff(courant), &state[0], &mut self.flux);
        subtract_divergence(&self.flux, &mut state[0]);
        Ok(())
    }
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "one-step-too-many",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The loop over the steps runs to the number of steps inclusively.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "the answer is one step late: first order",
        make: || Tampered::classical("lax-wendroff").steps(|steps| steps + 1).boxed(),
    },
    Flaw {
        name: "one-step-too-few",
        twin: "central4-rk4",
        setting: Setting::SeveralSteps,
        mistake: "The loop over the steps starts at 1 where more than one is asked for.",
        exposed_by: &[Study::OrderSpace, Study::Repeatability],
        why: "one step alone is right; runs end one step early: first order, and the answer depends on how steps are \
              grouped",
        make: || Tampered::classical("central4-rk4").steps(|steps| steps.max(2) - 1).boxed(),
    },
    Flaw {
        name: "step-clipped",
        twin: "lax-wendroff",
        setting: Setting::LargeSteps,
        mistake: "The step is silently clipped to a Courant number of 0.4.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "right below it; above, less time passes than was asked for",
        make: || {
            let slip = |step: f64, case: &Case| {
                let most = case.scalar("velocity").map_or(step, |a| 0.4 * case.grid.spacing(0) / a.abs());
                step.min(most)
            };
            Tampered::classical("lax-wendroff").step(slip).boxed()
        },
    },
    Flaw {
        name: "single-precision-state",
        twin: "central4-rk4",
        setting: Setting::Anywhere,
        mistake: "The state is held in single precision between steps.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "errors stall at 1e-7 times the root of the number of steps",
        make: || {
            let slip = |_: &Fields, state: &mut [Vec<f64>]| {
                state.iter_mut().flatten().for_each(|u| *u = f64::from(*u as f32));
            };
            Tampered::classical("central4-rk4").answer(slip).boxed()
        },
    },
    Flaw {
        name: "first-courant-number-kept",
        twin: "lax-wendroff",
        setting: Setting::EarlierRequests,
        mistake: "The Courant number is reckoned in the first step and never again.",
        exposed_by: &[Study::Repeatability, Study::OrderTime],
        why: "a fresh scheme is right, and so is a ladder at a fixed Courant number; after another case or another \
              step it is not",
        make: || boxed(Remembers::new(0)),
    },
    Flaw {
        name: "every-tenth-step-halved",
        twin: "lax-wendroff",
        setting: Setting::EarlierRequests,
        mistake: "A start-up step of half the size is taken again whenever a counter over all requests reaches ten.",
        exposed_by: &[Study::Repeatability, Study::OrderSpace],
        why: "less time passes than was asked for, and the answer depends on what was asked before",
        make: || boxed(Remembers::new(10)),
    },
    Flaw {
        name: "negative-values-clipped",
        twin: "lax-wendroff",
        setting: Setting::NegativeValues,
        mistake: "Values below zero are set to zero after each step, meant for densities.",
        exposed_by: &[Study::Invariants, Study::Modes],
        why: "the scheme is no longer linear and the sum is not kept; a positive smooth state hides it",
        make: || {
            let slip = |_: &Fields, state: &mut [Vec<f64>]| state[0].iter_mut().for_each(|u| *u = u.max(0.0));
            Tampered::classical("lax-wendroff").answer(slip).boxed()
        },
    },
];
