//! What is trusted: a central difference with step h, whose own error is below h^2 |f'''| + eps |f| / h.

use super::super::{Expression, Scope};

#[test]
fn every_rule_agrees_with_a_central_difference() {
    let scope = Scope::new(["x", "y"]);
    for text in [
        "x^3 - 2*x/y",
        "exp(-x*y)",
        "log(x*y)",
        "sin(x*y)",
        "cos(x/y)",
        "tan(x)",
        "asin(x/2)",
        "acos(x/2)",
        "atan(x*y)",
        "atan2(x, y*x^2)",
        "sinh(x)",
        "cosh(x*y)",
        "tanh(x*y)",
        "asinh(x)",
        "acosh(1 + x)",
        "atanh(x/2)",
        "erf(x)",
        "erfc(x*y)",
        "min(x, x^2)",
        "max(x, x^2)",
        "abs(x - 1)",
        "if(x > 0.3, x^2, x)",
        "x^y",
        "y^x",
        "x^x",
        "x^2.5",
        "sqrt(1 + x^2)",
        "(x + y)^7/(1 + x)^3",
        "sign(x)*x",
        "heaviside(x)*x^2",
        "x^(2/3)",
    ] {
        let f = Expression::parse(text, &scope).unwrap();
        let slope = f.derivative("x").evaluate(&[("x", 0.7), ("y", 1.3)]).unwrap();
        let h = 1e-5;
        let at = |x: f64| f.evaluate(&[("x", x), ("y", 1.3)]).unwrap();
        let difference = (at(0.7 + h) - at(0.7 - h)) / (2.0 * h);
        let tolerance = 1e3 * h * h + f64::EPSILON * at(0.7).abs().max(1.0) / h;
        assert!((slope - difference).abs() <= tolerance * slope.abs().max(1.0), "{text}: {slope} {difference}");
    }
}

#[test]
fn derivatives_are_simplified_as_they_are_built() {
    let scope = Scope::new(["x", "y"]);
    for (text, expected) in [
        ("3*x^2 + y", "6*x"),
        ("y^2", "0"),
        ("sin(2*pi*x)", "2*pi*cos(2*pi*x)"),
        ("log(x)", "1/x"),
        ("x*y + y*x", "2*y"),
        ("sqrt(x)*sqrt(x)", "1"),
    ] {
        let derivative = Expression::parse(text, &scope).unwrap().derivative("x").simplified();
        assert_eq!(derivative.to_string(), expected, "{text}");
    }
}
