//! Claims about amplification factors against the measured ones.

use super::Judgement;
use crate::claims::ModesClaim;
use crate::record::{ModeRecord, ModesRecord, StudyRecord};

/// Weighs what is claimed about modes.
pub fn judge(claim: &ModesClaim, study: &StudyRecord, record: &ModesRecord) -> Judgement {
    if let Some(stopped) = &study.stopped {
        return Judgement::undecided(
            format!("the modes were not measured: {stopped}"),
            "a scheme that can be run on this case",
        );
    }
    if record.linear == Some(false) && claim.request.mode_by_mode {
        return Judgement::undecided(
            "the wavenumbers were tried one by one, so that what stands is an approximate dispersion relation",
            "the same claim without `mode_by_mode`, for a linear scheme",
        );
    }
    if record.modes.is_empty() && record.semi_discrete.is_some() {
        return Judgement::undecided(
            "the scheme offers its rate and no steps, so that it has no amplification factor of its own",
            "a scheme that offers `advance`, or a claim about its stable range with an integrator",
        );
    }
    if record.linear == Some(false) {
        return Judgement::undecided(
            "the scheme is not linear and shift invariant, so that it has no amplification factor",
            "a claim about the approximate dispersion relation, or about a linear scheme",
        );
    }
    let mut judgements = Vec::new();
    if let Some(within) = claim.phase_speed_error_within {
        let measured = |mode: &ModeRecord| mode.phase_speed_ratio.map(|ratio| (ratio - 1.0).abs());
        judgements.push(bounded(claim, record, "phase-speed error", within, measured));
    }
    if let Some(within) = claim.damping_error_within {
        let measured = |mode: &ModeRecord| mode.damping_error.map(f64::abs);
        judgements.push(bounded(claim, record, "damping error in one step", within, measured));
    }
    if let Some(order) = claim.formal_order {
        judgements.push(formal_order(order, record));
    }
    if let Some(symbol) = &record.claimed_symbol {
        judgements.push(symbol_judged(symbol));
    }
    Judgement::all(judgements)
}

/// Weighs a bound on the physical branches over all waves that are long enough.
fn bounded(
    claim: &ModesClaim,
    record: &ModesRecord,
    words: &str,
    within: f64,
    measured: impl Fn(&ModeRecord) -> Option<f64>,
) -> Judgement {
    let from = claim.from_points_per_wavelength;
    let long_enough = |mode: &&ModeRecord| mode.points_per_wavelength.is_some_and(|points| points >= from);
    let values: Vec<(f64, f64)> = record
        .modes
        .iter()
        .filter(|mode| mode.exact.is_some())
        .filter(long_enough)
        .filter_map(|mode| Some((measured(mode)?, mode.points_per_wavelength?)))
        .collect();
    let Some((worst, points)) = values.into_iter().max_by(|a, b| a.0.total_cmp(&b.0)) else {
        return Judgement::undecided(
            format!("no wave of {from} and more cells has a {words} on this grid"),
            format!("at least {} cells", (from * 2.0).ceil()),
        );
    };
    let uncertainty = record.uncertainty.unwrap_or(0.0);
    let says = format!(
        "the largest {words} of waves of {from} and more cells is {worst:.3e} (at {points:.1} cells), claimed within {within}"
    );
    // The uncertainty of G moves a phase-speed ratio by itself over theta x Courant number, of the order of itself over 2 pi / points.
    let slack = uncertainty * points;
    if !(worst - slack).is_finite() {
        Judgement::undecided(format!("the {words} is not finite"), "a scheme that does not blow up in one step")
    } else if worst + slack <= within {
        Judgement::upheld(says)
    } else if worst - slack > within {
        Judgement::refuted(says)
    } else {
        Judgement::undecided(
            format!("{says}; G is uncertain by {uncertainty:.1e}"),
            "an implicit part that is solved more tightly",
        )
    }
}

/// Weighs a claimed formal order: more than was claimed is no mistake.
fn formal_order(claimed: usize, record: &ModesRecord) -> Judgement {
    let Some(equation) = &record.modified_equation else {
        return Judgement::undecided(
            "no term of the modified equation stands out of rounding",
            "a scalar scheme in one dimension that is not exact at this step, or another Courant number",
        );
    };
    let terms = equation.terms.first().map_or_else(String::new, |(derivative, coefficient)| {
        format!("; the leading term is {coefficient:.4e} times the derivative of order {derivative}")
    });
    match equation.formal_order {
        Some(found) if found >= claimed => Judgement::upheld(format!("formally of order {found}{terms}")),
        found => {
            let found = found.unwrap_or(0);
            Judgement::refuted(format!("formally of order {found}, claimed {claimed}{terms}"))
        }
    }
}

fn symbol_judged(symbol: &crate::record::ClaimedSymbol) -> Judgement {
    let formula = &symbol.formula;
    let (count, total) = (symbol.disagreeing, symbol.compared);
    let Some(worst) = symbol.largest_difference else {
        return Judgement::undecided(
            format!("the claimed symbol `{formula}` could not be evaluated"),
            "a formula that is finite for every theta",
        );
    };
    if count == 0 {
        let says = format!("G agrees with `{formula}` at all {total} wavenumbers, within {worst:.1e}");
        return Judgement::upheld(says);
    }
    let neighbour = symbol.neighbour.as_ref().map_or_else(String::new, |entry| {
        format!(
            "; the coefficient of the neighbour at offset {} is {} as built and {} as claimed",
            entry.offset, entry.built, entry.claimed
        )
    });
    Judgement::refuted(format!(
        "G differs from `{formula}` at {count} of {total} wavenumbers, by up to {worst:.3e} (at k h = {:.4}){neighbour}",
        symbol.worst_theta.unwrap_or(f64::NAN)
    ))
}
