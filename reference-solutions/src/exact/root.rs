//! One root finder for all exact solvers.

/// Root of an increasing function in `[lower, upper]` by Newton's method, safeguarded by bisection.
///
/// `function` gives the value and the derivative. The bracket shrinks at every step, and a Newton step that leaves it
/// is replaced by its midpoint; the search ends when the step no longer changes the result (about 1 ulp), at most
/// after 200 steps, by which bisection alone has met the spacing of doubles for brackets within 1e-20 to 1e20.
pub(super) fn increasing_root(mut lower: f64, mut upper: f64, function: impl Fn(f64) -> (f64, f64)) -> f64 {
    let mut position = 0.5 * (lower + upper);
    for _ in 0..200 {
        let (value, derivative) = function(position);
        if value == 0.0 {
            return position;
        }
        if value < 0.0 {
            lower = position;
        } else {
            upper = position;
        }
        let newton = position - value / derivative;
        let next = if newton > lower && newton < upper { newton } else { 0.5 * (lower + upper) };
        if next == position || (next - position).abs() <= f64::EPSILON * 0.5 * position.abs() {
            return next;
        }
        position = next;
    }
    position
}

#[cfg(test)]
mod tests {
    use super::increasing_root;

    /// The cube root of 2 is known to all digits; the second bracket makes Newton's first step leave it.
    #[test]
    fn finds_the_cube_root_of_two_from_any_bracket() {
        for (lower, upper) in [(0.0, 2.0), (-1.0e3, 1.0e3), (1.25, 1.26)] {
            let root = increasing_root(lower, upper, |x| (x * x * x - 2.0, 3.0 * x * x));
            assert!((root - 2.0_f64.cbrt()).abs() <= 2.0 * f64::EPSILON, "{root} from [{lower}, {upper}]");
        }
    }
}
