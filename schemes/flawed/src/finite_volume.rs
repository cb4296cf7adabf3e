//! Mistakes in reconstructions, limiters and fluxes.

use gridassay_classical::finite_volume::reconstruction::{
    LinearReconstruction, Muscl, Reconstruction, UPWIND1, UPWIND2, UPWIND3, UPWIND5,
};
use gridassay_classical::finite_volume::scalar::{Meaning, NumericalFlux, ScalarLaw, godunov_burgers};
use gridassay_classical::finite_volume::weno::Weno5;
use gridassay_classical::numerics::limiters::{Limiter, minmod};
use gridassay_classical::numerics::runge_kutta::{RK1, RK3, RK4, SSPRK2, SSPRK3, Tableau};
use gridassay_classical::registry::with_runge_kutta;
use gridassay_scheme::{Parameter, Scheme};

use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn points<R: Reconstruction + 'static>(reconstruction: R, tableau: Tableau) -> Box<dyn Scheme> {
    with_runge_kutta(ScalarLaw::new(reconstruction, Meaning::PointsAtNodes), tableau)
}

pub(crate) fn upwind3(tableau: Tableau) -> Box<dyn Scheme> {
    points(UPWIND3, tableau)
}

fn muscl(limiter: Limiter) -> Box<dyn Scheme> {
    with_runge_kutta(ScalarLaw::new(Muscl { name: "muscl", limiter }, Meaning::CellAverages), SSPRK2)
}

fn burgers(flux: NumericalFlux) -> Box<dyn Scheme> {
    with_runge_kutta(ScalarLaw::new(UPWIND1, Meaning::BurgersAverages).with_burgers_flux(flux), RK1)
}

/// WENO5 that reads one value twice.
struct DuplicateIndex(Weno5);

impl Reconstruction for DuplicateIndex {
    fn name(&self) -> String {
        "duplicate-index".to_owned()
    }

    fn right_face(&self, [a, b, c, d, _]: [f64; 5]) -> f64 {
        self.0.right_face([a, b, c, d, d])
    }
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "upwind2-index",
        twin: "upwind2-rk2",
        setting: Setting::Anywhere,
        mistake: "The extrapolation takes u_{j-2} in place of u_{j-1}.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "the slope is twice too large: first order",
        make: || {
            points(
                LinearReconstruction { weights: [-0.5, 0.0, 1.5, 0.0, 0.0], ..UPWIND2 },
                gridassay_classical::numerics::runge_kutta::RK2,
            )
        },
    },
    Flaw {
        name: "upwind3-exchanged-weights",
        twin: "upwind3-rk3",
        setting: Setting::Anywhere,
        mistake: "The weights -1/6 and 2/6 are exchanged.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "a straight line is no longer reconstructed: first order",
        make: || points(LinearReconstruction { weights: [0.0, 1.0 / 3.0, 5.0 / 6.0, -1.0 / 6.0, 0.0], ..UPWIND3 }, RK3),
    },
    Flaw {
        name: "upwind5-typed-weight",
        twin: "upwind5-rk4",
        setting: Setting::Anywhere,
        mistake: "The weight 27/60 is typed as 26/60 and the upwind weight makes up for it.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "the reconstruction is right for a uniform state alone: first order with a small factor",
        make: || {
            let weights = [2.0 / 60.0, -13.0 / 60.0, 48.0 / 60.0, 26.0 / 60.0, -3.0 / 60.0];
            points(LinearReconstruction { weights, ..UPWIND5 }, RK4)
        },
    },
    Flaw {
        name: "upwind5-absolute-velocity",
        twin: "upwind5-rk4",
        setting: Setting::NegativeVelocity,
        mistake: "The flux is computed with the absolute value of the velocity.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "right for a positive velocity; for a negative one waves run the wrong way",
        make: || {
            let slip = |case: &mut gridassay_scheme::Case| match case.parameters.get_mut("velocity") {
                Some(Parameter::Scalar(value)) => *value = value.abs(),
                Some(Parameter::Vector(values)) => values.iter_mut().for_each(|value| *value = value.abs()),
                None => {}
            };
            Tampered::classical("upwind5-rk4").case(slip).boxed()
        },
    },
    Flaw {
        name: "weno5-reversed-linear-weights",
        twin: "weno5-ssprk3",
        setting: Setting::Anywhere,
        mistake: "The linear weights 1/10, 6/10, 3/10 are given in the reverse order.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "the three parabolas no longer combine to fifth order: third",
        make: || points(Weno5 { linear_weights: [0.3, 0.6, 0.1], ..Weno5::published() }, SSPRK3),
    },
    Flaw {
        name: "weno5-equal-linear-weights",
        twin: "weno5-ssprk3",
        setting: Setting::Anywhere,
        mistake: "The linear weights are a third each.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "third order",
        make: || points(Weno5 { linear_weights: [1.0 / 3.0; 3], ..Weno5::published() }, SSPRK3),
    },
    Flaw {
        name: "weno5-duplicate-index",
        twin: "weno5-ssprk3",
        setting: Setting::Anywhere,
        mistake: "u_{j+1} is read a second time in place of u_{j+2}.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "one of three parabolas is of low order and is trusted where it looks smooth",
        make: || points(DuplicateIndex(Weno5::published()), SSPRK3),
    },
    Flaw {
        name: "muscl-slope-not-halved",
        twin: "muscl-van-leer",
        setting: Setting::Anywhere,
        mistake: "The whole slope is added at the face in place of half of it.",
        exposed_by: &[Study::OrderSpace, Study::Invariants],
        why: "over-corrected: first order, and new extrema",
        make: || muscl(|a, b| 2.0 * gridassay_classical::numerics::limiters::van_leer(a, b)),
    },
    Flaw {
        name: "muscl-slope-zero",
        twin: "muscl-minmod",
        setting: Setting::Anywhere,
        mistake: "The bound 1 in max(0, min(1, r)) is typed as 0, so that the slope always vanishes.",
        exposed_by: &[Study::OrderSpace],
        why: "that is the upwind scheme: first order, total variation kept",
        make: || muscl(|_, _| 0.0),
    },
    Flaw {
        name: "muscl-minmod-takes-the-larger",
        twin: "muscl-minmod",
        setting: Setting::Jumps,
        mistake: "The comparison in minmod is the wrong way round.",
        exposed_by: &[Study::Invariants],
        why: "steeper than any limiter may be: the total variation grows; on smooth waves it is still of second order",
        make: || {
            muscl(|a, b| {
                if a * b <= 0.0 {
                    0.0
                } else if a.abs() > b.abs() {
                    a
                } else {
                    b
                }
            })
        },
    },
    Flaw {
        name: "muscl-minmod-one-sided",
        twin: "muscl-minmod",
        setting: Setting::Jumps,
        mistake: "The limiter returns its first argument wherever both have the same sign.",
        exposed_by: &[Study::Invariants],
        why: "the total variation grows beside steps; on smooth waves it is of second order",
        make: || muscl(|a, b| if a * b <= 0.0 { 0.0 } else { a }),
    },
    Flaw {
        name: "muscl-van-leer-sign-not-checked",
        twin: "muscl-van-leer",
        setting: Setting::Anywhere,
        mistake: "The sign of the product is not checked before the harmonic mean is taken.",
        exposed_by: &[Study::Invariants, Study::OrderSpace],
        why: "at extrema the slope can be anything: new extrema and blow-up; a uniform state gives 0 / 0",
        make: || muscl(|a, b| if a + b == 0.0 { 0.0 } else { 2.0 * a * b / (a + b) }),
    },
    Flaw {
        name: "muscl-superbee-three",
        twin: "muscl-superbee",
        setting: Setting::Jumps,
        mistake: "The factor 2 of superbee is typed as 3.",
        exposed_by: &[Study::Invariants],
        why: "leaves the region of Sweby: the total variation grows beside steps of several widths",
        make: || {
            muscl(|a, b| {
                let (steep, other) = (minmod(a, 3.0 * b), minmod(3.0 * a, b));
                if steep.abs() > other.abs() { steep } else { other }
            })
        },
    },
    Flaw {
        name: "muscl-mc-mean-not-halved",
        twin: "muscl-mc",
        setting: Setting::Anywhere,
        mistake: "The central slope is the sum of both differences in place of their mean.",
        exposed_by: &[Study::OrderSpace],
        why: "on smooth waves the slope is twice too large: first order, though the total variation is still bounded \
              by the other arguments",
        make: || muscl(|a, b| minmod(a + b, minmod(2.0 * a, 2.0 * b))),
    },
    Flaw {
        name: "burgers-flux-not-halved",
        twin: "burgers-godunov",
        setting: Setting::Anywhere,
        mistake: "The flux is u^2 in place of u^2 / 2.",
        exposed_by: &[Study::OrderSpace],
        why: "everything travels at twice its speed; the sum is still kept",
        make: || burgers(|left, right| 2.0 * godunov_burgers(left, right)),
    },
    Flaw {
        name: "burgers-no-sonic-point",
        twin: "burgers-godunov",
        setting: Setting::Jumps,
        mistake: "The side is chosen by the mean of both states, without a look at the sonic point.",
        exposed_by: &[Study::OrderSpace],
        why: "a rarefaction through zero stays a standing jump; right everywhere else",
        make: || {
            burgers(|left, right| {
                let upwind = if left + right >= 0.0 { left } else { right };
                0.5 * upwind * upwind
            })
        },
    },
    Flaw {
        name: "burgers-speed-of-one-side",
        twin: "burgers-lax-friedrichs",
        setting: Setting::Anywhere,
        mistake: "The viscosity takes the speed of the left state alone.",
        exposed_by: &[Study::Invariants],
        why: "too little viscosity where the right state is the faster one: new extrema and no mirror symmetry",
        make: || burgers(|left, right| 0.25 * (left * left + right * right) - 0.5 * left.abs() * (right - left)),
    },
    Flaw {
        name: "burgers-viscosity-sign",
        twin: "burgers-lax-friedrichs",
        setting: Setting::Anywhere,
        mistake: "The difference in the viscous part is the wrong way round.",
        exposed_by: &[Study::Invariants, Study::OrderSpace],
        why: "negative viscosity: blows up",
        make: || {
            burgers(|left, right| {
                0.25 * (left * left + right * right) + 0.5 * left.abs().max(right.abs()) * (right - left)
            })
        },
    },
];
