//! No discretisation but a checksum: a scheme that uses every part of the contract and folds every number that it is given into its
//! answers, so that a number lost, changed or exchanged on any way to a scheme changes what it answers.

use std::collections::BTreeMap;

use gridassay_scheme::{
    Advance, BoundaryKind, Case, Description, Fields, GridKind, Harness, March, Nodes, Offer, Operation, Placement,
    Position, Scheme, SchemeError, Side, Solution, Values,
};

/// The checksum of the case.
#[derive(Default)]
pub struct Everything {
    sum: f64,
    coefficients: Vec<String>,
    dimensions: usize,
    prepared: bool,
}

impl Scheme for Everything {
    fn describe(&self) -> Description {
        let operations = [Operation::Advance, Operation::March, Operation::Rate, Operation::Solve];
        let offer = Offer {
            dimensions: vec![1, 2],
            fields: Some(vec!["p".to_owned(), "flux".to_owned()]),
            placement: Placement::ByField(BTreeMap::from([("flux".to_owned(), Position::XFace)])),
            boundaries: vec![BoundaryKind::Periodic, BoundaryKind::Value, BoundaryKind::Gradient, BoundaryKind::None],
            levels: 3,
            time_offset: BTreeMap::from([("flux".to_owned(), 0.5)]),
            source: true,
            coefficients: vec!["wind".to_owned(), "bed".to_owned()],
            grids: vec![GridKind::Uniform, GridKind::Stretched, GridKind::Mapped],
            ..Offer::new("everything", &operations)
        };
        let elements = Offer { values: Values::CellNodes, ..Offer::new("advection", &[Operation::Advance]) };
        Description::new("everything \u{3b1} <&\">", "0.1", vec![offer, elements])
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.prepared = false;
        if case.equation == "advection" {
            (self.sum, self.dimensions, self.prepared) = (1.0, case.dimensions, true);
            self.coefficients.clear();
            return Ok(Some(Nodes { offsets: vec![0.1127, 0.5, 0.8873], weights: vec![5. / 18., 8. / 18., 5. / 18.] }));
        }
        let mut sum = Sum(0.0);
        case.parameters.values().for_each(|value| sum.add(value.components()));
        case.grid.cells.iter().for_each(|cells| sum.add(&[*cells as f64]));
        sum.add(&case.grid.lower);
        sum.add(&case.grid.upper);
        case.grid.edges.iter().chain(&case.grid.vertices).flatten().for_each(|array| sum.add(array));
        for side in case.boundaries.iter().flatten() {
            ["p", "flux"].iter().for_each(|field| sum.add(&[f64::from(side.of(field) as u8)]));
        }
        sum.add(&[f64::from(u8::from(case.source)), case.steady.len() as f64]);
        for name in &case.coefficients {
            harness.coefficient(name, 0.0, None)?.iter().for_each(|array| sum.add(array));
        }
        self.sum = sum.0;
        self.coefficients.clone_from(&case.coefficients);
        self.dimensions = case.dimensions;
        self.prepared = true;
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        if request.step > 1.0 {
            return Err(SchemeError::StepRefused("steps above 1 are not allowed \u{2264}".to_owned()));
        }
        let Advance { time, step, steps, state, earlier } = request;
        for n in 0..steps {
            let older: f64 = earlier.iter().flatten().map(|array| array.iter().sum::<f64>()).sum();
            let rate = self.rate(time + n as f64 * step, state, harness)?;
            let mut levels = vec![state.to_vec()];
            levels.extend(earlier.iter().cloned());
            for (field, rate) in state.iter_mut().zip(&rate) {
                field.iter_mut().zip(rate).for_each(|(value, rate)| *value += step * rate + 1e-3 * older);
            }
            levels.into_iter().zip(earlier.iter_mut()).for_each(|(level, older)| *older = level);
        }
        Ok(())
    }

    fn march(&mut self, request: March<'_>, harness: &mut dyn Harness) -> Result<usize, SchemeError> {
        let (steps, length) = (3, request.until - request.time);
        for n in 0..steps {
            let step = length / steps as f64;
            let rate = self.rate(request.time + n as f64 * step, request.state, harness)?;
            for (field, rate) in request.state.iter_mut().zip(&rate) {
                let factor = step + request.tolerance.unwrap_or(0.0);
                field.iter_mut().zip(rate).for_each(|(value, rate)| *value += factor * rate);
            }
        }
        Ok(steps)
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        if !self.prepared {
            return Err(SchemeError::NotPrepared);
        }
        let mut sum = Sum(self.sum);
        for side in [Side::XLower, Side::XUpper] {
            let data = harness.boundary(time, side, 2)?;
            data.value.iter().chain(&data.gradient).chain(data.ghost.iter().flatten()).for_each(|a| sum.add(a));
        }
        let points = &[vec![0.1, 0.2, 0.7], vec![0.3, 0.1, 0.9]][..self.dimensions];
        harness.source(time, Some(points))?.iter().for_each(|array| sum.add(array));
        for name in &self.coefficients {
            harness.coefficient(name, time, Some(points))?.iter().for_each(|array| sum.add(array));
        }
        let source = harness.source(time, None)?;
        let field = |(field, source): (&Vec<f64>, &Vec<f64>)| {
            field.iter().zip(source).map(|(value, source)| 0.25 * value + source + sum.0).collect()
        };
        Ok(state.iter().zip(&source).map(field).collect())
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        let state = self.rate(0.0, guess, harness)?;
        Ok(Solution { residual: Some(self.sum * 1e-9), iterations: Some(state[0].len()), state })
    }
}

/// A sum that depends on the order of what is added, and stays within bounds.
struct Sum(f64);

impl Sum {
    fn add(&mut self, values: &[f64]) {
        values.iter().for_each(|value| self.0 = (0.7 * self.0 + value).sin());
    }
}
