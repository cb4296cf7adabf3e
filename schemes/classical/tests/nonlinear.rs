//! Trusted: exact solutions of Burgers' equation and of the Riemann problem of gas dynamics.

mod common;
#[path = "common/exact.rs"]
mod exact;

use common::periodic;
use exact::{ExactHarness, Smooth};
use gridassay_classical::scheme;
use gridassay_scheme::{
    Advance, BoundaryData, BoundaryKind, Fields, Grid, Harness, NoCallbacks, Scheme, SchemeError, Side, SideKinds,
};

fn advance(scheme: &mut dyn Scheme, state: &mut Fields, end: f64, steps: usize) {
    let request = Advance { time: 0.0, step: end / steps as f64, steps, state, earlier: &mut [] };
    scheme.advance(request, &mut NoCallbacks).expect("steps");
}

#[test]
fn viscous_burgers_between_walls_is_of_second_order() {
    let errors = [40_usize, 80, 160].map(|cells| {
        let mut case = periodic("burgers", cells, &[("viscosity", 0.05)]);
        case.boundaries = vec![[BoundaryKind::Value; 2].map(SideKinds::Same)];
        case.source = true;
        let x = case.grid.nodes(0, 1, false);
        let mut harness = ExactHarness::new(&case, Smooth::GENERIC, x.clone());
        let mut scheme = scheme("burgers-central2-rk4").unwrap();
        scheme.prepare(&case, &mut harness).unwrap();
        let mut state = vec![x.iter().map(|x| Smooth::GENERIC.value(*x, 0.0)).collect::<Vec<_>>()];
        let steps = cells * cells / 10;
        let request = Advance { time: 0.0, step: 0.4 / steps as f64, steps, state: &mut state, earlier: &mut [] };
        scheme.advance(request, &mut harness).unwrap();
        x.iter().zip(&state[0]).map(|(x, u)| (u - Smooth::GENERIC.value(*x, 0.4)).abs()).fold(0.0, f64::max)
    });
    for pair in errors.windows(2) {
        let order = (pair[0] / pair[1]).log2();
        assert!((order - 2.0).abs() < 0.1, "{errors:?}");
    }
}

#[test]
fn a_shock_of_burgers_equation_runs_at_the_mean_speed_and_a_rarefaction_opens() {
    for name in
        ["burgers-godunov", "burgers-lax-friedrichs", "muscl-minmod", "muscl-van-leer", "muscl-superbee", "muscl-mc"]
    {
        let cells = 800;
        let case = periodic("burgers", cells, &[("viscosity", 0.0)]);
        let mut scheme = scheme(name).unwrap();
        scheme.prepare(&case, &mut NoCallbacks).unwrap();
        let x = case.grid.centres(0);
        // From -1 up to 2 at 0.8: a rarefaction through the sonic point; from 2 down to -1 at 1.6: a shock of speed
        // 1/2.
        let mut state = vec![x.iter().map(|x| if (0.8..1.6).contains(x) { 2.0 } else { -1.0 }).collect::<Vec<_>>()];
        let end = 0.2;
        advance(scheme.as_mut(), &mut state, end, 400);
        let exact = |x: f64| if x < 1.6 + 0.5 * end { ((x - 0.8) / end).clamp(-1.0, 2.0) } else { -1.0 };
        let h = case.grid.spacing(0);
        let error: f64 = x.iter().zip(&state[0]).map(|(x, u)| (u - exact(*x)).abs() * h).sum();
        // First order in the mean: a few cells times the jump of 3; a shock whose speed is wrong by 1/10 would give
        // 0.06.
        assert!(error < 0.03, "{name}: {error}");
    }
}

#[test]
fn limited_schemes_never_let_the_total_variation_grow() {
    let variation = |u: &[f64]| -> f64 { (0..u.len()).map(|j| (u[j] - u[(j + 1) % u.len()]).abs()).sum() };
    for name in ["muscl-minmod", "muscl-van-leer", "muscl-superbee", "muscl-mc"] {
        for velocity in [1.0, -1.0] {
            let mut scheme = scheme(name).unwrap();
            scheme.prepare(&periodic("advection", 60, &[("velocity", velocity)]), &mut NoCallbacks).unwrap();
            let shape = |j: usize| match j {
                10 => 1.0,
                20..25 => -0.5,
                30..50 => 0.1 * (j - 30) as f64,
                _ => 0.0,
            };
            let mut state = vec![(0..60).map(shape).collect::<Vec<f64>>()];
            let mut before = variation(&state[0]);
            for _ in 0..200 {
                advance(scheme.as_mut(), &mut state, 0.45 * 1.7 / 60.0, 1);
                let after = variation(&state[0]);
                // 60 roundings of values below 2.
                assert!(after <= before + 120.0 * f64::EPSILON, "{name}: {before} to {after}");
                before = after;
            }
        }
    }
}

#[test]
fn discontinuous_galerkin_is_of_order_p_plus_one() {
    for (name, degree) in [("dg-p1", 1), ("dg-p2", 2), ("dg-p3", 3)] {
        for velocity in [1.1, -1.1] {
            let errors = [8_usize, 16, 32].map(|cells| {
                let case = periodic("advection", cells, &[("velocity", velocity)]);
                let mut scheme = scheme(name).unwrap();
                let nodes = scheme.prepare(&case, &mut NoCallbacks).unwrap().expect("several values a cell");
                let x = case.grid.cell_nodes(0, &nodes);
                let k = std::f64::consts::TAU / 1.7;
                let exact = |x: f64, t: f64| (k * (x - velocity * t) + 0.4).sin();
                let mut state = vec![x.iter().map(|x| exact(*x, 0.0)).collect::<Vec<_>>()];
                // Small enough a step for the space error to rule.
                advance(scheme.as_mut(), &mut state, 1.9, 100 * cells);
                let square =
                    |(i, (x, u)): (usize, (&f64, &f64))| nodes.weights[i % (degree + 1)] * (u - exact(*x, 1.9)).powi(2);
                (x.iter().zip(&state[0]).enumerate().map(square).sum::<f64>() / cells as f64).sqrt()
            });
            let order = (errors[1] / errors[2]).log2();
            // At Gauss points the early error falls like 2p + 1 until the projection's p + 1 rules: both stand as
            // bounds.
            let bounds = (degree + 1) as f64 - 0.2..(2 * degree + 1) as f64 + 0.2;
            assert!(bounds.contains(&order), "{name}, velocity {velocity}: {errors:?}, order {order}");
        }
    }
}

#[test]
fn the_shock_tube_of_sod_has_its_plateau() {
    // Sod 1978, J. Comput. Phys. 27:1-31; between the waves p = 0.30313 and u = 0.92745 (Toro 2009, table 4.2).
    for (name, tolerance) in [("euler-rusanov", 0.03), ("euler-muscl-hllc", 0.003)] {
        let cells = 400;
        let mut case = periodic("euler", cells, &[("gamma", 1.4)]);
        case.grid = Grid::uniform(&[cells], &[0.0], &[1.0]);
        case.boundaries = vec![[BoundaryKind::None; 2].map(SideKinds::Same)];
        let mut scheme = scheme(name).unwrap();
        scheme.prepare(&case, &mut NoCallbacks).unwrap();
        let half =
            |left: f64, right: f64| (0..cells).map(|j| if j < cells / 2 { left } else { right }).collect::<Vec<_>>();
        let mut state = vec![half(1.0, 0.125), vec![0.0; cells], half(2.5, 0.25)];
        advance(scheme.as_mut(), &mut state, 0.2, 400);
        let at = (0.76 * cells as f64) as usize;
        let velocity = state[1][at] / state[0][at];
        let pressure = 0.4 * (state[2][at] - 0.5 * state[1][at] * velocity);
        assert!((velocity - 0.92745).abs() < tolerance, "{name}: velocity {velocity}");
        assert!((pressure - 0.30313).abs() < tolerance, "{name}: pressure {pressure}");
    }
}

/// A right-running simple wave of gas dynamics before it breaks: u is constant along straight lines.
#[derive(Clone, Copy)]
struct SimpleWave {
    gamma: f64,
    spacing: f64,
}

impl SimpleWave {
    fn point(&self, x: f64, t: f64) -> [f64; 3] {
        let gamma = self.gamma;
        let sound = |u: f64| 1.0 + 0.5 * (gamma - 1.0) * u;
        let start = |x: f64| 0.3 + 0.2 * (std::f64::consts::TAU / 1.7 * x + 0.4).sin();
        // By repeated substitution, a contraction while the wave has not broken.
        let u = (0..100).fold(start(x), |u, _| start(x - (u + sound(u)) * t));
        let density = sound(u).powf(2.0 / (gamma - 1.0));
        let pressure = density * sound(u).powi(2) / gamma;
        [density, density * u, pressure / (gamma - 1.0) + 0.5 * density * u * u]
    }

    /// Simpson's rule for the average over the cell about x: an error of fourth order.
    fn average(&self, x: f64, t: f64) -> [f64; 3] {
        let [a, b, c] = [-0.5, 0.0, 0.5].map(|part| self.point(x + part * self.spacing, t));
        std::array::from_fn(|f| (a[f] + 4.0 * b[f] + c[f]) / 6.0)
    }

    fn state(&self, x: &[f64], t: f64) -> Fields {
        (0..3).map(|f| x.iter().map(|x| self.average(*x, t)[f]).collect()).collect()
    }
}

impl Harness for SimpleWave {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        NoCallbacks.source(time, points)
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let beyond = |layer: usize| {
            let distance = (layer as f64 + 0.5) * self.spacing;
            self.average(if side.is_upper() { 2.0 + distance } else { 0.3 - distance }, time)
        };
        let ghost = (0..3).map(|f| (0..layers).map(|layer| vec![beyond(layer)[f]]).collect()).collect();
        Ok(BoundaryData { ghost, ..BoundaryData::default() })
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        NoCallbacks.coefficient(name, time, points)
    }
}

/// Mean error over all fields in the simple wave, periodic or between values given beyond the ends.
fn simple_wave_error(name: &str, cells: usize, kind: BoundaryKind) -> f64 {
    let (gamma, end) = (1.3, 0.1);
    let mut case = periodic("euler", cells, &[("gamma", gamma)]);
    case.boundaries = vec![[kind; 2].map(SideKinds::Same)];
    let mut wave = SimpleWave { gamma, spacing: case.grid.spacing(0) };
    let x = case.grid.centres(0);
    let mut scheme = scheme(name).unwrap();
    scheme.prepare(&case, &mut wave).unwrap();
    let mut state = wave.state(&x, 0.0);
    let steps = cells / 4;
    let request = Advance { time: 0.0, step: end / steps as f64, steps, state: &mut state, earlier: &mut [] };
    scheme.advance(request, &mut wave).expect("steps");
    let exact = wave.state(&x, end);
    (0..3).map(|f| state[f].iter().zip(&exact[f]).map(|(a, b)| (a - b).abs()).sum::<f64>() / cells as f64).sum()
}

#[test]
fn gas_dynamics_is_of_first_and_second_order_in_a_simple_wave() {
    for kind in [BoundaryKind::Periodic, BoundaryKind::Value] {
        for (name, order, tolerance) in [("euler-rusanov", 1.0, 0.1), ("euler-muscl-hllc", 2.0, 0.25)] {
            let errors = [80, 160, 320, 640].map(|cells| simple_wave_error(name, cells, kind));
            let last = (errors[2] / errors[3]).log2();
            assert!((last - order).abs() < tolerance, "{name}, {kind:?}: {errors:?}, order {last}");
        }
    }
}
