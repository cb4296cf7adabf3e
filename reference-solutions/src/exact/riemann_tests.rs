//! Trusted: the star states printed in Toro's book (tables 4.1 to 4.3), and a bisection of the pressure function in
//! its textbook form, which shares neither the formulas with logarithms nor the root finder of the solver.

use super::*;

const GAMMA: f64 = 1.4;

fn gas(density: f64, velocity: f64, pressure: f64) -> GasState {
    GasState { density, velocity, pressure }
}

/// Left and right states of Toro's five tests.
fn toro() -> [(GasState, GasState); 5] {
    [
        (gas(1.0, 0.0, 1.0), gas(0.125, 0.0, 0.1)),
        (gas(1.0, -2.0, 0.4), gas(1.0, 2.0, 0.4)),
        (gas(1.0, 0.0, 1000.0), gas(1.0, 0.0, 0.01)),
        (gas(1.0, 0.0, 0.01), gas(1.0, 0.0, 100.0)),
        (gas(5.99924, 19.5975, 460.894), gas(5.99242, -6.19633, 46.0950)),
    ]
}

fn solve(left: GasState, right: GasState) -> Riemann {
    Riemann::new(left, right, GAMMA, 0.0, 0.0).expect("no vacuum")
}

/// f_K in the form that the book prints.
fn textbook_change(p: f64, state: &GasState) -> f64 {
    let a = (GAMMA * state.pressure / state.density).sqrt();
    if p > state.pressure {
        let (big_a, big_b) = (2.0 / (2.4 * state.density), 0.4 / 2.4 * state.pressure);
        (p - state.pressure) * (big_a / (p + big_b)).sqrt()
    } else {
        2.0 * a / 0.4 * ((p / state.pressure).powf(0.4 / 2.8) - 1.0)
    }
}

/// Star pressure and velocity by plain bisection.
fn bisected(left: &GasState, right: &GasState) -> (f64, f64) {
    let f = |p: f64| textbook_change(p, left) + textbook_change(p, right) + right.velocity - left.velocity;
    let (mut lower, mut upper) = (0.0_f64, 1.0e6_f64);
    for _ in 0..200 {
        let middle = 0.5 * (lower + upper);
        if f(middle) < 0.0 { lower = middle } else { upper = middle }
    }
    (lower, 0.5 * (left.velocity + right.velocity + textbook_change(lower, right) - textbook_change(lower, left)))
}

/// One unit in the last printed digit: the book rounds, and in test 2 prints three digits.
#[test]
fn agrees_with_the_printed_star_states() {
    let printed = [
        [(0.30313, 1e-5), (0.92745, 1e-5), (0.42632, 1e-5), (0.26557, 1e-5)],
        [(0.00189, 1e-5), (0.0, 1e-14), (0.02185, 1e-5), (0.02185, 1e-5)],
        [(460.894, 1e-3), (19.5975, 1e-4), (0.57506, 1e-5), (5.99924, 1e-5)],
        [(46.0950, 1e-4), (-6.19633, 1e-5), (5.99242, 1e-5), (0.57511, 1e-5)],
    ];
    for ((left, right), row) in toro().into_iter().zip(printed) {
        compare(solve(left, right).star(), row.map(|(value, unit)| (value, 0.5 * unit)));
    }
}

/// The book's row of test 5 belongs to the unrounded star states of tests 3 and 4.
#[test]
fn agrees_with_the_printed_star_state_of_test_5_for_unrounded_states() {
    let [.., (left3, right3), (left4, right4), _] = toro();
    let (third, fourth) = (solve(left3, right3).star(), solve(left4, right4).star());
    let star = solve(
        gas(third.density_right, third.velocity, third.pressure),
        gas(fourth.density_left, fourth.velocity, fourth.pressure),
    )
    .star();
    compare(star, [(1691.64, 5e-3), (8.68975, 5e-6), (14.2823, 5e-5), (31.0426, 5e-5)]);
}

fn compare(star: StarRegion, row: [(f64, f64); 4]) {
    let found = [star.pressure, star.velocity, star.density_left, star.density_right];
    for (value, (printed, tolerance)) in found.into_iter().zip(row) {
        assert!((value - printed).abs() <= tolerance, "{value} against printed {printed}");
    }
}

#[test]
fn agrees_with_bisection_to_1e_12() {
    for (left, right) in toro() {
        let star = solve(left, right).star();
        let (pressure, velocity) = bisected(&left, &right);
        assert!((star.pressure - pressure).abs() <= 1e-12 * pressure, "{} against {pressure}", star.pressure);
        assert!((star.velocity - velocity).abs() <= 1e-12 * (1.0 + velocity.abs()), "{}", star.velocity);
    }
}

/// Mass, momentum and energy over a box that holds all waves change by the fluxes through its ends alone.
#[test]
fn conserves_mass_momentum_and_energy() {
    for (left, right) in toro() {
        let riemann = solve(left, right);
        let (time, reach) = (0.01, 1.0);
        let mut edges = riemann.breaks(time);
        edges.insert(0, -reach);
        edges.push(reach);
        let totals = edges.windows(2).fold([0.0; 3], |mut totals, edge| {
            // Midpoint rule with 4000 cells a piece: error below 1e-7 of the whole in the fans, zero elsewhere.
            let cells = 4000;
            let width = (edge[1] - edge[0]) / f64::from(cells);
            for cell in 0..cells {
                let sample = riemann.sample(time, edge[0] + (f64::from(cell) + 0.5) * width).unwrap();
                (0..3).for_each(|field| totals[field] += width * sample.value[field]);
            }
            totals
        });
        let conserved = |s: &GasState| {
            let kinetic = 0.5 * s.density * s.velocity * s.velocity;
            [s.density, s.density * s.velocity, s.pressure / 0.4 + kinetic]
        };
        let flux = |s: &GasState| {
            let [mass, momentum, energy] = conserved(s);
            [momentum, mass * s.velocity * s.velocity + s.pressure, s.velocity * (energy + s.pressure)]
        };
        for field in 0..3 {
            let before = reach * (conserved(&left)[field] + conserved(&right)[field]);
            let inflow = time * (flux(&left)[field] - flux(&right)[field]);
            let size = reach * (conserved(&left)[field].abs() + conserved(&right)[field].abs()) + inflow.abs();
            assert!((totals[field] - before - inflow).abs() <= 1e-7 * size, "field {field}: {totals:?}");
        }
    }
}

/// Wave speeds of check-values: test 1 has a left rarefaction and a right shock, test 5 two shocks.
#[test]
fn wave_speeds_agree_with_an_independent_computation() {
    let (left, right) = toro()[0];
    let speeds = solve(left, right).breaks(1.0);
    let expected = [-1.183_215_956_62, -0.070_272_812_561_2, 0.927_452_620_049, 1.752_155_732_03];
    assert_eq!(speeds.len(), expected.len());
    for (speed, expected) in speeds.iter().zip(expected) {
        assert!((speed - expected).abs() <= 1e-11, "{speed} against {expected}");
    }
}

#[test]
fn slopes_match_differences_inside_the_fan() {
    let (left, right) = toro()[0];
    // The mirrored problem has its fan on the right.
    for riemann in [solve(left, right), solve(right.mirrored(), left.mirrored())] {
        let breaks = riemann.breaks(0.2);
        let fan = if riemann.star().velocity > 0.0 { [breaks[0], breaks[1]] } else { [breaks[2], breaks[3]] };
        let x = 0.4 * fan[0] + 0.6 * fan[1];
        let h = 1e-5;
        let (below, above) = (riemann.sample(0.2, x - h).unwrap(), riemann.sample(0.2, x + h).unwrap());
        let slope = riemann.sample(0.2, x).unwrap().slope;
        for (field, slope) in slope.into_iter().enumerate() {
            let difference = (above.value[field] - below.value[field]) / (2.0 * h);
            assert!((slope - difference).abs() <= 1e-7 * difference.abs(), "{slope} against {difference}");
        }
    }
}

#[test]
fn tells_a_vacuum_and_bad_states() {
    let error = Riemann::new(gas(1.0, -20.0, 0.4), gas(1.0, 20.0, 0.4), GAMMA, 0.0, 0.0).unwrap_err();
    assert!(matches!(error, ExactError::Vacuum { separation, .. } if separation == 40.0), "{error}");
    let error = Riemann::new(gas(-1.0, 0.0, 1.0), gas(1.0, 0.0, 1.0), GAMMA, 0.0, 0.0).unwrap_err();
    assert_eq!(error.to_string(), "the left density is -1, but it must be positive and finite");
    assert!(Riemann::new(gas(1.0, 0.0, f64::NAN), gas(1.0, 0.0, 1.0), GAMMA, 0.0, 0.0).is_err());
    assert!(Riemann::new(gas(1.0, 0.0, 1.0), gas(1.0, 0.0, 1.0), 1.0, 0.0, 0.0).is_err());
}
