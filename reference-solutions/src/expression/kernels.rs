//! The elementary functions that the evaluator calls most.

/// e^x
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}

/// Natural logarithm.
pub fn log(x: f64) -> f64 {
    libm::log(x)
}

/// sin(x), x in radians.
pub fn sin(x: f64) -> f64 {
    libm::sin(x)
}

/// cos(x), x in radians.
pub fn cos(x: f64) -> f64 {
    libm::cos(x)
}
