//! Slope limiters: from the differences to the left, a = u_j - u_{j-1}, and to the right, b = u_{j+1} - u_j, the
//! slope (times the spacing) within cell j. Each vanishes at extrema (a b <= 0), is symmetric in a and b, and gives a
//! where a = b.

/// A slope limiter.
pub type Limiter = fn(f64, f64) -> f64;

/// The smaller of the two (Roe 1986, Annu. Rev. Fluid Mech. 18:337-365).
pub fn minmod(a: f64, b: f64) -> f64 {
    if a * b <= 0.0 {
        0.0
    } else if a.abs() < b.abs() {
        a
    } else {
        b
    }
}

/// The harmonic mean 2 a b / (a + b) (van Leer 1974, J. Comput. Phys. 14:361-370).
pub fn van_leer(a: f64, b: f64) -> f64 {
    if a * b <= 0.0 { 0.0 } else { 2.0 * a * b / (a + b) }
}

/// The steepest that keeps the total variation (Roe 1985; Sweby 1984, SIAM J. Numer. Anal. 21:995-1011).
pub fn superbee(a: f64, b: f64) -> f64 {
    let steep = minmod(a, 2.0 * b);
    let other = minmod(2.0 * a, b);
    if steep.abs() > other.abs() { steep } else { other }
}

/// The central slope, held within twice either difference (van Leer 1977, J. Comput. Phys. 23:276-299).
pub fn monotonised_central(a: f64, b: f64) -> f64 {
    minmod(0.5 * (a + b), minmod(2.0 * a, 2.0 * b))
}

#[cfg(test)]
mod tests {
    use super::*;

    const ALL: [(&str, Limiter); 4] =
        [("minmod", minmod), ("van Leer", van_leer), ("superbee", superbee), ("MC", monotonised_central)];

    fn pairs() -> impl Iterator<Item = (f64, f64)> {
        let values = [-2.0, -1.0, -0.3, 0.0, 0.1, 0.5, 1.0, 1.7, 4.0];
        values.into_iter().flat_map(move |a| values.into_iter().map(move |b| (a, b)))
    }

    #[test]
    fn extrema_are_flat_and_straight_lines_are_kept() {
        for (name, limiter) in ALL {
            for (a, b) in pairs() {
                if a * b <= 0.0 {
                    assert_eq!(limiter(a, b), 0.0, "{name} at {a}, {b}");
                }
                // Three roundings at most (van Leer).
                let error = (limiter(a, a) - a).abs();
                assert!(error <= 2.0 * f64::EPSILON * a.abs(), "{name} on a straight line of slope {a}");
            }
        }
    }

    #[test]
    fn both_sides_count_alike_and_signs_and_sizes_carry_over() {
        for (name, limiter) in ALL {
            for (a, b) in pairs() {
                assert_eq!(limiter(a, b), limiter(b, a), "{name} at {a}, {b}");
                assert_eq!(limiter(-a, -b), -limiter(a, b), "{name} at {a}, {b}");
                assert_eq!(limiter(4.0 * a, 4.0 * b), 4.0 * limiter(a, b), "{name} at {a}, {b}");
            }
        }
    }

    #[test]
    fn sweby_s_region_holds_them() {
        for (name, limiter) in ALL {
            for (a, b) in pairs().filter(|(a, b)| a * b > 0.0) {
                let slope = limiter(a, b);
                let (small, large) = (a.abs().min(b.abs()), a.abs().max(b.abs()));
                let rounding = 2.0 * f64::EPSILON * large;
                let (least, most) = (small - rounding, (2.0 * small).min(large) + rounding);
                assert!(slope.abs() >= least && slope.abs() <= most, "{name} at {a}, {b}: {slope}");
            }
        }
    }

    #[test]
    fn the_limiters_are_told_apart() {
        let at = |limiter: Limiter| limiter(1.0, 3.0);
        assert_eq!(ALL.map(|(_, limiter)| at(limiter)), [1.0, 1.5, 2.0, 2.0]);
        assert_eq!((superbee(1.0, 1.5), monotonised_central(1.0, 1.5)), (1.5, 1.25));
    }
}
