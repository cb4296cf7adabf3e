//! `invariants`: what a scheme keeps.

use clap::Args;

use super::arguments::{Output, ParameterArguments, Scheme, positive};
use super::outcome::Outcome;
use super::single;
use crate::claims::InvariantsRequest;
use crate::record::Invariant;
use crate::studies::invariants;

/// Measures conservation and its kin.
#[derive(Debug, Args)]
#[command(after_help = "Example:\n  gridassay invariants --equation advection --classical upwind")]
pub struct Invariants {
    /// The equation's name.
    #[arg(long)]
    equation: String,
    /// Cells, one number a direction; without it generic grids in every number of dimensions that is offered.
    #[arg(long, value_delimiter = ',')]
    cells: Option<Vec<usize>>,
    /// Courant number of the runs.
    #[arg(long, value_parser = positive)]
    courant: Option<f64>,
    /// Diffusion number of the runs.
    #[arg(long, value_parser = positive)]
    diffusion_number: Option<f64>,
    #[command(flatten)]
    parameters: ParameterArguments,
    #[command(flatten)]
    scheme: Scheme,
    #[command(flatten)]
    output: Output,
}

impl Invariants {
    /// Measures and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let request = InvariantsRequest {
            equation: self.equation,
            parameters: self.parameters.parse()?,
            cells: self.cells,
            courant: self.courant,
            diffusion_number: self.diffusion_number,
            invariants: Invariant::ALL.to_vec(),
            tolerance: 0.0,
        };
        let seed = self.output.seed;
        single::measure(&self.scheme, "invariants-1", &self.output, |session| invariants::run(session, &request, seed))
    }
}
