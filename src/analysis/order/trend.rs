//! What the finest slopes are doing, and where they lead.

/// The order seen between two neighbouring levels.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Slope {
    /// Cell size of the coarser level.
    pub coarse: f64,
    /// Cell size of the finer level.
    pub fine: f64,
    /// ln(e_coarse / e_fine) / ln(coarse / fine).
    pub order: f64,
    /// How far round-off can have moved it.
    pub uncertainty: f64,
}

impl Slope {
    /// Logarithm (base 2) of the cell size in the middle between the two levels.
    fn place(&self) -> f64 {
        0.5 * (self.coarse.log2() + self.fine.log2())
    }

    /// Share of h^q in this slope when ln e = a + p ln h + h^q: its exact difference quotient, with h in units of `unit`.
    fn share(&self, q: f64, unit: f64) -> f64 {
        let (coarse, fine) = (self.coarse / unit, self.fine / unit);
        (coarse.powf(q) - fine.powf(q)) / (coarse / fine).ln()
    }
}

/// What the last slopes do as the grid is refined.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Trend {
    /// Two slopes only: nothing is known about how they change.
    Pair,
    /// They no longer change beyond what counts as quiet.
    Level,
    /// They approach a limit like h^`rate`.
    Converging {
        /// Exponent of the approach, from 1/3 to 8.
        rate: f64,
        /// The limit.
        limit: f64,
    },
    /// They jump up and down, without their jumps growing.
    Scattered,
    /// They have just turned, with a change that does not die out: what follows is open.
    Turning,
    /// They change in one direction, and the changes do not die out.
    Running,
}

/// Slowest approach that is extrapolated: changes of slope must die out at least like h^(1/3), a factor 0.8 each halving.
const SLOWEST: f64 = 1.0 / 3.0;
/// Fastest approach that is told apart from an immediate one.
const FASTEST: f64 = 8.0;

/// Change of the last slope for each halving of the grid; zero for fewer than two slopes.
pub fn change_per_halving(slopes: &[Slope]) -> f64 {
    let [.., before, last] = slopes else { return 0.0 };
    (last.order - before.order) / (before.place() - last.place())
}

/// How much the last slope may still be off: the larger of its last change each halving and a quarter of the one before.
///
/// A second-order approach divides changes by four each halving; a last change that is smaller may be so by chance.
pub fn unrest(slopes: &[Slope]) -> f64 {
    let earlier = &slopes[..slopes.len().saturating_sub(1)];
    change_per_halving(slopes).abs().max(0.25 * change_per_halving(earlier).abs())
}

/// The trend of the last three slopes; changes of at most `quiet` each halving count as none.
pub fn trend(slopes: &[Slope], quiet: f64) -> Trend {
    let [.., a, b, c] = slopes else { return Trend::Pair };
    let (first, second) = (b.order - a.order, c.order - b.order);
    let is_quiet = change_per_halving(slopes).abs() <= quiet;
    let unit = a.coarse;
    // For ln e = ln C + p ln h + D h^q the changes of slope are in this ratio; it falls as q rises.
    let ratio = |q: f64| {
        let [a, b, c] = [a, b, c].map(|s| s.share(q, unit));
        (c - b) / (b - a)
    };
    let dies_out = second.abs() < ratio(SLOWEST) * first.abs();
    if second * first < 0.0 {
        return match (is_quiet, dies_out || zigzags(slopes)) {
            (true, _) => Trend::Level,
            (false, true) => Trend::Scattered,
            (false, false) => Trend::Turning,
        };
    }
    if !dies_out {
        return if is_quiet { Trend::Level } else { Trend::Running };
    }
    let rate = solve(|q| second / first - ratio(q));
    // At the fastest rate, or with no change at all, the last slope is the limit to within its last change.
    let remaining = second * c.share(rate, unit) / (b.share(rate, unit) - c.share(rate, unit));
    Trend::Converging { rate, limit: c.order + remaining }
}

/// Whether the last four slopes change direction twice, the last change being no outlier: noise, and not one term taking over from another.
fn zigzags(slopes: &[Slope]) -> bool {
    let [.., a, b, c, d] = slopes else { return false };
    let [first, second, third] = [b.order - a.order, c.order - b.order, d.order - c.order];
    first * second < 0.0 && second * third < 0.0 && third.abs() <= 2.0 * first.abs().max(second.abs())
}

/// Root in [SLOWEST, FASTEST] of a function that rises through zero there, or the end that it comes nearest to.
fn solve(f: impl Fn(f64) -> f64) -> f64 {
    let (mut low, mut high) = (SLOWEST, FASTEST);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if f(middle) < 0.0 { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

#[cfg(test)]
mod tests {
    //! Trusted: Aitken's formula for equal refinement ratios; ladders built from known error expansions for unequal ones.
    use super::*;
    use crate::analysis::compare::agree;

    fn halved(orders: &[f64]) -> Vec<Slope> {
        let slope = |(i, &order): (usize, &f64)| {
            let coarse = 0.5_f64.powi(i as i32);
            Slope { coarse, fine: 0.5 * coarse, order, uncertainty: 0.0 }
        };
        orders.iter().enumerate().map(slope).collect()
    }

    #[test]
    fn equal_ratios_give_aitkens_limit() {
        // p + x for changes with ratio k: x = change k / (1 - k).
        for (orders, limit) in [([1.7, 1.85, 1.925], 2.0), ([2.4, 2.2, 2.1], 2.0), ([3.2, 3.8, 3.95], 4.0)] {
            let Trend::Converging { limit: found, .. } = trend(&halved(&orders), 0.01) else { panic!("{orders:?}") };
            agree(found, limit, 1e-12).unwrap();
        }
        let Trend::Converging { rate, .. } = trend(&halved(&[1.0, 1.75, 1.9375]), 0.01) else { panic!() };
        agree(rate, 2.0, 1e-12).unwrap();
    }

    #[test]
    fn unequal_ratios_find_rate_and_limit_of_a_known_expansion() {
        let (p, q, d) = (3.0, 1.5, 0.4);
        let sizes = [1.0, 0.7, 0.4, 0.25_f64];
        let log_error = |h: f64| p * h.ln() + d * h.powf(q);
        let slopes: Vec<Slope> = sizes
            .windows(2)
            .map(|w| Slope {
                coarse: w[0],
                fine: w[1],
                order: (log_error(w[0]) - log_error(w[1])) / (w[0] / w[1]).ln(),
                uncertainty: 0.0,
            })
            .collect();
        let Trend::Converging { rate, limit } = trend(&slopes, 0.01) else { panic!() };
        agree(rate, q, 1e-9).unwrap();
        agree(limit, p, 1e-9).unwrap();
    }

    #[test]
    fn what_does_not_die_out_is_running_or_scattered() {
        for orders in [[2.0, 1.95, 1.85], [2.0, 2.1, 2.3], [1.5, 1.6, 1.7], [2.0, 1.9, 1.81]] {
            assert_eq!(trend(&halved(&orders), 0.01), Trend::Running, "{orders:?}");
        }
        for orders in [&[2.0, 3.0, 2.5][..], &[2.0, 2.05, 1.98, 2.04]] {
            assert_eq!(trend(&halved(orders), 0.01), Trend::Scattered, "{orders:?}");
        }
        for orders in [&[2.2, 2.1, 2.18][..], &[2.0, 1.95, 2.0], &[2.0, 1.99, 2.0, 1.93]] {
            assert_eq!(trend(&halved(orders), 0.01), Trend::Turning, "{orders:?}");
        }
        for orders in [[2.0, 2.0, 2.0], [2.0, 2.001, 1.999], [2.0, 1.999, 1.995]] {
            assert_eq!(trend(&halved(&orders), 0.01), Trend::Level, "{orders:?}");
        }
        assert_eq!(trend(&halved(&[1.2, 1.5]), 0.01), Trend::Pair);
    }
}
