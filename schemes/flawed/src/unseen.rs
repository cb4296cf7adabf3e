//! Mistakes that no study of this kind can see, and why.

use gridassay_classical::diffusion::one_step::OneStepDiffusion;
use gridassay_classical::finite_volume::scalar::{Meaning, ScalarLaw};
use gridassay_classical::finite_volume::weno::Weno5;
use gridassay_classical::numerics::runge_kutta::SSPRK3;
use gridassay_classical::registry::{boxed, with_runge_kutta};
use gridassay_scheme::Case;

use crate::diffusion::scale;
use crate::flaw::{Flaw, Setting};
use crate::tampered::Tampered;

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "unseen-implicit-euler-old-source",
        twin: "implicit-euler-diffusion",
        setting: Setting::VaryingSource,
        mistake: "The source is taken at the old time in place of the new one.",
        exposed_by: &[],
        why: "the scheme is of first order in time either way, and without a source nothing changes",
        make: || Tampered::classical("implicit-euler-diffusion").source_time(|moment| moment.start).boxed(),
    },
    Flaw {
        name: "unseen-explicit-euler-late-walls",
        twin: "explicit-euler-diffusion",
        setting: Setting::VaryingBoundaryValue,
        mistake: "The boundary value of the old time is set at the new time.",
        exposed_by: &[],
        why: "an error of first order in time in a scheme of first order in time, and of second order in space where \
              the step falls with the square of the width",
        make: || {
            let mut scheme = OneStepDiffusion::explicit_euler();
            scheme.boundary_delay = 1.0;
            boxed(scheme)
        },
    },
    Flaw {
        name: "unseen-weno5-smoothness",
        twin: "weno5-ssprk3",
        setting: Setting::Anywhere,
        mistake: "The curvature's factor 13/12 in the measure of smoothness is typed as 13/10.",
        exposed_by: &[],
        why: "the fifth order does not depend on it, and shocks are still captured; only a comparison with published \
              numbers to their digits would tell",
        make: || {
            let weno = Weno5 { smoothness: [1.3, 0.25], ..Weno5::published() };
            with_runge_kutta(ScalarLaw::new(weno, Meaning::PointsAtNodes), SSPRK3)
        },
    },
    Flaw {
        name: "unseen-below-rounding",
        twin: "crank-nicolson-diffusion",
        setting: Setting::Anywhere,
        mistake: "A constant is wrong in the fourteenth digit.",
        exposed_by: &[],
        why: "below what rounding does to the answer",
        make: || {
            let slip = |case: &mut Case| scale(case, "diffusivity", |_| 1.0 + 1e-14);
            Tampered::classical("crank-nicolson-diffusion").case(slip).boxed()
        },
    },
    Flaw {
        name: "unseen-work-done-twice",
        twin: "poisson-central2",
        setting: Setting::Anywhere,
        mistake: "The case is prepared twice.",
        exposed_by: &[],
        why: "costs time and changes no number",
        make: || Tampered::new(Tampered::classical("poisson-central2").boxed()).boxed(),
    },
];
