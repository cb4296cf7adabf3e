//! Mistakes in systems of equations and in discontinuous Galerkin.

use gridassay_classical::discontinuous_galerkin::DiscontinuousGalerkin;
use gridassay_classical::numerics::limiters::van_leer;
use gridassay_classical::numerics::runge_kutta::{RK1, SSPRK2, Tableau};
use gridassay_classical::registry::with_runge_kutta;
use gridassay_classical::systems::euler::EulerSpace;
use gridassay_classical::systems::riemann::{EulerFlux, Primitive, conserved, hllc, physical_flux, rusanov};
use gridassay_scheme::{Case, Parameter, Scheme};

use crate::diffusion::scale;
use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn set(case: &mut Case, name: &str, value: f64) {
    case.parameters.insert(name.to_owned(), Parameter::Scalar(value));
}

fn first_order(flux: EulerFlux) -> Box<dyn Scheme> {
    with_runge_kutta(EulerSpace::new("euler", flux, None), RK1)
}

fn second_order(flux: EulerFlux) -> Box<dyn Scheme> {
    with_runge_kutta(EulerSpace::new("euler", flux, Some(van_leer)), SSPRK2)
}

fn galerkin(degree: usize, tableau: Tableau) -> Box<dyn Scheme> {
    with_runge_kutta(DiscontinuousGalerkin::new(degree), tableau)
}

/// A pressure of the mean state, for fluxes that leave a part of it out.
fn mean_pressure(left: Primitive, right: Primitive) -> f64 {
    0.5 * (left[2] + right[2])
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "acoustics-no-density",
        twin: "acoustics-upwind",
        setting: Setting::Parameter("density"),
        mistake: "The density is left out of the impedance.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "hidden where the density is 1; else velocity answers pressure with the wrong size",
        make: || Tampered::classical("acoustics-upwind").case(|case| set(case, "density", 1.0)).boxed(),
    },
    Flaw {
        name: "acoustics-mean-flow-sign",
        twin: "acoustics-upwind",
        setting: Setting::Parameter("velocity"),
        mistake: "The mean flow has the wrong sign.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden without a mean flow; else sound is carried upstream",
        make: || Tampered::classical("acoustics-upwind").case(|case| scale(case, "velocity", |_| -1.0)).boxed(),
    },
    Flaw {
        name: "acoustics-mean-flow-forgotten",
        twin: "acoustics-upwind",
        setting: Setting::Parameter("velocity"),
        mistake: "The mean flow is left out of the eigenvalues.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden without a mean flow",
        make: || Tampered::classical("acoustics-upwind").case(|case| scale(case, "velocity", |_| 0.0)).boxed(),
    },
    Flaw {
        name: "acoustics-staggered-sound-speed-not-squared",
        twin: "acoustics-staggered",
        setting: Setting::Parameter("sound_speed"),
        mistake: "The pressure's equation has rho c in place of rho c^2.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden where the speed of sound is 1; else sound runs at the root of its speed",
        make: || {
            let slip = |case: &mut Case| {
                // Both equations as they then are: compression rho c, acceleration 1 / rho.
                scale(case, "sound_speed", |c| c.sqrt() / c);
            };
            Tampered::classical("acoustics-staggered").case(slip).boxed()
        },
    },
    Flaw {
        name: "dg-p1-forward-euler",
        twin: "dg-p1",
        setting: Setting::Anywhere,
        mistake: "The second stage of the Runge-Kutta method is never reached.",
        exposed_by: &[Study::Stability, Study::OrderTime, Study::Modes],
        why: "forward Euler with this space grows at every fixed Courant number",
        make: || galerkin(1, RK1),
    },
    Flaw {
        name: "dg-p3-second-order-time",
        twin: "dg-p3",
        setting: Setting::Anywhere,
        mistake: "The time stepping of the piecewise linear elements is kept.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "second order in time where fourth is needed",
        make: || galerkin(3, SSPRK2),
    },
    Flaw {
        name: "dg-p2-equal-weights",
        twin: "dg-p2",
        setting: Setting::Anywhere,
        mistake: "The weights of the points are told as a third each.",
        exposed_by: &[Study::Invariants],
        why: "the mean that these weights form is not the one that is kept; a state that is smooth within each cell \
              hardly shows it",
        make: || Tampered::classical("dg-p2").nodes(|nodes| nodes.weights = vec![1.0 / 3.0; 3]).boxed(),
    },
    Flaw {
        name: "dg-p2-shifted-points",
        twin: "dg-p2",
        setting: Setting::Anywhere,
        mistake: "The points are told as those of equal thirds of a cell.",
        exposed_by: &[Study::OrderSpace],
        why: "the state is compared with the solution at places where it does not stand: first order",
        make: || Tampered::classical("dg-p2").nodes(|nodes| nodes.offsets = vec![1.0 / 6.0, 0.5, 5.0 / 6.0]).boxed(),
    },
    Flaw {
        name: "euler-gamma-of-air",
        twin: "euler-muscl-hllc",
        setting: Setting::Parameter("gamma"),
        mistake: "The ratio of specific heats is 1.4 whatever the gas.",
        exposed_by: &[Study::OrderSpace],
        why: "hidden for air, and by an entropy wave, which is blind to gamma",
        make: || Tampered::classical("euler-muscl-hllc").case(|case| set(case, "gamma", 1.4)).boxed(),
    },
    Flaw {
        name: "euler-no-slopes",
        twin: "euler-muscl-hllc",
        setting: Setting::Anywhere,
        mistake: "The reconstructed states are computed and then not handed to the flux.",
        exposed_by: &[Study::OrderSpace],
        why: "first order",
        make: || with_runge_kutta(EulerSpace::new("euler", hllc, None), SSPRK2),
    },
    Flaw {
        name: "euler-no-pressure-work",
        twin: "euler-rusanov",
        setting: Setting::Anywhere,
        mistake: "The energy's flux is u E in place of u (E + p).",
        exposed_by: &[Study::OrderSpace],
        why: "the pressure's work is lost; all sums are still kept, and an entropy wave is carried wrongly at most in \
              its energy",
        make: || {
            first_order(|gamma, left, right| {
                let [mass, momentum, energy] = rusanov(gamma, left, right);
                [mass, momentum, energy - 0.5 * (left[1] * left[2] + right[1] * right[2])]
            })
        },
    },
    Flaw {
        name: "euler-half-pressure",
        twin: "euler-rusanov",
        setting: Setting::Anywhere,
        mistake: "The pressure enters the momentum's flux with the factor 1/2 of the dynamic pressure.",
        exposed_by: &[Study::OrderSpace],
        why: "an entropy wave, whose pressure is constant, does not see it",
        make: || {
            first_order(|gamma, left, right| {
                let [mass, momentum, energy] = rusanov(gamma, left, right);
                [mass, momentum - 0.5 * mean_pressure(left, right), energy]
            })
        },
    },
    Flaw {
        name: "euler-viscosity-without-sound",
        twin: "euler-rusanov",
        setting: Setting::Anywhere,
        mistake: "The viscosity takes the flow's speed without the speed of sound.",
        exposed_by: &[Study::Stability],
        why: "too little viscosity below the speed of sound: forward Euler grows",
        make: || {
            first_order(|gamma, left, right| {
                let speed = left[1].abs().max(right[1].abs());
                let (fl, fr) = (physical_flux(gamma, left), physical_flux(gamma, right));
                let (ul, ur) = (conserved(gamma, left), conserved(gamma, right));
                std::array::from_fn(|k| 0.5 * (fl[k] + fr[k]) - 0.5 * speed * (ur[k] - ul[k]))
            })
        },
    },
    Flaw {
        name: "euler-hllc-energy-from-the-left",
        twin: "euler-muscl-hllc",
        setting: Setting::Anywhere,
        mistake: "The energy's flux is always that of the left state.",
        exposed_by: &[Study::Invariants],
        why: "with second-order states on both sides the order stays two, but a mirrored run is no longer the mirror \
              image",
        make: || {
            second_order(|gamma, left, right| {
                let [mass, momentum, _] = hllc(gamma, left, right);
                [mass, momentum, physical_flux(gamma, left)[2]]
            })
        },
    },
];
