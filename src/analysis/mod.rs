//! Pure mathematics on arrays: symbols, spectra, norms, fits, uncertainty. Knows no scheme and no file.
//!
//! Conventions that hold in every file here:
//! * a mode is exp(i theta j) on cell j, with theta = k h in (-pi, pi] (in 2-D and 3-D one theta a direction);
//! * the new value of a linear scheme at cell j is the sum over offsets m of c_m u_{j+m}, so its symbol is
//!   G(theta) = sum c_m exp(i m theta);
//! * arrays over cells are flat with x fastest;
//! * a number that is NaN or infinite never passes a comparison.

pub mod branches;
pub mod compare;
pub mod dispersion;
pub mod eigen;
pub mod integrators;
pub mod matrix;
pub mod modified_equation;
pub mod norms;
pub mod order;
pub mod powers;
pub mod spectrum;
pub mod stability;
pub mod symbol;
pub mod uncertainty;
