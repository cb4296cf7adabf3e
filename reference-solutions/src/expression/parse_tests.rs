//! What is trusted: values worked out by hand, and messages read by eye.

use super::super::{Expression, ParseError, Scope};

fn value(text: &str) -> f64 {
    let scope = Scope::new(["x", "y", "nu", "alpha"]);
    Expression::parse(text, &scope).unwrap().evaluate(&[("x", 2.0), ("y", 0.5), ("nu", 0.1), ("alpha", 3.0)]).unwrap()
}

fn error(text: &str) -> ParseError {
    Expression::parse(text, &Scope::new(["x", "y", "nu", "alpha"])).unwrap_err()
}

#[test]
fn operators_bind_as_in_mathematics() {
    for (text, expected) in [
        ("-2^2", -4.0),
        ("2^3^2", 512.0),
        ("2^-1", 0.5),
        ("2^-x^2", 0.0625),
        ("6/3/2", 1.0),
        ("1 - 2 - 3", -4.0),
        ("-x*y", -1.0),
        ("2 - -x", 4.0),
        ("+x", 2.0),
        ("(1 < x)*3 + (x <= 1)", 3.0),
        ("if(x > 1, y, 7)", 0.5),
        ("1.5e1 + .5 + 2.", 17.5),
        ("max(x, y) + min(x, y) + abs(-3) + sign(-x) + heaviside(0)", 5.0),
        ("sqrt(4*x^2)", 4.0),
        ("atan2(-1, -1)", -2.356194490192345),
    ] {
        assert_eq!(value(text), expected, "{text}");
    }
}

#[test]
fn messages_point_at_the_character() {
    for (text, column, part) in [
        ("sin(2*x) + * y", 12, "expected a number, a name or `(`, found `*`"),
        ("1 + (x*2", 5, "never closed"),
        ("1 + x)*2", 6, "closes nothing"),
        ("2x", 2, "expected an operator"),
        ("sinn(x)", 1, "did you mean `sin`"),
        ("x + alhpa", 5, "did you mean `alpha`"),
        ("x + q", 5, "known: alpha, nu, x, y"),
        ("x**2", 2, "powers are written with `^`"),
        ("x − y", 3, "write `-` for minus"),
        ("sin", 1, "write sin(...)"),
        ("x(3)", 1, "`x*(...)`"),
        ("atan2(x)", 1, "takes 2 arguments, 1 given"),
        ("0 < x < 1", 7, "cannot be chained"),
        ("d(x, x)", 1, "only in the residual"),
        ("", 1, "found the end of the text"),
        ("sin()", 5, "found `)`"),
        ("π", 1, "write `pi`"),
    ] {
        let error = error(text);
        assert_eq!(error.column(), column, "{text}: {error}");
        assert!(error.to_string().contains(part), "{text}: {error}");
    }
}

#[test]
fn carets_stand_below_the_fault_also_after_wide_characters() {
    let error = error("x + β");
    assert_eq!(
        error.rendered(),
        "unexpected character `β`; names are made of the letters a-z, A-Z, digits and `_`\n  x + β\n      ^"
    );
    assert_eq!(
        super::super::Expression::parse("1 +\n foo", &Scope::new(["x"])).unwrap_err().rendered().lines().last(),
        Some("   ^^^")
    );
}

#[test]
fn deep_nesting_is_refused_before_the_stack_is_full() {
    for text in [
        format!("{}x{}", "(".repeat(100_000), ")".repeat(100_000)),
        "-".repeat(100_000) + "x",
        "x^".repeat(100_000) + "x",
    ] {
        assert!(error(&text).to_string().contains("nested more than 200 deep"));
    }
    assert!(value(&vec!["x"; 10_000].join(" + ")) == 20_000.0);
}

#[test]
fn residuals_differentiate_what_is_substituted() {
    let scope = Scope::new(["x", "t", "u", "a"]).with_derivatives(["x", "t"]);
    let residual = Expression::parse("d(u, t) + a*d(u*u, x) - d(d(u, x), x)", &scope).unwrap();
    let u = Expression::parse("exp(-t)*x^2", &scope).unwrap();
    let carried_out = residual.substitute(&[("u".to_string(), u)].into()).carried_out();
    // u = e^-t x^2 at x = 2, t = 0: u_t = -4, (u^2)_x = 4 x^3 = 32, u_xx = 2
    assert_eq!(carried_out.evaluate(&[("x", 2.0), ("t", 0.0), ("a", 0.5)]), Ok(-4.0 + 16.0 - 2.0));
    assert!(Expression::parse("d(u, a)", &scope).unwrap_err().to_string().contains("one of x, t, found `a`"));
}

#[test]
fn amplification_factors_are_complex() {
    let scope = Scope::new(["c", "theta"]).with_imaginary_unit();
    let factor = Expression::parse("1 - i*c*sin(theta) - c^2*(1 - cos(theta))", &scope).unwrap();
    let value = factor.evaluate_complex(&[("c", 0.5.into()), ("theta", std::f64::consts::FRAC_PI_2.into())]).unwrap();
    assert!((value - num_complex::Complex64::new(0.75, -0.5)).norm() < 1e-15);
}
