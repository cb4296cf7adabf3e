//! What is trusted: reading back what was written gives the same expression.

use super::super::{Expression, Scope};

#[test]
fn what_is_written_reads_back_alike() {
    let scope = Scope::new(["x", "y", "a"]);
    for text in [
        "1 + 0.1*sin(pi*x)*cos(2*pi*y)",
        "-x",
        "-(x + y)",
        "(x + y)*(x - y)",
        "x/(y*a)",
        "2/3*x",
        "(-x)^a",
        "-x^2",
        "x^(-a)",
        "(x^y)^a",
        "x^(2/3)",
        "sqrt(x^2)",
        "sqrt(2)*x",
        "1/sqrt(x)",
        "(x < y)*a",
        "if(x >= 1, -x, y - (x - a))",
        "1e-30*x",
        "6.02e23",
        "(2/3)^x",
        "(x/y)^a",
        "-1.5 + x",
        "x - 2*(y - x)",
        "max(x, -y)",
        "(1 - x)^3/(2 - y)^2",
        "0.1*x^2*y",
        "(x < y) == (y < a)",
        "(sin(x))^2",
    ] {
        let expression = Expression::parse(text, &scope).unwrap();
        let written = expression.to_string();
        let again =
            Expression::parse(&written, &scope).unwrap_or_else(|error| panic!("{text} -> {}", error.rendered()));
        assert_eq!(expression, again, "{text} -> {written}");
    }
}
