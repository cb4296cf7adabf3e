//! Steps of linear schemes on complex waves.

use gridassay_scheme::{Advance, Fields, NoCallbacks, Scheme};
use num_complex::Complex64;

/// One step of a linear scheme on complex arrays, field by field: the newest level and the older ones.
#[allow(clippy::type_complexity)]
pub fn complex_step(
    scheme: &mut dyn Scheme,
    step: f64,
    state: &[Vec<Complex64>],
    earlier: &[Vec<Vec<Complex64>>],
) -> (Vec<Vec<Complex64>>, Vec<Vec<Vec<Complex64>>>) {
    let mut run = |part: fn(&Complex64) -> f64| -> (Fields, Vec<Fields>) {
        let real =
            |fields: &[Vec<Complex64>]| -> Fields { fields.iter().map(|u| u.iter().map(part).collect()).collect() };
        let mut state = real(state);
        let mut earlier: Vec<Fields> = earlier.iter().map(|level| real(level)).collect();
        let request = Advance { time: 0.0, step, steps: 1, state: &mut state, earlier: &mut earlier };
        scheme.advance(request, &mut NoCallbacks).expect("a step");
        (state, earlier)
    };
    let (re, re_earlier) = run(|z| z.re);
    let (im, im_earlier) = run(|z| z.im);
    let join = |re: &Fields, im: &Fields| -> Vec<Vec<Complex64>> {
        re.iter().zip(im).map(|(a, b)| a.iter().zip(b).map(|(a, b)| Complex64::new(*a, *b)).collect()).collect()
    };
    let older = re_earlier.iter().zip(&im_earlier).map(|(a, b)| join(a, b)).collect();
    (join(&re, &im), older)
}

/// exp(i theta j) for j from 0 to n - 1, with theta = 2 pi mode / n reduced exactly before the cosine is taken.
pub fn fourier_mode(mode: usize, n: usize) -> Vec<Complex64> {
    let angle = |j: usize| std::f64::consts::TAU * ((mode * j) % n) as f64 / n as f64;
    (0..n).map(|j| Complex64::from_polar(1.0, angle(j))).collect()
}
