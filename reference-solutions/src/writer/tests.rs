//! What is trusted: whole texts, read by eye. That they compile and compute the same is tried with compilers in the tests folder.

use super::*;
use crate::expression::Scope;

fn listing(texts: &[&str]) -> Listing {
    let scope = Scope::new(["x", "t", "nu", "lambda"]);
    let outputs = texts.iter().enumerate().map(|(k, text)| Output {
        name: format!("S_{k}"),
        meaning: "rate, 1/s".into(),
        expression: Expression::parse(text, &scope).unwrap(),
    });
    let argument = |name: &str, meaning: &str| Argument { name: name.into(), meaning: meaning.into() };
    Listing {
        function: "source".into(),
        title: vec!["Example".into()],
        arguments: vec![
            argument("x", "coordinate, m"),
            argument("t", "time, s"),
            argument("nu", "m^2/s"),
            argument("lambda", "1/m"),
        ],
        outputs: outputs.collect(),
    }
}

#[test]
fn one_output_in_every_language() {
    let listing = listing(&["-nu*exp(-lambda*x)*(1 - 2*x)/3 - nu"]);
    let expected = [
        ("formula", "# Example\nS_0 = -nu - nu*(1 - 2*x)*exp(-lambda*x)/3\n"),
        (
            "latex",
            "% Example\n\\begin{align*}\n  S_{0} &= -\\nu - \\frac{\\nu\\,\\left(1 - 2\\,x\\right)\\,e^{-\\lambda\\,x}}{3}\n\\end{align*}\n",
        ),
        (
            "c",
            "/*\n * Example\n * Arguments:\n *   x: coordinate, m\n *   nu: m^2/s\n *   lambda_2: 1/m\n * Result:\n *   returned: S_0, rate, 1/s\n */\n#include <math.h>\n\ndouble source(double x, double nu, double lambda_2)\n{\n",
        ),
        (
            "fortran",
            "! Example\n! Arguments:\n!   x: coordinate, m\n!   nu: m^2/s\n!   lambda_2: 1/m\n! Result:\n!   result: S_0, rate, 1/s\npure function source(x, nu, lambda_2) result(s)\n    use, intrinsic :: iso_fortran_env, only: real64\n    implicit none\n    real(real64), intent(in) :: x, nu, lambda_2\n    real(real64) :: s\n",
        ),
        ("python", "import numpy as np\n\n\ndef source(x, nu, lambda_2):\n    \"\"\"\n    Example\n"),
        ("rust", "/// Example\n/// Arguments:\n///   x: coordinate, m\n"),
    ];
    for (language, start) in expected {
        let text = listing.write(language.parse().unwrap()).unwrap();
        assert!(text.starts_with(start), "{language}:\n{text}");
    }
}

#[test]
fn a_formula_reads_back() {
    let listing = listing(&["sin(x)^2/(1 + nu*x)^(1/3) - if(x < t, x, max(t, nu))"]);
    let formula = listing.write(Language::Formula).unwrap();
    let text = formula.lines().last().unwrap().trim_start_matches("S_0 = ");
    assert_eq!(Expression::parse(text, &Scope::new(["x", "t", "nu"])).unwrap(), listing.outputs[0].expression);
}

#[test]
fn what_cannot_be_written_is_told() {
    let bad = listing(&["x + 1/(1 - 1)"]);
    assert!(bad.write(Language::C).unwrap_err().to_string().contains("`S_0` contains a constant that is inf"));
    assert!("pascal".parse::<Language>().unwrap_err().to_string().contains("choose formula, latex"));
    let mut open = listing(&["x"]);
    open.arguments.clear();
    assert!(open.write(Language::Rust).unwrap_err().to_string().contains("`x` has no value"));
}
