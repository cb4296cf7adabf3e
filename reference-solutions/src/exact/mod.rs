//! Exact solutions that no finite expression gives: Riemann problems, dam breaks, the Cole-Hopf transform, characteristics, series.
//!
//! Each is a function of time and of one coordinate. It gives values, slopes along that coordinate, and the places
//! where values or slopes jump, so that averages can be split there.

mod characteristics;
mod cole_hopf;
mod dam_break;
mod riemann;
mod root;
mod series;
mod simple_wave;
mod swirl;

pub use characteristics::Characteristics;
pub use cole_hopf::ColeHopf;
pub use dam_break::DamBreak;
pub use riemann::{GasState, Riemann, StarRegion};
pub use series::{Series, SeriesKind};
pub use simple_wave::SimpleWave;
pub use swirl::Swirl;

/// Why an exact solver cannot be set up or evaluated.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum ExactError {
    /// A given state or argument lies outside what the solver accepts.
    #[error("{name} is {value}, but it must be {requirement}")]
    Argument {
        /// The argument's name.
        name: &'static str,
        /// Its value.
        value: f64,
        /// What it must be.
        requirement: &'static str,
    },
    /// The two states move apart so fast that a vacuum opens between them.
    #[error(
        "the states move apart at {separation}, and at {limit} or more a vacuum opens between them, which has no \
         star state: bring the velocities closer or raise the pressures"
    )]
    Vacuum {
        /// u_R - u_L.
        separation: f64,
        /// 2 (a_L + a_R) / (gamma - 1).
        limit: f64,
    },
    /// The solution is asked for at a time at which it is not (or no longer) defined by this solver.
    #[error("the solution is asked for at time {time}, but it is defined {requirement}")]
    Time {
        /// The time asked for.
        time: f64,
        /// Where it is defined.
        requirement: String,
    },
}

/// Values and slopes of up to three fields at one point.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Sample {
    /// The fields, in the order of the equation.
    pub value: [f64; 3],
    /// Their derivatives along the coordinate.
    pub slope: [f64; 3],
}

/// A solution along one coordinate.
pub trait ExactSolution: Send + Sync {
    /// How many fields it gives: 1 to 3.
    fn fields(&self) -> usize;
    /// Values and slopes at `time` and `position`; at a jump, those of the upper side.
    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError>;
    /// Positions at which a value or a slope jumps at `time`, in rising order.
    fn breaks(&self, time: f64) -> Vec<f64>;
}

/// Refuses a value that is not above zero.
fn positive(name: &'static str, value: f64) -> Result<(), ExactError> {
    if value > 0.0 && value.is_finite() {
        return Ok(());
    }
    Err(ExactError::Argument { name, value, requirement: "positive and finite" })
}

/// Refuses a time that is not after `start`.
fn after(start: f64, time: f64) -> Result<f64, ExactError> {
    if time >= start {
        return Ok(time - start);
    }
    Err(ExactError::Time { time, requirement: format!("from time {start} on") })
}
