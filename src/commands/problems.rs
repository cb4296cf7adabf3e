//! `problems`: the catalogue, and one problem in full.

use std::path::Path;

use clap::Args;
use gridassay_reference::problem::Problem;

use super::outcome::Outcome;
use crate::dossier::terminal;

/// Lists the problems of the catalogue; with a name, shows one in full.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay problems\n  gridassay problems travelling-sine\n  gridassay problems my_problem.toml"
)]
pub struct Problems {
    /// A problem of the catalogue, or a problem file.
    #[arg(value_name = "NAME")]
    name: Option<String>,
}

impl Problems {
    /// Reads and prints.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        match self.name {
            None => {
                let problems =
                    Problem::catalogue().iter().map(|name| Problem::named(name)).collect::<Result<Vec<_>, _>>()?;
                print!("{}", terminal::catalogue_text(&problems));
            }
            Some(name) => print!("{}", terminal::problem_text(&Problem::resolve(&name, Path::new("."))?)),
        }
        Ok(Outcome::Measured)
    }
}
