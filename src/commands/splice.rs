//! `splice`: joins results that were computed apart.

use std::path::PathBuf;

use clap::Args;

use super::outcome::Outcome;
use crate::dossier;
use crate::record::{join, read_results};

/// Joins results files that were computed apart into one dossier.
#[derive(Debug, Args)]
#[command(after_help = "Example:\n  gridassay splice advection/results.json diffusion/results.json --out dossier")]
pub struct Splice {
    /// The results files.
    #[arg(value_name = "PART", required = true, num_args = 2..)]
    parts: Vec<PathBuf>,
    /// The folder for the dossier.
    #[arg(long, value_name = "DIR", default_value = "dossier")]
    out: PathBuf,
}

impl Splice {
    /// Reads, joins, writes.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let parts = self.parts.iter().map(|path| read_results(path)).collect::<Result<Vec<_>, _>>()?;
        let joined = join(parts).ok_or("there is nothing to join")?;
        dossier::prepare_folder(&self.out)?;
        dossier::write_dossier(&self.out, &joined)?;
        println!("Dossier: {}", self.out.join("index.html").display());
        Ok(Outcome::of(&joined))
    }
}
