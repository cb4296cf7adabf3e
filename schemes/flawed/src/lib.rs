//! Textbook schemes with one realistic coding mistake each: the negative controls of Gridassay's own tests.
//!
//! A study that cannot tell these from their right twins proves nothing about anybody's code. Each row of the table
//! names the twin, the mistake, the studies that should expose it and why; some mistakes no study of this kind can
//! see, and the table says so.
//!
//! ```
//! let all = gridassay_flawed::flaws();
//! let flaw = all.iter().find(|flaw| flaw.name == "lax-wendroff-viscosity-not-halved").expect("a row of the table");
//! assert_eq!(flaw.twin, "lax-wendroff");
//! assert_eq!(flaw.scheme().describe().name, flaw.name);
//! ```

mod advection;
mod diffusion;
mod finite_volume;
mod flaw;
mod lines;
mod plane;
mod steady;
mod stepping;
mod systems;
mod tampered;
mod unseen;

use std::sync::LazyLock;

use gridassay_scheme::Scheme;

pub use flaw::{Flaw, Setting, Study};
pub use tampered::{AnswerSlip, Moment, Tampered};

static FLAWS: LazyLock<Vec<Flaw>> = LazyLock::new(|| {
    let families = [
        advection::FLAWS,
        diffusion::FLAWS,
        lines::FLAWS,
        finite_volume::FLAWS,
        plane::FLAWS,
        systems::FLAWS,
        steady::FLAWS,
        stepping::FLAWS,
        unseen::FLAWS,
    ];
    families.concat()
});

/// All flawed schemes.
pub fn flaws() -> &'static [Flaw] {
    &FLAWS
}

/// The names of all flawed schemes.
pub fn names() -> Vec<&'static str> {
    flaws().iter().map(|flaw| flaw.name).collect()
}

/// A new flawed scheme of that name.
pub fn scheme(name: &str) -> Option<Box<dyn Scheme>> {
    flaws().iter().find(|flaw| flaw.name == name).map(Flaw::scheme)
}
