//! One file a command: arguments in, calls out, nothing else.
//!
//! Exit status: 0 all upheld (or, without a claim, measured), 1 something refuted, 3 something undecided and nothing refuted, 2 the request
//! itself is wrong.

mod arguments;
mod completions;
mod contrast;
mod greet;
mod invariants;
mod judge;
mod manual;
mod modes;
mod operator;
mod order;
mod outcome;
mod problems;
mod redraw;
mod repeat;
mod single;
mod source;
mod splice;
mod stability;
mod starter;
mod uncertainty;

use std::process::ExitCode;

use clap::{Parser, Subcommand};

/// Measures what a discretisation does, and weighs it against what its developer claims.
#[derive(Debug, Parser)]
#[command(
    name = "gridassay",
    version,
    after_help = "Examples:\n  gridassay judge                        judge the classical schemes that come with the program\n  \
                  gridassay judge claims.toml            judge the claims of a file, leave the dossier in ./dossier\n  \
                  gridassay modes --equation advection --cells 64 --courant 0.5 --classical lax-wendroff\n\n\
                  Exit status: 0 all upheld, 1 something refuted, 3 something undecided and nothing refuted, 2 the request itself is wrong."
)]
pub struct Program {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    Judge(judge::Judge),
    Modes(modes::Modes),
    Order(order::Order),
    Stability(stability::Stability),
    Invariants(invariants::Invariants),
    Operator(operator::Operator),
    Problems(problems::Problems),
    Source(source::Source),
    Contrast(contrast::Contrast),
    Redraw(redraw::Redraw),
    Splice(splice::Splice),
    Uncertainty(uncertainty::Uncertainty),
    Greet(greet::Greet),
    Starter(starter::Starter),
    Completions(completions::Completions),
    Manual(manual::Manual),
}

impl Program {
    /// Does what was asked; the exit status tells how it ended.
    pub fn run(self) -> ExitCode {
        let done = match self.command {
            Command::Judge(command) => command.run(),
            Command::Modes(command) => command.run(),
            Command::Order(command) => command.run(),
            Command::Stability(command) => command.run(),
            Command::Invariants(command) => command.run(),
            Command::Operator(command) => command.run(),
            Command::Problems(command) => command.run(),
            Command::Source(command) => command.run(),
            Command::Contrast(command) => command.run(),
            Command::Redraw(command) => command.run(),
            Command::Splice(command) => command.run(),
            Command::Uncertainty(command) => command.run(),
            Command::Greet(command) => command.run(),
            Command::Starter(command) => command.run(),
            Command::Completions(command) => command.run(),
            Command::Manual(command) => command.run(),
        };
        match done {
            Ok(outcome) => outcome.exit_code(),
            Err(error) => {
                eprintln!("gridassay: {error}");
                outcome::WRONG_REQUEST.into()
            }
        }
    }
}
