//! What is trusted: the equations themselves. A mode with the right frequency needs no source; linearised equations need one that is
//! quadratic in the amplitude.

use std::collections::BTreeMap;

use super::*;
use crate::expression::{Expression, Scope};

const POINT: [(&str, f64); 4] = [("x", 0.37), ("y", -0.81), ("z", 0.53), ("t", 0.29)];

fn numbers(parameters: &[(&str, &[f64])]) -> BTreeMap<String, Vec<f64>> {
    parameters.iter().map(|(name, values)| (name.to_string(), values.to_vec())).collect()
}

/// Largest source that `solution` needs at one point.
fn largest_source(
    equation: &str,
    dimensions: usize,
    parameters: &BTreeMap<String, Vec<f64>>,
    solution: &[(&str, String)],
) -> f64 {
    let equation = Equation::named(equation).unwrap();
    let known = equation.parameters().iter().map(|parameter| parameter.name.as_str()).collect::<Vec<_>>();
    let parameters = parameters.iter().filter(|(name, _)| known.contains(&name.as_str()));
    let parameters = parameters
        .map(|(name, values)| (name.clone(), values.iter().map(|v| Expression::from(*v)).collect()))
        .collect();
    let scope = Scope::new(["x", "y", "z", "t"]);
    let solution = solution.iter().map(|(name, text)| (name.to_string(), Expression::parse(text, &scope).unwrap()));
    let sources = equation.source_terms(dimensions, &parameters, &solution.collect()).unwrap();
    sources.iter().map(|(_, source)| source.evaluate(&POINT).unwrap().abs()).fold(0.0, f64::max)
}

fn phase(k: &[f64], omega: f64) -> String {
    let terms = k.iter().zip(["x", "y", "z"]).map(|(k, x)| format!("({k})*{x}"));
    format!("({} - ({omega})*t)", terms.collect::<Vec<_>>().join(" + "))
}

#[test]
fn scalar_modes_need_no_source() {
    type Case<'a> = (&'a str, &'a [(&'a str, &'a [f64])], &'a [f64]);
    let cases: [Case; 6] = [
        ("advection", &[("velocity", &[1.3, -0.7])], &[2.1, 0.9]),
        ("diffusion", &[("diffusivity", &[0.11])], &[2.1, 0.9, -1.7]),
        ("advection_diffusion", &[("velocity", &[1.3]), ("diffusivity", &[0.07])], &[-2.3]),
        ("dispersion", &[("dispersion", &[0.21])], &[1.9]),
        ("dispersion", &[("dispersion", &[-0.21])], &[-1.9]),
        ("advection", &[("velocity", &[-1.1, 0.4, 0.9])], &[1.2, 3.1, -0.6]),
    ];
    for (name, parameters, k) in cases {
        let parameters = numbers(parameters);
        let branches = exact_branches(&Equation::named(name).unwrap(), &parameters, k).unwrap();
        let omega = branches[0].omega;
        let mode = format!("exp(({})*t)*cos{}", omega.im, phase(k, omega.re));
        let source = largest_source(name, k.len(), &parameters, &[("u", mode.clone())]);
        assert!(source < 1e-14 * 10.0, "{name}: {source:e}");
        // The same mode with a frequency that is 1e-6 off does need one: the test can fail.
        let off = largest_source(name, k.len(), &parameters, &[("u", mode + " + 1e-6*t*x")]);
        assert!(off > 1e-8, "{name}");
    }
}

#[test]
fn acoustic_branches_need_no_source() {
    let (density, speed, k) = (1.3, 2.2, [1.7, -0.8]);
    let size = f64::hypot(k[0], k[1]);
    let parameters = numbers(&[("density", &[density]), ("sound_speed", &[speed]), ("velocity", &[0.4, 0.9])]);
    let branches = exact_branches(&Equation::named("acoustics").unwrap(), &parameters, &k).unwrap();
    assert_eq!(branches.iter().map(|b| b.name.as_str()).collect::<Vec<_>>(), ["acoustic +", "acoustic -", "shear"]);
    for (branch, sign) in branches.iter().zip([1.0, -1.0, 0.0]) {
        let wave = format!("sin{}", phase(&k, branch.omega.re));
        let amplitudes = match sign {
            0.0 => [0.0, -k[1], k[0]],
            _ => [density * speed * size * sign, k[0], k[1]],
        };
        let field = |name, amplitude: f64| (name, format!("({amplitude})*{wave}"));
        let solution = [field("p", amplitudes[0]), field("u", amplitudes[1]), field("v", amplitudes[2])];
        let source = largest_source("acoustics", 2, &parameters, &solution);
        assert!(source < 1e-13, "{}: {source:e}", branch.name);
    }
}

#[test]
fn linearised_branches_need_a_source_of_second_order_in_the_amplitude() {
    let (density, pressure, gamma, k) = (1.3, 0.9, 1.6, [1.7, -0.8]);
    let parameters =
        numbers(&[("gamma", &[gamma]), ("density", &[density]), ("pressure", &[pressure]), ("velocity", &[0.4, 0.9])]);
    let speed = (gamma * pressure / density).sqrt();
    let size = f64::hypot(k[0], k[1]);
    let branches = exact_branches(&Equation::named("euler").unwrap(), &parameters, &k).unwrap();
    for (branch, sign) in branches.iter().zip([1.0, -1.0, 0.0, 0.0]) {
        let amplitudes = match branch.name.as_str() {
            "entropy" => [1.0, 0.0, 0.0, 0.0],
            "shear" => [0.0, -k[1], k[0], 0.0],
            _ => [density / speed * sign * size, k[0], k[1], density * speed * sign * size],
        };
        let source = |amplitude: f64| {
            let wave = format!("{amplitude}*sin{}", phase(&k, branch.omega.re));
            let means = [density, 0.4, 0.9, pressure];
            let names = ["density", "velocity_x", "velocity_y", "pressure"];
            let fields = names.iter().zip(means).zip(amplitudes);
            let fields: Vec<_> = fields.map(|((name, mean), a)| (*name, format!("{mean} + ({a})*{wave}"))).collect();
            largest_source("euler", 2, &parameters, &fields)
        };
        let (coarse, fine) = (source(1e-3), source(1e-4));
        assert!(fine < 1e-14 || (coarse / fine - 100.0).abs() < 3.0, "{}: {coarse:e} {fine:e}", branch.name);
    }
}

#[test]
fn gravity_waves_and_vorticity_of_shallow_water() {
    let parameters = numbers(&[("gravity", &[9.81]), ("depth", &[1.7]), ("velocity", &[0.3, -0.2])]);
    let k = [0.9, 1.4];
    let branches = exact_branches(&Equation::named("shallow_water").unwrap(), &parameters, &k).unwrap();
    let size = f64::hypot(k[0], k[1]);
    let speed = (9.81f64 * 1.7).sqrt();
    for (branch, sign) in branches.iter().zip([1.0, -1.0, 0.0]) {
        let amplitudes =
            if sign == 0.0 { [0.0, -k[1], k[0]] } else { [1.7 * size, speed * sign * k[0], speed * sign * k[1]] };
        let source = |amplitude: f64| {
            let wave = format!("{amplitude}*sin{}", phase(&k, branch.omega.re));
            let fields = ["depth", "velocity_x", "velocity_y"].iter().zip([1.7, 0.3, -0.2]).zip(amplitudes);
            let fields: Vec<_> = fields.map(|((name, mean), a)| (*name, format!("{mean} + ({a})*{wave}"))).collect();
            largest_source("shallow_water", 2, &parameters, &fields)
        };
        let (coarse, fine) = (source(1e-3), source(1e-4));
        assert!(fine < 1e-14 || (coarse / fine - 100.0).abs() < 3.0, "{}: {coarse:e} {fine:e}", branch.name);
    }
}

#[test]
fn what_cannot_be_answered_is_refused_with_the_reason() {
    let branches = |name: &str, parameters: &[(&str, &[f64])], k: &[f64]| {
        exact_branches(&Equation::named(name).unwrap(), &numbers(parameters), k).unwrap_err().to_string()
    };
    assert!(
        branches("diffusion", &[("diffusivity", &[-0.1])], &[1.0]).contains("exp(+|nu| k^2 t), without bound in k")
    );
    assert!(branches("advection", &[("velocity", &[1.0])], &[1.0, 2.0]).contains("needs `velocity` as 2 finite"));
    assert!(branches("poisson", &[], &[1.0]).contains("steady"));
    assert!(branches("dispersion", &[("dispersion", &[1.0])], &[1.0, 2.0]).contains("not in 2"));
    assert!(branches("advection", &[("velocity", &[f64::NAN])], &[1.0]).contains("finite"));
}
