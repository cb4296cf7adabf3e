//! Time integration of y' = f(t, y) to a tolerance, so that a semi-discrete scheme's own error is all that is left.
//!
//! The embedded pair of order 5(4) of Dormand & Prince (1980), J. Comput. Appl. Math. 6:19-26, table 2, with local extrapolation. The step
//! follows the error per unit of time, so that the error at the end is about the tolerance times what the equations make of it.

use std::iter::zip;

/// Times of the stages within a step.
const C: [f64; 7] = [0.0, 1.0 / 5.0, 3.0 / 10.0, 4.0 / 5.0, 8.0 / 9.0, 1.0, 1.0];

/// Weights of the earlier stages in each stage; the last row is the solution of order 5 itself.
const A: [[f64; 6]; 7] = [
    [0.0; 6],
    [1.0 / 5.0, 0.0, 0.0, 0.0, 0.0, 0.0],
    [3.0 / 40.0, 9.0 / 40.0, 0.0, 0.0, 0.0, 0.0],
    [44.0 / 45.0, -56.0 / 15.0, 32.0 / 9.0, 0.0, 0.0, 0.0],
    [19372.0 / 6561.0, -25360.0 / 2187.0, 64448.0 / 6561.0, -212.0 / 729.0, 0.0, 0.0],
    [9017.0 / 3168.0, -355.0 / 33.0, 46732.0 / 5247.0, 49.0 / 176.0, -5103.0 / 18656.0, 0.0],
    [35.0 / 384.0, 0.0, 500.0 / 1113.0, 125.0 / 192.0, -2187.0 / 6784.0, 11.0 / 84.0],
];

/// Weights of the embedded solution of order 4.
const EMBEDDED: [f64; 7] =
    [5179.0 / 57600.0, 0.0, 7571.0 / 16695.0, 393.0 / 640.0, -92097.0 / 339200.0, 187.0 / 2100.0, 1.0 / 40.0];

/// The most steps, taken or turned down.
const MOST_STEPS: usize = 400_000;

/// Errors of a step below this many eps of the state's size are rounding, which a smaller step cannot mend.
const ROUNDING: f64 = 16.0;

/// A state: one array a field.
type Fields = Vec<Vec<f64>>;

/// What a step does to the state: the equations, and the values that are prescribed.
pub trait Equations {
    /// Why they could not be evaluated.
    type Error;

    /// f(t, y).
    ///
    /// # Errors
    /// They cannot be evaluated there.
    fn rate(&mut self, time: f64, state: &Fields) -> Result<Fields, Self::Error>;

    /// Sets the entries of a state that are prescribed at `time`.
    ///
    /// # Errors
    /// As [`Equations::rate`].
    fn prescribe(&mut self, time: f64, state: &mut Fields) -> Result<(), Self::Error>;
}

/// Why an integration did not come to its end.
#[derive(Debug, Clone, PartialEq)]
pub enum Unfinished<E> {
    /// The equations could not be evaluated.
    Equations(E),
    /// The step fell below what the time can resolve, or too many steps were needed.
    Steps {
        /// How far it came.
        time: f64,
        /// The size of the last step.
        step: f64,
    },
}

/// The state at `until` from the state at `start`, with the number of steps taken. `tolerance`: the largest error of a step, as a share of the
/// largest modulus of the state, for the whole time; each step is allowed its share of it.
///
/// # Errors
/// The equations fail, or steps become too small or too many. A state that is no longer finite is returned as it stands.
pub fn integrate<S: Equations>(
    equations: &mut S,
    start: f64,
    until: f64,
    mut state: Fields,
    tolerance: f64,
) -> Result<(Fields, usize), Unfinished<S::Error>> {
    let whole = until - start;
    let (mut time, mut step, mut taken) = (start, whole / 64.0, 0);
    equations.prescribe(time, &mut state).map_err(Unfinished::Equations)?;
    let mut first = equations.rate(time, &state).map_err(Unfinished::Equations)?;
    for _ in 0..MOST_STEPS {
        let last = time + step >= until - 1e-12 * whole;
        let this = if last { until - time } else { step };
        let (next, slope, error) = attempt(equations, time, this, &state, &first).map_err(Unfinished::Equations)?;
        let size = largest(&state).max(largest(&next));
        if !size.is_finite() || !error.is_finite() {
            if this > 1e-9 * whole && largest(&state).is_finite() {
                step = 0.2 * this;
                continue;
            }
            return Ok((next, taken));
        }
        let allowed = size * (tolerance * this / whole).max(ROUNDING * f64::EPSILON);
        // Error per unit of time falls as the fourth power of the step; 0.9 and the bounds are common practice.
        let factor = if error > 0.0 { (0.9 * (allowed / error).powf(0.25)).clamp(0.2, 4.0) } else { 4.0 };
        if error <= allowed {
            (state, first, time, taken) = (next, slope, time + this, taken + 1);
            if last {
                return Ok((state, taken));
            }
        }
        step = this * if error <= allowed { factor } else { factor.min(0.9) };
        if step < 1e-13 * whole {
            break;
        }
    }
    Err(Unfinished::Steps { time, step })
}

/// One step: the new state, the rate there, and the largest difference between the two embedded solutions.
fn attempt<S: Equations>(
    equations: &mut S,
    time: f64,
    step: f64,
    state: &Fields,
    first: &Fields,
) -> Result<(Fields, Fields, f64), S::Error> {
    let mut slopes: Vec<Fields> = vec![first.clone()];
    let mut stage = state.clone();
    for index in 1..7 {
        stage = combined(state, step, &slopes, &A[index][..index]);
        equations.prescribe(time + C[index] * step, &mut stage)?;
        slopes.push(equations.rate(time + C[index] * step, &stage)?);
    }
    let differences: Vec<f64> = (0..7).map(|index| A[6].get(index).copied().unwrap_or(0.0) - EMBEDDED[index]).collect();
    let zeros: Fields = state.iter().map(|field| vec![0.0; field.len()]).collect();
    let mut error = combined(&zeros, step, &slopes, &differences);
    // What is prescribed has no error.
    let mut pinned: Fields = state.iter().map(|field| vec![f64::NAN; field.len()]).collect();
    equations.prescribe(time + step, &mut pinned)?;
    for (error, pinned) in zip(error.iter_mut().flatten(), pinned.iter().flatten()) {
        if !pinned.is_nan() {
            *error = 0.0;
        }
    }
    let last = slopes.pop().unwrap_or_default();
    Ok((stage, last, largest(&error)))
}

/// base + step x sum of weights x slopes.
fn combined(base: &Fields, step: f64, slopes: &[Fields], weights: &[f64]) -> Fields {
    let mut out = base.clone();
    for (slope, weight) in zip(slopes, weights) {
        for (out, slope) in zip(out.iter_mut().flatten(), slope.iter().flatten()) {
            *out += step * weight * slope;
        }
    }
    out
}

/// The largest modulus; NaN where any entry is.
fn largest(fields: &Fields) -> f64 {
    let bigger = |a: f64, b: f64| if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b) };
    fields.iter().flatten().fold(0.0, |largest, value| bigger(largest, value.abs()))
}

#[cfg(test)]
mod tests {
    //! Trusted: the conditions of order 5 and 4 (Butcher) on the coefficients, and closed forms.
    use std::convert::Infallible;

    use super::*;
    use crate::analysis::compare::agree;

    #[test]
    fn the_coefficients_meet_the_conditions_of_their_orders() {
        for index in 0..7 {
            agree(A[index].iter().sum(), C[index], 1e-14).unwrap();
        }
        let moment = |weights: &[f64], power: i32| zip(weights, C).map(|(w, c)| w * c.powi(power)).sum::<f64>();
        for power in 0..5 {
            agree(moment(&A[6], power), 1.0 / f64::from(power + 1), 1e-14).unwrap();
        }
        for power in 0..4 {
            agree(moment(&EMBEDDED, power), 1.0 / f64::from(power + 1), 1e-14).unwrap();
        }
        // sum b_i a_ij c_j^k = 1 / ((k + 1)(k + 2)): conditions that the quadrature above does not hold.
        for power in 1..4 {
            let inner = |row: &[f64; 6]| zip(row, C).map(|(a, c)| a * c.powi(power)).sum::<f64>();
            let sum: f64 = zip(A[6], &A).map(|(b, row)| b * inner(row)).sum();
            agree(sum, 1.0 / f64::from((power + 1) * (power + 2)), 1e-14).unwrap();
        }
    }

    /// u' = -v + t, v' = u, with a third value prescribed as t^2.
    struct Oscillator;

    impl Equations for Oscillator {
        type Error = Infallible;

        fn rate(&mut self, time: f64, state: &Fields) -> Result<Fields, Infallible> {
            // The rate of what is prescribed is ignored.
            Ok(vec![vec![-state[0][1] + time, state[0][0]], vec![7.0]])
        }

        fn prescribe(&mut self, time: f64, state: &mut Fields) -> Result<(), Infallible> {
            state[1][0] = time * time;
            Ok(())
        }
    }

    #[test]
    fn an_oscillator_comes_out_to_its_tolerance() {
        // v'' = -v + t with v(0) = 0.3, u(0) = 0.5: v = t + 0.3 cos t - 0.5 sin t, u = 1 - 0.3 sin t - 0.5 cos t.
        let exact = |t: f64| [1.0 - 0.3 * t.sin() - 0.5 * t.cos(), t + 0.3 * t.cos() - 0.5 * t.sin()];
        let error = |tolerance: f64| {
            let start = vec![vec![0.5, 0.3], vec![0.0]];
            let (end, steps) = integrate(&mut Oscillator, 0.0, 7.3, start, tolerance).unwrap();
            let difference = zip(&end[0], exact(7.3)).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
            assert_eq!(end[1][0], 7.3 * 7.3);
            (difference, steps)
        };
        // Error per unit of time: the end error is the tolerance times the size (about 53, the prescribed value) at most.
        for tolerance in [1e-6, 1e-9, 1e-11] {
            let (error, steps) = error(tolerance);
            assert!(error < 54.0 * tolerance && steps < 5000, "{error} after {steps} steps for {tolerance}");
        }
        assert!(error(1e-6).1 < error(1e-9).1);
    }

    #[test]
    fn what_blows_up_is_handed_back() {
        struct Explosion;
        impl Equations for Explosion {
            type Error = Infallible;
            fn rate(&mut self, _: f64, state: &Fields) -> Result<Fields, Infallible> {
                Ok(vec![vec![state[0][0] * state[0][0]]])
            }
            fn prescribe(&mut self, _: f64, _: &mut Fields) -> Result<(), Infallible> {
                Ok(())
            }
        }
        // y = 1 / (1 - t) has no value at t = 2.
        match integrate(&mut Explosion, 0.0, 2.0, vec![vec![1.0]], 1e-9) {
            Err(Unfinished::Steps { time, .. }) => assert!((0.9..=1.1).contains(&time), "{time}"),
            Ok((state, _)) => assert!(!state[0][0].is_finite() || state[0][0].abs() > 1e6),
            Err(Unfinished::Equations(never)) => match never {},
        }
    }
}
