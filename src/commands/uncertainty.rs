//! `uncertainty`: grid convergence of the person's own values.

use std::path::PathBuf;

use clap::Args;

use super::arguments::Output;
use super::outcome::Outcome;
use super::single;
use crate::assay;
use crate::record::{Study, StudyRecord};
use crate::studies::uncertainty;

/// Weighs values on three or more grids for which there is no exact solution.
#[derive(Debug, Args)]
#[command(
    after_help = "The table has a line of headings, a column `h` (cell size) or `cells` (count), and a column for each quantity:\n\n  \
                  cells,drag,lift\n  980,10.605,6.0909\n  4500,10.725,5.9624\n  18000,10.788,6.0042\n\n\
                  Example:\n  gridassay uncertainty forces.csv --dimensions 2"
)]
pub struct Uncertainty {
    /// The table, comma-separated.
    #[arg(value_name = "TABLE.csv")]
    table: PathBuf,
    /// In how many space dimensions the column `cells` counts the cells of a whole grid; 1: it counts them along one direction.
    #[arg(long, default_value_t = 1, value_parser = clap::value_parser!(u8).range(1..=3))]
    dimensions: u8,
    /// Prints the results as JSON to stdout, and nothing else there.
    #[arg(long)]
    json: bool,
    /// Leaves a dossier in this folder.
    #[arg(long, value_name = "DIR")]
    out: Option<PathBuf>,
}

impl Uncertainty {
    /// Reads, weighs and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let record = uncertainty::run(&self.table, usize::from(self.dimensions))?;
        let study = StudyRecord {
            id: "uncertainty-1".to_owned(),
            scheme: record.table.clone(),
            study: Study::Uncertainty(record),
            stopped: None,
            notes: Vec::new(),
        };
        let results = assay::of_table(std::env::args().collect(), study);
        single::show(&results, &Output { json: self.json, out: self.out, seed: 1 })
    }
}
