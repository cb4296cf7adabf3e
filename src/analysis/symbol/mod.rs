//! The symbol G(theta) of a linear, shift-invariant scheme, from its impulse responses.
//!
//! A scheme with m components (fields x time levels x nodes of a cell) on a periodic grid is a convolution. Component a of the new
//! state, started from a unit impulse in component b at cell J, is `r_ab[j]`, and the coefficient of the neighbour at offset d is
//! `c_ab(d) = r_ab[J - d]`, so that the m x m block G(theta) = sum over d of c(d) exp(i d . theta) is one forward Fourier transform of
//! the response, turned so that the impulse stands at cell zero.
//!
//! * [`response`]: the impulse responses and the grid they live on;
//! * [`sampled`]: G and its derivative at all wavenumbers of the grid, in n log n;
//! * [`stencil`]: the coefficients themselves where the response is short, and from them G at any theta.

pub mod response;
pub mod sampled;
pub mod stencil;

pub use response::{Grid, ImpulseResponses, ResponseError};
pub use sampled::SampledSymbol;
pub use stencil::{Jet, Stencil};

#[cfg(test)]
mod tests;
