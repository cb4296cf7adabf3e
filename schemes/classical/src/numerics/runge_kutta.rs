//! Explicit Runge-Kutta methods as their tableaus.

/// An explicit Runge-Kutta method: u_i = u + dt sum_j a_ij k_j, k_i = f(t + c_i dt, u_i), u_new = u + dt sum_i b_i
/// k_i.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tableau {
    /// Short name, as it stands in the names of schemes.
    pub name: &'static str,
    /// Row i holds a_i1 to a_i(i-1).
    pub a: &'static [&'static [f64]],
    /// Weights of the stages.
    pub b: &'static [f64],
    /// Times of the stages, in steps.
    pub c: &'static [f64],
}

/// Forward Euler, order 1.
pub const RK1: Tableau = Tableau { name: "rk1", a: &[&[]], b: &[1.0], c: &[0.0] };

/// The midpoint rule, order 2 (Runge 1895).
pub const RK2: Tableau = Tableau { name: "rk2", a: &[&[], &[0.5]], b: &[0.0, 1.0], c: &[0.0, 0.5] };

/// Kutta's method of order 3 (Kutta 1901).
pub const RK3: Tableau = Tableau {
    name: "rk3",
    a: &[&[], &[0.5], &[-1.0, 2.0]],
    b: &[1.0 / 6.0, 2.0 / 3.0, 1.0 / 6.0],
    c: &[0.0, 0.5, 1.0],
};

/// The classical method of order 4 (Kutta 1901).
pub const RK4: Tableau = Tableau {
    name: "rk4",
    a: &[&[], &[0.5], &[0.0, 0.5], &[0.0, 0.0, 1.0]],
    b: &[1.0 / 6.0, 1.0 / 3.0, 1.0 / 3.0, 1.0 / 6.0],
    c: &[0.0, 0.5, 0.5, 1.0],
};

/// Heun's method, order 2: the optimal strong-stability-preserving one of two stages (Shu & Osher 1988, J. Comput.
/// Phys. 77:439-471).
pub const SSPRK2: Tableau = Tableau { name: "ssprk2", a: &[&[], &[1.0]], b: &[0.5, 0.5], c: &[0.0, 1.0] };

/// The optimal strong-stability-preserving method of three stages, order 3 (Shu & Osher 1988, J. Comput. Phys.
/// 77:439-471, eq. 2.18), in Butcher's form.
pub const SSPRK3: Tableau = Tableau {
    name: "ssprk3",
    a: &[&[], &[1.0], &[0.25, 0.25]],
    b: &[1.0 / 6.0, 1.0 / 6.0, 2.0 / 3.0],
    c: &[0.0, 1.0, 0.5],
};

impl Tableau {
    /// Number of stages.
    pub fn stages(&self) -> usize {
        self.b.len()
    }

    /// The vectors A^m 1 for m = 0 to 3: what the stages make of the powers of time.
    pub fn powers_of_a(&self) -> [Vec<f64>; 4] {
        let product = |v: &Vec<f64>| -> Vec<f64> {
            self.a.iter().map(|row| row.iter().zip(v).map(|(a, v)| a * v).sum()).collect()
        };
        let ones = vec![1.0; self.stages()];
        let first = product(&ones);
        let second = product(&first);
        let third = product(&second);
        [ones, first, second, third]
    }
}

/// target += factor * values, over all fields.
pub fn add_scaled(target: &mut [Vec<f64>], factor: f64, values: &[Vec<f64>]) {
    if factor == 0.0 {
        return;
    }
    for (target, values) in target.iter_mut().zip(values) {
        for (t, v) in target.iter_mut().zip(values) {
            *t += factor * v;
        }
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: the order conditions (Butcher 2016, Numerical Methods for Ordinary Differential Equations, section
    //! 31).
    use super::*;

    #[test]
    fn order_conditions_hold_up_to_the_order_and_not_beyond() {
        for (tableau, order) in [(RK1, 1), (RK2, 2), (RK3, 3), (RK4, 4), (SSPRK2, 2), (SSPRK3, 3)] {
            let c = tableau.c;
            let a = |v: &[f64]| -> Vec<f64> {
                tableau.a.iter().map(|row| row.iter().zip(v).map(|(a, v)| a * v).sum()).collect()
            };
            let weigh = |v: &[f64]| -> f64 { tableau.b.iter().zip(v).map(|(b, v)| b * v).sum() };
            let power = |p: i32| -> Vec<f64> { c.iter().map(|c| c.powi(p)).collect() };
            let times = |x: &[f64], y: &[f64]| -> Vec<f64> { x.iter().zip(y).map(|(x, y)| x * y).collect() };
            // (order of the condition, left side, right side)
            let conditions = [
                (1, weigh(&power(0)), 1.0),
                (2, weigh(c), 0.5),
                (3, weigh(&power(2)), 1.0 / 3.0),
                (3, weigh(&a(c)), 1.0 / 6.0),
                (4, weigh(&power(3)), 0.25),
                (4, weigh(&times(c, &a(c))), 0.125),
                (4, weigh(&a(&power(2))), 1.0 / 12.0),
                (4, weigh(&a(&a(c))), 1.0 / 24.0),
            ];
            let holds = |(_, left, right): &(i32, f64, f64)| (left - right).abs() < 4.0 * f64::EPSILON;
            for condition in conditions.iter().filter(|condition| condition.0 <= order) {
                assert!(holds(condition), "{}: {condition:?}", tableau.name);
            }
            let next: Vec<_> = conditions.iter().filter(|condition| condition.0 == order + 1).collect();
            assert!(next.is_empty() || next.iter().any(|condition| !holds(condition)), "{}", tableau.name);
            // Stage times are the row sums.
            let sums = a(&power(0));
            assert!(sums.iter().zip(c).all(|(s, c)| (s - c).abs() < 4.0 * f64::EPSILON), "{}", tableau.name);
        }
    }
}
