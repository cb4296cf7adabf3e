//! What a scheme and the Gridassay harness say to each other, contract version 1.
//!
//! A scheme is any type that implements [`Scheme`]. A plugin crate depends on this crate alone. The same contract is carried
//! by a Rust trait (here), by a C ABI and by a JSON conversation; the three follow each other name by name.
//!
//! ```
//! use gridassay_scheme::{Advance, Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
//!
//! /// First-order upwind differences for u_t + a u_x = 0, a > 0.
//! #[derive(Default)]
//! struct Upwind {
//!     velocity: f64,
//!     spacing: f64,
//! }
//!
//! impl Scheme for Upwind {
//!     fn describe(&self) -> Description {
//!         let offer = Offer::new("advection", &[Operation::Advance]).with_parameter("velocity", [Some(0.0), None]);
//!         Description::new("upwind", "1.0", vec![offer])
//!     }
//!
//!     fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
//!         self.velocity = case.vector("velocity")?[0];
//!         self.spacing = case.grid.spacing(0);
//!         Ok(None)
//!     }
//!
//!     fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
//!         let courant = self.velocity * request.step / self.spacing;
//!         let u = &mut request.state[0];
//!         for _ in 0..request.steps {
//!             let old = u.clone();
//!             for j in 0..u.len() {
//!                 let left = (j + old.len() - 1) % old.len();
//!                 u[j] = old[j] - courant * (old[j] - old[left]);
//!             }
//!         }
//!         Ok(())
//!     }
//! }
//! ```

pub mod abi;
mod case;
pub mod conversation;
mod description;
mod error;
mod fields;
mod grid;
mod harness;
mod scheme;

pub use case::{Case, Parameter, SideKinds};
pub use description::{
    ArrayEncoding, BoundaryKind, CellRule, Description, GridKind, Offer, Operation, ParameterRange, Placement,
    Position, Range, Values,
};
pub use error::{SchemeError, panic_message};
pub use fields::equation_fields;
pub use grid::Grid;
pub use harness::{BoundaryData, Callback, Harness, NoCallbacks, Side};
pub use scheme::{Advance, Fields, March, Nodes, Scheme, Solution};

/// The version of the contract that this crate speaks.
pub const CONTRACT: u32 = 1;
