//! Mistakes in the schemes for advection.

use gridassay_classical::advection::implicit::ImplicitAdvection;
use gridassay_classical::advection::leapfrog::leap;
use gridassay_classical::advection::one_step::{ExplicitAdvection, lax_wendroff, periodic_advection, upwind};
use gridassay_classical::numerics::flux_form::{FaceWeights, mirrored, periodic_fluxes, subtract_divergence};
use gridassay_classical::one_step::OneStep;
use gridassay_classical::registry::boxed;
use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, Scheme, SchemeError};

use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn explicit(weights: fn(f64) -> FaceWeights) -> Box<dyn Scheme> {
    boxed(ExplicitAdvection::new("explicit", weights))
}

/// The explicit schemes with a mistake that the weights of the flux alone do not show.
struct Explicit {
    weights: fn(f64) -> FaceWeights,
    /// Alters the fluxes, or the field directly.
    slip: fn(f64, &mut [f64], &mut [f64]),
    velocity: f64,
    spacing: f64,
    flux: Vec<f64>,
}

fn with_slip(weights: fn(f64) -> FaceWeights, slip: fn(f64, &mut [f64], &mut [f64])) -> Box<dyn Scheme> {
    boxed(Explicit { weights, slip, velocity: 0.0, spacing: 1.0, flux: Vec::new() })
}

impl OneStep for Explicit {
    fn name(&self) -> String {
        "explicit".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![periodic_advection(&[Operation::Advance], 4)]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
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
        let courant = self.velocity * step / self.spacing;
        periodic_fluxes(&(self.weights)(courant), &state[0], &mut self.flux);
        (self.slip)(courant, &mut self.flux, &mut state[0]);
        subtract_divergence(&self.flux, &mut state[0]);
        Ok(())
    }
}

/// Two-level schemes by what is added to the older value.
struct TwoLevels {
    change: fn(f64, [f64; 3], f64) -> f64,
    velocity: f64,
    spacing: f64,
}

fn two_levels(change: fn(f64, [f64; 3], f64) -> f64) -> Box<dyn Scheme> {
    boxed(TwoLevels { change, velocity: 0.0, spacing: 1.0 })
}

impl OneStep for TwoLevels {
    fn name(&self) -> String {
        "two-levels".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = periodic_advection(&[Operation::Advance], 3);
        offer.levels = 2;
        vec![offer]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
        Ok(None)
    }

    fn step(
        &mut self,
        _: f64,
        step: f64,
        state: &mut [Vec<f64>],
        earlier: &mut [Fields],
        _: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let courant = self.velocity * step / self.spacing;
        let change = self.change;
        leap(&state[0], &mut earlier[0][0], |window, old| change(courant, window, old));
        std::mem::swap(&mut state[0], &mut earlier[0][0]);
        Ok(())
    }
}

/// A predictor and a corrector for advection, each given by what it takes from the field and from the prediction.
struct Predictor {
    corrected: fn(f64, [f64; 3], [f64; 3]) -> f64,
    velocity: f64,
    spacing: f64,
}

fn predictor(corrected: fn(f64, [f64; 3], [f64; 3]) -> f64) -> Box<dyn Scheme> {
    boxed(Predictor { corrected, velocity: 0.0, spacing: 1.0 })
}

impl OneStep for Predictor {
    fn name(&self) -> String {
        "predictor".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![periodic_advection(&[Operation::Advance], 3)]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
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
        let courant = self.velocity * step / self.spacing;
        let u = state[0].clone();
        let n = u.len();
        let around = |v: &[f64], j: usize| [v[(j + n - 1) % n], v[j], v[(j + 1) % n]];
        let predicted: Vec<f64> = (0..n).map(|j| u[j] - courant * (u[(j + 1) % n] - u[j])).collect();
        for (j, value) in state[0].iter_mut().enumerate() {
            *value = (self.corrected)(courant, around(&u, j), around(&predicted, j));
        }
        Ok(())
    }
}

fn implicit(part: f64) -> Box<dyn Scheme> {
    boxed(ImplicitAdvection::new("implicit", part))
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "upwind-never-switches",
        twin: "upwind",
        setting: Setting::NegativeVelocity,
        mistake: "The cell to the left is taken as the upwind one whatever the sign of the velocity.",
        exposed_by: &[Study::Stability, Study::Modes],
        why: "for a negative velocity it is the downwind scheme, which grows at every step size",
        make: || explicit(|c| [0.0, c, 0.0, 0.0]),
    },
    Flaw {
        name: "upwind-takes-the-downwind-cell",
        twin: "upwind",
        setting: Setting::Anywhere,
        mistake: "The branches of the switch on the velocity's sign are exchanged.",
        exposed_by: &[Study::Stability, Study::Modes],
        why: "the downwind scheme grows at every step size",
        make: || explicit(|c| if c >= 0.0 { [0.0, 0.0, c, 0.0] } else { [0.0, c, 0.0, 0.0] }),
    },
    Flaw {
        name: "upwind-doubled-width",
        twin: "upwind",
        setting: Setting::Anywhere,
        mistake: "The difference over one cell is divided by two cell widths.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "waves travel at half the velocity, so the error does not fall at all",
        make: || explicit(|c| upwind(0.5 * c)),
    },
    Flaw {
        name: "lax-friedrichs-half-viscosity",
        twin: "lax-friedrichs",
        setting: Setting::Anywhere,
        mistake: "The factor 1/2 of the mean is applied twice to the viscous part.",
        exposed_by: &[Study::Modes, Study::Stability],
        why: "still consistent and of first order, but cos(theta) becomes (1 + cos(theta)) / 2, and it is stable only \
              up to c^2 = 1/2",
        make: || explicit(|c| [0.0, 0.5 * c + 0.25, 0.5 * c - 0.25, 0.0]),
    },
    Flaw {
        name: "lax-wendroff-viscosity-not-halved",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The factor 1/2 of the second-order term is forgotten.",
        exposed_by: &[Study::OrderSpace, Study::Modes, Study::Stability],
        why: "the error of the second time derivative is over-corrected: first order",
        make: || explicit(|c| [0.0, c * (0.5 + c), c * (0.5 - c), 0.0]),
    },
    Flaw {
        name: "lax-wendroff-viscosity-sign",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The second-order term has the wrong sign.",
        exposed_by: &[Study::Stability, Study::Modes],
        why: "negative viscosity grows at every step size",
        make: || explicit(|c| [0.0, 0.5 * c * (1.0 - c), 0.5 * c * (1.0 + c), 0.0]),
    },
    Flaw {
        name: "lax-wendroff-courant-not-squared",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The Courant number is not squared in the second-order term.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "that is the upwind scheme: first order, and blind at Courant number 1",
        make: || explicit(|c| [0.0, 0.5 * (c + c.abs()), 0.5 * (c - c.abs()), 0.0]),
    },
    Flaw {
        name: "lax-wendroff-one-per-cent",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The second-order term is multiplied by 0.505 in place of 0.5.",
        exposed_by: &[Study::Modes],
        why: "far below the space error of any usual grid, where the order stays two; the amplification factor shows \
              it at once",
        make: || explicit(|c| [0.0, 0.5 * c + 0.505 * c * c, 0.5 * c - 0.505 * c * c, 0.0]),
    },
    Flaw {
        name: "lax-wendroff-single-precision",
        twin: "lax-wendroff",
        setting: Setting::Anywhere,
        mistake: "The Courant number is held in single precision.",
        exposed_by: &[Study::Modes],
        why: "keeps every order until errors fall to 1e-7; a Courant number that is no dyadic fraction shows it in the \
              amplification factor",
        make: || explicit(|c| lax_wendroff(f64::from(c as f32))),
    },
    Flaw {
        name: "lax-wendroff-wrong-face-at-the-seam",
        twin: "lax-wendroff",
        setting: Setting::LastCell,
        mistake: "The flux through the face between the last and the first cell is taken from the last cell alone.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "it conserves, since both cells share the flux, but is of lower order at one face; the answer to an \
              impulse depends on where it sits",
        make: || with_slip(lax_wendroff, |c, flux, u| flux[u.len() - 1] = c * u[u.len() - 1]),
    },
    Flaw {
        name: "upwind-first-cell-left-out",
        twin: "upwind",
        setting: Setting::FirstCell,
        mistake: "The loop over the cells starts at 1.",
        exposed_by: &[Study::Invariants, Study::OrderSpace, Study::Modes],
        why: "what flows into the first cell is lost; seen once a signal gets there",
        make: || Tampered::classical("upwind").answer(|before, state| state[0][0] = before[0][0]).boxed(),
    },
    Flaw {
        name: "lax-wendroff-last-cell-left-out",
        twin: "lax-wendroff",
        setting: Setting::LastCell,
        mistake: "The loop over the cells ends one too early.",
        exposed_by: &[Study::Invariants, Study::OrderSpace, Study::Modes],
        why: "what flows into the last cell is lost; seen once a signal gets there",
        make: || {
            let keep_last = |before: &Fields, state: &mut [Vec<f64>]| {
                let last = state[0].len() - 1;
                state[0][last] = before[0][last];
            };
            Tampered::classical("lax-wendroff").answer(keep_last).boxed()
        },
    },
    Flaw {
        name: "upwind-two-fluxes-at-one-face",
        twin: "upwind",
        setting: Setting::OneCell,
        mistake: "One cell sees another flux through a face than its neighbour does.",
        exposed_by: &[Study::Invariants, Study::Modes],
        why: "the field's sum changes by what one side gains and the other does not lose",
        make: || {
            with_slip(upwind, |c, _, u| {
                let middle = u.len() / 2;
                u[middle] -= 0.05 * c * u[middle];
            })
        },
    },
    Flaw {
        name: "beam-warming-slope-sign",
        twin: "beam-warming",
        setting: Setting::Anywhere,
        mistake: "The correction has the factor (1 + c) in place of (1 - c).",
        exposed_by: &[Study::OrderSpace, Study::Modes, Study::Stability],
        why: "the error of the time derivative is doubled in place of removed: first order",
        make: || explicit(|c| mirrored(c, |c| [-0.5 * c * (1.0 + c), 0.5 * c * (3.0 + c), 0.0, 0.0])),
    },
    Flaw {
        name: "beam-warming-downwind-slope",
        twin: "beam-warming",
        setting: Setting::Anywhere,
        mistake: "The slope is taken over the face, with an index that is one too high.",
        exposed_by: &[Study::Modes, Study::Stability],
        why: "that is the Lax-Wendroff scheme, of second order too, but stable only up to Courant number 1 and with \
              phase errors of the other sign",
        make: || explicit(lax_wendroff),
    },
    Flaw {
        name: "fromm-slope-not-halved",
        twin: "fromm",
        setting: Setting::Anywhere,
        mistake: "The difference over two cells is taken as if it were over one.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "twice the slope over-corrects: first order",
        make: || {
            explicit(|c| {
                mirrored(c, |c| {
                    let slope = 0.5 * c * (1.0 - c);
                    [-slope, c, slope, 0.0]
                })
            })
        },
    },
    Flaw {
        name: "leapfrog-half-difference",
        twin: "leapfrog",
        setting: Setting::Anywhere,
        mistake: "The factor 2 of the double step is forgotten, and so the difference is halved.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "waves travel at half the velocity",
        make: || two_levels(|c, [left, _, right], _| -0.5 * c * (right - left)),
    },
    Flaw {
        name: "leapfrog-starts-from-the-newer-level",
        twin: "leapfrog",
        setting: Setting::Anywhere,
        mistake: "The change is added to the newer level in place of the older one.",
        exposed_by: &[Study::Modes, Study::Stability, Study::OrderSpace],
        why: "central differences with forward Euler and twice the velocity: grows at every step size",
        make: || two_levels(|c, [left, middle, right], old| middle - old - c * (right - left)),
    },
    Flaw {
        name: "leapfrog-stale-level",
        twin: "leapfrog",
        setting: Setting::SeveralSteps,
        mistake: "The older level is not replaced after a step.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "one step is right; from the second on the older level is too old",
        make: || Tampered::classical("leapfrog").stale_level().boxed(),
    },
    Flaw {
        name: "maccormack-forward-twice",
        twin: "maccormack",
        setting: Setting::Anywhere,
        mistake: "The corrector takes a forward difference, as the predictor does.",
        exposed_by: &[Study::OrderSpace, Study::Modes, Study::Stability],
        why: "the space error of the predictor is not cancelled: first order, and unstable for a positive velocity",
        make: || predictor(|c, u, p| 0.5 * (u[1] + p[1] - c * (p[2] - p[1]))),
    },
    Flaw {
        name: "maccormack-corrects-the-old-values",
        twin: "maccormack",
        setting: Setting::Anywhere,
        mistake: "The corrector's difference is taken of the old values in place of the predicted ones.",
        exposed_by: &[Study::Stability, Study::Modes, Study::OrderSpace],
        why: "central differences with forward Euler: grows at every step size",
        make: || predictor(|c, u, p| 0.5 * (u[1] + p[1] - c * (u[1] - u[0]))),
    },
    Flaw {
        name: "maccormack-mean-forgotten",
        twin: "maccormack",
        setting: Setting::Anywhere,
        mistake: "The corrector is not averaged with the old value.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "two steps are taken in the time of one: waves travel at twice the velocity",
        make: || predictor(|c, _, p| p[1] - c * (p[1] - p[0])),
    },
    Flaw {
        name: "crank-nicolson-advection-mostly-implicit",
        twin: "crank-nicolson-advection",
        setting: Setting::Anywhere,
        mistake: "The implicit part is 0.6 in place of 0.5.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "first order in time, and waves are damped that should not be",
        make: || implicit(0.6),
    },
    Flaw {
        name: "crank-nicolson-advection-mostly-explicit",
        twin: "crank-nicolson-advection",
        setting: Setting::Anywhere,
        mistake: "The implicit part is 0.45 in place of 0.5.",
        exposed_by: &[Study::Stability, Study::OrderTime, Study::Modes],
        why: "|G| > 1 at every step size, weakly",
        make: || implicit(0.45),
    },
    Flaw {
        name: "implicit-euler-advection-explicit-part-left-in",
        twin: "implicit-euler-advection",
        setting: Setting::Anywhere,
        mistake: "The explicit half of the Crank-Nicolson scheme is left in beside a fully implicit operator.",
        exposed_by: &[Study::Modes],
        why: "the implicit part 0.9 keeps the first order; the amplification factor is another one",
        make: || implicit(0.9),
    },
];
