//! `redraw`: pages and figures again, from results alone.

use std::path::PathBuf;

use clap::Args;

use super::outcome::Outcome;
use crate::dossier;
use crate::record::read_results;

/// Makes the dossier again from its results file alone.
#[derive(Debug, Args)]
#[command(after_help = "Example:\n  gridassay redraw dossier/results.json --out again")]
pub struct Redraw {
    /// The results file.
    #[arg(value_name = "RESULTS")]
    results: PathBuf,
    /// The folder for the dossier; without it, the folder of the results file.
    #[arg(long, value_name = "DIR")]
    out: Option<PathBuf>,
    /// Leaves out every study but these, by id; repeatable.
    #[arg(long = "study", value_name = "ID")]
    studies: Vec<String>,
}

impl Redraw {
    /// Reads, selects, draws.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let mut results = read_results(&self.results)?;
        if let Some(unknown) = self.studies.iter().find(|id| results.studies.iter().all(|study| study.id != **id)) {
            let known: Vec<&str> = results.studies.iter().map(|study| study.id.as_str()).collect();
            return Err(format!("there is no study `{unknown}` in the results; there are {}", known.join(", ")).into());
        }
        let selected = !self.studies.is_empty();
        if selected && self.out.is_none() {
            return Err("a selection would replace the whole results; name another folder with --out".into());
        }
        if selected {
            results.studies.retain(|study| self.studies.contains(&study.id));
            results.verdicts.retain(|verdict| verdict.evidence.iter().any(|id| self.studies.contains(id)));
        }
        let folder = self.out.or_else(|| self.results.parent().map(PathBuf::from)).unwrap_or_default();
        dossier::prepare_folder(&folder)?;
        dossier::write_dossier(&folder, &results)?;
        println!("Dossier: {}", folder.join("index.html").display());
        Ok(Outcome::Measured)
    }
}
