//! Still water: over an uneven bed a level surface at rest stays at rest.

use gridassay_scheme::{BoundaryData, Callback, Fields, Harness, SchemeError, Side, Values};

use super::tally::Tally;
use super::trial::Trial;
use super::uniform::departures;
use crate::host::Session;
use crate::studies::Stop;
use crate::studies::layout::{FieldLayout, Layout, spread};

/// Height of the surface, mean height of the bed, height of its waves.
const LEVEL: f64 = 1.31;
const MEAN: f64 = 0.23;
const WAVES: f64 = 0.11;

/// Water at rest over a bed of waves, in every direction that the setting has.
///
/// Source: Bermudez & Vazquez 1994, Computers & Fluids 23:1049-1071 (the C-property).
///
/// # Errors
/// Another equation, a bed that the scheme does not offer, or a scheme that refused or failed.
pub fn check(session: &mut Session, trial: &Trial, tally: &mut Tally) -> Result<(), Stop> {
    if trial.case.equation != "shallow_water" {
        return Err(Stop::NotOffered(format!("`{}` has no water", trial.case.equation)));
    }
    let mut case = trial.case.clone();
    case.coefficients = vec!["bed".to_owned()];
    case.steady = vec![Callback::Coefficient];
    let mut parameters = trial.parameters.clone();
    parameters.remove("bed");
    case.parameters.remove("bed");
    let trial = trial.with_case(session, case, parameters)?;
    let layout = Layout::new(&trial.offer, &trial.case, &trial.names, None).map_err(Stop::Request)?;
    let grid = &trial.case.grid;
    let mut bed = Bed {
        lower: grid.lower.clone(),
        length: (0..grid.dimensions()).map(|axis| grid.upper[axis] - grid.lower[axis]).collect(),
        layout: layout.clone(),
    };
    session.prepare(&trial.case, &mut bed)?;
    let field = |(name, layout): (&String, &FieldLayout)| match name.as_str() {
        "depth" => bed.on(layout).into_iter().map(|b| LEVEL - b).collect(),
        _ => vec![0.0; layout.len()],
    };
    let fields = trial.names.iter().zip(&layout.fields).map(field).collect();
    departures(session, &trial, "water at rest over a bed".to_owned(), fields, &mut bed, tally);
    Ok(())
}

/// b = mean + waves x sum over directions of sin(2 pi s + 0.4), s from 0 to 1 along the domain.
struct Bed {
    lower: Vec<f64>,
    length: Vec<f64>,
    layout: Layout,
}

impl Bed {
    fn angle(&self, axis: usize, x: f64) -> f64 {
        std::f64::consts::TAU * (x - self.lower[axis]) / self.length[axis] + 0.4
    }

    fn at(&self, points: &[Vec<f64>]) -> Vec<f64> {
        let value = |index: usize| {
            let waves = points.iter().enumerate().map(|(axis, along)| self.angle(axis, along[index]).sin());
            MEAN + WAVES * waves.sum::<f64>()
        };
        (0..points.first().map_or(0, Vec::len)).map(value).collect()
    }

    /// The bed as the state holds its values: at points, or averaged over cells in closed form.
    fn on(&self, layout: &FieldLayout) -> Vec<f64> {
        if self.layout.values != Values::CellAverage {
            return self.at(&layout.points());
        }
        let (lower, upper) = (spread(&layout.lower), spread(&layout.upper));
        let mean = |axis: usize, index: usize| {
            let (a, b) = (self.angle(axis, lower[axis][index]), self.angle(axis, upper[axis][index]));
            (a.cos() - b.cos()) / (b - a)
        };
        let value = |index: usize| MEAN + WAVES * (0..lower.len()).map(|axis| mean(axis, index)).sum::<f64>();
        (0..layout.len()).map(value).collect()
    }
}

impl Harness for Bed {
    fn source(&mut self, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed("this case has no source term".to_owned()))
    }

    fn boundary(&mut self, _: f64, side: Side, _: usize) -> Result<BoundaryData, SchemeError> {
        Err(SchemeError::Failed(format!("this case has no boundary data at {}", side.name())))
    }

    fn coefficient(&mut self, name: &str, _: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        if name != "bed" {
            return Err(SchemeError::Failed(format!("`{name}` does not vary in this case")));
        }
        match points {
            Some(points) if points.len() != self.length.len() || points.iter().any(|p| p.len() != points[0].len()) => {
                let message = format!("`points` needs {} lists of equal length", self.length.len());
                Err(SchemeError::Failed(message))
            }
            Some(points) => Ok(vec![self.at(points)]),
            None => Ok(vec![self.on(&self.layout.fields[0])]),
        }
    }
}
