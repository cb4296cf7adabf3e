//! `modes`: one Fourier study.

use clap::Args;

use super::arguments::{Output, ParameterArguments, Scheme, positive};
use super::outcome::Outcome;
use super::single;
use crate::claims::ModesRequest;
use crate::studies::modes;

/// Measures the amplification factor of every wavenumber.
#[derive(Debug, Args)]
#[command(
    after_help = "Example:\n  gridassay modes --equation advection --cells 64 --courant 0.5 --classical lax-wendroff"
)]
pub struct Modes {
    /// The equation's name.
    #[arg(long)]
    equation: String,
    /// Cells, one number a direction: N, N,M or N,M,K.
    #[arg(long, value_delimiter = ',', default_value = "64")]
    cells: Vec<usize>,
    /// Courant number a dt / h.
    #[arg(long, value_parser = positive)]
    courant: Option<f64>,
    /// Diffusion number nu dt / h^2.
    #[arg(long, value_parser = positive)]
    diffusion_number: Option<f64>,
    /// Tries each wavenumber by itself even where the scheme is linear.
    #[arg(long)]
    mode_by_mode: bool,
    #[command(flatten)]
    parameters: ParameterArguments,
    #[command(flatten)]
    scheme: Scheme,
    #[command(flatten)]
    output: Output,
}

impl Modes {
    /// Measures and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        if self.courant.is_none() && self.diffusion_number.is_none() {
            return Err("a study of modes needs a step: give --courant or --diffusion-number, or both".into());
        }
        let request = ModesRequest {
            equation: self.equation,
            parameters: self.parameters.parse()?,
            cells: self.cells,
            courant: self.courant,
            diffusion_number: self.diffusion_number,
            mode_by_mode: self.mode_by_mode,
        };
        let seed = self.output.seed;
        single::measure(&self.scheme, "modes-1", &self.output, |session| modes::run(session, &request, None, seed))
    }
}
