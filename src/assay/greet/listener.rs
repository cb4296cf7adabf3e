//! The harness of a greeting: answers every question with smooth formulas, and remembers what was asked.

use std::collections::BTreeSet;

use gridassay_scheme::{BoundaryData, Case, Fields, Harness, SchemeError, Side};

use crate::studies::layout::{FieldLayout, Layout, spread};

/// Answers, and remembers what was asked.
#[derive(Debug)]
pub struct Listener<'a> {
    case: &'a Case,
    names: &'a [String],
    /// Where the values sit; not known before the answer to `prepare` where a cell has several.
    layout: Option<&'a Layout>,
    /// Whether `source` was asked.
    pub source: bool,
    /// Whether `boundary` was asked.
    pub boundary: bool,
    /// Which coefficients were asked.
    pub coefficients: BTreeSet<String>,
}

impl<'a> Listener<'a> {
    /// Knows the case and where its values sit.
    pub fn new(case: &'a Case, names: &'a [String], layout: Option<&'a Layout>) -> Self {
        Self { case, names, layout, source: false, boundary: false, coefficients: BTreeSet::new() }
    }

    fn layout(&self) -> Result<&'a Layout, SchemeError> {
        let early = "where the values sit is known after the answer to `prepare`, since a cell has several";
        self.layout.ok_or_else(|| SchemeError::Failed(early.to_owned()))
    }
}

/// A smooth state: positive density, depth and pressure, small motion.
pub fn state(names: &[String], layout: &Layout) -> Fields {
    names.iter().zip(&layout.fields).map(|(name, layout)| on(layout, |x| value(name, 0.0, x))).collect()
}

fn value(name: &str, time: f64, x: &[f64]) -> f64 {
    let level = match name {
        "density" | "depth" => 1.1,
        "energy" => 2.3,
        _ => 0.1,
    };
    level + 0.03 * wave(name, time, x)
}

/// Every field has a phase of its own.
fn wave(name: &str, time: f64, x: &[f64]) -> f64 {
    let phase: u32 = name.bytes().map(u32::from).sum();
    let along: f64 = x.iter().zip([1.9, 2.3, 1.3]).map(|(x, k)| k * x).sum();
    (along - time + f64::from(phase)).sin()
}

fn on(layout: &FieldLayout, value: impl Fn(&[f64]) -> f64) -> Vec<f64> {
    at(&layout.points(), value)
}

fn at(points: &[Vec<f64>], value: impl Fn(&[f64]) -> f64) -> Vec<f64> {
    let count = points.first().map_or(0, Vec::len);
    (0..count).map(|i| value(&points.iter().map(|along| along[i]).collect::<Vec<f64>>())).collect()
}

fn finite(time: f64, what: &str) -> Result<(), SchemeError> {
    if time.is_finite() {
        return Ok(());
    }
    Err(SchemeError::Failed(format!("`{what}` was asked at a time that is not finite")))
}

impl Listener<'_> {
    fn check_points(&self, points: &[Vec<f64>]) -> Result<(), SchemeError> {
        let fits = points.len() == self.case.dimensions && points.iter().all(|along| along.len() == points[0].len());
        let needed = self.case.dimensions;
        fits.then_some(()).ok_or_else(|| {
            SchemeError::Failed(format!("`points` needs {needed} lists of equal length, one for each direction"))
        })
    }
}

impl Harness for Listener<'_> {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        self.source = true;
        finite(time, "source")?;
        let of = |name: &str, points: &[Vec<f64>]| at(points, |x| 0.01 * wave(name, time, x));
        if let Some(points) = points {
            self.check_points(points)?;
            return Ok(self.names.iter().map(|name| of(name, points)).collect());
        }
        let layout = self.layout()?;
        Ok(self.names.iter().zip(&layout.fields).map(|(name, layout)| of(name, &layout.points())).collect())
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        self.boundary = true;
        finite(time, "boundary")?;
        let axis = side.axis();
        if axis >= self.case.dimensions {
            let message = format!("there is no side {} in {} dimension(s)", side.name(), self.case.dimensions);
            return Err(SchemeError::Failed(message));
        }
        let end = if side.is_upper() { self.case.grid.upper[axis] } else { self.case.grid.lower[axis] };
        let outward = if side.is_upper() { 1.0 } else { -1.0 };
        let spacing = self.case.grid.spacing(axis);
        let mut data = BoundaryData::default();
        for (name, layout) in self.names.iter().zip(&self.layout()?.fields) {
            let along = |at_axis: f64| {
                let mut axes = layout.axes.clone();
                axes[axis] = vec![at_axis];
                at(&spread(&axes), |x| value(name, time, x))
            };
            data.value.push(along(end));
            let (near, far) = (along(end), along(end + 1e-3 * outward));
            data.gradient.push(near.iter().zip(&far).map(|(near, far)| (far - near) / 1e-3).collect());
            data.ghost.push((0..layers).map(|k| along(end + outward * (k as f64 + 0.5) * spacing)).collect());
        }
        Ok(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        finite(time, "coefficient")?;
        if !self.case.coefficients.iter().any(|known| known == name) {
            return Err(SchemeError::Failed(format!("`{name}` does not vary in this case")));
        }
        self.coefficients.insert(name.to_owned());
        let points = match points {
            Some(points) => {
                self.check_points(points)?;
                points.to_vec()
            }
            None => self.layout()?.fields[0].points(),
        };
        let components = if name == "velocity" { self.case.dimensions } else { 1 };
        Ok((0..components).map(|_| at(&points, |x| 0.3 + 0.02 * wave(name, time, x))).collect())
    }
}
