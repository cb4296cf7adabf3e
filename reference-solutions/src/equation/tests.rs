//! What is trusted: exact solutions need no source; the sample values of the manufactured solutions of Roy, Nelson, Smith and Ober
//! (2004, Int. J. Numer. Meth. Fluids 44:599-620), whose constants stand below and whose sources were computed apart with 14 digits.

use super::*;
use crate::expression::{Expression, Scope};

fn parse(text: &str) -> Expression {
    Expression::parse(text, &Scope::new(["x", "y", "z", "t"])).unwrap_or_else(|error| panic!("{}", error.rendered()))
}

fn parameters(given: &[(&str, &[&str])]) -> Parameters {
    given.iter().map(|(name, values)| (name.to_string(), values.iter().map(|text| parse(text)).collect())).collect()
}

fn solution(given: &[(&str, &str)]) -> Solution {
    given.iter().map(|(name, text)| (name.to_string(), parse(text))).collect()
}

/// phi0 + phix f(a_x pi x) + phiy f(a_y pi y) + phixy f(a_xy pi x y), the form of Roy et al.
fn roy(functions: [&str; 3], c: [&str; 7]) -> String {
    let [f, g, h] = functions;
    format!(
        "{} + ({})*{f}({}*pi*x) + ({})*{g}({}*pi*y) + ({})*{h}({}*pi*x*y)",
        c[0], c[1], c[4], c[2], c[5], c[3], c[6]
    )
}

fn roy_solution(constants: [[&str; 7]; 4]) -> Solution {
    let functions = [["sin", "cos", "cos"], ["sin", "cos", "cos"], ["cos", "sin", "cos"], ["cos", "sin", "sin"]];
    let names = ["density", "velocity_x", "velocity_y", "pressure"];
    let texts = functions.into_iter().zip(constants).map(|(f, c)| roy(f, c));
    names.iter().zip(texts).map(|(name, text)| (name.to_string(), parse(&text))).collect()
}

pub(crate) fn roy_supersonic() -> Solution {
    roy_solution([
        ["1", "0.15", "-0.1", "0", "1", "0.5", "0"],
        ["800", "50", "-30", "0", "1.5", "0.6", "0"],
        ["800", "-75", "40", "0", "0.5", "2/3", "0"],
        ["1e5", "0.2e5", "0.5e5", "0", "2", "1", "0"],
    ])
}

pub(crate) fn roy_subsonic() -> Solution {
    roy_solution([
        ["1", "0.1", "0.15", "0.08", "0.75", "1.0", "1.25"],
        ["70", "4", "-12", "7", "5/3", "1.5", "0.6"],
        ["90", "-20", "4", "-11", "1.5", "1.0", "0.9"],
        ["1e5", "-0.3e5", "0.2e5", "-0.25e5", "1.0", "1.25", "0.75"],
    ])
}

fn check_sources(equation: &str, given: Parameters, solution: &Solution, samples: &[(f64, f64, [f64; 4])]) {
    let sources = Equation::named(equation).unwrap().source_terms(2, &given, solution).unwrap();
    for (x, y, expected) in samples {
        for ((name, source), expected) in sources.iter().zip(expected) {
            let value = source.evaluate(&[("x", *x), ("y", *y)]).unwrap();
            // The samples have 14 digits; cancellation among terms a hundred times larger costs two.
            assert!(
                (value - expected).abs() <= 1e-12 * expected.abs(),
                "{equation} {name} at ({x}, {y}): {value} {expected}"
            );
        }
    }
}

#[test]
fn roy_supersonic_euler_sources() {
    let samples = [
        (0.5, 0.5, [-47.794366832675, -147531.02522096, 71500.078350060, -90923635.986815]),
        (0.25, 0.75, [488.52992401908, 412419.49754206, 305952.55204439, -170869169.92114]),
    ];
    check_sources("euler", parameters(&[("gamma", &["1.4"])]), &roy_supersonic(), &samples);
}

#[test]
fn roy_subsonic_navier_stokes_sources() {
    let samples = [
        (0.5, 0.5, [-76.101170147518, 67893.298787358, -50111.080838692, 3867207.6588890]),
        (0.25, 0.75, [-28.747560159261, 26484.215625169, -85557.049235655, -19956612.774602]),
    ];
    let gas =
        parameters(&[("gamma", &["1.4"]), ("gas_constant", &["287"]), ("viscosity", &["10"]), ("prandtl", &["1.0"])]);
    check_sources("navier_stokes", gas, &roy_subsonic(), &samples);
}

#[test]
fn exact_solutions_need_no_source() {
    type Case<'a> = (&'a str, usize, &'a [(&'a str, &'a [&'a str])], &'a [(&'a str, &'a str)]);
    let cases: [Case; 10] = [
        ("advection", 1, &[("velocity", &["1.3"])], &[("u", "sin(2*pi*(x - 1.3*t))")]),
        // Variable velocity: u = f(x exp(-t)) for a = x.
        ("advection", 1, &[("velocity", &["x"])], &[("u", "cos(x*exp(-t))")]),
        ("diffusion", 2, &[("diffusivity", &["0.1"])], &[("u", "exp(-0.5*t)*sin(x)*sin(2*y)")]),
        // Heat flows through varying nu: nu u_x constant in x.
        ("diffusion", 1, &[("diffusivity", &["exp(x)"])], &[("u", "exp(-x)")]),
        ("dispersion", 1, &[("dispersion", &["0.5"])], &[("u", "sin(2*x + 4*t)")]),
        // Travelling front of viscous Burgers (tanh profile).
        ("burgers", 1, &[("viscosity", &["0.1"])], &[("u", "1 - tanh((x - t)/0.2)")]),
        // Still water over a bed.
        (
            "shallow_water",
            2,
            &[("gravity", &["9.81"]), ("bed", &["0.2*exp(-x^2 - y^2)"])],
            &[("depth", "1 - 0.2*exp(-x^2 - y^2)"), ("velocity_x", "0"), ("velocity_y", "0")],
        ),
        // Entropy wave.
        (
            "euler",
            1,
            &[("gamma", &["1.4"])],
            &[("density", "1 + 0.2*sin(x - 0.7*t)"), ("velocity_x", "0.7"), ("pressure", "1.1")],
        ),
        // Taylor and Green.
        (
            "incompressible",
            2,
            &[("viscosity", &["0.05"])],
            &[
                ("u", "cos(x)*sin(y)*exp(-0.1*t)"),
                ("v", "-sin(x)*cos(y)*exp(-0.1*t)"),
                ("p", "-(cos(2*x) + cos(2*y))/4*exp(-0.2*t)"),
            ],
        ),
        ("poisson", 3, &[], &[("u", "x*y + y*z - x^2 + z^2")]),
    ];
    for (name, dimensions, given, fields) in cases {
        let equation = Equation::named(name).unwrap();
        let sources = equation.source_terms(dimensions, &parameters(given), &solution(fields)).unwrap();
        for (field, source) in sources {
            let value = source.evaluate(&[("x", 0.37), ("y", 0.81), ("z", -0.4), ("t", 0.23)]).unwrap();
            assert!(value.abs() < 1e-14 * 20.0, "{name} {field}: {value:e}");
        }
    }
}

#[test]
fn fields_and_primitives_give_the_same_source() {
    let gas =
        parameters(&[("gamma", &["1.4"]), ("gas_constant", &["287"]), ("viscosity", &["10"]), ("prandtl", &["0.7"])]);
    let equation = Equation::named("navier_stokes").unwrap();
    let fields = equation.solution_fields(2, &gas, &roy_subsonic()).unwrap();
    assert_eq!(
        fields.iter().map(|(name, _)| name.as_str()).collect::<Vec<_>>(),
        ["density", "momentum_x", "momentum_y", "energy"]
    );
    let from_primitives = equation.source_terms(2, &gas, &roy_subsonic()).unwrap();
    let from_fields = equation.source_terms(2, &gas, &fields.into_iter().collect()).unwrap();
    for ((name, a), (_, b)) in from_primitives.iter().zip(&from_fields) {
        let at = [("x", 0.3), ("y", 0.6)];
        let (a, b) = (a.evaluate(&at).unwrap(), b.evaluate(&at).unwrap());
        assert!((a - b).abs() < 1e-11 * a.abs(), "{name}: {a} {b}");
    }
}

#[test]
fn a_defined_equation_works_like_a_built_in_one() {
    let definition = Definition {
        name: "my_transport".into(),
        dimensions: vec![1],
        fields: vec!["u".into()],
        parameters: vec![("a".into(), None), ("nu".into(), Some(0.07))],
        residuals: vec!["d(u,t) + a*d(u,x) - nu*d(u,x,x)".into()],
    };
    let mine = Equation::defined(definition.clone()).unwrap();
    let built_in = Equation::named("advection_diffusion").unwrap();
    let u = solution(&[("u", "sin(x*t) + x^3*exp(-t)")]);
    let given = parameters(&[("velocity", &["1.3"]), ("diffusivity", &["0.07"])]);
    let a = mine.source_terms(1, &parameters(&[("a", &["1.3"])]), &u).unwrap();
    let b = built_in.source_terms(1, &given, &u).unwrap();
    let at = [("x", 0.7), ("t", 0.3)];
    let (a, b) = (a[0].1.evaluate(&at).unwrap(), b[0].1.evaluate(&at).unwrap());
    assert!((a - b).abs() < 1e-15 * 20.0, "{a} {b}");
    assert!(!mine.steady());

    let taken = Definition { fields: vec!["x".into()], ..definition.clone() };
    assert!(Equation::defined(taken).unwrap_err().to_string().contains("already taken by a coordinate"));
    let wrong = Definition { residuals: vec!["d(u,t) + a*d(v,x)".into()], ..definition };
    assert!(Equation::defined(wrong).unwrap_err().to_string().contains("`v` is not declared"));
}

#[test]
fn bad_requests_are_refused_with_place_and_remedy() {
    let sources = |name: &str, dimensions, given: &[(&str, &[&str])], fields: &[(&str, &str)]| {
        Equation::named(name)
            .and_then(|equation| equation.source_terms(dimensions, &parameters(given), &solution(fields)))
            .unwrap_err()
            .to_string()
    };
    let u = [("u", "x")];
    assert!(sources("heat", 1, &[], &u).contains("there is no equation `heat`"));
    assert!(sources("diffusion", 1, &[("diffusivity", &["-0.1"])], &u).contains("exp(+|nu| k^2 t)"));
    assert!(sources("diffusion", 1, &[], &u).contains("needs the parameter `diffusivity`"));
    assert!(sources("diffusion", 1, &[("nu", &["1"])], &u).contains("no parameter `nu`"));
    assert!(sources("advection", 2, &[("velocity", &["1"])], &u).contains("takes 2 values here, 1 given"));
    assert!(sources("dispersion", 2, &[("dispersion", &["1"])], &u).contains("not in 2"));
    assert!(sources("advection", 1, &[("velocity", &["1"])], &[("v", "x")]).contains("`v` is no field"));
    let gas: [(&str, &[&str]); 1] = [("gamma", &["1.4"])];
    assert!(sources("euler", 1, &gas, &[("density", "1")]).contains("or give all of density, velocity_x, pressure"));
    assert!(sources("euler", 1, &[("gamma", &["1"])], &[("density", "1")]).contains("above 1"));
}
