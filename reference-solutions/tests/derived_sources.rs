//! Source terms of every equation against SymPy's, which derives them itself from the equations as the contract states them.
//!
//! What is trusted: SymPy's differentiation, and NumPy's extended precision. Compared at 1000 random points; tolerance 1e-13 of the
//! largest value of an output: a source is a sum of terms that cancel, each with a rounding error of a few 1e-16 of its own size.

mod python;

use std::collections::BTreeMap;

use gridassay_reference::equation::{Definition, Equation, Parameters, Solution};
use gridassay_reference::expression::{Expression, Program, Scope};

type Texts<'a> = &'a [(&'a str, &'a [&'a str])];

struct Case<'a> {
    equation: &'a str,
    dimensions: usize,
    parameters: Texts<'a>,
    solution: &'a [(&'a str, &'a str)],
}

const GAS: Texts = &[("gamma", &["1.4"])];
const VISCOUS_GAS: Texts =
    &[("gamma", &["1.4"]), ("gas_constant", &["287"]), ("viscosity", &["10"]), ("prandtl", &["0.71"])];
const VARYING_GAS: Texts =
    &[("gamma", &["1.3"]), ("gas_constant", &["2.7"]), ("viscosity", &["0.3 + 0.1*sin(x*t)"]), ("prandtl", &["0.71"])];
const WAVES: [&str; 3] = [
    "1.3 + 0.2*sin(1.1*pi*x + t)",
    "1.3 + 0.2*sin(1.1*pi*x - t)*cos(0.7*y)",
    "1.3 + 0.2*sin(1.1*pi*x)*cos(0.7*y + t)*sin(0.9*z + 0.4)",
];

const CASES: &[Case] = &[
    Case {
        equation: "advection",
        dimensions: 1,
        parameters: &[("velocity", &["1.3"])],
        solution: &[("u", "exp(-x^2)*sin(3*t)")],
    },
    Case {
        equation: "advection",
        dimensions: 2,
        parameters: &[("velocity", &["-y", "x*t"])],
        solution: &[("u", "atan(x*y) + x^2.5*t")],
    },
    Case {
        equation: "advection",
        dimensions: 3,
        parameters: &[("velocity", &["0.3", "z", "sin(x)"])],
        solution: &[("u", WAVES[2])],
    },
    Case {
        equation: "diffusion",
        dimensions: 1,
        parameters: &[("diffusivity", &["0.1 + x^2"])],
        solution: &[("u", "tanh(x - t)")],
    },
    Case {
        equation: "diffusion",
        dimensions: 2,
        parameters: &[("diffusivity", &["0.1"])],
        solution: &[("u", "sqrt(1 + x*y)*exp(-t)")],
    },
    Case {
        equation: "diffusion",
        dimensions: 3,
        parameters: &[("diffusivity", &["1 + x*y*z*t"])],
        solution: &[("u", WAVES[2])],
    },
    Case {
        equation: "advection_diffusion",
        dimensions: 1,
        parameters: &[("velocity", &["2"]), ("diffusivity", &["0.01"])],
        solution: &[("u", "log(2 + x + t^2)/(1 + x)")],
    },
    Case {
        equation: "advection_diffusion",
        dimensions: 2,
        parameters: &[("velocity", &["cos(y)", "exp(-t)"]), ("diffusivity", &["1/(1 + x^2 + y^2)"])],
        solution: &[("u", "cosh(x)*sinh(y)*t^3")],
    },
    Case {
        equation: "advection_diffusion",
        dimensions: 3,
        parameters: &[("velocity", &["1", "2", "3"]), ("diffusivity", &["0.2"])],
        solution: &[("u", "exp(-x^2 - 2*y^2 - z^2 - t)")],
    },
    Case {
        equation: "dispersion",
        dimensions: 1,
        parameters: &[("dispersion", &["0.3"])],
        solution: &[("u", "x^4*exp(-x*t)")],
    },
    Case {
        equation: "dispersion",
        dimensions: 1,
        parameters: &[("dispersion", &["1 + x"])],
        solution: &[("u", "asinh(x) + erf(x)*t")],
    },
    Case {
        equation: "burgers",
        dimensions: 1,
        parameters: &[("viscosity", &["0.05 + 0.02*x"])],
        solution: &[("u", "1 - tanh(3*(x - t))")],
    },
    Case { equation: "burgers", dimensions: 2, parameters: &[("viscosity", &["0"])], solution: &[("u", WAVES[1])] },
    Case { equation: "burgers", dimensions: 3, parameters: &[("viscosity", &["0.2"])], solution: &[("u", WAVES[2])] },
    Case { equation: "poisson", dimensions: 1, parameters: &[("conductivity", &["1"])], solution: &[("u", "x^x")] },
    Case {
        equation: "poisson",
        dimensions: 2,
        parameters: &[("conductivity", &["1 + x*y"])],
        solution: &[("u", "atan2(y + 1, x + 2)*x")],
    },
    Case {
        equation: "poisson",
        dimensions: 3,
        parameters: &[("conductivity", &["exp(x - y + z)"])],
        solution: &[("u", "sin(x)*cos(y)*z^2")],
    },
    Case {
        equation: "acoustics",
        dimensions: 1,
        parameters: &[("density", &["1.2"]), ("sound_speed", &["3.4"]), ("velocity", &["0.5"])],
        solution: &[("p", "sin(x - 2*t)"), ("u", "cos(2*x + t)")],
    },
    Case {
        equation: "acoustics",
        dimensions: 2,
        parameters: &[("density", &["1 + 0.1*x"]), ("sound_speed", &["2 + sin(y)"]), ("velocity", &["0.5", "-y"])],
        solution: &[("p", WAVES[1]), ("u", "x*y*t"), ("v", "exp(x - y)")],
    },
    Case {
        equation: "acoustics",
        dimensions: 3,
        parameters: &[("density", &["1.2"]), ("sound_speed", &["3.4"]), ("velocity", &["0.1", "0.2", "0.3"])],
        solution: &[("p", WAVES[2]), ("u", "x*y*z*t"), ("v", "exp(x - y)"), ("w", "z^3 - t")],
    },
    Case {
        equation: "shallow_water",
        dimensions: 1,
        parameters: &[("gravity", &["9.81"]), ("bed", &["0.2*exp(-x^2)"])],
        solution: &[("depth", WAVES[0]), ("velocity_x", "0.3*cos(x - t)")],
    },
    Case {
        equation: "shallow_water",
        dimensions: 2,
        parameters: &[("gravity", &["9.81"]), ("bed", &["0.2*sin(x*y)"])],
        solution: &[("depth", WAVES[1]), ("discharge_x", "0.3*cos(x - t)"), ("discharge_y", "x*y^2")],
    },
    Case {
        equation: "euler",
        dimensions: 1,
        parameters: GAS,
        solution: &[
            ("density", WAVES[0]),
            ("velocity_x", "0.5 + 0.1*cos(x*t)"),
            ("pressure", "1 + 0.3*exp(-x)*sin(t)"),
        ],
    },
    Case {
        equation: "euler",
        dimensions: 2,
        parameters: GAS,
        solution: &[
            ("density", WAVES[1]),
            ("momentum_x", "0.5 + 0.1*cos(x*t)"),
            ("momentum_y", "x*y"),
            ("energy", "3 + 0.3*exp(-x)*sin(t)*y"),
        ],
    },
    Case {
        equation: "euler",
        dimensions: 3,
        parameters: GAS,
        solution: &[
            ("density", WAVES[2]),
            ("velocity_x", "0.5 + 0.1*cos(x*t)"),
            ("velocity_y", "x*y"),
            ("velocity_z", "sin(z - t)"),
            ("pressure", "2 + sin(x + y + z)"),
        ],
    },
    Case {
        equation: "navier_stokes",
        dimensions: 1,
        parameters: VARYING_GAS,
        solution: &[("density", WAVES[0]), ("momentum_x", "0.5 + 0.1*cos(x*t)"), ("energy", "3 + 0.3*exp(-x)*sin(t)")],
    },
    // Roy et al. (2004), subsonic, made unsteady.
    Case {
        equation: "navier_stokes",
        dimensions: 2,
        parameters: VISCOUS_GAS,
        solution: &[
            ("density", "1 + 0.1*sin(0.75*pi*x) + 0.15*cos(pi*y)*cos(t) + 0.08*cos(1.25*pi*x*y)"),
            ("velocity_x", "70 + 4*sin(5/3*pi*x) - 12*cos(1.5*pi*y) + 7*cos(0.6*pi*x*y)"),
            ("velocity_y", "90 - 20*cos(1.5*pi*x) + 4*sin(pi*y)*exp(-t) - 11*cos(0.9*pi*x*y)"),
            ("pressure", "1e5 - 0.3e5*cos(pi*x) + 0.2e5*sin(1.25*pi*y) - 0.25e5*sin(0.75*pi*x*y)"),
        ],
    },
    Case {
        equation: "navier_stokes",
        dimensions: 3,
        parameters: VARYING_GAS,
        solution: &[
            ("density", WAVES[2]),
            ("velocity_x", "0.5 + 0.1*cos(x*y)"),
            ("velocity_y", "x*z - t"),
            ("velocity_z", "sin(z - t)*y"),
            ("pressure", "2 + sin(x + y + z)"),
        ],
    },
    Case {
        equation: "incompressible",
        dimensions: 2,
        parameters: &[("viscosity", &["0.1"])],
        solution: &[("u", "cos(x)*sin(2*y)*exp(-t)"), ("v", "x^2 - y*t"), ("p", "sin(x*y)")],
    },
    Case {
        equation: "incompressible",
        dimensions: 3,
        parameters: &[("viscosity", &["0.1 + 0.05*x"])],
        solution: &[("u", "cos(x)*z"), ("v", "exp(y - z*t)"), ("w", "x*y*z"), ("p", "sin(x*y) + z^2")],
    },
    Case {
        equation: "my_korteweg",
        dimensions: 1,
        parameters: &[("a", &["6"])],
        solution: &[("u", "1/cosh(x - 4*t)^2")],
    },
    Case {
        equation: "my_system",
        dimensions: 2,
        parameters: &[("k", &["0.3"])],
        solution: &[("u", "1 + sin(x*y - t)"), ("v", "exp(-x)*cos(y)")],
    },
];

fn equation(name: &str) -> Equation {
    let definition = |fields: &[&str], parameter: &str, residuals: &[&str]| Definition {
        name: name.to_string(),
        dimensions: vec![1, 2],
        fields: fields.iter().map(|field| field.to_string()).collect(),
        parameters: vec![(parameter.to_string(), None)],
        residuals: residuals.iter().map(|residual| residual.to_string()).collect(),
    };
    let defined = match name {
        "my_korteweg" => definition(&["u"], "a", &["d(u,t) + a*u*d(u,x) + d(u,x,x,x)"]),
        "my_system" => definition(
            &["u", "v"],
            "k",
            &[
                "d(u,t) - d((1 + u^2)*d(u,x), x) - u*(1 - v)",
                "d(v,t) - k*(d(v,x,x) + d(v,y,y)) + v*(1 - u) + d(u*v, y)",
            ],
        ),
        _ => return Equation::named(name).unwrap(),
    };
    Equation::defined(defined).unwrap()
}

/// Points in (0.1, 1.1)^4, from a fixed seed.
fn points() -> Vec<[f64; 4]> {
    let mut state = 20_261_201_u64;
    let mut random = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        0.1 + (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    (0..1000).map(|_| [random(), random(), random(), random()]).collect()
}

#[test]
fn derived_sources_agree_with_sympy() {
    let scope = Scope::new(["x", "y", "z", "t"]);
    let parse = |text: &str| Expression::parse(text, &scope).unwrap_or_else(|error| panic!("{}", error.rendered()));
    let points = points();
    let mut asked = Vec::new();
    for case in CASES {
        let parameters: Parameters = case
            .parameters
            .iter()
            .map(|(name, texts)| (name.to_string(), texts.iter().map(|text| parse(text)).collect()))
            .collect();
        let solution: Solution = case.solution.iter().map(|(name, text)| (name.to_string(), parse(text))).collect();
        let sources = equation(case.equation).source_terms(case.dimensions, &parameters, &solution).unwrap();
        let sources: Vec<Expression> = sources.into_iter().map(|(_, source)| source).collect();
        let program = Program::new(&sources, &["x", "y", "z", "t"]).unwrap();
        let at_points: Vec<Vec<f64>> = points.iter().map(|point| program.at(point)).collect();
        let values: Vec<Vec<f64>> =
            (0..sources.len()).map(|k| at_points.iter().map(|values| values[k]).collect()).collect();
        asked.push(serde_json::json!({
            "equation": case.equation,
            "dimensions": case.dimensions,
            "parameters": case.parameters.iter().cloned().collect::<BTreeMap<_, _>>(),
            "solution": case.solution.iter().cloned().collect::<BTreeMap<_, _>>(),
            "points": points,
            "values": values,
        }));
    }
    let covered: Vec<&str> = CASES.iter().map(|case| case.equation).collect();
    let missing: Vec<String> = gridassay_reference::equation::all()
        .iter()
        .flat_map(|equation| {
            equation.dimensions().iter().map(|d| (equation.name().to_string(), *d)).collect::<Vec<_>>()
        })
        .filter(|(name, d)| !CASES.iter().any(|case| case.equation == name && case.dimensions == *d))
        .map(|(name, d)| format!("{name} {d}-D"))
        .collect();
    assert!(missing.is_empty() && !covered.is_empty(), "not compared: {missing:?}");
    let report = python::ask("derived_sources.py", &serde_json::to_string(&asked).unwrap());
    assert_eq!(report.lines().count(), CASES.len(), "{report}");
}
