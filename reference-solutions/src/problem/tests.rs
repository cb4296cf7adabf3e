//! Trusted: closed forms written out here, and mistakes that must be refused.

use super::*;
use std::f64::consts::PI;

#[test]
fn every_problem_of_the_catalogue_is_read_and_checked() {
    let read = |name: &&str| Problem::named(name).err().map(|error| format!("{name}: {error}"));
    let refused: Vec<String> = Problem::catalogue().iter().filter_map(read).collect();
    assert!(refused.is_empty(), "{}", refused.join("\n"));
    for name in Problem::catalogue() {
        let problem = Problem::named(name).unwrap();
        assert_eq!(problem.name(), *name, "the file's name and the problem's name must agree");
        assert!(!problem.title().is_empty() && !problem.reference().is_empty(), "{name}");
    }
}

/// Values, slopes, averages and the integral of the travelling sine in closed form.
#[test]
fn travelling_sine_agrees_with_its_closed_form() {
    let problem = Problem::named("travelling-sine").unwrap();
    let (k, time) = (4.0 * PI / 1.3, 0.67);
    let angle = |x: f64| k * (x - 0.83 * time) + 0.7;
    let (x, upper) = ([-0.13, 0.21, 0.9], [-0.05, 0.21, 1.0]);
    let mut out = [0.0; 3];
    problem.evaluate(Quantity::Value(0), time, &[&x], &mut out).unwrap();
    (0..3).for_each(|i| assert!((out[i] - 0.31 - 0.9 * angle(x[i]).sin()).abs() <= 1e-15 * 4.0, "{}", out[i]));
    problem.evaluate(Quantity::Derivative { field: 0, axis: 0 }, time, &[&x], &mut out).unwrap();
    (0..3).for_each(|i| assert!((out[i] - 0.9 * k * angle(x[i]).cos()).abs() <= 1e-14 * k, "{}", out[i]));
    problem.average(Quantity::Value(0), time, &[&x], &[&upper], &mut out).unwrap();
    for i in [0, 2] {
        let mean = 0.31 + 0.9 * (angle(x[i]).cos() - angle(upper[i]).cos()) / (k * (upper[i] - x[i]));
        assert!((out[i] - mean).abs() <= 1e-14, "{} against {mean}", out[i]);
    }
    assert!((out[1] - 0.31 - 0.9 * angle(0.21).sin()).abs() <= 4e-15, "equal bounds are a point");
    assert!((problem.functional(0, time).unwrap() - 0.31 * 1.3).abs() <= 1e-14);
    problem.evaluate(Quantity::Source(0), time, &[&x], &mut out).unwrap();
    assert_eq!(out, [0.0; 3]);
}

#[test]
fn both_signs_of_the_velocity_are_usable() {
    let problem = Problem::named("travelling-sine").unwrap();
    let reversed = problem.with_parameters(&BTreeMap::from([("velocity".into(), vec![-0.83])])).unwrap();
    assert_eq!(reversed.parameters()["velocity"], [-0.83]);
    let mut out = [0.0];
    reversed.evaluate(Quantity::Value(0), 0.3, &[&[0.2]], &mut out).unwrap();
    let expected = 0.31 + 0.9 * (4.0 * PI / 1.3 * (0.2 + 0.83 * 0.3) + 0.7).sin();
    assert!((out[0] - expected).abs() <= 4e-15, "{} against {expected}", out[0]);
}

/// The check on reading shows that the solution still satisfies its equation for every combination of signs.
#[test]
fn every_velocity_may_have_every_sign() {
    let mut tried = 0;
    for name in Problem::catalogue() {
        let problem = Problem::named(name).unwrap();
        let Some(velocity) = problem.parameters().get("velocity") else { continue };
        for signs in 0..1_u32 << velocity.len() {
            let turned = |(axis, value): (usize, &f64)| if signs >> axis & 1 == 1 { -value } else { *value };
            let values = velocity.iter().enumerate().map(turned).collect();
            let turned = problem.with_parameters(&BTreeMap::from([("velocity".to_string(), values)]));
            assert!(turned.is_ok(), "{name}: {}", turned.err().unwrap());
            tried += 1;
        }
    }
    assert!(tried >= 30, "{tried}");
}

#[test]
fn problems_can_be_shared_among_threads() {
    fn shareable<T: Clone + Send + Sync>() {}
    shareable::<Problem>();
}

#[test]
fn refuses_parameters_that_do_not_fit() {
    let problem = Problem::named("travelling-decaying-sine").unwrap();
    let refusal = |name: &str, values: &[f64]| {
        let error = problem.with_parameters(&BTreeMap::from([(name.to_string(), values.to_vec())]));
        error.expect_err("it must be refused").to_string()
    };
    assert!(refusal("diffusivity", &[-0.1]).contains("ill-posed"), "{}", refusal("diffusivity", &[-0.1]));
    assert!(refusal("velocity", &[1.0, 2.0]).contains("2 values given, but it has 1"));
    assert!(refusal("viscosity", &[1.0]).contains("known: diffusivity, velocity, amplitude"));
    assert!(refusal("amplitude", &[f64::NAN]).contains("not finite"));
}

#[test]
fn near_names_are_told() {
    let error = Problem::named("traveling-sin").err().unwrap().to_string();
    assert!(error.starts_with("no problem is called \"traveling-sin\" (near it: travelling-sine"), "{error}");
    assert!(matches!(Problem::resolve("absent.toml", Path::new(".")), Err(ProblemError::Unreadable { .. })));
}

const FILE: &str = r#"
name = "own"
title = "A wave"
reference = "own"
equation = "advection_diffusion"
dimensions = 1

[parameters]
velocity = [0.83]
diffusivity = 0.02

[solution]
u = "0.4 + exp(-diffusivity*k^2*t)*sin(k*(x - velocity*t) + 0.2)"

[names]
k = "2*pi/1.3"

[domain]
lower = [-0.2]
upper = [1.1]
boundaries = ["periodic"]

[time]
start = 0.0
final = 0.37
"#;

fn refusal(from: &str, to: &str) -> String {
    assert!(FILE.contains(from), "{from}");
    Problem::from_text("own.toml", &FILE.replace(from, to)).expect_err("it must be refused").to_string()
}

/// A change of one part in ten thousand of the decay, of the speed, or of a sign is seen.
#[test]
fn refuses_a_solution_that_does_not_fit_its_equation() {
    assert!(Problem::from_text("own.toml", FILE).is_ok());
    for (from, to) in [
        ("exp(-diffusivity", "exp(-1.0001*diffusivity"),
        ("velocity*t)", "1.0001*velocity*t)"),
        ("- velocity*t", "+ velocity*t"),
    ] {
        let error = refusal(from, to);
        assert!(error.starts_with("own.toml:13: the solution does not fit its equation: at x = "), "{error}");
    }
}

#[test]
fn tells_place_value_and_remedy_of_bad_entries() {
    let cases = [
        ("title =", "titel =", "own.toml:3: unknown field `titel`"),
        ("velocity = [0.83]", "velocity = [0.83, 1.0]", "own.toml:9: velocity: 2 values given, but it has 1"),
        ("diffusivity = 0.02", "diffusivity = -0.02", "own.toml:10: diffusivity: the parameter"),
        ("diffusivity = 0.02", "viscosity = 0.02", "own.toml:10: viscosity: the equation has no such parameter"),
        ("2*pi/1.3", "2*pi/1.3 + 0*j", "own.toml:16: k: column 14 of `2*pi/1.3 + 0*j`: the name `j` is not declared"),
        ("2*pi/1.3", "2*pi/1.4", "own.toml:21: u is not periodic in x"),
        ("k = \"2*pi/1.3\"", "k = \"m\"\nm = \"k\"", "own.toml:16: k: it is defined by itself (k uses m uses k)"),
        ("final = 0.37", "final = -0.37", "own.toml:23: time: the final time -0.37 must be finite and after 0"),
        ("\"periodic\"", "[\"periodic\", \"value\"]", "own.toml:21: domain.boundaries: a direction is periodic"),
        ("dimensions = 1", "dimensions = 4", "own.toml:6: dimensions: 4 given; write 1, 2 or 3"),
        ("advection_diffusion", "advektion", "own.toml:5: equation: there is no equation `advektion`"),
        ("0.4 + exp", "0.4 + sqrt(x)*exp", "own.toml:13: the solution leaves its domain at x = "),
    ];
    for (from, to, beginning) in cases {
        let error = refusal(from, to);
        assert!(error.starts_with(beginning), "{error}\nshould begin with\n{beginning}");
    }
}

/// An incompressible velocity with a divergence has no source that would repair it.
#[test]
fn refuses_a_velocity_with_a_divergence() {
    let text = catalogue::text("manufactured-incompressible-walls").unwrap();
    let error =
        Problem::from_text("walls.toml", &text.replace("u = \"beat", "u = \"1.001*beat")).err().unwrap().to_string();
    assert!(error.contains("the velocity is not free of divergence: div u = "), "{error}");
}

/// Fields and sources of Roy, Nelson, Smith & Ober (2004) at two points, computed apart with 14 digits: density, velocities,
/// pressure, then the sources of mass, momentum and energy.
#[test]
fn solutions_of_roy_and_others_have_their_sources() {
    type Sample = (&'static str, [f64; 2], [f64; 4], [f64; 4]);
    let samples: [Sample; 4] = [
        (
            "roy-supersonic-euler",
            [0.5, 0.5],
            [1.0792893218813, 817.72178149055, 781.60800756239, 130000.0],
            [-47.794366832675, -147531.02522096, 71500.078350060, -90923635.986815],
        ),
        (
            "roy-supersonic-euler",
            [0.25, 0.75],
            [1.0677976739415, 841.50094267436, 770.70903506165, 135355.33905933],
            [488.52992401908, 412419.49754206, 305952.55204439, -170869169.92114],
        ),
        (
            "roy-navier-stokes",
            [0.5, 0.5],
            [1.1368335718927, 86.722327043557, 99.777670002131, 104588.33482474],
            [-76.101170147518, 67893.298787358, -50111.080838692, 3867207.6588890],
        ),
        (
            "roy-navier-stokes",
            [0.25, 0.75],
            [1.0087670961524, 91.517597046749, 75.684680231689, 71999.725668969],
            [-28.747560159261, 26484.215625169, -85557.049235655, -19956612.774602],
        ),
    ];
    for (name, [x, y], [density, u, v, pressure], sources) in samples {
        let problem = Problem::named(name).unwrap();
        let at = |quantity| {
            let mut out = [0.0];
            problem.evaluate(quantity, 0.0, &[&[x], &[y]], &mut out).unwrap();
            out[0]
        };
        let energy = pressure / 0.4 + 0.5 * density * (u * u + v * v);
        for (field, expected) in [density, density * u, density * v, energy].into_iter().enumerate() {
            let value = at(Quantity::Value(field));
            assert!((value - expected).abs() <= 1e-13 * expected.abs() * 4.0, "{name}: {value} against {expected}");
        }
        for (field, expected) in sources.into_iter().enumerate() {
            let value = at(Quantity::Source(field));
            // Fourteen digits, less the two that the largest terms lose by cancelling.
            assert!((value - expected).abs() <= 2e-12 * expected.abs(), "{name}: {value} against {expected}");
        }
    }
}
