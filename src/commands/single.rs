//! One study without a claims file: a plan of one claim, or of none.

use std::collections::BTreeMap;
use std::io::IsTerminal;

use super::arguments::{Output, Scheme};
use super::outcome::Outcome;
use crate::assay::schemes::source;
use crate::assay::{self, progress};
use crate::claims::{Claim, ClaimKind, Plan};
use crate::dossier;
use crate::host::Session;
use crate::record::{Results, write_results};
use crate::studies::Made;

/// The name of the scheme in such a plan.
const SCHEME: &str = "scheme";

/// Runs one claim and shows what came of it.
pub fn judge(
    scheme: &Scheme,
    kind: ClaimKind,
    id: &str,
    output: &Output,
) -> Result<Outcome, Box<dyn std::error::Error>> {
    let mut plan = empty_plan(scheme, output)?;
    plan.claims.push(Claim { id: id.to_owned(), scheme: SCHEME.to_owned(), line: None, kind });
    let manner = assay::Manner {
        command_line: std::env::args().collect(),
        workers: 1,
        progress: &progress::Quiet,
        journal: None,
        done: Vec::new(),
    };
    let results = assay::run(&plan, manner)?;
    show(&results, output)
}

/// Makes one study without a claim and shows it.
pub fn measure(
    scheme: &Scheme,
    id: &str,
    output: &Output,
    make: impl FnOnce(&mut Session) -> Made,
) -> Result<Outcome, Box<dyn std::error::Error>> {
    let plan = empty_plan(scheme, output)?;
    let mut session = Session::open(&source(&plan.schemes[SCHEME], &plan.folder))?;
    let results = assay::single(&plan, std::env::args().collect(), id, SCHEME, &mut session, make);
    show(&results, output)
}

fn empty_plan(scheme: &Scheme, output: &Output) -> Result<Plan, String> {
    Ok(Plan {
        claims_file: None,
        folder: ".".into(),
        schemes: BTreeMap::from([(SCHEME.to_owned(), scheme.choice()?)]),
        seed: output.seed,
        claims: Vec::new(),
    })
}

/// Shows results as was asked, and leaves a dossier where one is wanted.
pub fn show(results: &Results, output: &Output) -> Result<Outcome, Box<dyn std::error::Error>> {
    if let Some(folder) = &output.out {
        write_results(&dossier::prepare_folder(folder)?, results)?;
        dossier::write_dossier(folder, results)?;
    }
    if output.json {
        println!("{}", serde_json::to_string_pretty(results)?);
    } else {
        let colour = std::io::stdout().is_terminal() && std::env::var_os("NO_COLOR").is_none();
        let studies = results.studies.iter().map(|study| dossier::terminal::study_text(study, colour));
        let verdicts = results.overall.map(|_| dossier::terminal::verdict_table(results, colour));
        print!("{}", studies.chain(verdicts).collect::<Vec<_>>().join("\n"));
    }
    Ok(Outcome::of(results))
}
