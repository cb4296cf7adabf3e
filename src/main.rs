//! The command-line program.

use std::process::ExitCode;

use clap::Parser;

fn main() -> ExitCode {
    gridassay::host::run_child_if_asked();
    gridassay::commands::Program::parse().run()
}
