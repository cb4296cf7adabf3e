//! `stability`: the range of stable steps.

use clap::Args;

use super::arguments::{Output, ParameterArguments, Scheme, positive};
use super::outcome::Outcome;
use super::single;
use crate::analysis::integrators;
use crate::claims::StabilityRequest;
use crate::record::StepNumber;
use crate::studies::stability;

/// Measures the range of stable steps.
#[derive(Debug, Args)]
#[command(after_help = "Example:\n  gridassay stability --equation advection --classical upwind")]
pub struct Stability {
    /// The equation's name.
    #[arg(long)]
    equation: String,
    /// Varies the diffusion number even where the equation has a Courant number too.
    #[arg(long)]
    vary_diffusion_number: bool,
    /// The other number, held fixed, where the equation has both.
    #[arg(long, value_name = "NUMBER", value_parser = positive)]
    held: Option<f64>,
    /// How far the scan goes.
    #[arg(long, default_value_t = 4.0, value_parser = positive)]
    scan_to: f64,
    /// A time integrator that takes the steps with the scheme's rate, such as rk4 or ab3.
    #[arg(long, value_parser = clap::builder::PossibleValuesParser::new(integrators::NAMES))]
    integrator: Option<String>,
    /// Maps the plane of both numbers as well, up to this diffusion number and up to --scan-to in the Courant number.
    #[arg(long, value_name = "NUMBER")]
    map_to: Option<f64>,
    #[command(flatten)]
    parameters: ParameterArguments,
    #[command(flatten)]
    scheme: Scheme,
    #[command(flatten)]
    output: Output,
}

impl Stability {
    /// Measures and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let request = StabilityRequest {
            equation: self.equation,
            parameters: self.parameters.parse()?,
            number: self.vary_diffusion_number.then_some(StepNumber::DiffusionNumber),
            held: self.held,
            scan_to: self.scan_to,
            integrator: self.integrator,
            map_to: self.map_to,
        };
        let seed = self.output.seed;
        single::measure(&self.scheme, "stability-1", &self.output, |session| stability::run(session, &request, seed))
    }
}
