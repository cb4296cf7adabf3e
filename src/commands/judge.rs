//! `judge`: what a claims file asks is run and judged, and the dossier is left.

use std::io::IsTerminal;
use std::num::NonZeroUsize;
use std::path::{Path, PathBuf};

use clap::Args;

use super::outcome::Outcome;
use super::repeat;
use crate::assay::{self, Manner, progress};
use crate::claims::{ClaimsError, Plan, plan_of, read_claims};
use crate::dossier;
use crate::record::{Journal, JournalEntry, JournalHead, Results, VerdictRecord, read_results};

/// The name of the claims file that is embedded: where it stands in a clone.
const EMBEDDED: &str = "schemes/classical/claims.toml";

/// Judges the claims of a file and leaves the dossier.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay judge\n  gridassay judge my_claims.toml --out report\n  gridassay judge my_claims.toml --resume\n  \
                  gridassay judge --repeat dossier/results.json\n\n\
                  Where GITHUB_ACTIONS is set, each claim that is not upheld becomes an annotation on its line of the claims file."
)]
pub struct Judge {
    /// The claims file; without one, the claims of the classical schemes that come with the program.
    #[arg(value_name = "CLAIMS.toml")]
    claims: Option<PathBuf>,
    /// The folder for the dossier.
    #[arg(long, value_name = "DIR", default_value = "dossier")]
    out: PathBuf,
    /// Goes on where an interrupted run with the same claims and the same --out stopped.
    #[arg(long)]
    resume: bool,
    /// How many claims are tried side by side, each worker with scheme processes of its own; all cores unless told. Give 1 where the
    /// scheme is parallel itself. Results do not depend on it.
    #[arg(long, value_name = "N")]
    workers: Option<NonZeroUsize>,
    /// Runs what these results come from again, and says whether anything changed (exit status 1). Leaves no dossier.
    #[arg(long, value_name = "RESULTS.json", conflicts_with_all = ["out", "resume", "json"])]
    repeat: Option<PathBuf>,
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
        if let Some(path) = &self.repeat {
            return self.repeat(path);
        }
        let plan = self.plan()?;
        let results_path = dossier::prepare_folder(&self.out)?;
        let (journal, done) = self.journal(&plan)?;
        // What an earlier run left must not be taken for the outcome of one that was interrupted.
        let _ = std::fs::remove_file(results_path);
        let results = self.carry_out(&plan, Some(journal), done)?;
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

    fn plan(&self) -> Result<Plan, ClaimsError> {
        match &self.claims {
            Some(path) => read_claims(path),
            None => embedded(),
        }
    }

    /// The journal of this run, and what it holds already.
    fn journal(&self, plan: &Plan) -> Result<(Journal, Vec<JournalEntry>), Box<dyn std::error::Error>> {
        let head = JournalHead::new(plan.claims_file.clone(), plan.seed);
        let path = self.out.join(dossier::JOURNAL_FILE);
        match self.resume {
            true => Ok(Journal::resume(&path, &head)?),
            false => Ok((Journal::begin(&path, &head)?, Vec::new())),
        }
    }

    fn carry_out(
        &self,
        plan: &Plan,
        journal: Option<Journal>,
        done: Vec<JournalEntry>,
    ) -> Result<Results, assay::RunError> {
        let shown = progress::fitting(self.quiet);
        let workers = self.workers.or_else(|| std::thread::available_parallelism().ok()).map_or(1, NonZeroUsize::get);
        let command_line = std::env::args().collect();
        assay::run(plan, Manner { command_line, workers, progress: &*shown, journal, done })
    }

    fn repeat(&self, path: &Path) -> Result<Outcome, Box<dyn std::error::Error>> {
        let before = read_results(path)?;
        let plan = match &self.claims {
            Some(claims) => read_claims(claims)?,
            None => repeat::plan(path, &before, &embedded()?)?,
        };
        repeat::check(path, &before, &plan)?;
        let after = self.carry_out(&plan, None, Vec::new())?;
        let (text, changed) = repeat::told(&before, &after);
        print!("{text}");
        Ok(Outcome::Repeated { changed })
    }
}

fn embedded() -> Result<Plan, ClaimsError> {
    plan_of(Path::new(EMBEDDED), gridassay_classical::CLAIMS, Path::new("."))
}

/// Each verdict with the line of its claim.
fn stated<'a>(plan: &Plan, results: &'a Results) -> Vec<(usize, &'a VerdictRecord)> {
    let line = |verdict: &VerdictRecord| plan.claims.iter().find(|claim| claim.id == verdict.claim)?.line;
    results.verdicts.iter().map(|verdict| (line(verdict).unwrap_or(1), verdict)).collect()
}
