//! `operator`: the matrix of a problem with boundaries.

use clap::Args;

use super::arguments::{Output, ParameterArguments, Scheme};
use super::outcome::Outcome;
use super::single;
use crate::analysis::integrators;
use crate::claims::OperatorRequest;
use crate::studies::operator;

/// Measures the operator of a bounded problem: spectrum, pseudospectra, largest growth.
#[derive(Debug, Args)]
#[command(
    after_help = "Example:\n  gridassay operator --equation advection_diffusion --cells 40 --courant 0.8 --integrator rk4 --classical central4-rk4"
)]
pub struct Operator {
    /// The equation's name.
    #[arg(long)]
    equation: String,
    /// Cells; the matrix has about as many rows.
    #[arg(long, default_value_t = 40)]
    cells: usize,
    /// Courant number a dt / h.
    #[arg(long)]
    courant: Option<f64>,
    /// Diffusion number nu dt / h^2.
    #[arg(long)]
    diffusion_number: Option<f64>,
    /// A time integrator that takes the steps with the scheme's rate, such as rk4; without it the scheme's own steps are probed.
    #[arg(long, value_parser = clap::builder::PossibleValuesParser::new(integrators::NAMES))]
    integrator: Option<String>,
    #[command(flatten)]
    parameters: ParameterArguments,
    #[command(flatten)]
    scheme: Scheme,
    #[command(flatten)]
    output: Output,
}

impl Operator {
    /// Measures and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let request = OperatorRequest {
            equation: self.equation,
            parameters: self.parameters.parse()?,
            cells: self.cells,
            courant: self.courant,
            diffusion_number: self.diffusion_number,
            boundaries: None,
            integrator: self.integrator,
        };
        let seed = self.output.seed;
        single::measure(&self.scheme, "operator-1", &self.output, |session| operator::run(session, &request, seed))
    }
}
