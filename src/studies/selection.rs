//! Which of a scheme's offers a study can use, or why none.

use gridassay_scheme::{BoundaryKind, Description, GridKind, Offer, Operation};

use crate::record::Parameters;

/// What a study needs of an offer.
#[derive(Clone, Debug)]
pub struct Need<'a> {
    /// The equation's name.
    pub equation: &'a str,
    /// Number of space dimensions.
    pub dimensions: usize,
    /// Operations, any one of which serves, the best first.
    pub operations: &'a [Operation],
    /// Kinds of boundary that occur.
    pub boundaries: &'a [BoundaryKind],
    /// Whether a source term is to be added.
    pub source: bool,
    /// Parameters that vary.
    pub coefficients: &'a [String],
    /// Parameters that are constant.
    pub parameters: &'a Parameters,
    /// Cells in each direction.
    pub cells: &'a [usize],
    /// The kind of grid.
    pub grid: GridKind,
}

/// The first offer that meets the need, with the operation to use.
///
/// # Errors
/// A sentence that names what is missing: the shortfall of the offer that comes nearest.
pub fn choose<'a>(description: &'a Description, need: &Need<'_>) -> Result<(&'a Offer, Operation), String> {
    let mut nearest: Option<(usize, String)> = None;
    for offer in &description.offers {
        match shortfall(offer, need) {
            Ok(operation) => return Ok((offer, operation)),
            Err((met, sentence)) => {
                if nearest.as_ref().is_none_or(|(best, _)| met > *best) {
                    nearest = Some((met, sentence));
                }
            }
        }
    }
    Err(nearest.map_or_else(|| "the scheme offers nothing".to_owned(), |(_, sentence)| sentence))
}

/// The operation to use, or how many needs are met before the first that is not, and that one in words.
fn shortfall(offer: &Offer, need: &Need<'_>) -> Result<Operation, (usize, String)> {
    if offer.equation != need.equation {
        return Err((0, format!("the scheme offers `{}`, not `{}`", offer.equation, need.equation)));
    }
    if !offer.dimensions.contains(&need.dimensions) {
        return Err((1, format!("the scheme does not offer `{}` in {} dimension(s)", need.equation, need.dimensions)));
    }
    let Some(operation) = need.operations.iter().copied().find(|operation| offer.has(*operation)) else {
        let words: Vec<&str> = need.operations.iter().map(|operation| operation.name()).collect();
        return Err((2, format!("the scheme does not offer `{}` for `{}`", words.join("` or `"), need.equation)));
    };
    if let Some(kind) = need.boundaries.iter().find(|kind| !offer.boundaries.contains(kind)) {
        return Err((3, format!("the scheme does not offer boundaries of kind `{}`", boundary_word(*kind))));
    }
    if need.source && !offer.source {
        return Err((4, "the problem has a source term, which the scheme does not offer to add".to_owned()));
    }
    if let Some(name) = need.coefficients.iter().find(|name| !offer.coefficients.contains(name)) {
        return Err((5, format!("the scheme does not offer a varying `{name}`")));
    }
    for (name, range) in &offer.parameters {
        if let Some(values) = need.parameters.get(name).filter(|values| !range.admits(values)) {
            return Err((6, format!("the scheme does not offer `{name}` = {}", list(values))));
        }
    }
    if let Some(cells) = need.cells.iter().find(|cells| !offer.cells.admits(**cells)) {
        let rule = offer.cells;
        let sentence =
            format!("the scheme takes at least {} cells in multiples of {}, not {cells}", rule.minimum, rule.multiple);
        return Err((7, sentence));
    }
    if !offer.grids.contains(&need.grid) {
        return Err((8, format!("the scheme does not offer {} grids", grid_word(need.grid))));
    }
    Ok(operation)
}

/// Numbers as a person writes them.
pub fn list(values: &[f64]) -> String {
    match values {
        [value] => value.to_string(),
        values => format!("[{}]", values.iter().map(f64::to_string).collect::<Vec<_>>().join(", ")),
    }
}

fn boundary_word(kind: BoundaryKind) -> &'static str {
    match kind {
        BoundaryKind::Periodic => "periodic",
        BoundaryKind::Value => "value",
        BoundaryKind::Gradient => "gradient",
        BoundaryKind::None => "none",
    }
}

fn grid_word(kind: GridKind) -> &'static str {
    match kind {
        GridKind::Uniform => "uniform",
        GridKind::Stretched => "stretched",
        GridKind::Mapped => "mapped",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn need<'a>(equation: &'a str, parameters: &'a Parameters) -> Need<'a> {
        Need {
            equation,
            dimensions: 1,
            operations: &[Operation::Advance],
            boundaries: &[BoundaryKind::Periodic],
            source: false,
            coefficients: &[],
            parameters,
            cells: &[64],
            grid: GridKind::Uniform,
        }
    }

    #[test]
    fn the_sentence_names_what_the_nearest_offer_lacks() {
        let offers = vec![
            Offer::new("diffusion", &[Operation::Advance]),
            Offer::new("advection", &[Operation::Advance]).with_parameter("velocity", [Some(0.0), None]),
        ];
        let description = Description::new("s", "1", offers);
        let parameters = Parameters::from([("velocity".to_owned(), vec![-0.8])]);
        assert_eq!(
            choose(&description, &need("advection", &parameters)).unwrap_err(),
            "the scheme does not offer `velocity` = -0.8"
        );
        assert_eq!(
            choose(&description, &need("euler", &parameters)).unwrap_err(),
            "the scheme offers `diffusion`, not `euler`"
        );
        let forwards = Parameters::from([("velocity".to_owned(), vec![0.8])]);
        assert_eq!(choose(&description, &need("advection", &forwards)).unwrap().1, Operation::Advance);
    }
}
