//! Textbook schemes as an ordinary Gridassay plugin: the embedded default and the worked example.
//!
//! Each scheme names its published source in its doc comment, with its amplification factor where it is linear. The pieces that a scheme is
//! made of are public, so that others can be put together from them.
//!
//! ```
//! let scheme = gridassay_classical::scheme("lax-wendroff").expect("a known name");
//! assert_eq!(scheme.describe().name, "lax-wendroff");
//! assert!(gridassay_classical::names().contains(&"central4-rk4"));
//! ```

pub mod advection;
pub mod advection_diffusion;
pub mod diffusion;
pub mod discontinuous_galerkin;
pub mod finite_volume;
pub mod numerics;
pub mod one_step;
pub mod plane;
pub mod poisson;
pub mod registry;
pub mod systems;

pub use registry::{names, scheme};

/// What the textbooks say of these schemes, as a claims file: what `gridassay judge` judges where it is given no other.
pub const CLAIMS: &str = include_str!("../claims.toml");

#[cfg(feature = "plugin")]
gridassay_scheme::export_schemes!(|name: Option<&str>| scheme(name.unwrap_or("lax-wendroff")));
