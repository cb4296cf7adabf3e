//! The schemes by name.

use std::sync::LazyLock;

use gridassay_scheme::Scheme;

use crate::advection::implicit::ImplicitAdvection;
use crate::advection::leapfrog::Leapfrog;
use crate::advection::maccormack::MacCormack;
use crate::advection::one_step::{self, ExplicitAdvection};
use crate::advection_diffusion::burgers::BurgersCentral;
use crate::advection_diffusion::central::CentralSpace;
use crate::advection_diffusion::compact::CompactSpace;
use crate::diffusion::du_fort_frankel::DuFortFrankel;
use crate::diffusion::one_step::OneStepDiffusion;
use crate::discontinuous_galerkin::DiscontinuousGalerkin;
use crate::finite_volume::reconstruction::{Muscl, Reconstruction, UPWIND1, UPWIND2, UPWIND3, UPWIND5};
use crate::finite_volume::scalar::{Meaning, NumericalFlux, ScalarLaw, godunov_burgers, local_lax_friedrichs_burgers};
use crate::finite_volume::weno::Weno5;
use crate::numerics::limiters::{minmod, monotonised_central, superbee, van_leer};
use crate::numerics::method_of_lines::{MethodOfLines, Space};
use crate::numerics::runge_kutta::{RK1, RK2, RK3, RK4, SSPRK2, SSPRK3, Tableau};
use crate::one_step::{OneStep, Repeated};
use crate::plane::{PlaneScheme, diffusion_2d, lax_wendroff_2d, upwind_2d};
use crate::poisson::PoissonCentral;
use crate::systems::acoustics::{AcousticsStaggered, AcousticsUpwind};
use crate::systems::euler::EulerSpace;
use crate::systems::riemann::{hllc, rusanov};
use crate::volume::{VolumeScheme, diffusion_3d, upwind_3d};

type Maker = Box<dyn Fn() -> Box<dyn Scheme> + Send + Sync>;

/// A scheme that is one step repeated, boxed.
pub fn boxed(one_step: impl OneStep + 'static) -> Box<dyn Scheme> {
    Box::new(Repeated::new(one_step))
}

/// A space operator with a Runge-Kutta method, boxed.
pub fn with_runge_kutta(space: impl Space + 'static, tableau: Tableau) -> Box<dyn Scheme> {
    boxed(MethodOfLines::new(space, tableau))
}

fn one_step_schemes() -> Vec<Maker> {
    let explicit = [
        ("upwind", one_step::upwind as fn(f64) -> [f64; 4]),
        ("lax-friedrichs", one_step::lax_friedrichs),
        ("lax-wendroff", one_step::lax_wendroff),
        ("beam-warming", one_step::beam_warming),
        ("fromm", one_step::fromm),
    ];
    let mut makers: Vec<Maker> = Vec::new();
    for (name, weights) in explicit {
        makers.push(Box::new(move || boxed(ExplicitAdvection::new(name, weights))));
    }
    makers.push(Box::new(|| boxed(Leapfrog::default())));
    makers.push(Box::new(|| boxed(MacCormack::default())));
    makers.push(Box::new(|| boxed(ImplicitAdvection::crank_nicolson())));
    makers.push(Box::new(|| boxed(ImplicitAdvection::implicit_euler())));
    makers.push(Box::new(|| boxed(OneStepDiffusion::explicit_euler())));
    makers.push(Box::new(|| boxed(OneStepDiffusion::crank_nicolson())));
    makers.push(Box::new(|| boxed(OneStepDiffusion::implicit_euler())));
    makers.push(Box::new(|| boxed(DuFortFrankel::default())));
    makers.push(Box::new(|| boxed(PoissonCentral::second_order())));
    makers.push(Box::new(|| boxed(PoissonCentral::fourth_order())));
    makers
}

fn lines<S: Space + 'static>(space: fn() -> S, tableaus: &[Tableau]) -> Vec<Maker> {
    let maker = |tableau: Tableau| -> Maker { Box::new(move || with_runge_kutta(space(), tableau)) };
    tableaus.iter().copied().map(maker).collect()
}

fn advection_diffusion_schemes() -> Vec<Maker> {
    let both = [SSPRK3, RK4];
    let mut makers = lines(CentralSpace::second_order, &both);
    makers.extend(lines(CentralSpace::fourth_order, &both));
    makers.extend(lines(CentralSpace::sixth_order, &both));
    makers.extend(lines(CompactSpace::pade4, &both));
    makers.extend(lines(CompactSpace::compact6, &both));
    makers.extend(lines(BurgersCentral::default, &[RK4]));
    makers
}

fn law<R: Reconstruction + 'static>(reconstruction: R, meaning: Meaning, tableau: Tableau) -> Box<dyn Scheme> {
    with_runge_kutta(ScalarLaw::new(reconstruction, meaning), tableau)
}

fn muscl(muscl: Muscl) -> Box<dyn Scheme> {
    boxed(MethodOfLines::new(ScalarLaw::new(muscl, Meaning::CellAverages), SSPRK2).named(muscl.name))
}

fn burgers(name: &'static str, flux: NumericalFlux) -> Box<dyn Scheme> {
    let space = ScalarLaw::new(UPWIND1, Meaning::BurgersAverages).with_burgers_flux(flux);
    boxed(MethodOfLines::new(space, RK1).named(name))
}

fn conservation_law_schemes() -> Vec<Maker> {
    let mut makers: Vec<Maker> = Vec::new();
    for linear in [UPWIND1, UPWIND2, UPWIND3, UPWIND5] {
        for tableau in [RK1, RK2, RK3, RK4, SSPRK3] {
            makers.push(Box::new(move || law(linear, Meaning::PointsAtNodes, tableau)));
        }
    }
    let limited = [
        Muscl { name: "muscl-minmod", limiter: minmod },
        Muscl { name: "muscl-van-leer", limiter: van_leer },
        Muscl { name: "muscl-superbee", limiter: superbee },
        Muscl { name: "muscl-mc", limiter: monotonised_central },
    ];
    for limited in limited {
        makers.push(Box::new(move || muscl(limited)));
    }
    for tableau in [SSPRK3, RK4] {
        makers.push(Box::new(move || law(Weno5::published(), Meaning::PointsAtNodes, tableau)));
    }
    makers.push(Box::new(|| law(Weno5::as_in_the_tables(), Meaning::PointsAtNodes, RK4)));
    makers.push(Box::new(|| burgers("burgers-godunov", godunov_burgers)));
    makers.push(Box::new(|| burgers("burgers-lax-friedrichs", local_lax_friedrichs_burgers)));
    makers
}

fn plane_and_volume_schemes() -> Vec<Maker> {
    vec![
        Box::new(|| boxed(PlaneScheme::new("upwind-2d", "advection", upwind_2d))),
        Box::new(|| boxed(PlaneScheme::new("lax-wendroff-2d", "advection", lax_wendroff_2d))),
        Box::new(|| boxed(PlaneScheme::new("diffusion-2d", "diffusion", diffusion_2d))),
        Box::new(|| boxed(VolumeScheme::new("upwind-3d", "advection", upwind_3d))),
        Box::new(|| boxed(VolumeScheme::new("diffusion-3d", "diffusion", diffusion_3d))),
    ]
}

fn galerkin(degree: usize, name: &'static str, tableau: Tableau) -> Box<dyn Scheme> {
    boxed(MethodOfLines::new(DiscontinuousGalerkin::new(degree), tableau).named(name))
}

fn systems() -> Vec<Maker> {
    vec![
        Box::new(|| boxed(AcousticsUpwind::default())),
        Box::new(|| boxed(AcousticsStaggered::default())),
        Box::new(|| galerkin(1, "dg-p1", SSPRK2)),
        Box::new(|| galerkin(2, "dg-p2", SSPRK3)),
        Box::new(|| galerkin(3, "dg-p3", RK4)),
        Box::new(|| boxed(MethodOfLines::new(EulerSpace::new("euler", rusanov, None), RK1).named("euler-rusanov"))),
        Box::new(|| {
            boxed(MethodOfLines::new(EulerSpace::new("euler", hllc, Some(van_leer)), SSPRK2).named("euler-muscl-hllc"))
        }),
    ]
}

/// Every scheme under the name that it gives itself.
static SCHEMES: LazyLock<Vec<(String, Maker)>> = LazyLock::new(|| {
    let mut makers = one_step_schemes();
    makers.extend(advection_diffusion_schemes());
    makers.extend(conservation_law_schemes());
    makers.extend(plane_and_volume_schemes());
    makers.extend(systems());
    makers.into_iter().map(|make| (make().describe().name, make)).collect()
});

/// The names of all schemes.
pub fn names() -> Vec<&'static str> {
    SCHEMES.iter().map(|(name, _)| name.as_str()).collect()
}

/// A new scheme of that name.
pub fn scheme(name: &str) -> Option<Box<dyn Scheme>> {
    SCHEMES.iter().find(|(known, _)| known == name).map(|(_, make)| make())
}
