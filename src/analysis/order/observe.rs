//! From a ladder to the observed order: slopes, asymptotic range, limit and interval.

use super::fit::{Interval, LineFit, fit_line};
use super::ladder::{Ladder, Level, SetAside};
use super::trend::{Slope, Trend, change_per_halving, trend, unrest};

/// Settings of the rule.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Settings {
    /// How far below the claim an order may stand and still uphold it; also the scale on which slopes must settle.
    pub tolerance: f64,
    /// Confidence of Student's interval.
    pub confidence: f64,
}

impl Default for Settings {
    fn default() -> Self {
        Settings { tolerance: 0.1, confidence: 0.95 }
    }
}

/// What a ladder shows about the order.
#[derive(Debug, Clone, PartialEq)]
pub struct Observed {
    /// Slopes between neighbouring usable levels, coarse to fine.
    pub slopes: Vec<Slope>,
    /// The slopes from which the trend is taken: the same, or on a ladder with close levels those of every second or third one.
    pub spaced_slopes: Vec<Slope>,
    /// For each level of the ladder why it does not count, or `None`.
    pub set_aside: Vec<Option<SetAside>>,
    /// Index of the first level whose error is NaN, infinite or negative.
    pub failed: Option<usize>,
    /// What the last slopes do; `None` with fewer than three usable levels.
    pub trend: Option<Trend>,
    /// Change of the slope for each halving of the grid, at the fine end.
    pub change: f64,
    /// Indices of the levels in the asymptotic range.
    pub used: Vec<usize>,
    /// Straight-line fit over the asymptotic range.
    pub fit: Option<LineFit>,
    /// The limit order; `None` where the slopes lead nowhere.
    pub order: Option<f64>,
    /// The interval in which the order lies; `None` with fewer than three usable levels.
    pub interval: Option<Interval>,
    /// Whether the slopes have settled.
    pub settled: bool,
    /// Whether the errors grow with refinement: the last two slopes are below -1/2 and the finest error is the largest.
    pub growing: bool,
}

/// Levels closer than this ratio magnify noise in their slopes; the trend then skips some, where at least three levels remain.
const CLOSEST: f64 = 1.25;
/// Rising slopes are taken to rise on at their present pace for this many halvings before a claim is refuted.
const HALVINGS: f64 = 10.0;

/// Applies the rule of the module documentation to a ladder.
pub fn observe(ladder: &Ladder, settings: Settings) -> Observed {
    let set_aside = ladder.set_aside();
    let failed = ladder.first_failed();
    let usable: Vec<usize> = match failed {
        Some(_) => Vec::new(),
        None => (0..set_aside.len()).filter(|&i| set_aside[i].is_none()).collect(),
    };
    let slopes = slopes(ladder, &usable);
    let spaced = spaced(ladder, &usable);
    let spaced_slopes = self::slopes(ladder, &spaced);
    let mut observed = Observed {
        growing: grows(ladder, &usable, &spaced_slopes),
        slopes,
        set_aside,
        failed,
        trend: None,
        change: change_per_halving(&spaced_slopes),
        used: Vec::new(),
        fit: None,
        order: None,
        interval: None,
        settled: false,
        spaced_slopes,
    };
    if observed.spaced_slopes.len() >= 2 {
        conclude(&mut observed, ladder, &usable, settings);
    }
    observed
}

fn slopes(ladder: &Ladder, at: &[usize]) -> Vec<Slope> {
    let slope = |w: &[usize]| {
        let (c, f): (Level, Level) = (ladder.levels()[w[0]], ladder.levels()[w[1]]);
        let distance = (c.h / f.h).ln();
        Slope {
            coarse: c.h,
            fine: f.h,
            order: (c.error / f.error).ln() / distance,
            uncertainty: (c.floor / c.error + f.floor / f.error) / distance,
        }
    };
    at.windows(2).map(slope).collect()
}

fn spaced(ladder: &Ladder, usable: &[usize]) -> Vec<usize> {
    let mut kept: Vec<usize> = Vec::new();
    for &i in usable.iter().rev() {
        let h = ladder.levels()[i].h;
        if kept.last().is_none_or(|&finer| h >= CLOSEST * (1.0 - 1e-9) * ladder.levels()[finer].h) {
            kept.push(i);
        }
    }
    kept.reverse();
    if kept.len() >= 3 { kept } else { usable.to_vec() }
}

fn grows(ladder: &Ladder, usable: &[usize], slopes: &[Slope]) -> bool {
    let error = |i: usize| ladder.levels()[i].error;
    let largest_last = usable.last().is_some_and(|&last| usable.iter().all(|&i| error(i) <= error(last)));
    largest_last && matches!(slopes, [.., a, b] if a.order < -0.5 && b.order < -0.5)
}

fn conclude(observed: &mut Observed, ladder: &Ladder, usable: &[usize], settings: Settings) {
    let slopes = observed.spaced_slopes.clone();
    let last = slopes[slopes.len() - 1];
    let size = unrest(&slopes);
    let quiet = (0.1 * settings.tolerance).max(2.0 * last.uncertainty);
    let trend = trend(&slopes, quiet);
    let goal = if let Trend::Converging { limit, .. } = trend { limit } else { last.order };
    let in_range = |s: &&Slope| (s.order - goal).abs() <= settings.tolerance + s.uncertainty;
    let count = slopes.iter().rev().take_while(in_range).count();
    let coarsest = slopes[slopes.len() - count.max(1)].coarse;
    let range: Vec<usize> = usable.iter().copied().filter(|&i| ladder.levels()[i].h <= coarsest).collect();
    let fit = if count >= 2 { fit(ladder, &range, settings.confidence) } else { None };
    let recent: Vec<f64> = slopes.iter().rev().take(3).map(|s| s.order).collect();
    let rising = observed.change > 0.0;
    let onward = if rising { HALVINGS * observed.change } else { 0.0 };
    let (settled, order, interval) = match (trend, fit) {
        (Trend::Pair, Some(fit)) => {
            let seen = Interval::around(&[recent[0], recent[1], last.order + onward], last.uncertainty);
            (true, Some(fit.slope), seen.hull(fit.interval))
        }
        (Trend::Level | Trend::Scattered, Some(fit)) => {
            (true, Some(fit.slope), Interval::around(&[last.order], size + last.uncertainty).hull(fit.interval))
        }
        (Trend::Converging { limit, .. }, fit) => {
            let seen = Interval::around(&[last.order, limit], size + last.uncertainty);
            (fit.is_some() && size <= settings.tolerance, Some(limit), seen)
        }
        (Trend::Running | Trend::Turning, _) => {
            let ahead = last.order + HALVINGS * observed.change;
            (false, None, Interval::around(&[&recent[..], &[ahead]].concat(), size + last.uncertainty))
        }
        (Trend::Pair | Trend::Level | Trend::Scattered, None) => {
            let spread = Interval::around(&recent, 0.0);
            let seen = Interval::around(&recent, spread.high - spread.low + last.uncertainty);
            (false, None, seen.hull(Interval::around(&[last.order + onward], 0.0)))
        }
    };
    observed.used = if count >= 2 { range } else { Vec::new() };
    (observed.trend, observed.fit) = (Some(trend), fit);
    (observed.settled, observed.order, observed.interval) = (settled, order, Some(interval));
}

fn fit(ladder: &Ladder, range: &[usize], confidence: f64) -> Option<LineFit> {
    let point = |&i: &usize| (ladder.levels()[i].h.ln(), ladder.levels()[i].error.ln());
    fit_line(&range.iter().map(point).collect::<Vec<_>>(), confidence)
}
