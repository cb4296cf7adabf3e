//! `contrast`: two results files side by side.

use std::path::PathBuf;

use clap::Args;

use super::outcome::Outcome;
use crate::dossier::{self, terminal};
use crate::record::comparison::contrast;
use crate::record::{read_results, write_text};

/// Holds two results files against each other: verdicts, amplification factors, orders, limits.
#[derive(Debug, Args)]
#[command(
    after_help = "Example:\n  gridassay contrast baseline/results.json dossier/results.json\n\nExit status: 0 nothing got worse, 1 something got worse, 2 the request itself is wrong."
)]
pub struct Contrast {
    /// The earlier results.
    #[arg(value_name = "OLD")]
    old: PathBuf,
    /// The later results.
    #[arg(value_name = "NEW")]
    new: PathBuf,
    /// Prints what changed as JSON to stdout, and nothing else there.
    #[arg(long)]
    json: bool,
    /// Writes what changed as a page.
    #[arg(long, value_name = "FILE.html")]
    out: Option<PathBuf>,
}

impl Contrast {
    /// Reads, compares, shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let (old, new) = (read_results(&self.old)?, read_results(&self.new)?);
        let contrast = contrast(&old, &new);
        if let Some(path) = &self.out {
            write_text(path, &dossier::contrast_page(&contrast, &old, &new)?)?;
        }
        if self.json {
            println!("{}", serde_json::to_string_pretty(&contrast)?);
        } else {
            print!("{}", terminal::contrast_text(&contrast));
        }
        Ok(if contrast.is_worse() { Outcome::Worse } else { Outcome::Measured })
    }
}
