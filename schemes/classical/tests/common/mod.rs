//! Cases and runs that the tests share.

use std::collections::BTreeMap;

use gridassay_scheme::{BoundaryKind, Case, Grid, Parameter, SideKinds};

/// A periodic case in one dimension on a domain of generic bounds.
pub fn periodic(equation: &str, cells: usize, parameters: &[(&str, f64)]) -> Case {
    Case {
        equation: equation.to_owned(),
        dimensions: 1,
        parameters: parameters
            .iter()
            .map(|(name, value)| ((*name).to_owned(), Parameter::Scalar(*value)))
            .collect::<BTreeMap<_, _>>(),
        coefficients: Vec::new(),
        grid: Grid::uniform(&[cells], &[0.3], &[2.0]),
        boundaries: vec![[SideKinds::Same(BoundaryKind::Periodic), SideKinds::Same(BoundaryKind::Periodic)]],
        source: false,
        steady: Vec::new(),
        arrays: Default::default(),
    }
}
