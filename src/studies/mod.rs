//! One file a study: what is asked of a scheme, and what is measured. A study asks a host and returns measurements; it judges nothing.

pub mod callbacks;
pub mod case;
pub mod cellwise;
pub mod impulse;
pub mod invariants;
pub mod jitter;
pub mod layout;
pub mod linearity;
pub mod modes;
pub mod noise;
pub mod operator;
pub mod order;
pub mod selection;
pub mod semi_discrete;
pub mod setting;
pub mod speed;
pub mod stability;
pub mod uncertainty;

mod made;
mod stop;

pub use made::Made;
pub use stop::Stop;
