//! An observed order against a claimed one.

use super::fit::Interval;
use super::ladder::{BLOWN_UP, SetAside};
use super::observe::{Observed, Settings};
use super::trend::Trend;
use std::fmt;

/// The three answers to a claim.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Outcome {
    /// The whole interval stands above claim - tolerance.
    Upheld,
    /// The whole interval stands below claim - tolerance.
    Refuted,
    /// The evidence is thin.
    Undecided,
}

/// A claim weighed against a ladder.
#[derive(Debug, Clone, PartialEq)]
pub struct Judgement {
    /// The answer.
    pub outcome: Outcome,
    /// Why; its `Display` is one sentence with the numbers.
    pub reason: Reason,
    /// Whether the observed order exceeds the claim by more than a half: no mistake (superconvergence), but the problem may be blind to
    /// the terms that set the order.
    pub beyond_claim: bool,
}

/// Observed order above the claim from which the problem may be blind.
const BEYOND: f64 = 0.5;

/// Why an answer is what it is.
#[derive(Debug, Clone, PartialEq)]
pub enum Reason {
    /// The claimed order or the tolerance is no positive number.
    BadClaim {
        /// The claim.
        claim: f64,
        /// The tolerance.
        tolerance: f64,
    },
    /// A level has no usable error.
    Failed {
        /// Index of the level, from zero.
        level: usize,
    },
    /// Every level that is not under-resolved is at round-off.
    Exact,
    /// Fewer than three usable levels.
    TooFew {
        /// Usable levels.
        usable: usize,
        /// Levels at round-off.
        at_round_off: usize,
        /// Levels on which the error is as large as the solution.
        unresolved: usize,
    },
    /// The slopes do not settle.
    NotSettled {
        /// The finest slope.
        finest: f64,
        /// Change of slope for each halving.
        change: f64,
        /// What the slopes do.
        trend: Trend,
    },
    /// The interval holds claim - tolerance.
    Straddles {
        /// The interval.
        interval: Interval,
        /// Claim - tolerance.
        threshold: f64,
    },
    /// The interval stands on one side of claim - tolerance.
    Clear {
        /// The limit order, where the slopes lead to one.
        order: Option<f64>,
        /// The interval.
        interval: Interval,
        /// Claim - tolerance.
        threshold: f64,
    },
    /// The errors grow with refinement.
    Grows {
        /// The finest slope.
        finest: f64,
    },
}

/// Weighs the claim "at least of order `claim`" against what was observed with the same `settings`.
pub fn judge(observed: &Observed, claim: f64, settings: Settings) -> Judgement {
    let (outcome, reason) = weigh(observed, claim, settings);
    // A superconvergent order is told from the settled limit alone: unsettled slopes may stand anywhere.
    let beyond_claim = observed.settled && observed.order.is_some_and(|order| order > claim + BEYOND);
    Judgement { outcome, reason, beyond_claim }
}

fn weigh(observed: &Observed, claim: f64, settings: Settings) -> (Outcome, Reason) {
    let tolerance = settings.tolerance;
    let positive = |x: f64| x.is_finite() && x > 0.0;
    if !positive(claim) || !positive(tolerance) {
        return (Outcome::Undecided, Reason::BadClaim { claim, tolerance });
    }
    if let Some(level) = observed.failed {
        return (Outcome::Undecided, Reason::Failed { level });
    }
    let (Some(interval), Some(trend)) = (observed.interval, observed.trend) else {
        return (Outcome::Undecided, too_few(observed));
    };
    let finest = observed.spaced_slopes.last().map_or(f64::NAN, |s| s.order);
    if observed.growing {
        return (Outcome::Refuted, Reason::Grows { finest });
    }
    let threshold = claim - tolerance;
    let clear = Reason::Clear { order: observed.order, interval, threshold };
    // Slopes that have not settled never uphold a claim; far below it they refute it, since their interval already allows for their drift.
    if interval.high < threshold {
        (Outcome::Refuted, clear)
    } else if !observed.settled {
        (Outcome::Undecided, Reason::NotSettled { finest, change: observed.change, trend })
    } else if interval.low >= threshold {
        (Outcome::Upheld, clear)
    } else {
        (Outcome::Undecided, Reason::Straddles { interval, threshold })
    }
}

fn too_few(observed: &Observed) -> Reason {
    let count = |why: SetAside| observed.set_aside.iter().filter(|s| **s == Some(why)).count();
    let (at_round_off, unresolved) = (count(SetAside::RoundOff), count(SetAside::Unresolved));
    let usable = observed.set_aside.len() - at_round_off - unresolved;
    if usable == 0 && at_round_off > 0 { Reason::Exact } else { Reason::TooFew { usable, at_round_off, unresolved } }
}

impl fmt::Display for Reason {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        match self {
            Reason::BadClaim { claim, tolerance } => {
                write!(f, "the claimed order {claim} or the tolerance {tolerance} is no positive number")
            }
            Reason::Failed { level } => write!(
                f,
                "the error on level {} is not finite, or more than {BLOWN_UP} times the solution: the run blew up",
                level + 1
            ),
            Reason::Exact => write!(f, "the errors are at round-off: the scheme solves this problem exactly"),
            Reason::TooFew { usable, at_round_off, unresolved } => write!(
                f,
                "{usable} of the levels can be used where three are needed ({at_round_off} at round-off, {unresolved} not resolved)"
            ),
            Reason::NotSettled { finest, change, trend } => {
                let doing = match trend {
                    Trend::Scattered => "jump up and down",
                    Trend::Turning => "have just turned",
                    _ if *change < 0.0 => "are still falling",
                    _ => "are still rising",
                };
                write!(f, "the slopes {doing}: the finest is {finest:.3} and changes by {change:+.3} each halving")
            }
            Reason::Straddles { interval, threshold } => write!(
                f,
                "the order lies between {:.3} and {:.3}, on both sides of the {threshold:.3} that the claim needs",
                interval.low, interval.high
            ),
            Reason::Clear { order, interval, threshold } => {
                let side = if interval.low >= *threshold { "above" } else { "below" };
                let order =
                    order.map_or_else(|| "has no limit yet, but".to_string(), |o| format!("tends to {o:.3} and"));
                write!(
                    f,
                    "the order {order} lies between {:.3} and {:.3}, all {side} the {threshold:.3} that the claim needs",
                    interval.low, interval.high
                )
            }
            Reason::Grows { finest } => write!(f, "the errors grow with refinement (finest slope {finest:.3})"),
        }
    }
}

impl Reason {
    /// What would decide an undecided case; `None` for a decided one.
    pub fn remedy(&self) -> Option<&'static str> {
        match self {
            Reason::BadClaim { .. } => Some("state a positive order and a positive tolerance"),
            Reason::Failed { .. } => {
                Some("a smaller step (a study of stability tells the largest), or finding out why this level failed")
            }
            Reason::Exact => {
                Some("choose a problem that the scheme cannot solve exactly, with more terms or generic wavelengths")
            }
            Reason::TooFew { unresolved, at_round_off, .. } if unresolved > at_round_off => Some("add finer levels"),
            Reason::TooFew { at_round_off, .. } if *at_round_off > 0 => {
                Some("add levels between the coarsest ones, or a harder problem whose errors stay above round-off")
            }
            Reason::TooFew { .. } => Some("add levels, at least three in all and better five"),
            Reason::NotSettled { .. } => Some("add finer levels until the slopes settle"),
            Reason::Straddles { .. } => Some("add a finer level, which narrows the interval"),
            Reason::Clear { .. } | Reason::Grows { .. } => None,
        }
    }
}
