//! The parts of a file that stand for themselves: the equation, the domain, the sides, the times.

use toml::Spanned;

use crate::equation::{Definition, Equation};

use super::BoundaryKind;
use super::error::ProblemError;
use super::file::{BoundaryName, ProblemFile};
use super::text::Text;

/// The equation, known or the file's own.
pub(super) fn equation(file: &ProblemFile, text: &Text) -> Result<Equation, ProblemError> {
    let dimensions = *file.dimensions.get_ref();
    if !(1..=3).contains(&dimensions) {
        return text.refuse(file.dimensions.span(), "dimensions", format!("{dimensions} given; write 1, 2 or 3"));
    }
    let name = file.equation.get_ref();
    let refuse = |reason: String| text.refuse(file.equation.span(), "equation", reason);
    let equation = match (&file.fields, &file.residuals) {
        (Some(fields), Some(residuals)) => Equation::defined(definition(file, fields, residuals)),
        (None, None) => Equation::named(name),
        _ => return refuse("an equation of one's own needs both `fields` and `residuals`".to_string()),
    };
    match equation {
        Ok(equation) if equation.dimensions().contains(&dimensions) => Ok(equation),
        Ok(equation) => {
            let allowed: Vec<String> = equation.dimensions().iter().map(usize::to_string).collect();
            let reason = format!("{name} is not defined in {dimensions} dimensions; write {}", allowed.join(" or "));
            text.refuse(file.dimensions.span(), "dimensions", reason)
        }
        Err(error) => {
            let remedy = if file.residuals.is_none() { "; one of your own needs `fields` and `residuals`" } else { "" };
            refuse(format!("{error}{remedy}"))
        }
    }
}

fn definition(file: &ProblemFile, fields: &Spanned<Vec<String>>, residuals: &[Spanned<String>]) -> Definition {
    let names = file.parameters.keys().chain(file.coefficients.keys());
    Definition {
        name: file.equation.get_ref().clone(),
        dimensions: vec![*file.dimensions.get_ref()],
        fields: fields.get_ref().clone(),
        parameters: names.map(|name| (name.clone(), None)).collect(),
        residuals: residuals.iter().map(|residual| residual.get_ref().clone()).collect(),
    }
}

pub(super) fn domain(file: &ProblemFile, text: &Text) -> Result<(), ProblemError> {
    let dimensions = *file.dimensions.get_ref();
    let domain = file.domain.get_ref();
    for (entry, bounds) in [("domain.lower", &domain.lower), ("domain.upper", &domain.upper)] {
        if bounds.get_ref().len() != dimensions {
            let reason = format!("{} numbers given; write {dimensions}, one a dimension", bounds.get_ref().len());
            return text.refuse(bounds.span(), entry, reason);
        }
    }
    for (lower, upper) in domain.lower.get_ref().iter().zip(domain.upper.get_ref()) {
        if !(lower < upper && lower.is_finite() && upper.is_finite()) {
            let reason = format!("{upper} must be finite and above the lower bound {lower}");
            return text.refuse(domain.upper.span(), "domain.upper", reason);
        }
    }
    Ok(())
}

pub(super) fn boundaries(file: &ProblemFile, text: &Text) -> Result<Vec<[BoundaryKind; 2]>, ProblemError> {
    let dimensions = *file.dimensions.get_ref();
    let entry = &file.domain.get_ref().boundaries;
    let refuse = |reason: String| text.refuse(entry.span(), "domain.boundaries", reason);
    if entry.get_ref().len() != dimensions {
        return refuse(format!("{} directions given; write {dimensions}", entry.get_ref().len()));
    }
    let kind = |name: BoundaryName| match name {
        BoundaryName::Periodic => BoundaryKind::Periodic,
        BoundaryName::Value => BoundaryKind::Value,
        BoundaryName::Gradient => BoundaryKind::Gradient,
        BoundaryName::None => BoundaryKind::None,
    };
    let mut boundaries = Vec::new();
    for direction in entry.get_ref() {
        let pair = match direction.as_slice() {
            [both] => [kind(*both); 2],
            [lower, upper] => [kind(*lower), kind(*upper)],
            other => return refuse(format!("{} kinds for one direction; write one, or two", other.len())),
        };
        if pair[0] != pair[1] && pair.contains(&BoundaryKind::Periodic) {
            return refuse("a direction is periodic at both ends or at neither".to_string());
        }
        boundaries.push(pair);
    }
    Ok(boundaries)
}

pub(super) fn times(file: &ProblemFile, text: &Text) -> Result<(f64, f64), ProblemError> {
    let refuse = |reason: String| text.refuse(file.time.span(), "time", reason);
    let time = file.time.get_ref();
    match (time.steady, time.start, time.end) {
        (true, None, None) => Ok((0.0, 0.0)),
        (true, ..) => refuse("a steady problem has neither start nor final time; remove them, or `steady`".to_string()),
        (false, Some(start), Some(end)) if start < end && end.is_finite() && start.is_finite() => Ok((start, end)),
        (false, Some(start), Some(end)) => refuse(format!("the final time {end} must be finite and after {start}")),
        (false, ..) => refuse("write `start` and `final`, or `steady = true`".to_string()),
    }
}
