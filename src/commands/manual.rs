//! `manual`: manual pages.

use std::path::PathBuf;

use clap::{Args, CommandFactory};

use super::outcome::Outcome;

/// Writes a manual page for the program and one for each command into a folder.
#[derive(Debug, Args)]
#[command(after_help = "Example:\n  gridassay manual ~/.local/share/man/man1")]
pub struct Manual {
    /// The folder, which is created where it is missing.
    #[arg(value_name = "DIR")]
    folder: PathBuf,
}

impl Manual {
    /// Writes.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let failed = |error| format!("{}: cannot be written: {error}; name another folder", self.folder.display());
        std::fs::create_dir_all(&self.folder).map_err(failed)?;
        clap_mangen::generate_to(super::Program::command(), &self.folder).map_err(failed)?;
        println!("Manual pages: {}", self.folder.join("gridassay.1").display());
        Ok(Outcome::Measured)
    }
}
