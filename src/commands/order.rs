//! `order`: one refinement study.

use std::path::Path;

use clap::{Args, ValueEnum};
use gridassay_reference::problem::Problem;
use gridassay_scheme::Operation;

use super::arguments::{Output, ParameterArguments, Scheme, positive};
use super::outcome::Outcome;
use super::single;
use crate::claims::{
    ClaimKind, DEFAULT_TOLERANCE, OrderClaim, OrderRequest, StepSize, default_step_power, in_proportion,
};
use crate::record::Refinement;
use crate::studies::order;

/// Measures an order of accuracy on a ladder of grids.
#[derive(Debug, Args)]
#[command(
    after_help = "Example:\n  gridassay order --problem travelling-sine --cells 32,64,128,256 --courant 0.4 --expect 2 --classical lax-wendroff"
)]
pub struct Order {
    /// A problem of the catalogue, or a problem file.
    #[arg(long)]
    problem: String,
    /// The ladder, cells in x, coarse to fine; without it the ladder is chosen and lengthened.
    #[arg(long, value_delimiter = ',')]
    cells: Option<Vec<usize>>,
    #[command(flatten)]
    step: StepArguments,
    /// What is refined.
    #[arg(long, value_enum, default_value = "space-time")]
    refine: Refine,
    /// The step falls as this power of the cell width.
    #[arg(long, value_parser = positive)]
    step_power: Option<f64>,
    /// Where the run ends; the problem's own final time without it.
    #[arg(long)]
    final_time: Option<f64>,
    /// How the problem is taken to its end; the first of these that is offered without it. A rate is integrated to far below its error.
    #[arg(long, value_enum)]
    operation: Option<InTime>,
    /// The norm that is judged: l1, l2 or linf.
    #[arg(long, default_value = "l2", value_parser = ["l1", "l2", "linf"])]
    norm: String,
    /// A claimed order: with it the study is judged.
    #[arg(long, value_parser = positive)]
    expect: Option<f64>,
    #[command(flatten)]
    parameters: ParameterArguments,
    #[command(flatten)]
    scheme: Scheme,
    #[command(flatten)]
    output: Output,
}

#[derive(Debug, Args)]
#[group(multiple = false)]
struct StepArguments {
    /// Courant number on the coarsest level.
    #[arg(long, value_parser = positive)]
    courant: Option<f64>,
    /// Diffusion number on the coarsest level.
    #[arg(long, value_parser = positive)]
    diffusion_number: Option<f64>,
    /// The step on the coarsest level.
    #[arg(long, value_parser = positive)]
    step: Option<f64>,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum InTime {
    Advance,
    March,
    Rate,
}

impl From<InTime> for Operation {
    fn from(operation: InTime) -> Self {
        match operation {
            InTime::Advance => Self::Advance,
            InTime::March => Self::March,
            InTime::Rate => Self::Rate,
        }
    }
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum Refine {
    Space,
    Time,
    SpaceTime,
}

impl Order {
    /// Measures, judges where an order is claimed, and shows.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let claim = self.claim()?;
        let seed = self.output.seed;
        if self.expect.is_some() {
            return single::judge(&self.scheme, ClaimKind::Order(claim), "order-1", &self.output);
        }
        single::measure(&self.scheme, "order-1", &self.output, |session| {
            order::run(session, &claim.request, None, seed)
        })
    }

    fn claim(&self) -> Result<OrderClaim, Box<dyn std::error::Error>> {
        let problem = Problem::resolve(&self.problem, Path::new("."))?;
        let parameters = self.parameters.parse()?;
        let velocity_is_open = !parameters.contains_key("velocity");
        let problem = if parameters.is_empty() { problem } else { problem.with_parameters(&parameters)? };
        let step = match (self.step.courant, self.step.diffusion_number, self.step.step) {
            (Some(courant), _, _) => Some(StepSize::Courant(courant)),
            (_, Some(number), _) => Some(StepSize::DiffusionNumber(number)),
            (_, _, step) => step.map(StepSize::Step),
        };
        let refine = match self.refine {
            Refine::Space => Refinement::Space,
            Refine::Time => Refinement::Time,
            Refine::SpaceTime => Refinement::SpaceTime,
        };
        let expect = self.expect.unwrap_or(1.0);
        let dimensions = problem.dimensions();
        let request = OrderRequest {
            cells: self.cells.as_ref().map(|cells| cells.iter().map(|x| in_proportion(*x, dimensions)).collect()),
            step,
            refine,
            step_power: self.step_power.unwrap_or_else(|| default_step_power(refine, step, expect, None)),
            final_time: self.final_time.unwrap_or(problem.final_time()),
            velocity_is_open,
            operation: self.operation.map(Operation::from),
            problem,
        };
        Ok(OrderClaim { request, norm: self.norm.clone(), field: None, expect, tolerance: DEFAULT_TOLERANCE })
    }
}
