//! `judge`: what a claims file asks is run and judged, and the dossier is left.

use std::io::IsTerminal;
use std::path::{Path, PathBuf};

use clap::Args;

use super::outcome::Outcome;
use crate::assay::{self, progress};
use crate::claims::{Plan, plan_of, read_claims};
use crate::dossier;
use crate::record::{Results, VerdictRecord, write_results};

/// Where the embedded claims stand in a clone.
const EMBEDDED: &str = "schemes/classical/claims.toml";

/// Judges the claims of a file and leaves the dossier.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay judge\n  gridassay judge my_claims.toml --out report\n\nWhere GITHUB_ACTIONS is set, each claim that is not upheld becomes an annotation on its line of the claims file."
)]
pub struct Judge {
    /// The claims file; without one, the claims of the classical schemes that come with the program.
    #[arg(value_name = "CLAIMS.toml")]
    claims: Option<PathBuf>,
    /// The folder for the dossier.
    #[arg(long, value_name = "DIR", default_value = "dossier")]
    out: PathBuf,
    /// Shows no progress.
    #[arg(long)]
    quiet: bool,
    /// Prints the results as JSON to stdout, and nothing else there.
    #[arg(long)]
    json: bool,
}

impl Judge {
    /// Reads, plans, runs, judges, writes.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let plan = self.plan()?;
        let results_path = dossier::prepare_folder(&self.out)?;
        let shown = progress::fitting(self.quiet);
        let command_line = std::env::args().collect();
        let results = assay::run(&plan, command_line, &*shown, |results| write_results(&results_path, results))?;
        dossier::write_dossier(&self.out, &results)?;
        if std::env::var_os("GITHUB_ACTIONS").is_some() {
            // To stderr, since stdout may be for machines; the runner reads both.
            eprint!("{}", dossier::annotations(&self.claims_path(), &stated(&plan, &results)));
        }
        if self.json {
            println!("{}", serde_json::to_string_pretty(&results)?);
        } else {
            let colour = std::io::stdout().is_terminal() && std::env::var_os("NO_COLOR").is_none();
            print!("{}", dossier::terminal::verdict_table(&results, colour));
            println!("\nDossier: {}", self.out.join("index.html").display());
        }
        Ok(Outcome::of(&results))
    }

    fn claims_path(&self) -> PathBuf {
        self.claims.clone().unwrap_or_else(|| EMBEDDED.into())
    }

    fn plan(&self) -> Result<Plan, crate::claims::ClaimsError> {
        match &self.claims {
            Some(path) => read_claims(path),
            None => plan_of(Path::new(EMBEDDED), gridassay_classical::CLAIMS, Path::new(".")),
        }
    }
}

/// Each verdict with the line of its claim.
fn stated<'a>(plan: &Plan, results: &'a Results) -> Vec<(usize, &'a VerdictRecord)> {
    let line = |verdict: &VerdictRecord| plan.claims.iter().find(|claim| claim.id == verdict.claim)?.line;
    results.verdicts.iter().map(|verdict| (line(verdict).unwrap_or(1), verdict)).collect()
}
