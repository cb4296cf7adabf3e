//! Mistakes in steady solvers.

use gridassay_classical::advection_diffusion::steady::SteadyCentral;
use gridassay_classical::poisson::PoissonCentral;
use gridassay_classical::registry::boxed;
use gridassay_scheme::{Parameter, Scheme};

use crate::diffusion::scale;
use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn averaged(source_average: f64) -> Box<dyn Scheme> {
    let steady = SteadyCentral::with_source_average(source_average);
    boxed(PoissonCentral { steady, ..PoissonCentral::fourth_order() })
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "poisson-compact4-source-not-averaged",
        twin: "poisson-compact4",
        setting: Setting::Source,
        mistake: "The source is taken at the node alone.",
        exposed_by: &[Study::OrderSpace],
        why: "second order: only a fourth-order scheme feels it",
        make: || averaged(0.0),
    },
    Flaw {
        name: "poisson-compact4-average-of-a-tenth",
        twin: "poisson-compact4",
        setting: Setting::Source,
        mistake: "The source's weights are 1/10, 8/10, 1/10 in place of 1/12, 10/12, 1/12.",
        exposed_by: &[Study::OrderSpace],
        why: "second order with a small factor: only a fourth-order scheme feels it",
        make: || averaged(0.1),
    },
    Flaw {
        name: "poisson-compact4-average-sign",
        twin: "poisson-compact4",
        setting: Setting::Source,
        mistake: "The source's second difference is subtracted.",
        exposed_by: &[Study::OrderSpace],
        why: "second order: only a fourth-order scheme feels it",
        make: || averaged(-1.0 / 12.0),
    },
    Flaw {
        name: "poisson-unit-conductivity",
        twin: "poisson-central2",
        setting: Setting::Parameter("conductivity"),
        mistake: "The conductivity is taken as 1.",
        exposed_by: &[Study::OrderSpace],
        why: "hidden where it is 1",
        make: || {
            let slip = |case: &mut gridassay_scheme::Case| {
                case.parameters.insert("conductivity".to_owned(), Parameter::Scalar(1.0));
            };
            Tampered::classical("poisson-central2").case(slip).boxed()
        },
    },
    Flaw {
        name: "poisson-inward-gradient",
        twin: "poisson-central2",
        setting: Setting::GradientWall,
        mistake: "The prescribed gradient is taken along the inward normal.",
        exposed_by: &[Study::OrderSpace],
        why: "hidden by a zero gradient, and with values on both sides",
        make: || Tampered::classical("poisson-central2").boundary(|_, data| data.gradient[0][0] *= -1.0).boxed(),
    },
    Flaw {
        name: "poisson-half-gradient",
        twin: "poisson-central2",
        setting: Setting::GradientWall,
        mistake: "The value beyond the wall is u_1 + h g in place of u_1 + 2 h g.",
        exposed_by: &[Study::OrderSpace],
        why: "half the gradient is set: no convergence; hidden with values on both sides",
        make: || Tampered::classical("poisson-central2").boundary(|_, data| data.gradient[0][0] *= 0.5).boxed(),
    },
    Flaw {
        name: "poisson-source-shifted",
        twin: "poisson-central2",
        setting: Setting::Source,
        mistake: "The source is read one node too far to the right.",
        exposed_by: &[Study::OrderSpace],
        why: "first order",
        make: || Tampered::classical("poisson-central2").source(|_, source| source[0].rotate_left(1)).boxed(),
    },
    Flaw {
        name: "boundary-layer-velocity-halved",
        twin: "central2-rk4",
        setting: Setting::Advection,
        mistake: "The factor 1/2 of the central difference is applied twice.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "half the velocity: no convergence",
        make: || Tampered::classical("central2-rk4").case(|case| scale(case, "velocity", |_| 0.5)).boxed(),
    },
];
