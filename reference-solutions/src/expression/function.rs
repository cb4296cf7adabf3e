//! The functions that an expression may call: names, numbers of arguments, values.

use num_complex::Complex64;

/// A function of one to three real arguments. Comparisons have the value 1 or 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[allow(missing_docs)] // each name is its own documentation
pub enum Function {
    Exp,
    Log,
    Sin,
    Cos,
    Tan,
    Asin,
    Acos,
    Atan,
    Atan2,
    Sinh,
    Cosh,
    Tanh,
    Asinh,
    Acosh,
    Atanh,
    Erf,
    Erfc,
    Min,
    Max,
    Abs,
    Sign,
    Heaviside,
    If,
    Less,
    LessEqual,
    Greater,
    GreaterEqual,
    Equal,
    NotEqual,
}

use Function::*;

/// The callable functions by name. `sqrt` and `ln` are written otherwise inside: x^(1/2) and `log`.
pub(crate) const NAMED: [(&str, Function); 23] = [
    ("exp", Exp),
    ("log", Log),
    ("sin", Sin),
    ("cos", Cos),
    ("tan", Tan),
    ("asin", Asin),
    ("acos", Acos),
    ("atan", Atan),
    ("atan2", Atan2),
    ("sinh", Sinh),
    ("cosh", Cosh),
    ("tanh", Tanh),
    ("asinh", Asinh),
    ("acosh", Acosh),
    ("atanh", Atanh),
    ("erf", Erf),
    ("erfc", Erfc),
    ("min", Min),
    ("max", Max),
    ("abs", Abs),
    ("sign", Sign),
    ("heaviside", Heaviside),
    ("if", If),
];

impl Function {
    /// The function called `name`; `sqrt` is no function here but the power 1/2.
    pub fn named(name: &str) -> Option<Function> {
        let name = if name == "ln" { "log" } else { name };
        NAMED.iter().find(|(known, _)| *known == name).map(|(_, function)| *function)
    }

    /// How it is written: `sin`, or `<` for a comparison.
    pub fn name(self) -> &'static str {
        match self {
            Less => "<",
            LessEqual => "<=",
            Greater => ">",
            GreaterEqual => ">=",
            Equal => "==",
            NotEqual => "!=",
            _ => NAMED.iter().find(|(_, function)| *function == self).map_or("", |(name, _)| name),
        }
    }

    /// Number of arguments.
    pub fn arguments(self) -> usize {
        match self {
            If => 3,
            Atan2 | Min | Max => 2,
            _ if self.is_comparison() => 2,
            _ => 1,
        }
    }

    /// Whether this is one of the six comparisons.
    pub fn is_comparison(self) -> bool {
        matches!(self, Less | LessEqual | Greater | GreaterEqual | Equal | NotEqual)
    }

    /// The value at real arguments; NaN outside the domain. Within 1 ulp of the true value, `erfc` within 2 (measured against 50-digit
    /// values), and the same bits on every processor. `sign(0) = 0`, `heaviside(0) = 1/2`. Minimum and maximum pass NaN on.
    pub fn value(self, a: &[f64]) -> f64 {
        let truth = |holds: bool| if holds { 1.0 } else { 0.0 };
        match self {
            Exp => super::kernels::exp(a[0]),
            Log => super::kernels::log(a[0]),
            Sin => super::kernels::sin(a[0]),
            Cos => super::kernels::cos(a[0]),
            Tan => libm::tan(a[0]),
            Asin => libm::asin(a[0]),
            Acos => libm::acos(a[0]),
            Atan => libm::atan(a[0]),
            Atan2 => super::compensated::atan2(a[0], a[1]),
            Sinh => super::compensated::sinh(a[0]),
            Cosh => super::compensated::cosh(a[0]),
            Tanh => super::compensated::tanh(a[0]),
            Asinh => super::compensated::asinh(a[0]),
            Acosh => super::compensated::acosh(a[0]),
            Atanh => super::compensated::atanh(a[0]),
            Erf => libm::erf(a[0]),
            Erfc => libm::erfc(a[0]),
            Min if a[0].is_nan() || a[1].is_nan() => f64::NAN,
            Max if a[0].is_nan() || a[1].is_nan() => f64::NAN,
            Min => a[0].min(a[1]),
            Max => a[0].max(a[1]),
            Abs => a[0].abs(),
            Sign | Heaviside if a[0].is_nan() => f64::NAN,
            Sign => truth(a[0] > 0.0) - truth(a[0] < 0.0),
            Heaviside => 0.5 * (truth(a[0] > 0.0) + truth(a[0] >= 0.0)),
            If => {
                if a[0] != 0.0 {
                    a[1]
                } else {
                    a[2]
                }
            }
            Less => truth(a[0] < a[1]),
            LessEqual => truth(a[0] <= a[1]),
            Greater => truth(a[0] > a[1]),
            GreaterEqual => truth(a[0] >= a[1]),
            Equal => truth(a[0] == a[1]),
            NotEqual => truth(a[0] != a[1]),
        }
    }

    /// The value at complex arguments (principal branches); `None` for functions without a complex meaning. `abs` is the modulus;
    /// comparisons and `if` look at real parts.
    pub fn complex_value(self, a: &[Complex64]) -> Option<Complex64> {
        Some(match self {
            Exp => a[0].exp(),
            Log => a[0].ln(),
            Sin => a[0].sin(),
            Cos => a[0].cos(),
            Tan => a[0].tan(),
            Asin => a[0].asin(),
            Acos => a[0].acos(),
            Atan => a[0].atan(),
            Sinh => a[0].sinh(),
            Cosh => a[0].cosh(),
            Tanh => a[0].tanh(),
            Asinh => a[0].asinh(),
            Acosh => a[0].acosh(),
            Atanh => a[0].atanh(),
            Abs => a[0].norm().into(),
            If => {
                if a[0].re != 0.0 {
                    a[1]
                } else {
                    a[2]
                }
            }
            // Real functions of real arguments keep their meaning.
            _ if a.iter().all(|z| z.im == 0.0) => {
                let reals: Vec<f64> = a.iter().map(|z| z.re).collect();
                self.value(&reals).into()
            }
            _ => return None,
        })
    }
}
