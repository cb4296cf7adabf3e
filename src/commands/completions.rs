//! `completions`: what a shell needs to complete a command line.

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::outcome::Outcome;

/// Prints completions for a shell, made from the same definitions as the commands themselves.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay completions bash > ~/.local/share/bash-completion/completions/gridassay\n  gridassay completions fish > ~/.config/fish/completions/gridassay.fish"
)]
pub struct Completions {
    /// The shell.
    #[arg(value_enum)]
    shell: Shell,
}

impl Completions {
    /// Prints.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        clap_complete::generate(self.shell, &mut super::Program::command(), "gridassay", &mut std::io::stdout());
        Ok(Outcome::Measured)
    }
}
