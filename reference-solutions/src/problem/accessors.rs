//! What a problem says about itself.

use std::collections::BTreeMap;

use toml::Spanned;

use super::asked::listed;
use super::file::OneOrMany;
use super::{BoundaryKind, FieldSolution, Functional, Norm, Problem, Weak};

impl Problem {
    /// The name by which it is called.
    #[must_use]
    pub fn name(&self) -> &str {
        self.inner.file.name.get_ref()
    }

    /// One line for people.
    #[must_use]
    pub fn title(&self) -> &str {
        &self.inner.file.title
    }

    /// The published source of the solution.
    #[must_use]
    pub fn reference(&self) -> &str {
        &self.inner.file.reference
    }

    /// The equation's name.
    #[must_use]
    pub fn equation(&self) -> &str {
        self.inner.file.equation.get_ref()
    }

    /// The equation in one line of plain text.
    #[must_use]
    pub fn form(&self) -> &str {
        self.inner.equation.form()
    }

    /// Number of space dimensions: 1 to 3.
    #[must_use]
    pub fn dimensions(&self) -> usize {
        *self.inner.file.dimensions.get_ref()
    }

    /// The fields, in the equation's order.
    #[must_use]
    pub fn fields(&self) -> &[String] {
        &self.inner.fields
    }

    /// The equation's constant parameters.
    #[must_use]
    pub fn parameters(&self) -> &BTreeMap<String, Vec<f64>> {
        &self.inner.parameters
    }

    /// Names of the equation's parameters that vary.
    #[must_use]
    pub fn coefficients(&self) -> Vec<String> {
        self.inner.coefficients.keys().cloned().collect()
    }

    /// The solution's own numbers, which [`Problem::with_parameters`] may change too.
    #[must_use]
    pub fn constants(&self) -> BTreeMap<String, f64> {
        let value = |(name, value): (&String, &Spanned<f64>)| {
            let changed = self.inner.changed.get(name).map(|values| values[0]);
            (name.clone(), changed.unwrap_or(*value.get_ref()))
        };
        self.inner.file.constants.iter().map(value).collect()
    }

    /// Lower corner of the domain.
    #[must_use]
    pub fn lower(&self) -> &[f64] {
        self.inner.file.domain.get_ref().lower.get_ref()
    }

    /// Upper corner of the domain.
    #[must_use]
    pub fn upper(&self) -> &[f64] {
        self.inner.file.domain.get_ref().upper.get_ref()
    }

    /// What is prescribed at the lower and the upper side of each direction.
    #[must_use]
    pub fn boundaries(&self) -> &[[BoundaryKind; 2]] {
        &self.inner.boundaries
    }

    /// Time at which the solution starts; 0 for a steady problem.
    #[must_use]
    pub fn start_time(&self) -> f64 {
        self.inner.start
    }

    /// Time at which errors are taken; 0 for a steady problem.
    #[must_use]
    pub fn final_time(&self) -> f64 {
        self.inner.end
    }

    /// Whether the problem has no time.
    #[must_use]
    pub fn is_steady(&self) -> bool {
        self.inner.file.time.get_ref().steady
    }

    /// Whether the equation has a source term.
    #[must_use]
    pub fn has_source(&self) -> bool {
        self.inner.sources.is_some()
    }

    /// Whether the solution has jumps, or jumps in a derivative.
    #[must_use]
    pub fn is_weak(&self) -> bool {
        self.weak().is_some()
    }

    /// What kind of weak solution this is.
    #[must_use]
    pub fn weak(&self) -> Option<Weak> {
        let weak = self.inner.file.weak.as_ref()?.get_ref();
        Some(Weak { wave: weak.wave, continuous: weak.continuous })
    }

    /// The order in L1 that theory gives a first-order scheme on this weak solution; none for smooth ones.
    /// [`Weak::expected_order`] gives it for schemes of any formal order.
    #[must_use]
    pub fn expected_order(&self) -> Option<f64> {
        self.weak().map(|weak| weak.expected_order(1.0))
    }

    /// Norms that make sense: all of them unless the problem says otherwise.
    #[must_use]
    pub fn norms(&self) -> Vec<Norm> {
        self.inner.file.norms.clone().unwrap_or_else(|| vec![Norm::L1, Norm::L2, Norm::Linf])
    }

    /// A Courant number a dt / h that suits most explicit schemes, where the problem names one.
    #[must_use]
    pub fn courant_number(&self) -> Option<f64> {
        self.inner.file.step.and_then(|step| step.courant_number)
    }

    /// A diffusion number nu dt / h^2 that suits most explicit schemes, where the problem names one.
    #[must_use]
    pub fn diffusion_number(&self) -> Option<f64> {
        self.inner.file.step.and_then(|step| step.diffusion_number)
    }

    /// Integrals over the domain that a study may compare.
    #[must_use]
    pub fn functionals(&self) -> &[Functional] {
        &self.inner.functionals
    }

    /// Whether the source is the same at all times; true where there is none.
    #[must_use]
    pub fn source_is_steady(&self) -> bool {
        let sources = self.inner.sources.iter().flatten();
        self.is_steady() || !sources.into_iter().any(|source| source.depends_on("t"))
    }

    /// Whether the values and gradients at the sides are the same at all times.
    #[must_use]
    pub fn boundary_is_steady(&self) -> bool {
        let changes = |field: &FieldSolution| match field {
            FieldSolution::Formula { value, .. } => value.depends_on("t"),
            FieldSolution::Solved(_) => true,
        };
        let prescribed =
            self.boundaries().iter().flatten().any(|kind| matches!(kind, BoundaryKind::Value | BoundaryKind::Gradient));
        self.is_steady() || !prescribed || !self.inner.solution.iter().any(changes)
    }

    /// Whether all varying parameters are the same at all times.
    #[must_use]
    pub fn coefficient_is_steady(&self) -> bool {
        let mut formulas = self.inner.coefficients.values().flatten();
        self.is_steady() || !formulas.any(|formula| formula.depends_on("t"))
    }

    /// The exact solver and the fields that it gives, where there is one.
    #[must_use]
    pub fn solver(&self) -> Option<(&'static str, &[String])> {
        let entry = self.inner.file.exact.as_ref()?.get_ref();
        self.inner.solved.as_ref().map(|solved| (entry.name(), &solved.fields[..]))
    }

    /// The formulas as they were written, for people: named sub-expressions, coefficients, then the solution.
    #[must_use]
    pub fn formulas(&self) -> Vec<(String, String)> {
        let file = &self.inner.file;
        let names = file.names.iter().map(|(name, text)| (name.clone(), text.get_ref().clone()));
        let list = |values: &OneOrMany<String>| listed(values);
        let coefficients = file.coefficients.iter().map(|(name, texts)| (name.clone(), list(texts.get_ref())));
        let fields = self
            .fields()
            .iter()
            .filter_map(|field| file.solution.get(field).map(|text| (field.clone(), text.get_ref().clone())));
        names.chain(coefficients).chain(fields).collect()
    }
}

impl std::fmt::Debug for Problem {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        out.debug_struct("Problem")
            .field("name", &self.name())
            .field("parameters", self.parameters())
            .finish_non_exhaustive()
    }
}
