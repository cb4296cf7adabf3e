//! Which offer takes a case, and which fields its state has.

use crate::{BoundaryKind, Case, Description, Offer, SideKinds};

/// The fields of an equation of the contract in `dimensions` dimensions, in order; `None` for an equation that a problem file
/// defines.
pub fn equation_fields(equation: &str, dimensions: usize) -> Option<Vec<&'static str>> {
    let with_components = |first: &[&'static str], components: [&'static str; 3], last: &[&'static str]| {
        let components = &components[..dimensions.clamp(1, 3)];
        [first, components, last].concat()
    };
    let momentum = ["momentum_x", "momentum_y", "momentum_z"];
    Some(match equation {
        "advection" | "diffusion" | "advection_diffusion" | "dispersion" | "burgers" | "poisson" => vec!["u"],
        "acoustics" => with_components(&["p"], ["u", "v", "w"], &[]),
        "shallow_water" => with_components(&["depth"], ["discharge_x", "discharge_y", "discharge_z"], &[]),
        "euler" | "navier_stokes" => with_components(&["density"], momentum, &["energy"]),
        "incompressible" => with_components(&[], ["u", "v", "w"], &["p"]),
        _ => return None,
    })
}

impl Offer {
    /// The names of the fields in `dimensions` dimensions, in order: the offer's own, else the equation's. `None` where neither
    /// names them.
    pub fn field_names(&self, dimensions: usize) -> Option<Vec<String>> {
        match &self.fields {
            Some(fields) => Some(fields.clone()),
            None => Some(equation_fields(&self.equation, dimensions)?.into_iter().map(str::to_owned).collect()),
        }
    }

    /// Whether the offer takes `case`: equation, dimensions, grid, boundaries, source, coefficients, ranges and cells.
    pub fn takes(&self, case: &Case) -> bool {
        let kinds = |side: &SideKinds| match side {
            SideKinds::Same(kind) => vec![*kind],
            SideKinds::ByField(table) => table.values().copied().collect(),
        };
        let boundary = |kind: BoundaryKind| self.boundaries.contains(&kind);
        let in_range = |(name, value): (&String, &crate::Parameter)| {
            self.parameters.get(name).is_none_or(|range| range.admits(value.components()))
        };
        self.equation == case.equation
            && self.dimensions.contains(&case.dimensions)
            && self.grids.contains(&case.grid.kind())
            && case.boundaries.iter().flatten().flat_map(kinds).all(boundary)
            && (self.source || !case.source)
            && case.coefficients.iter().all(|name| self.coefficients.contains(name))
            && case.parameters.iter().all(in_range)
            && case.grid.cells.iter().all(|cells| self.cells.admits(*cells))
    }
}

impl Description {
    /// The first offer that takes `case`.
    pub fn offer_for(&self, case: &Case) -> Option<&Offer> {
        self.offers.iter().find(|offer| offer.takes(case))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Operation;

    #[test]
    fn fields_follow_the_table_of_equations() {
        assert_eq!(equation_fields("acoustics", 2).unwrap(), ["p", "u", "v"]);
        assert_eq!(
            equation_fields("euler", 3).unwrap(),
            ["density", "momentum_x", "momentum_y", "momentum_z", "energy"]
        );
        assert_eq!(equation_fields("incompressible", 2).unwrap(), ["u", "v", "p"]);
        assert_eq!(equation_fields("shallow_water", 1).unwrap(), ["depth", "discharge_x"]);
        assert_eq!(equation_fields("somebody's own", 1), None);
        let own = Offer { fields: Some(vec!["phi".into()]), ..Offer::new("somebody's own", &[Operation::Advance]) };
        assert_eq!(own.field_names(1).unwrap(), ["phi"]);
    }
}
