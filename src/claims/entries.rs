//! The tables of claims, one by one: from an entry as written to a claim as resolved.

use std::collections::BTreeMap;

use gridassay_reference::expression::{Expression, Scope};
use gridassay_reference::problem::Problem;
use toml::Spanned;

use super::file::{CellsEntry, InvariantsEntry, ModesEntry, NumberOrList, OrderEntry, StabilityEntry};
use super::plan::{
    InvariantsClaim, InvariantsRequest, ModesClaim, ModesRequest, OrderClaim, OrderRequest, StabilityClaim,
    StabilityRequest, StepSize,
};
use super::problem::ClaimsError;
use super::read::Reader;
use crate::record::{Invariant, Norms, Parameters, Refinement, StepNumber};

/// How far below a claimed order the observed one may lie, unless told otherwise.
pub const DEFAULT_TOLERANCE: f64 = 0.1;

impl Reader<'_> {
    pub(super) fn order(&self, entry: &OrderEntry) -> Result<OrderClaim, ClaimsError> {
        let problem = Problem::resolve(entry.problem.get_ref(), self.folder)
            .map_err(|error| self.at(entry.problem.span(), error.to_string()))?;
        let problem = if entry.parameters.is_empty() {
            problem
        } else {
            problem
                .with_parameters(&parameters(&entry.parameters))
                .map_err(|error| self.at(entry.problem.span(), error.to_string()))?
        };
        let expect = self.positive(&entry.expect, "expect")?;
        let request = self.order_request(entry, problem, expect)?;
        let norm = self.norm(entry.norm.as_ref())?;
        let field = entry.field.as_ref().map(|field| self.field(field, request.problem.fields())).transpose()?;
        let tolerance = match &entry.tolerance {
            Some(tolerance) => self.positive(tolerance, "tolerance")?,
            None => DEFAULT_TOLERANCE,
        };
        Ok(OrderClaim { request, norm, field, expect, tolerance })
    }

    fn order_request(&self, entry: &OrderEntry, problem: Problem, expect: f64) -> Result<OrderRequest, ClaimsError> {
        let step = self.step(entry)?;
        let final_time = match &entry.final_time {
            Some(time) if *time.get_ref() > problem.start_time() => *time.get_ref(),
            Some(time) => {
                let message =
                    format!("`final_time` is {}, not after the start at {}", time.get_ref(), problem.start_time());
                return Err(self.at(time.span(), message));
            }
            None => problem.final_time(),
        };
        let time_order = entry.time_order.as_ref().map(|order| self.positive(order, "time_order")).transpose()?;
        let step_power = match &entry.step_power {
            Some(power) => self.positive(power, "step_power")?,
            None => default_step_power(entry.refine, step, expect, time_order),
        };
        let least = if entry.refine == Refinement::Time { 1 } else { 2 };
        let cells = entry.cells.as_ref().map(|cells| self.cells(cells, problem.dimensions(), least)).transpose()?;
        let velocity_is_open = !entry.parameters.contains_key("velocity");
        Ok(OrderRequest { problem, velocity_is_open, cells, step, refine: entry.refine, step_power, final_time })
    }

    fn step(&self, entry: &OrderEntry) -> Result<Option<StepSize>, ClaimsError> {
        let courant = entry.courant.as_ref().map(|value| self.positive(value, "courant").map(StepSize::Courant));
        let diffusion = entry
            .diffusion_number
            .as_ref()
            .map(|value| self.positive(value, "diffusion_number").map(StepSize::DiffusionNumber));
        let step = entry.step.as_ref().map(|value| self.positive(value, "step").map(StepSize::Step));
        match [courant, diffusion, step].into_iter().flatten().collect::<Result<Vec<_>, _>>()?.as_slice() {
            [] => Ok(None),
            [one] => Ok(Some(*one)),
            _ => {
                let message = "give the step once: one of `courant`, `diffusion_number` and `step`";
                Err(self.at(entry.problem.span(), message))
            }
        }
    }

    /// The levels of a ladder, each finer than the one before.
    fn cells(
        &self,
        cells: &Spanned<Vec<CellsEntry>>,
        dimensions: usize,
        least: usize,
    ) -> Result<Vec<Vec<usize>>, ClaimsError> {
        let mut levels = Vec::new();
        for level in cells.get_ref() {
            let level = match level {
                CellsEntry::One(x) => in_proportion(*x, dimensions),
                CellsEntry::Each(each) if each.len() == dimensions => each.clone(),
                CellsEntry::Each(each) => {
                    let message =
                        format!("the level {each:?} has {} directions, the problem has {dimensions}", each.len());
                    return Err(self.at(cells.span(), message));
                }
            };
            if level.contains(&0) {
                return Err(self.at(cells.span(), "a level has no cells; every number must be at least 1"));
            }
            levels.push(level);
        }
        if levels.len() < least {
            return Err(self.at(cells.span(), "a ladder needs at least two levels, and three to decide anything"));
        }
        if let Some(pair) = levels.windows(2).find(|pair| pair[1][0] <= pair[0][0]) {
            let message =
                format!("the ladder goes from {} to {} cells; write it from coarse to fine", pair[0][0], pair[1][0]);
            return Err(self.at(cells.span(), message));
        }
        Ok(levels)
    }

    fn norm(&self, norm: Option<&Spanned<String>>) -> Result<String, ClaimsError> {
        match norm {
            None => Ok("l2".to_owned()),
            Some(norm) if Norms::NAMES.contains(&norm.get_ref().as_str()) => Ok(norm.get_ref().clone()),
            Some(norm) => {
                Err(self
                    .at(norm.span(), format!("there is no norm `{}`; there are `l1`, `l2` and `linf`", norm.get_ref())))
            }
        }
    }

    fn field(&self, field: &Spanned<String>, fields: &[String]) -> Result<String, ClaimsError> {
        if fields.contains(field.get_ref()) {
            return Ok(field.get_ref().clone());
        }
        let message = format!("the problem has no field `{}`; it has {}", field.get_ref(), fields.join(", "));
        Err(self.at(field.span(), message))
    }

    pub(super) fn modes(&self, spanned: &Spanned<ModesEntry>) -> Result<ModesClaim, ClaimsError> {
        let entry = spanned.get_ref();
        let positive =
            |value: &Option<Spanned<f64>>, key| value.as_ref().map(|value| self.positive(value, key)).transpose();
        let claim = ModesClaim {
            request: ModesRequest {
                equation: self.equation(&entry.equation)?,
                parameters: parameters(&entry.parameters),
                cells: vec![entry.cells.as_ref().map_or(64, |cells| *cells.get_ref())],
                courant: positive(&entry.courant, "courant")?,
                diffusion_number: positive(&entry.diffusion_number, "diffusion_number")?,
            },
            phase_speed_error_within: positive(&entry.phase_speed_error_within, "phase_speed_error_within")?,
            damping_error_within: positive(&entry.damping_error_within, "damping_error_within")?,
            from_points_per_wavelength: positive(&entry.from_points_per_wavelength, "from_points_per_wavelength")?
                .unwrap_or(20.0),
            symbol: entry.symbol.as_ref().map(|formula| self.symbol(formula)).transpose()?,
        };
        if claim.request.courant.is_none() && claim.request.diffusion_number.is_none() {
            return Err(
                self.at(spanned.span(), "a study of modes needs a step: give `courant` or `diffusion_number`, or both")
            );
        }
        let claims = [claim.phase_speed_error_within, claim.damping_error_within];
        if claims.iter().all(Option::is_none) && claim.symbol.is_none() {
            let message =
                "[[modes]] claims nothing; give `phase_speed_error_within`, `damping_error_within` or `symbol`";
            return Err(self.at(spanned.span(), message));
        }
        Ok(claim)
    }

    pub(super) fn stability(&self, spanned: &Spanned<StabilityEntry>) -> Result<StabilityClaim, ClaimsError> {
        let entry = spanned.get_ref();
        let (number, up_to, held) = match (&entry.courant_up_to, &entry.diffusion_number_up_to) {
            (Some(courant), None) => {
                (StepNumber::Courant, self.positive(courant, "courant_up_to")?, &entry.diffusion_number)
            }
            (None, Some(diffusion)) => {
                (StepNumber::DiffusionNumber, self.positive(diffusion, "diffusion_number_up_to")?, &entry.courant)
            }
            _ => {
                let message = "[[stability]] claims one range: give either `courant_up_to` or `diffusion_number_up_to`";
                return Err(self.at(spanned.span(), message));
            }
        };
        let scan_to = match &entry.scan_to {
            Some(end) => self.positive(end, "scan_to")?,
            None => (2.0 * up_to).max(4.0),
        };
        if scan_to < up_to {
            let message = format!("the scan to {scan_to} ends before the claim {up_to}; make `scan_to` larger");
            return Err(self.at(spanned.span(), message));
        }
        let request = StabilityRequest {
            equation: self.equation(&entry.equation)?,
            parameters: parameters(&entry.parameters),
            number: Some(number),
            held: held.as_ref().map(|held| self.positive(held, "the number that is held")).transpose()?,
            scan_to,
        };
        Ok(StabilityClaim { request, up_to, exactly: entry.exactly })
    }

    pub(super) fn invariants(&self, spanned: &Spanned<InvariantsEntry>) -> Result<InvariantsClaim, ClaimsError> {
        let entry = spanned.get_ref();
        let positive =
            |value: &Option<Spanned<f64>>, key| value.as_ref().map(|value| self.positive(value, key)).transpose();
        let held = entry.hold.get_ref();
        if held.is_empty() {
            let message = "[[invariants]] claims nothing; name what holds, for example `hold = [\"conservation\"]`";
            return Err(self.at(entry.hold.span(), message));
        }
        if let Some(cells) = &entry.cells
            && (cells.get_ref().contains(&0) || !(1..=3).contains(&cells.get_ref().len()))
        {
            let message = "`cells` gives the cells in each of one to three directions, for example [40] or [24, 18]";
            return Err(self.at(cells.span(), message));
        }
        let request = InvariantsRequest {
            equation: self.equation(&entry.equation)?,
            parameters: parameters(&entry.parameters),
            cells: entry.cells.as_ref().map(|cells| cells.get_ref().clone()),
            courant: positive(&entry.courant, "courant")?,
            diffusion_number: positive(&entry.diffusion_number, "diffusion_number")?,
            invariants: Invariant::ALL.into_iter().filter(|invariant| held.contains(invariant)).collect(),
            tolerance: positive(&entry.tolerance, "tolerance")?.unwrap_or(0.0),
        };
        Ok(InvariantsClaim { request })
    }

    /// Checks that a claimed symbol can be read; it is evaluated where G is measured.
    fn symbol(&self, formula: &Spanned<String>) -> Result<String, ClaimsError> {
        let scope = Scope::new(SYMBOL_NAMES).with_imaginary_unit();
        match Expression::parse(formula.get_ref(), &scope) {
            Ok(_) => Ok(formula.get_ref().clone()),
            Err(error) => Err(self.at(formula.span(), error.to_string())),
        }
    }
}

/// The names that a claimed symbol may use: k h, the Courant number and the diffusion number. `i` is the imaginary unit.
pub const SYMBOL_NAMES: [&str; 3] = ["theta", "c", "r"];

/// The power of the cell width with which the step falls, unless told otherwise: in proportion, or as h^2 where the diffusion number is held;
/// where space alone is studied, as fast as keeps the error in time (order `time_order`, 1 unless told) from falling more slowly than h^expect,
/// and never so slowly that a diffusion number given on the coarsest level grows: a right explicit scheme would blow up on the finer ones.
pub fn default_step_power(refine: Refinement, step: Option<StepSize>, expect: f64, time_order: Option<f64>) -> f64 {
    let slowest = if matches!(step, Some(StepSize::DiffusionNumber(_))) { 2.0 } else { 1.0 };
    match (refine, step) {
        (Refinement::Space, _) => (expect / time_order.unwrap_or(1.0)).max(slowest),
        _ => slowest,
    }
}

/// Cells in each direction from those in x. The proportions 1 : 5/4 : 3/4 are generic: equal spacings would hide exchanged ones.
pub fn in_proportion(x: usize, dimensions: usize) -> Vec<usize> {
    [x, (5 * x).div_ceil(4), (3 * x).div_ceil(4)][..dimensions].to_vec()
}

fn parameters(entries: &BTreeMap<String, NumberOrList>) -> Parameters {
    entries.iter().map(|(name, value)| (name.clone(), value.components())).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_diffusion_number_given_on_the_coarsest_level_grows_on_no_other() {
        let held = Some(StepSize::DiffusionNumber(0.2));
        for refine in [Refinement::Space, Refinement::SpaceTime] {
            for (expect, time_order) in [(2.0, 4.0), (2.0, 3.0), (4.0, 4.0), (6.0, 4.0), (4.0, 1.0)] {
                assert!(
                    default_step_power(refine, held, expect, Some(time_order)) >= 2.0,
                    "{refine:?} {expect} {time_order}"
                );
            }
        }
        assert_eq!(default_step_power(Refinement::Space, Some(StepSize::Courant(0.4)), 5.0, Some(3.0)), 5.0 / 3.0);
        assert_eq!(default_step_power(Refinement::SpaceTime, Some(StepSize::Courant(0.4)), 5.0, None), 1.0);
    }
}
