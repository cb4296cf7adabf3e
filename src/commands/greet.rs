//! `greet`: a conversation with a scheme, step by step.

use std::path::Path;

use clap::Args;

use super::arguments::Scheme;
use super::outcome::Outcome;
use crate::assay::greet::{Standing, Step, greet};
use crate::assay::schemes::source;
use crate::host::{FaultKind, HostError};

/// Holds a conversation with a scheme and explains what it finds: what was understood, what is wrong and how to mend it, which studies it can take.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay greet --command \"python3 my_scheme.py\"\n  gridassay greet --plugin ./libscheme.so\n\n\
                  Exit status: 0 nothing is wrong, 3 something is, 2 the scheme could not be started."
)]
pub struct Greet {
    #[command(flatten)]
    scheme: Scheme,
}

impl Greet {
    /// Greets and prints each step.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let source = source(&self.scheme.choice()?, Path::new("."));
        match greet(&source, &mut |step| print!("{}", shown(step))) {
            Ok(true) => Ok(Outcome::Measured),
            Ok(false) => Ok(Outcome::NotMeasured),
            Err(HostError::Fault(fault)) if !matches!(fault.kind, FaultKind::NotStarted { .. }) => {
                let mend = "answer `describe` as the page on the conversation says: gridassay starter conversation DIR";
                print!("{}", shown(&Step { standing: Standing::Wrong, text: fault.to_string(), mend: Some(mend) }));
                Ok(Outcome::NotMeasured)
            }
            Err(error) => Err(error.into()),
        }
    }
}

/// A step with its sign; names and messages of a scheme as text, without control characters.
fn shown(step: &Step) -> String {
    let sign = match step.standing {
        Standing::Good => "✓",
        Standing::Note => "·",
        Standing::Wrong => "✗",
    };
    let clean: String = step.text.chars().map(|c| if c.is_control() && c != '\n' { '\u{fffd}' } else { c }).collect();
    let mend = step.mend.map_or_else(String::new, |mend| format!("    {mend}\n"));
    format!("{sign} {clean}\n{mend}")
}
