//! A hill in the swirling deformation flow (LeVeque 1996, SIAM J. Numer. Anal. 33:627-665), by tracing particles back.

use std::f64::consts::PI;

use super::{ExactError, positive};

/// Longest step of the integration along a path; the flow turns by at most 2 pi a unit of time.
const LONGEST_STEP: f64 = 0.12;
/// Rows of the extrapolation: its order is 16, and at the longest step its error is below round-off.
const ROWS: usize = 8;

/// u = sin^2(pi x) sin(2 pi y) g, v = -sin^2(pi y) sin(2 pi x) g, g = cos(pi t / period), carrying
/// base + height exp(-r^2 / (2 width^2)) from time 0.
///
/// The flow is a steady one at a varying pace, so that a particle's path by time t is that of the steady flow by the integral of g,
/// period / pi sin(pi t / period). The path is integrated by Gragg's method with extrapolation (Hairer, Norsett & Wanner,
/// "Solving Ordinary Differential Equations I", section II.9).
#[derive(Debug, Clone)]
pub struct Swirl {
    period: f64,
    base: f64,
    height: f64,
    centre: [f64; 2],
    width: f64,
}

impl Swirl {
    /// A hill of `width` about `centre`, in a flow that returns after `period`.
    ///
    /// # Errors
    /// A period or width that is not positive.
    pub fn new(period: f64, [base, height, width]: [f64; 3], centre: [f64; 2]) -> Result<Self, ExactError> {
        positive("the period", period)?;
        positive("the width", width)?;
        Ok(Self { period, base, height, centre, width })
    }

    fn pace(&self, time: f64) -> f64 {
        self.period / PI * (PI * time / self.period).sin()
    }

    fn hill(&self, [x, y]: [f64; 2]) -> (f64, [f64; 2]) {
        let (dx, dy) = (x - self.centre[0], y - self.centre[1]);
        let square = self.width * self.width;
        let excess = self.height * (-(dx * dx + dy * dy) / (2.0 * square)).exp();
        (self.base + excess, [-dx / square * excess, -dy / square * excess])
    }

    /// The value at a point.
    #[must_use]
    pub fn value(&self, time: f64, point: [f64; 2]) -> f64 {
        self.hill(traced(self.pace(time), point)).0
    }

    /// The gradient at a point.
    #[must_use]
    pub fn gradient(&self, time: f64, [x, y]: [f64; 2]) -> [f64; 2] {
        // Beside the path, the matrix of its derivatives by the point from which it is traced.
        let [x, y, xx, xy, yx, yy] = traced(self.pace(time), [x, y, 1.0, 0.0, 0.0, 1.0]);
        let [gx, gy] = self.hill([x, y]).1;
        [gx * xx + gy * yx, gx * xy + gy * yy]
    }
}

/// The state at the end of a path followed backwards for `pace`.
fn traced<const N: usize>(pace: f64, mut state: [f64; N]) -> [f64; N] {
    let steps = (pace.abs() / LONGEST_STEP).ceil();
    for _ in 0..steps as usize {
        state = extrapolated(&state, -pace / steps);
    }
    state
}

/// The steady flow at the position state[0..2], and where N = 6 the rate of its matrix of derivatives.
fn rates<const N: usize>(state: &[f64; N]) -> [f64; N] {
    let (sx, cx) = (PI * state[0]).sin_cos();
    let (sy, cy) = (PI * state[1]).sin_cos();
    let mut rates = [0.0; N];
    rates[0] = 2.0 * sx * sx * sy * cy;
    rates[1] = -2.0 * sy * sy * sx * cx;
    if N == 6 {
        let u_x = 4.0 * PI * sx * cx * sy * cy;
        let u_y = 2.0 * PI * sx * sx * (cy * cy - sy * sy);
        let v_x = -2.0 * PI * sy * sy * (cx * cx - sx * sx);
        for column in 0..2 {
            rates[2 + column] = u_x * state[2 + column] + u_y * state[4 + column];
            rates[4 + column] = v_x * state[2 + column] - u_x * state[4 + column];
        }
    }
    rates
}

/// One step: Gragg's method with 2, 4, ..., 16 parts, extrapolated in the square of the part.
fn extrapolated<const N: usize>(state: &[f64; N], step: f64) -> [f64; N] {
    let mut table = [[0.0; N]; ROWS];
    for row in 0..ROWS {
        table[row] = gragg(state, step, 2 * (row + 1));
        for column in (0..row).rev() {
            let ratio = (row + 1) as f64 / (column + 1) as f64;
            let factor = 1.0 / (ratio * ratio - 1.0);
            let (finer, coarser) = (table[column + 1], table[column]);
            table[column] = std::array::from_fn(|i| finer[i] + factor * (finer[i] - coarser[i]));
        }
    }
    table[0]
}

fn gragg<const N: usize>(state: &[f64; N], step: f64, parts: usize) -> [f64; N] {
    let part = step / parts as f64;
    let plus = |state: &[f64; N], rates: &[f64; N], time: f64| std::array::from_fn(|i| state[i] + time * rates[i]);
    let mut before: [f64; N] = *state;
    let mut now: [f64; N] = plus(state, &rates(state), part);
    for _ in 1..parts {
        let next = plus(&before, &rates(&now), 2.0 * part);
        before = now;
        now = next;
    }
    let ahead: [f64; N] = plus(&before, &rates(&now), 2.0 * part);
    std::array::from_fn(|i| 0.25 * (before[i] + 2.0 * now[i] + ahead[i]))
}

#[cfg(test)]
mod tests {
    //! Trusted: the flow keeps its stream function along a path and keeps areas; it returns after a period; a path traced there
    //! and back ends where it began.
    use super::*;

    fn swirl() -> Swirl {
        Swirl::new(1.5, [0.2, 1.0, 0.13], [0.33, 0.41]).unwrap()
    }

    #[test]
    fn paths_keep_the_stream_function_and_areas() {
        let stream = |x: f64, y: f64| ((PI * x).sin() * (PI * y).sin()).powi(2);
        for point in [[0.31, 0.72], [0.9, 0.13], [0.52, 0.47]] {
            let [x, y, xx, xy, yx, yy] = traced(0.477, [point[0], point[1], 1.0, 0.0, 0.0, 1.0]);
            // A few roundings a step, stretched up to tenfold along the path.
            let drift = stream(x, y) - stream(point[0], point[1]);
            assert!(drift.abs() <= 256.0 * f64::EPSILON, "{drift:e} at {x}, {y}");
            assert!((xx * yy - xy * yx - 1.0).abs() <= 1e-12 * (xx * yy).abs().max(1.0), "area");
            let [back_x, back_y] = traced(-0.477, [x, y]);
            let miss = (back_x - point[0]).hypot(back_y - point[1]);
            assert!(miss <= 256.0 * f64::EPSILON, "{miss:e} at {back_x}, {back_y}");
        }
    }

    #[test]
    fn returns_after_a_period_and_not_before() {
        let swirl = swirl();
        let point = [0.31, 0.52];
        let start = swirl.value(0.0, point);
        assert!((swirl.value(1.5, point) - start).abs() <= 1e-14);
        assert!((swirl.value(1.1, point) - start).abs() > 0.1);
    }

    #[test]
    fn gradient_matches_differences() {
        let (swirl, h) = (swirl(), 1e-5);
        let [gx, gy] = swirl.gradient(1.1, [0.41, 0.62]);
        let along_x = (swirl.value(1.1, [0.41 + h, 0.62]) - swirl.value(1.1, [0.41 - h, 0.62])) / (2.0 * h);
        let along_y = (swirl.value(1.1, [0.41, 0.62 + h]) - swirl.value(1.1, [0.41, 0.62 - h])) / (2.0 * h);
        assert!((gx - along_x).abs() <= 1e-7 * (1.0 + gx.abs()), "{gx} against {along_x}");
        assert!((gy - along_y).abs() <= 1e-7 * (1.0 + gy.abs()), "{gy} against {along_y}");
    }
}
