//! Exact solutions as functions of place and time, and the harness that answers from them.

use std::f64::consts::TAU;

use gridassay_scheme::{BoundaryData, Fields, Harness, SchemeError, Side};

/// An exact solution: fields at a point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Solution {
    /// sin(k (x - a t)) exp(-nu k^2 t) in a periodic box of length `length`.
    Wave { velocity: f64, diffusivity: f64, length: f64 },
    /// sin(2.3 x - 1.9 t + 0.7) + exp(x / 2 - 0.6 t), with the source that makes it one.
    Manufactured { velocity: f64, diffusivity: f64, burgers: bool, steady: bool },
    /// A wave of Burgers' equation before it breaks.
    BurgersWave { length: f64 },
    /// A rarefaction from -1 to 2 that starts at 0.8 and a shock back to -1 that starts at 1.6.
    BurgersJumps,
    /// A wave in the plane along both directions.
    PlaneWave { velocity: [f64; 2], lengths: [f64; 2] },
    /// sin in x times a travelling cosine in y, with its source.
    PlaneManufactured { diffusivity: f64, lengths: [f64; 2] },
    /// Sound in both directions on a mean flow.
    Sound { density: f64, sound_speed: f64, velocity: f64, length: f64 },
    /// A right-running simple wave of gas dynamics before it breaks.
    SimpleWave { gamma: f64, length: f64 },
}

fn manufactured(x: f64, t: f64) -> [f64; 4] {
    let (phase, tail) = (2.3 * x - 1.9 * t + 0.7, (0.5 * x - 0.6 * t).exp());
    [
        phase.sin() + tail,
        -1.9 * phase.cos() - 0.6 * tail,
        2.3 * phase.cos() + 0.5 * tail,
        -2.3 * 2.3 * phase.sin() + 0.25 * tail,
    ]
}

/// u = start(x - speed(u) t) by repeated substitution, a contraction while the wave has not broken.
fn along_characteristics(x: f64, t: f64, start: impl Fn(f64) -> f64, speed: impl Fn(f64) -> f64) -> f64 {
    (0..60).fold(start(x), |u, _| start(x - speed(u) * t))
}

impl Solution {
    /// All fields at a point.
    pub fn at(&self, [x, y]: [f64; 2], t: f64) -> Vec<f64> {
        match *self {
            Self::Wave { velocity, diffusivity, length } => {
                let k = TAU / length;
                vec![(k * (x - velocity * t) + 0.4).sin() * (-diffusivity * k * k * t).exp()]
            }
            Self::Manufactured { steady, .. } => vec![manufactured(x, if steady { 0.0 } else { t })[0]],
            Self::BurgersWave { length } => {
                vec![along_characteristics(x, t, |x| 0.3 + 0.5 * (TAU * x / length + 0.4).sin(), |u| u)]
            }
            Self::BurgersJumps => {
                let fan = if t > 0.0 {
                    ((x - 0.8) / t).clamp(-1.0, 2.0)
                } else if x < 0.8 {
                    -1.0
                } else {
                    2.0
                };
                vec![if x < 1.6 + 0.5 * t { fan } else { -1.0 }]
            }
            Self::PlaneWave { velocity, lengths } => {
                let phase = |x: f64, axis: usize| TAU / lengths[axis] * (x - velocity[axis] * t);
                vec![(phase(x, 0) + phase(y, 1) + 0.4).sin() + 0.5 * (2.0 * phase(x, 0) - phase(y, 1)).cos()]
            }
            Self::PlaneManufactured { lengths, .. } => {
                vec![(TAU / lengths[0] * x + 0.3).sin() * (TAU / lengths[1] * y - 1.3 * t).cos()]
            }
            Self::Sound { density, sound_speed, velocity, length } => {
                let k = TAU / length;
                let with = (k * (x - (velocity + sound_speed) * t) + 0.4).sin();
                let against = 0.6 * (k * (x - (velocity - sound_speed) * t) - 0.7).sin();
                vec![with + against, (with - against) / (density * sound_speed)]
            }
            Self::SimpleWave { gamma, length } => {
                let sound = |u: f64| 1.0 + 0.5 * (gamma - 1.0) * u;
                let start = |x: f64| 0.3 + 0.2 * (TAU * x / length + 0.4).sin();
                let u = along_characteristics(x, t, start, |u| u + sound(u));
                let density = sound(u).powf(2.0 / (gamma - 1.0));
                let pressure = density * sound(u).powi(2) / gamma;
                vec![density, density * u, pressure / (gamma - 1.0) + 0.5 * density * u * u]
            }
        }
    }

    fn source_at(&self, [x, y]: [f64; 2], t: f64) -> f64 {
        match *self {
            Self::Manufactured { velocity, diffusivity, burgers, steady } => {
                let [u, in_time, in_space, curvature] = manufactured(x, if steady { 0.0 } else { t });
                let speed = if burgers { u } else { velocity };
                let in_time = if steady { 0.0 } else { in_time };
                in_time + speed * in_space - diffusivity * curvature
            }
            Self::PlaneManufactured { diffusivity, lengths } => {
                let [kx, ky] = lengths.map(|length| TAU / length);
                let (a, b) = (kx * x + 0.3, ky * y - 1.3 * t);
                a.sin() * (1.3 * b.sin() + diffusivity * (kx * kx + ky * ky) * b.cos())
            }
            _ => 0.0,
        }
    }
}

/// Answers from an exact solution, at the positions of the values.
pub struct SolutionHarness {
    pub solution: Solution,
    pub positions: Vec<[f64; 2]>,
    pub ends: [f64; 2],
}

impl Harness for SolutionHarness {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let at = |place: &[f64; 2]| self.solution.source_at(*place, time);
        Ok(vec![match points {
            None => self.positions.iter().map(at).collect(),
            Some(points) => points[0].iter().map(|x| at(&[*x, 0.0])).collect(),
        }])
    }

    fn boundary(&mut self, time: f64, side: Side, _: usize) -> Result<BoundaryData, SchemeError> {
        let x = self.ends[usize::from(side.is_upper())];
        let outward = if side.is_upper() { 1.0 } else { -1.0 };
        let Solution::Manufactured { steady, .. } = self.solution else {
            return Err(SchemeError::Failed("no walls here".to_owned()));
        };
        let [value, _, slope, _] = manufactured(x, if steady { 0.0 } else { time });
        Ok(BoundaryData { value: vec![vec![value]], gradient: vec![vec![outward * slope]], ghost: Vec::new() })
    }

    fn coefficient(&mut self, name: &str, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed(format!("`{name}` does not vary")))
    }
}
