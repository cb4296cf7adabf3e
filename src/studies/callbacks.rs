//! The harness's side of the questions that a scheme asks: answered from a problem at the scheme's own times and positions.

use gridassay_reference::problem::{EvaluationError, Problem, Quantity};
use gridassay_scheme::{BoundaryData, Fields, Harness, SchemeError, Side, Values};

use super::layout::{FieldLayout, Layout, spread};

/// Answers from a problem.
pub struct ProblemHarness<'a> {
    problem: &'a Problem,
    layout: &'a Layout,
    /// Which field of the problem each field of the layout is.
    fields: Vec<usize>,
}

impl<'a> ProblemHarness<'a> {
    /// Answers for the fields `names` (in the order of the layout) of `problem`.
    ///
    /// # Errors
    /// A sentence, where the problem lacks a field that the scheme offers.
    pub fn new(problem: &'a Problem, layout: &'a Layout, names: &[String]) -> Result<Self, String> {
        let index = |name: &String| {
            let known = problem.fields();
            known
                .iter()
                .position(|field| field == name)
                .ok_or_else(|| format!("the scheme's field `{name}` is not among the problem's: {}", known.join(", ")))
        };
        Ok(Self { problem, layout, fields: names.iter().map(index).collect::<Result<_, _>>()? })
    }

    /// The exact solution at `time` as the state holds it: point values or cell averages, one array a field.
    ///
    /// # Errors
    /// The solution cannot be evaluated there.
    pub fn exact(&self, time: f64) -> Result<Fields, EvaluationError> {
        self.everywhere(time, Quantity::Value)
    }

    fn everywhere(&self, time: f64, quantity: impl Fn(usize) -> Quantity<'static>) -> Result<Fields, EvaluationError> {
        let pairs = self.fields.iter().zip(&self.layout.fields);
        pairs.map(|(field, layout)| self.on(layout, time, quantity(*field))).collect()
    }

    /// `quantity` on a layout, as the state holds it.
    fn on(&self, layout: &FieldLayout, time: f64, quantity: Quantity<'_>) -> Result<Vec<f64>, EvaluationError> {
        let mut out = vec![0.0; layout.len()];
        if self.layout.values == Values::CellAverage {
            let (lower, upper) = (spread(&layout.lower), spread(&layout.upper));
            self.problem.average(quantity, time, &slices(&lower), &slices(&upper), &mut out)?;
        } else {
            self.problem.evaluate(quantity, time, &slices(&layout.points()), &mut out)?;
        }
        Ok(out)
    }

    fn at_points(&self, time: f64, quantity: Quantity<'_>, points: &[Vec<f64>]) -> Result<Vec<f64>, EvaluationError> {
        let mut out = vec![0.0; points.first().map_or(0, Vec::len)];
        self.problem.evaluate(quantity, time, &slices(points), &mut out)?;
        Ok(out)
    }

    fn check_points(&self, points: &[Vec<f64>]) -> Result<(), SchemeError> {
        let dimensions = self.problem.dimensions();
        if points.len() == dimensions && points.iter().all(|along| along.len() == points[0].len()) {
            return Ok(());
        }
        let lengths: Vec<usize> = points.iter().map(Vec::len).collect();
        Err(SchemeError::Failed(format!("`points` needs {dimensions} lists of equal length, not lists of {lengths:?}")))
    }
}

impl Harness for ProblemHarness<'_> {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let Some(points) = points else {
            return self.everywhere(time, Quantity::Source).map_err(failed);
        };
        self.check_points(points)?;
        let fields = self.fields.iter();
        fields.map(|field| self.at_points(time, Quantity::Source(*field), points).map_err(failed)).collect()
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let axis = side.axis();
        if axis >= self.problem.dimensions() {
            let message = format!("there is no side {} in {} dimension(s)", side.name(), self.problem.dimensions());
            return Err(SchemeError::Failed(message));
        }
        let sign = if side.is_upper() { 1.0 } else { -1.0 };
        let at = if side.is_upper() { self.problem.upper()[axis] } else { self.problem.lower()[axis] };
        let mut data = BoundaryData::default();
        for (field, layout) in self.fields.iter().copied().zip(&self.layout.fields) {
            let along = moved(layout, axis, [at, at], at);
            data.value.push(self.on(&along, time, Quantity::Value(field)).map_err(failed)?);
            let mut gradient = self.on(&along, time, Quantity::Derivative { field, axis }).map_err(failed)?;
            gradient.iter_mut().for_each(|value| *value *= sign);
            data.gradient.push(gradient);
            let layer = |index: usize| {
                let outside = layer_outside(layout, axis, side.is_upper(), index, at);
                self.on(&outside, time, Quantity::Value(field)).map_err(failed)
            };
            data.ghost.push((0..layers).map(layer).collect::<Result<_, _>>()?);
        }
        Ok(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        if !self.problem.coefficients().iter().any(|known| known == name) {
            return Err(SchemeError::Failed(format!("`{name}` does not vary in this problem")));
        }
        // Only the velocity has a component for each direction.
        let components = if name == "velocity" { self.problem.dimensions() } else { 1 };
        let quantity = |component| Quantity::Coefficient { name, component };
        if let Some(points) = points {
            self.check_points(points)?;
            return (0..components).map(|c| self.at_points(time, quantity(c), points).map_err(failed)).collect();
        }
        (0..components).map(|c| self.on(&self.layout.fields[0], time, quantity(c)).map_err(failed)).collect()
    }
}

/// The same layout flattened in direction `axis` to one value at `at` that stands for `between`.
fn moved(layout: &FieldLayout, axis: usize, between: [f64; 2], at: f64) -> FieldLayout {
    let mut moved = layout.clone();
    moved.axes[axis] = vec![at];
    moved.lower[axis] = vec![between[0]];
    moved.upper[axis] = vec![between[1]];
    moved.widths[axis] = vec![between[1] - between[0]];
    moved
}

/// The layer number `index` (0: nearest) outside the end `end` of direction `axis`: the grid mirrored at the end, so that on a
/// uniform grid the layers go on with the grid's spacing.
fn layer_outside(layout: &FieldLayout, axis: usize, upper: bool, index: usize, end: f64) -> FieldLayout {
    let along = &layout.axes[axis];
    // A value on the end itself is no layer: the first one lies beyond it.
    let on_end = if upper { along[along.len() - 1] == end } else { along[0] == end };
    let inside = (index + usize::from(on_end)).min(along.len() - 1);
    let inside = if upper { along.len() - 1 - inside } else { inside };
    let mirror = |x: f64| 2.0 * end - x;
    let between = [mirror(layout.upper[axis][inside]), mirror(layout.lower[axis][inside])];
    moved(layout, axis, between, mirror(along[inside]))
}

fn slices(arrays: &[Vec<f64>]) -> Vec<&[f64]> {
    arrays.iter().map(Vec::as_slice).collect()
}

fn failed(error: EvaluationError) -> SchemeError {
    SchemeError::Failed(error.to_string())
}
