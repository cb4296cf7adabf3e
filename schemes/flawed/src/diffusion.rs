//! Mistakes in the one-step schemes for diffusion.

use gridassay_classical::advection::leapfrog::leap;
use gridassay_classical::diffusion::du_fort_frankel::DuFortFrankel;
use gridassay_classical::diffusion::one_step::OneStepDiffusion;
use gridassay_classical::one_step::OneStep;
use gridassay_classical::registry::boxed;
use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Parameter, Scheme, SchemeError};

use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

/// Multiplies a scalar parameter.
pub(crate) fn scale(case: &mut Case, name: &str, factor: impl Fn(f64) -> f64) {
    if let Some(Parameter::Scalar(value)) = case.parameters.get_mut(name) {
        *value *= factor(*value);
    } else if let Some(Parameter::Vector(values)) = case.parameters.get_mut(name) {
        values.iter_mut().for_each(|value| *value *= factor(*value));
    }
}

/// The scheme of Du Fort and Frankel with another weight.
struct OtherWeight {
    right: DuFortFrankel,
    weight: fn(f64) -> f64,
    number_of_unit_step: f64,
}

impl OneStep for OtherWeight {
    fn name(&self) -> String {
        "other-weight".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        self.right.offers()
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.number_of_unit_step = case.scalar("diffusivity")? / case.grid.spacing(0).powi(2);
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
        let weight = (self.weight)(self.number_of_unit_step * step);
        leap(&state[0], &mut earlier[0][0], |[left, _, right], old| weight * ((left - old) + (right - old)));
        std::mem::swap(&mut state[0], &mut earlier[0][0]);
        Ok(())
    }
}

fn du_fort_frankel(weight: fn(f64) -> f64) -> Box<dyn Scheme> {
    boxed(OtherWeight { right: DuFortFrankel::default(), weight, number_of_unit_step: 0.0 })
}

fn crank_nicolson() -> Tampered {
    Tampered::classical("crank-nicolson-diffusion")
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "explicit-diffusion-width-not-squared",
        twin: "explicit-euler-diffusion",
        setting: Setting::Anywhere,
        mistake: "The second difference is divided by the width of a cell in place of its square.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "the diffusivity shrinks with the grid: no convergence",
        make: || {
            let slip = |case: &mut Case| {
                let h = case.grid.spacing(0);
                scale(case, "diffusivity", |_| h);
            };
            Tampered::classical("explicit-euler-diffusion").case(slip).boxed()
        },
    },
    Flaw {
        name: "explicit-diffusion-single-precision",
        twin: "explicit-euler-diffusion",
        setting: Setting::Anywhere,
        mistake: "The diffusivity is held in single precision.",
        exposed_by: &[Study::Modes],
        why: "wrong in the eighth digit, which no order shows before errors fall to 1e-7",
        make: || {
            let slip = |case: &mut Case| scale(case, "diffusivity", |nu| f64::from(nu as f32) / nu);
            Tampered::classical("explicit-euler-diffusion").case(slip).boxed()
        },
    },
    Flaw {
        name: "explicit-diffusion-seam-off-by-one",
        twin: "explicit-euler-diffusion",
        setting: Setting::LastCell,
        mistake: "The last node is left as it was.",
        exposed_by: &[Study::Invariants, Study::OrderSpace, Study::Modes],
        why: "a periodic field has a value that never changes; with walls the boundary value is never set",
        make: || {
            let keep_last = |before: &Fields, state: &mut [Vec<f64>]| {
                let last = state[0].len() - 1;
                state[0][last] = before[0][last];
            };
            Tampered::classical("explicit-euler-diffusion").answer(keep_last).boxed()
        },
    },
    Flaw {
        name: "crank-nicolson-diffusion-one-per-cent",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Anywhere,
        mistake: "The diffusivity is one per cent too large.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "below the space error of coarse grids; the amplification factor shows it at once",
        make: || crank_nicolson().case(|case| scale(case, "diffusivity", |_| 1.01)).boxed(),
    },
    Flaw {
        name: "crank-nicolson-diffusion-implicit",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Anywhere,
        mistake: "The explicit half is forgotten: the operator is taken at the new time alone.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "first order in time; with a step that falls with the square of the width it looks like second order in \
              space",
        make: || boxed(OneStepDiffusion::new("implicit", 1.0)),
    },
    Flaw {
        name: "crank-nicolson-diffusion-part-typed-wrong",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Anywhere,
        mistake: "The implicit part is 0.55 in place of 0.5.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "first order in time with a small factor",
        make: || boxed(OneStepDiffusion::new("leaning", 0.55)),
    },
    Flaw {
        name: "crank-nicolson-diffusion-late-walls",
        twin: "crank-nicolson-diffusion",
        setting: Setting::VaryingBoundaryValue,
        mistake: "The boundary value of the old time is set at the new time.",
        exposed_by: &[Study::OrderTime, Study::OrderSpace],
        why: "first order in time where the boundary value varies in time; blind with steady walls and on periodic \
              grids",
        make: || {
            let mut scheme = OneStepDiffusion::crank_nicolson();
            scheme.boundary_delay = 1.0;
            boxed(scheme)
        },
    },
    Flaw {
        name: "crank-nicolson-diffusion-walls-at-half-step",
        twin: "crank-nicolson-diffusion",
        setting: Setting::VaryingBoundaryValue,
        mistake: "The boundary value is taken at the middle of the step.",
        exposed_by: &[Study::OrderTime, Study::OrderSpace],
        why: "first order in time where the boundary value varies in time",
        make: || {
            let mut scheme = OneStepDiffusion::crank_nicolson();
            scheme.boundary_delay = 0.5;
            boxed(scheme)
        },
    },
    Flaw {
        name: "crank-nicolson-diffusion-old-source",
        twin: "crank-nicolson-diffusion",
        setting: Setting::VaryingSource,
        mistake: "The source is taken at the old time in both halves.",
        exposed_by: &[Study::OrderTime],
        why: "first order in time where the source varies in time; no amplification factor shows it",
        make: || crank_nicolson().source_time(|moment| moment.start).boxed(),
    },
    Flaw {
        name: "crank-nicolson-diffusion-source-sign",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Source,
        mistake: "The source is subtracted.",
        exposed_by: &[Study::OrderSpace],
        why: "another equation is solved; without a source nothing shows",
        make: || crank_nicolson().source(|_, source| source[0].iter_mut().for_each(|s| *s = -*s)).boxed(),
    },
    Flaw {
        name: "crank-nicolson-diffusion-shifted-source",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Source,
        mistake: "The source of the next node is added.",
        exposed_by: &[Study::OrderSpace],
        why: "the source is off by one cell: first order in space",
        make: || crank_nicolson().source(|_, source| source[0].rotate_left(1)).boxed(),
    },
    Flaw {
        name: "crank-nicolson-diffusion-inward-gradient",
        twin: "crank-nicolson-diffusion",
        setting: Setting::GradientWall,
        mistake: "The prescribed gradient is taken along the inward normal.",
        exposed_by: &[Study::OrderSpace],
        why: "heat flows the wrong way through the wall; a zero gradient hides it",
        make: || crank_nicolson().boundary(|_, data| data.gradient[0][0] *= -1.0).boxed(),
    },
    Flaw {
        name: "crank-nicolson-diffusion-gradient-along-x",
        twin: "crank-nicolson-diffusion",
        setting: Setting::LowerGradientWall,
        mistake: "The prescribed gradient is taken as the derivative along x at both ends.",
        exposed_by: &[Study::OrderSpace],
        why: "right at the upper end, of the wrong sign at the lower one",
        make: || {
            let slip = |side: gridassay_scheme::Side, data: &mut gridassay_scheme::BoundaryData| {
                if !side.is_upper() {
                    data.gradient[0][0] *= -1.0;
                }
            };
            crank_nicolson().boundary(slip).boxed()
        },
    },
    Flaw {
        name: "crank-nicolson-diffusion-whole-cell-at-the-wall",
        twin: "crank-nicolson-diffusion",
        setting: Setting::GradientWall,
        mistake: "The node on a wall with a prescribed gradient is given a whole cell in place of half of one.",
        exposed_by: &[Study::OrderSpace],
        why: "the wall's balance is wrong by half a cell: first order; with prescribed values nothing shows",
        make: || {
            let mut scheme = OneStepDiffusion::crank_nicolson();
            scheme.wall_volume = 1.0;
            boxed(scheme)
        },
    },
    Flaw {
        name: "implicit-euler-diffusion-value-for-gradient",
        twin: "implicit-euler-diffusion",
        setting: Setting::GradientWall,
        mistake: "The value at a wall is taken in place of the gradient.",
        exposed_by: &[Study::OrderSpace],
        why: "another boundary condition is set; with prescribed values nothing shows",
        make: || {
            let slip = |_: gridassay_scheme::Side, data: &mut gridassay_scheme::BoundaryData| {
                data.gradient[0][0] = data.value[0][0];
            };
            Tampered::classical("implicit-euler-diffusion").boundary(slip).boxed()
        },
    },
    Flaw {
        name: "du-fort-frankel-denominator",
        twin: "du-fort-frankel",
        setting: Setting::Anywhere,
        mistake: "The denominator is 1 + r in place of 1 + 2 r.",
        exposed_by: &[Study::Modes, Study::OrderSpace, Study::Stability],
        why: "the weight of the mean is wrong, most at large steps: no convergence with a fixed diffusion number, and \
              growth where it exceeds 1",
        make: || du_fort_frankel(|r| 2.0 * r / (1.0 + r)),
    },
    Flaw {
        name: "du-fort-frankel-single-step",
        twin: "du-fort-frankel",
        setting: Setting::Anywhere,
        mistake: "The step across two levels is counted as one.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "half the diffusivity",
        make: || du_fort_frankel(|r| r / (1.0 + r)),
    },
];
