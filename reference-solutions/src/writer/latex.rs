//! LaTeX, with the symbols that the field uses.

use super::Listing;
use crate::expression::{Expression, Function, Node, Number};

const GREEK: [&str; 23] = [
    "alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa", "lambda", "mu", "nu", "xi",
    "rho", "sigma", "tau", "upsilon", "phi", "chi", "psi", "omega", "Omega",
];

const SYMBOLS: [(&str, &str); 19] = [
    ("density", "\\rho"),
    ("pressure", "p"),
    ("temperature", "T"),
    ("velocity", "V"),
    ("momentum", "m"),
    ("energy", "E"),
    ("total_enthalpy", "(\\rho H)"),
    ("stress", "\\tau"),
    ("depth", "h"),
    ("discharge", "q"),
    ("diffusivity", "\\nu"),
    ("viscosity", "\\mu"),
    ("dispersion", "\\mu"),
    ("conductivity", "k"),
    ("sound_speed", "c"),
    ("gravity", "g"),
    ("gas_constant", "R"),
    ("prandtl", "\\mathrm{Pr}"),
    ("bed", "b"),
];

#[derive(Clone, Copy, PartialEq, PartialOrd)]
enum Strength {
    Weak,
    Sum,
    Product,
    Power,
    Atom,
}

pub(super) fn write(listing: &Listing) -> String {
    let mut lines: Vec<String> = listing.title.iter().map(|line| format!("% {line}")).collect();
    lines.push("\\begin{align*}".into());
    let parts = listing.named_parts();
    let parts = parts.iter().map(|(part, definition)| (name(part), definition));
    let outputs = listing.outputs.iter().map(|output| (name(&output.name), &output.expression));
    let equations: Vec<String> =
        parts.chain(outputs).map(|(left, right)| format!("  {left} &= {}", text(right).0)).collect();
    lines.push(equations.join(" \\\\\n"));
    lines.push("\\end{align*}".into());
    lines.join("\n") + "\n"
}

/// `u_d_xx` becomes u_{xx}, `velocity_x` V_{x}, `alpha` \alpha, `S_u` S_{u}.
fn name(plain: &str) -> String {
    let (plain, derivative) = plain.split_once("_d_").unwrap_or((plain, ""));
    if let Some(output) = plain.strip_prefix("S_") {
        return format!("S_{{{}}}", name(output));
    }
    let whole = SYMBOLS.iter().find(|(known, _)| *known == plain).map(|(_, symbol)| symbol.to_string());
    let (stem, index) = match &whole {
        Some(symbol) => (symbol.clone(), ""),
        None => plain.split_once('_').map_or((symbol(plain), ""), |(stem, index)| (symbol(stem), index)),
    };
    let index = index.replace('_', "\\_");
    let derivative = if derivative.is_empty() { String::new() } else { format!("_{{{derivative}}}") };
    match (index.is_empty(), derivative.is_empty()) {
        (true, _) => format!("{stem}{derivative}"),
        (false, true) => format!("{stem}_{{{index}}}"),
        // A comma sets the derivative apart from the component.
        (false, false) => format!("{stem}_{{{index},{}", derivative.trim_start_matches("_{")),
    }
}

fn symbol(word: &str) -> String {
    let known = SYMBOLS.iter().find(|(known, _)| *known == word).map(|(_, symbol)| symbol.to_string());
    known.unwrap_or_else(|| match word {
        _ if GREEK.contains(&word) => format!("\\{word}"),
        _ if word.len() == 1 => word.to_string(),
        _ => format!("\\mathrm{{{word}}}"),
    })
}

fn text(expression: &Expression) -> (String, Strength) {
    match expression.node() {
        Node::Number(value) => number(*value),
        Node::Pi => ("\\pi".into(), Strength::Atom),
        Node::Symbol(symbol) => (name(symbol), Strength::Atom),
        Node::Named(part, _) => (name(part), Strength::Atom),
        Node::Sum(constant, terms) => (sum(*constant, terms), Strength::Sum),
        Node::Product(coefficient, factors) => product(*coefficient, factors),
        Node::Power(base, exponent) => {
            (format!("{}^{{{}}}", at_least(base, Strength::Atom), text(exponent).0), Strength::Power)
        }
        Node::Call(function, arguments) => call(*function, arguments),
        Node::Derivative(operand, names) => {
            let by: Vec<String> = names.iter().map(|by| format!("\\partial {by}")).collect();
            let order = if names.len() == 1 { String::new() } else { format!("^{}", names.len()) };
            let operand = at_least(operand, Strength::Atom);
            (format!("\\frac{{\\partial{order} {operand}}}{{{}}}", by.join("\\,")), Strength::Atom)
        }
    }
}

fn at_least(expression: &Expression, needed: Strength) -> String {
    let (text, strength) = text(expression);
    if strength < needed { format!("\\left({text}\\right)") } else { text }
}

fn number(value: Number) -> (String, Strength) {
    let strength = if value.is_negative() { Strength::Sum } else { Strength::Atom };
    let plain = value.to_string();
    let text = match (plain.split_once('/'), plain.split_once('e')) {
        (Some((n, d)), _) => match n.strip_prefix('-') {
            Some(n) => format!("-\\frac{{{n}}}{{{d}}}"),
            None => format!("\\frac{{{n}}}{{{d}}}"),
        },
        (None, Some((mantissa, exponent))) => format!("{mantissa} \\times 10^{{{exponent}}}"),
        (None, None) => plain,
    };
    (text, strength)
}

/// What is added first, what is subtracted last.
fn sum(constant: Number, terms: &[(Number, Expression)]) -> String {
    let size = |value: Number| if value.is_negative() { value.negated() } else { value };
    let constant_piece = (!constant.is_zero()).then(|| (constant.is_negative(), number(size(constant)).0));
    let term_pieces = terms.iter().map(|(coefficient, term)| {
        (coefficient.is_negative(), at_least(&term.scaled(size(*coefficient)), Strength::Product))
    });
    let (subtracted, added): (Vec<_>, Vec<_>) =
        constant_piece.into_iter().chain(term_pieces).partition(|(minus, _)| *minus);
    let mut result = added.into_iter().map(|(_, piece)| piece).collect::<Vec<_>>().join(" + ");
    for (_, piece) in subtracted {
        result += &if result.is_empty() { format!("-{piece}") } else { format!(" - {piece}") };
    }
    result
}

fn product(coefficient: Number, factors: &[(Expression, Number)]) -> (String, Strength) {
    if coefficient.is_negative() {
        return (format!("-{}", product(coefficient.negated(), factors).0), Strength::Sum);
    }
    let (mut above, mut below, mut denominator) = (Vec::new(), Vec::new(), String::new());
    match coefficient {
        _ if coefficient.is_one() => {}
        Number::Fraction(n, d) if coefficient.to_string().contains('/') => {
            above.extend((n != 1).then(|| n.to_string()));
            denominator = d.to_string();
        }
        _ => above.push(number(coefficient).0),
    }
    for (base, exponent) in factors {
        match exponent.is_negative() {
            true => below.push((base, exponent.negated())),
            false => above.push(factor(base, *exponent)),
        }
    }
    // A denominator that is one factor needs no parentheses.
    let below: Vec<String> = match below.as_slice() {
        [(base, exponent)] if denominator.is_empty() && exponent.is_one() => vec![text(base).0],
        many => {
            let factors = many.iter().map(|(base, exponent)| factor(base, *exponent));
            std::iter::once(denominator).filter(|number| !number.is_empty()).chain(factors).collect()
        }
    };
    match (above.as_slice(), below.as_slice()) {
        ([one], []) => (one.clone(), Strength::Power),
        (many, []) => (many.join("\\,"), Strength::Product),
        ([], below) => (format!("\\frac{{1}}{{{}}}", below.join("\\,")), Strength::Product),
        (above, below) => (format!("\\frac{{{}}}{{{}}}", above.join("\\,"), below.join("\\,")), Strength::Product),
    }
}

fn factor(base: &Expression, exponent: Number) -> String {
    if exponent == Number::HALF {
        return format!("\\sqrt{{{}}}", text(base).0);
    }
    // sin^2 x would need the exponent inside; parentheses are always right.
    match exponent.is_one() {
        true => at_least(base, Strength::Power),
        false => format!("{}^{{{}}}", at_least(base, Strength::Atom), exponent),
    }
}

fn call(function: Function, arguments: &[Expression]) -> (String, Strength) {
    let texts: Vec<String> = arguments.iter().map(|argument| text(argument).0).collect();
    let in_parentheses = |name: &str| (format!("{name}\\left({}\\right)", texts.join(", ")), Strength::Power);
    match function {
        Function::Exp => (format!("e^{{{}}}", texts[0]), Strength::Power),
        Function::Abs => (format!("\\left|{}\\right|", texts[0]), Strength::Atom),
        Function::If => {
            let rows = format!("{} & \\text{{if }} {} \\\\ {} & \\text{{otherwise}}", texts[1], texts[0], texts[2]);
            (format!("\\begin{{cases}} {rows} \\end{{cases}}"), Strength::Atom)
        }
        Function::Log => in_parentheses("\\ln"),
        Function::Sin
        | Function::Cos
        | Function::Tan
        | Function::Sinh
        | Function::Cosh
        | Function::Tanh
        | Function::Min
        | Function::Max => in_parentheses(&format!("\\{}", function.name())),
        Function::Asin => in_parentheses("\\arcsin"),
        Function::Acos => in_parentheses("\\arccos"),
        Function::Atan => in_parentheses("\\arctan"),
        Function::Heaviside => in_parentheses("H"),
        _ if function.is_comparison() => {
            let sign = match function {
                Function::LessEqual => "\\le",
                Function::GreaterEqual => "\\ge",
                Function::Equal => "=",
                Function::NotEqual => "\\ne",
                _ => function.name(),
            };
            // Bare in `cases` above; in parentheses, as Iverson writes it, where it is used as a number.
            (format!("{} {sign} {}", texts[0], texts[1]), Strength::Weak)
        }
        _ => in_parentheses(&format!("\\operatorname{{{}}}", function.name())),
    }
}
