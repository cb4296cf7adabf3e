//! Scan and bisection over the step, with weak growth told from a limit.

use crate::analysis::eigen::Excess;

/// What is scanned.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scan {
    /// Largest s that is tried.
    pub up_to: f64,
    /// Equal divisions of the scan. A hole in the stable set that is narrower than one division can be missed.
    pub divisions: usize,
    /// Smallest s that is tried, as a share of one division.
    pub smallest: f64,
}

impl Default for Scan {
    fn default() -> Self {
        Scan { up_to: 4.0, divisions: 200, smallest: 1.0 / 64.0 }
    }
}

/// The steps that were found stable.
#[derive(Debug, Clone, PartialEq)]
pub struct StableSet {
    /// Stable stretches of s in rising order, each with both ends; the first one begins at zero where small steps are stable.
    pub intervals: Vec<(f64, f64)>,
    /// What it means for somebody who chooses a step.
    pub range: StableRange,
    /// The end of the scan.
    pub scanned_up_to: f64,
}

/// The stable range that begins at zero.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum StableRange {
    /// Every step up to the scan's end is stable.
    Unlimited,
    /// Steps are stable up to a limit.
    LimitedTo {
        /// The limit.
        limit: f64,
        /// Distance to the nearest step that was seen to grow.
        uncertainty: f64,
    },
    /// No step is stable, however small.
    NoStableStep {
        /// The law by which growth vanishes with the step, where it follows one.
        growth: Option<WeakGrowth>,
    },
}

/// Growth of |u| in a step, less one, for small s: coefficient x s^power.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WeakGrowth {
    /// Power of s: 1 for growth that no step cures (an ill-posed or anti-diffusive scheme), 2 and more for growth that small steps postpone.
    pub power: f64,
    /// Factor of s^power.
    pub coefficient: f64,
}

impl WeakGrowth {
    /// Steps until the fastest mode has grown by `factor` at this s.
    pub fn steps_until(&self, factor: f64, s: f64) -> f64 {
        factor.ln() / (self.coefficient * s.powf(self.power)).ln_1p()
    }
}

/// The set of s in (0, up_to] for which `excess(s)`, the largest |G| - 1 over all wavenumbers, is positive by no more than its uncertainty.
///
/// Scanned in equal divisions and, below the first, by halving; every change is then bisected to 1e-13 of the scan. Where the first
/// stretch ends in growth that runs on to zero by a power law, it is no stable stretch: growth had only sunk below round-off.
///
/// # Errors
/// The first error that `excess` returns. A step that a scheme refuses is best answered by an infinite excess.
pub fn search<E>(mut excess: impl FnMut(f64) -> Result<Excess, E>, scan: Scan) -> Result<StableSet, E> {
    let samples: Vec<(f64, Excess)> =
        places(scan).into_iter().map(|s| Ok((s, excess(s)?))).collect::<Result<_, E>>()?;
    let mut intervals: Vec<(f64, f64)> = Vec::new();
    let mut ends = (0.0, 0.0);
    let mut open = is_stable(samples[0].1).then_some(0.0);
    for pair in samples.windows(2) {
        let [(a, before), (b, after)] = [pair[0], pair[1]];
        match (is_stable(before), is_stable(after)) {
            (true, false) => {
                let (last_stable, first_growing) = bisect(&mut excess, a, b, scan.up_to)?;
                ends = if intervals.is_empty() { (last_stable, first_growing) } else { ends };
                intervals.push((open.take().unwrap_or(a), last_stable));
            }
            (false, true) => open = Some(bisect(&mut excess, b, a, scan.up_to)?.0),
            _ => {}
        }
    }
    if let Some(from) = open {
        intervals.push((from, scan.up_to));
    }
    let starts_stable = intervals.first().is_some_and(|i| i.0 == 0.0);
    let growth = weak_growth(&mut excess, if starts_stable { intervals[0].1 } else { 0.0 }, &samples)?;
    let range = match growth {
        _ if starts_stable && intervals[0].1 >= scan.up_to => StableRange::Unlimited,
        None if starts_stable => StableRange::LimitedTo { limit: ends.0, uncertainty: ends.1 - ends.0 },
        growth => StableRange::NoStableStep { growth },
    };
    if starts_stable && matches!(range, StableRange::NoStableStep { .. }) {
        intervals.remove(0);
    }
    Ok(StableSet { intervals, range, scanned_up_to: scan.up_to })
}

fn is_stable(e: Excess) -> bool {
    // A growth of a few eps is what rounding gives to a root on the unit circle. NaN is no stability.
    e.value <= e.uncertainty
}

fn places(scan: Scan) -> Vec<f64> {
    let division = scan.up_to / scan.divisions as f64;
    let mut places: Vec<f64> = (1..=scan.divisions).rev().map(|i| division * i as f64).collect();
    while places[places.len() - 1] > division * scan.smallest {
        places.push(0.5 * places[places.len() - 1]);
    }
    places.reverse();
    places
}

/// Last stable and first growing s between `stable` and `growing`, closed in to 1e-13 of the scan.
fn bisect<E>(
    excess: &mut impl FnMut(f64) -> Result<Excess, E>,
    mut stable: f64,
    mut growing: f64,
    scale: f64,
) -> Result<(f64, f64), E> {
    while (growing - stable).abs() > 1e-13 * scale {
        let middle = 0.5 * (stable + growing);
        if middle == stable || middle == growing {
            break;
        }
        if is_stable(excess(middle)?) { stable = middle } else { growing = middle }
    }
    Ok((stable, growing))
}

/// The power law of growth towards s = 0, where growth from `end` (the end of the first stable stretch, zero for none) on follows one
/// that would be lost in round-off at `end`.
fn weak_growth<E>(
    excess: &mut impl FnMut(f64) -> Result<Excess, E>,
    end: f64,
    samples: &[(f64, Excess)],
) -> Result<Option<WeakGrowth>, E> {
    let (smallest, largest) = (samples[0].0, samples[samples.len() - 1].0);
    if end == 0.0 {
        return Ok(power_law(samples[0].0, samples[0].1.value, excess(2.0 * smallest)?.value));
    }
    // Four times the end, where what rounding can add to growth of the second power and more is below a tenth.
    let (near, far) = (4.0 * end, 8.0 * end);
    if far > largest {
        return Ok(None);
    }
    let law = power_law(near, excess(near)?.value, excess(far)?.value);
    let hidden = 16.0 * excess(end)?.uncertainty.max(f64::EPSILON);
    // A true limit has growth at twice the limit that is far too large to have sunk to round-off at the limit itself.
    Ok(law.filter(|l| l.power > 1.5 && l.coefficient * end.powf(l.power) <= hidden))
}

fn power_law(s: f64, growth: f64, growth_at_double: f64) -> Option<WeakGrowth> {
    let power = (growth_at_double / growth).log2();
    (growth > 0.0 && power.is_finite()).then(|| WeakGrowth { power, coefficient: growth / s.powf(power) })
}
