//! Mistakes that need two dimensions.

use gridassay_classical::plane::{FaceBlock, PlaneNumbers, PlaneScheme, diffusion_2d, lax_wendroff_2d, upwind_2d};
use gridassay_classical::registry::boxed;
use gridassay_scheme::{Case, Fields, Parameter, Scheme};

use crate::flaw::{Flaw, Setting, Study};
use crate::tampered::Tampered;

fn advection(weights: fn(PlaneNumbers) -> [FaceBlock; 2]) -> Box<dyn Scheme> {
    boxed(PlaneScheme::new("plane", "advection", weights))
}

/// Lax-Wendroff with the mixed derivative multiplied.
fn with_mixed_part(numbers: PlaneNumbers, factor: f64) -> [FaceBlock; 2] {
    lax_wendroff_2d(numbers).map(|block| block.map(|[before, own, after]| [factor * before, own, factor * after]))
}

pub(crate) const FLAWS: &[Flaw] = &[
    Flaw {
        name: "upwind-2d-exchanged-velocities",
        twin: "upwind-2d",
        setting: Setting::ObliqueDirection,
        mistake: "The Courant numbers of x and y are exchanged.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden where both are equal, as on a square grid with a diagonal velocity",
        make: || {
            advection(|PlaneNumbers { courant: [x, y], diffusion }| {
                upwind_2d(PlaneNumbers { courant: [y, x], diffusion })
            })
        },
    },
    Flaw {
        name: "upwind-2d-exchanged-spacings",
        twin: "upwind-2d",
        setting: Setting::UnequalSpacings,
        mistake: "The widths of a cell in x and y are exchanged.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden on square cells",
        make: || {
            let slip = |case: &mut Case| {
                let ratio = case.grid.spacing(0) / case.grid.spacing(1);
                if let Some(Parameter::Vector(velocity)) = case.parameters.get_mut("velocity") {
                    velocity[0] *= ratio;
                    velocity[1] /= ratio;
                }
            };
            Tampered::classical("upwind-2d").case(slip).boxed()
        },
    },
    Flaw {
        name: "upwind-2d-never-switches-in-y",
        twin: "upwind-2d",
        setting: Setting::NegativeVelocity,
        mistake: "In y the lower cell is taken as the upwind one whatever the sign of the velocity.",
        exposed_by: &[Study::Stability, Study::Modes],
        why: "right in two of the four quadrants, unstable in the others",
        make: || {
            advection(|numbers| {
                let [x, _] = upwind_2d(numbers);
                [x, [[0.0, numbers.courant[1], 0.0], [0.0; 3]]]
            })
        },
    },
    Flaw {
        name: "upwind-2d-transposed",
        twin: "upwind-2d",
        setting: Setting::ObliqueDirection,
        mistake: "The velocity in y is that of x.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden by a diagonal velocity on square cells",
        make: || {
            advection(|PlaneNumbers { courant: [x, _], diffusion }| {
                upwind_2d(PlaneNumbers { courant: [x, x], diffusion })
            })
        },
    },
    Flaw {
        name: "lax-wendroff-2d-no-mixed-derivative",
        twin: "lax-wendroff-2d",
        setting: Setting::ObliqueDirection,
        mistake: "The mixed derivative is forgotten.",
        exposed_by: &[Study::OrderSpace, Study::Modes, Study::Stability],
        why: "first order in time in oblique directions, right along the axes",
        make: || advection(|numbers| with_mixed_part(numbers, 0.0)),
    },
    Flaw {
        name: "lax-wendroff-2d-mixed-sign",
        twin: "lax-wendroff-2d",
        setting: Setting::ObliqueDirection,
        mistake: "The mixed derivative has the wrong sign.",
        exposed_by: &[Study::OrderSpace, Study::Modes, Study::Stability],
        why: "first order in oblique directions",
        make: || advection(|numbers| with_mixed_part(numbers, -1.0)),
    },
    Flaw {
        name: "lax-wendroff-2d-mixed-doubled",
        twin: "lax-wendroff-2d",
        setting: Setting::ObliqueDirection,
        mistake: "The mixed derivative's factor is 1/4 in place of 1/8 in each direction.",
        exposed_by: &[Study::OrderSpace, Study::Modes],
        why: "first order in oblique directions",
        make: || advection(|numbers| with_mixed_part(numbers, 2.0)),
    },
    Flaw {
        name: "diffusion-2d-one-spacing",
        twin: "diffusion-2d",
        setting: Setting::UnequalSpacings,
        mistake: "The width in x is used in both directions.",
        exposed_by: &[Study::Modes, Study::OrderSpace],
        why: "hidden on square cells",
        make: || {
            let weights = |PlaneNumbers { courant, diffusion: [x, _] }: PlaneNumbers| {
                diffusion_2d(PlaneNumbers { courant, diffusion: [x, x] })
            };
            boxed(PlaneScheme::new("plane", "diffusion", weights))
        },
    },
    Flaw {
        name: "diffusion-2d-transposed-source",
        twin: "diffusion-2d",
        setting: Setting::Source,
        mistake: "The source's array is read with x and y exchanged.",
        exposed_by: &[Study::OrderSpace],
        why: "another source is added; one that is symmetric in x and y hides it, and so does the amplification factor",
        make: || {
            let slip = |case: &Case, source: &mut Fields| {
                let [nx, ny] = [case.grid.cells[0], case.grid.cells[1]];
                let read = source[0].clone();
                for (place, value) in source[0].iter_mut().enumerate() {
                    let (i, j) = (place % nx, place / nx);
                    *value = read[(i * ny + j) % read.len()];
                }
            };
            Tampered::classical("diffusion-2d").source(slip).boxed()
        },
    },
];
