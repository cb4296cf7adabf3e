//! Mistakes in central and compact differences, in Runge-Kutta methods, and in what they ask at which time.

use gridassay_classical::advection_diffusion::burgers::BurgersCentral;
use gridassay_classical::advection_diffusion::central::{CENTRAL2, CENTRAL4, CENTRAL6, CentralSpace, CentralWeights};
use gridassay_classical::advection_diffusion::compact::{
    COMPACT6, CompactRow, CompactSpace, CompactWeights, PADE4, WALL_FIRST, WALL_SECOND, WallRow,
};
use gridassay_classical::numerics::boundary_rates::StageValues;
use gridassay_classical::numerics::method_of_lines::MethodOfLines;
use gridassay_classical::numerics::runge_kutta::{RK3, RK4, SSPRK3, Tableau};
use gridassay_classical::registry::{boxed, with_runge_kutta};
use gridassay_scheme::Scheme;

use crate::diffusion::scale;
use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn central(weights: CentralWeights, closure_order: usize) -> Box<dyn Scheme> {
    with_runge_kutta(CentralSpace::new("central", weights, closure_order), RK4)
}

fn compact(weights: CompactWeights, walls: Option<[WallRow; 2]>) -> Box<dyn Scheme> {
    with_runge_kutta(CompactSpace::new("compact", weights, walls), RK4)
}

fn fourth_order_in_space(tableau: Tableau) -> Box<dyn Scheme> {
    with_runge_kutta(CentralSpace::fourth_order(), tableau)
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "central2-divided-by-one-width",
        twin: "central2-rk4",
        setting: Setting::Advection,
        mistake: "The difference over two cells is divided by one width.",
        exposed_by: &[Study::Modes, Study::OrderSpace, Study::Stability],
        why: "waves travel at twice the velocity; with diffusion alone nothing shows",
        make: || central(CentralWeights { first: [1.0, 0.0, 0.0], ..CENTRAL2 }, 2),
    },
    Flaw {
        name: "central4-eight-typed-as-seven",
        twin: "central4-rk4",
        setting: Setting::Advection,
        mistake: "The weight 8/12 of the first derivative is typed as 7/12.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "the weights no longer differentiate a straight line: no convergence",
        make: || central(CentralWeights { first: [7.0 / 12.0, -1.0 / 12.0, 0.0], ..CENTRAL4 }, 4),
    },
    Flaw {
        name: "central4-outer-sign",
        twin: "central4-rk4",
        setting: Setting::Diffusion,
        mistake: "The outer weight of the second derivative has the wrong sign.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "a parabola is no longer differentiated exactly; with advection alone nothing shows",
        make: || central(CentralWeights { second: [4.0 / 3.0, 1.0 / 12.0, 0.0], ..CENTRAL4 }, 4),
    },
    Flaw {
        name: "central4-consistent-but-second-order",
        twin: "central4-rk4",
        setting: Setting::Advection,
        mistake: "The weights 3/4 and -1/8 stand in place of 2/3 and -1/12.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "they still differentiate a straight line, but no cubic: second order",
        make: || central(CentralWeights { first: [0.75, -0.125, 0.0], ..CENTRAL4 }, 4),
    },
    Flaw {
        name: "central4-single-precision-third",
        twin: "central4-rk4",
        setting: Setting::Advection,
        mistake: "The weights 2/3 and 1/12 are single-precision constants.",
        exposed_by: &[Study::Modes],
        why: "the order is kept until errors fall to 1e-8; the amplification factor shows it",
        make: || central(CentralWeights { first: [0.666_666_7, -0.083_333_336, 0.0], ..CENTRAL4 }, 4),
    },
    Flaw {
        name: "central4-first-order-closure",
        twin: "central4-rk4",
        setting: Setting::Walls,
        mistake: "The nodes next to the walls use the shortest one-sided differences.",
        exposed_by: &[Study::OrderSpace],
        why: "a closure three orders below the inside pulls the whole down; on periodic grids nothing shows",
        make: || central(CENTRAL4, 1),
    },
    Flaw {
        name: "central6-third-weight",
        twin: "central6-rk4",
        setting: Setting::Advection,
        mistake: "The weight 1/60 is typed as 1/66.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "half a per cent of the velocity is missing, which only fine grids feel",
        make: || central(CentralWeights { first: [0.75, -0.15, 1.0 / 66.0], ..CENTRAL6 }, 5),
    },
    Flaw {
        name: "central6-second-derivative-of-fourth-order",
        twin: "central6-rk4",
        setting: Setting::Diffusion,
        mistake: "The second derivative keeps the weights of the fourth-order scheme.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "fourth order wherever there is diffusion",
        make: || central(CentralWeights { second: CENTRAL4.second, ..CENTRAL6 }, 5),
    },
    Flaw {
        name: "central6-low-order-closure",
        twin: "central6-rk4",
        setting: Setting::Walls,
        mistake: "The nodes near the walls are closed with second order.",
        exposed_by: &[Study::OrderSpace],
        why: "the walls rule the error; on periodic grids nothing shows",
        make: || central(CENTRAL6, 2),
    },
    Flaw {
        name: "pade4-alpha-a-fifth",
        twin: "pade4-rk4",
        setting: Setting::Advection,
        mistake: "The weight of the neighbouring first derivatives is 1/5 in place of 1/4.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "a straight line is no longer differentiated exactly",
        make: || {
            compact(
                CompactWeights { first: CompactRow { alpha: 0.2, ..PADE4.first }, ..PADE4 },
                Some([WALL_FIRST, WALL_SECOND]),
            )
        },
    },
    Flaw {
        name: "pade4-average-of-an-eighth",
        twin: "pade4-rk4",
        setting: Setting::Diffusion,
        mistake: "Second derivatives are averaged with weights 1/8, 1, 1/8 in place of 1/10, 1, 1/10.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "consistent, but of second order: only a fourth-order scheme feels it, and only with diffusion",
        make: || {
            let second = CompactRow { alpha: 0.125, weights: [1.25, 0.0] };
            compact(CompactWeights { second, ..PADE4 }, Some([WALL_FIRST, WALL_SECOND]))
        },
    },
    Flaw {
        name: "pade4-wall-row-beta",
        twin: "pade4-rk4",
        setting: Setting::Walls,
        mistake: "The row of the first derivative at a wall has the weight 3 in place of 2.",
        exposed_by: &[Study::OrderSpace],
        why: "an inconsistent row at the wall pollutes the inside; on periodic grids nothing shows",
        make: || compact(PADE4, Some([WallRow { beta: 3.0, ..WALL_FIRST }, WALL_SECOND])),
    },
    Flaw {
        name: "pade4-wall-row-sign",
        twin: "pade4-rk4",
        setting: Setting::Walls,
        mistake: "The last weight of the second derivative's row at a wall has the wrong sign.",
        exposed_by: &[Study::OrderSpace],
        why: "the row no longer vanishes on a uniform state; on periodic grids nothing shows",
        make: || compact(PADE4, Some([WALL_FIRST, WallRow { weights: [13.0, -27.0, 15.0, 1.0], ..WALL_SECOND }])),
    },
    Flaw {
        name: "compact6-outer-weight-not-quartered",
        twin: "compact6-rk4",
        setting: Setting::Advection,
        mistake: "The difference over four cells is divided by two widths in place of four.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "waves travel too fast by a thirtieth",
        make: || {
            let first = CompactRow { weights: [7.0 / 9.0, 1.0 / 18.0], ..COMPACT6.first };
            compact(CompactWeights { first, ..COMPACT6 }, None)
        },
    },
    Flaw {
        name: "rk4-weights",
        twin: "central4-rk4",
        setting: Setting::Anywhere,
        mistake: "The weights of the second and third stage are 1/6 and 1/2 in place of 1/3 each.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "the weights sum to 1 and give second order in time",
        make: || fourth_order_in_space(Tableau { b: &[1.0 / 6.0, 1.0 / 6.0, 0.5, 1.0 / 6.0], ..RK4 }),
    },
    Flaw {
        name: "rk4-third-stage-from-the-first",
        twin: "central4-rk4",
        setting: Setting::Anywhere,
        mistake: "The third stage starts from the slope of the first in place of the second.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "one of the conditions of third order is lost",
        make: || fourth_order_in_space(Tableau { a: &[&[], &[0.5], &[0.5], &[0.0, 0.0, 1.0]], ..RK4 }),
    },
    Flaw {
        name: "rk4-last-stage-half-step",
        twin: "central4-rk4",
        setting: Setting::Anywhere,
        mistake: "The last stage goes half a step in place of a whole one.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "second order is lost: the slopes' times have the wrong mean",
        make: || fourth_order_in_space(Tableau { a: &[&[], &[0.5], &[0.0, 0.5], &[0.0, 0.0, 0.5]], ..RK4 }),
    },
    Flaw {
        name: "rk4-source-times",
        twin: "central4-rk4",
        setting: Setting::VaryingSource,
        mistake: "The last stage takes the source at the middle of the step.",
        exposed_by: &[Study::OrderTime],
        why: "first order in time where the source varies in time; no amplification factor shows it",
        make: || fourth_order_in_space(Tableau { c: &[0.0, 0.5, 0.5, 0.5], ..RK4 }),
    },
    Flaw {
        name: "rk3-third-stage",
        twin: "upwind3-rk3",
        setting: Setting::Anywhere,
        mistake: "The third stage of Kutta's method is u + dt k2 in place of u - dt k1 + 2 dt k2.",
        exposed_by: &[Study::OrderTime, Study::Modes, Study::OrderSpace],
        why: "second order in time",
        make: || crate::finite_volume::upwind3(Tableau { a: &[&[], &[0.5], &[0.0, 1.0]], ..RK3 }),
    },
    Flaw {
        name: "ssprk3-second-stage",
        twin: "central4-ssprk3",
        setting: Setting::Anywhere,
        mistake: "The second stage is the mean of old and new in place of 3/4 and 1/4.",
        exposed_by: &[Study::OrderTime, Study::Modes],
        why: "the stage sits at the end of the step: second order is lost",
        make: || fourth_order_in_space(Tableau { a: &[&[], &[1.0], &[0.5, 0.5]], ..SSPRK3 }),
    },
    Flaw {
        name: "rk4-source-at-the-start",
        twin: "central4-rk4",
        setting: Setting::VaryingSource,
        mistake: "The source is taken at the start of the step in all stages.",
        exposed_by: &[Study::OrderTime],
        why: "first order in time where the source varies in time; a steady source hides it",
        make: || Tampered::classical("central4-rk4").source_time(|moment| moment.start).boxed(),
    },
    Flaw {
        name: "rk4-source-doubled",
        twin: "central4-rk4",
        setting: Setting::Source,
        mistake: "The source is added twice.",
        exposed_by: &[Study::OrderSpace],
        why: "another equation is solved; without a source nothing shows",
        make: || Tampered::classical("central4-rk4").source(|_, s| s[0].iter_mut().for_each(|s| *s *= 2.0)).boxed(),
    },
    Flaw {
        name: "rk4-walls-at-stage-times",
        twin: "central4-rk4",
        setting: Setting::VaryingBoundaryValue,
        mistake: "The stages take the boundary value of their own time.",
        exposed_by: &[Study::OrderSpace],
        why: "a stage is not the solution at its time: the order of the whole falls to about two and a half where the \
              boundary value varies (Carpenter et al. 1995); with time refined alone on a fixed grid nothing shows",
        make: || {
            let mut method = MethodOfLines::new(CentralSpace::fourth_order(), RK4);
            method.stage_values = StageValues::AtStageTime;
            boxed(method)
        },
    },
    Flaw {
        name: "rk4-walls-at-the-start",
        twin: "central4-rk4",
        setting: Setting::VaryingBoundaryValue,
        mistake: "The boundary value at the start of the step is kept throughout it.",
        exposed_by: &[Study::OrderTime, Study::OrderSpace],
        why: "first order in time where the boundary value varies in time",
        make: || Tampered::classical("central4-rk4").boundary_time(|moment| moment.start).boxed(),
    },
    Flaw {
        name: "central2-walls-exchanged-sign",
        twin: "central2-rk4",
        setting: Setting::UpperWall,
        mistake: "The boundary value has the wrong sign at the upper wall.",
        exposed_by: &[Study::OrderSpace],
        why: "another boundary condition is set; a value of zero hides it",
        make: || {
            let slip = |side: gridassay_scheme::Side, data: &mut gridassay_scheme::BoundaryData| {
                if side.is_upper() {
                    data.value[0][0] *= -1.0;
                }
            };
            Tampered::classical("central2-rk4").boundary(slip).boxed()
        },
    },
    Flaw {
        name: "burgers-viscosity-halved",
        twin: "burgers-central2-rk4",
        setting: Setting::Diffusion,
        mistake: "The viscosity is halved, as if it stood for the whole of a symmetric stress.",
        exposed_by: &[Study::OrderSpace],
        why: "another equation is solved; where the viscosity is small against the width it hardly shows",
        make: || {
            Tampered::new(with_runge_kutta(BurgersCentral::default(), RK4))
                .case(|case| scale(case, "viscosity", |_| 0.5))
                .boxed()
        },
    },
];
