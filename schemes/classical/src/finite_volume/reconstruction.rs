//! The value at the right face of a cell from the values around it: u_{j-2} to u_{j+2} give u at j + 1/2 as seen from
//! the left.
//!
//! The value as seen from the right is the mirror image. All of them give a uniform state back exactly.

use crate::numerics::limiters::Limiter;

/// A reconstruction at the right face from five cells, the middle one being the cell upwind of the face.
pub trait Reconstruction: Send {
    /// First part of the names of schemes that use it.
    fn name(&self) -> String;

    /// The value at the right face of the middle cell.
    fn right_face(&self, u: [f64; 5]) -> f64;
}

/// A reconstruction that is a sum of differences to the upwind value, with constant weights of u_{j-2} to u_{j+2}.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LinearReconstruction {
    /// First part of the names of schemes that use it.
    pub name: &'static str,
    /// Weights; they sum to 1.
    pub weights: [f64; 5],
}

impl Reconstruction for LinearReconstruction {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn right_face(&self, u: [f64; 5]) -> f64 {
        let [a, b, _, d, e] = self.weights;
        u[2] + (a * (u[0] - u[2]) + b * (u[1] - u[2]) + d * (u[3] - u[2]) + e * (u[4] - u[2]))
    }
}

/// u_j. Modified wavenumber: i k'h = 1 - z, with z = exp(-i theta) here and below.
pub const UPWIND1: LinearReconstruction = LinearReconstruction { name: "upwind1", weights: [0.0, 0.0, 1.0, 0.0, 0.0] };

/// (3 u_j - u_{j-1}) / 2. i k'h = (3 - 4 z + z^2) / 2.
pub const UPWIND2: LinearReconstruction = LinearReconstruction { name: "upwind2", weights: [0.0, -0.5, 1.5, 0.0, 0.0] };

/// (2 u_{j+1} + 5 u_j - u_{j-1}) / 6. i k'h = (2 / z + 3 - 6 z + z^2) / 6.
pub const UPWIND3: LinearReconstruction =
    LinearReconstruction { name: "upwind3", weights: [0.0, -1.0 / 6.0, 5.0 / 6.0, 1.0 / 3.0, 0.0] };

/// (2 u_{j-2} - 13 u_{j-1} + 47 u_j + 27 u_{j+1} - 3 u_{j+2}) / 60, the linear twin of WENO5.
/// i k'h = (-3 / z^2 + 30 / z + 20 - 60 z + 15 z^2 - 2 z^3) / 60. Source: Shu 1998, ICASE report 97-65.
pub const UPWIND5: LinearReconstruction = LinearReconstruction {
    name: "upwind5",
    weights: [2.0 / 60.0, -13.0 / 60.0, 47.0 / 60.0, 27.0 / 60.0, -3.0 / 60.0],
};

/// A limited slope within each cell: u_j + s_j / 2. Second order where the solution is smooth and monotone.
///
/// Source: van Leer 1979, J. Comput. Phys. 32:101-136 (MUSCL).
#[derive(Clone, Copy, Debug)]
pub struct Muscl {
    /// First part of the names of schemes that use it.
    pub name: &'static str,
    /// The slope limiter.
    pub limiter: Limiter,
}

impl Reconstruction for Muscl {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn right_face(&self, u: [f64; 5]) -> f64 {
        u[2] + 0.5 * (self.limiter)(u[2] - u[1], u[3] - u[2])
    }
}
