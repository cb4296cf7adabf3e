//! The rule by which an order of accuracy is observed and judged.
//!
//! The claim is always "at least of order p". What goes in is a ladder: levels with cell size (or step) h, error e, and the floor f that
//! round-off gives to e. What comes out is one of three answers.
//!
//! 1. **Levels that do not count.** From the first level with e < 30 f on, all finer levels are at round-off. Where the size of the
//!    solution is known, coarse levels with an error of more than half of it resolve nothing. Both are set aside. A level whose error is
//!    not finite, or a thousand times the solution, has blown up and makes the ladder undecided: that tells of the step, not of the order.
//!    Fewer than three usable levels do, too.
//! 2. **Slopes.** Between neighbours, p_i = ln(e_i / e_{i+1}) / ln(h_i / h_{i+1}), for any ratio. Where levels stand closer than 1.25,
//!    some are skipped, since close levels magnify noise.
//! 3. **Trend.** The last three slopes are compared with an error C h^p exp(D h^q), whose slopes tend to p like h^q. They are *level*
//!    when they change by at most a tenth of the tolerance each halving; *converging* when their changes die out at least like h^(1/3);
//!    *scattered* when they go to and fro with changes that do not grow; otherwise *turning* (the last change has another direction than
//!    the one before) or *running*. Running and turning slopes are the mark of a term of lower order that emerges (they fall
//!    faster and faster), of two terms about to cancel (they rise faster and faster) or of grids that are still too coarse.
//! 4. **Limit order.** Converging slopes are extrapolated with the q that they show; for level and scattered ones the limit is the slope
//!    of the straight-line fit.
//! 5. **Asymptotic range.** The finest levels whose slopes stand within the tolerance of the limit (of the finest slope, where there is
//!    no limit). Two slopes at least; else the slopes have *not settled*. Over this range ln e is fitted by a straight line in ln h.
//! 6. **Interval.** For level and scattered slopes: Student's interval of the fit, and the finest slope. For converging slopes: the limit, and
//!    the finest slope. With two slopes only: Student's interval (one degree of freedom) and both slopes. The finest slope (with the limit) is
//!    widened on both sides by its last change each halving or a quarter of the change before, whichever is larger. The interval therefore
//!    always holds the finest slope: three points that happen to be collinear cannot hide a drift, and no extrapolation alone upholds a
//!    claim. What round-off can have done to the finest slope is added. Two rising slopes, and running or turning ones, are let
//!    run on for ten more halvings.
//! 7. **Judgement.** Upheld when the slopes have settled and the whole interval stands at or above claim - tolerance (0.1 unless told).
//!    Refuted when the whole interval stands below, or when errors grow: the last two slopes below -1/2 and the finest error the largest.
//!    Undecided otherwise, with what would decide it. Slopes that have not settled never uphold.
//! 8. **Beyond the claim.** A limit more than one half above the claim is no mistake (nodal superconvergence) but is marked: the problem
//!    may be blind to the terms that set the order.
//!
//! Sources: the fit and its interval are common practice of regression; extrapolation of observed orders follows the error expansion of
//! Roache (1998), Verification and Validation in Computational Science and Engineering, ch. 5 (from memory). Thresholds are choices
//! of this project, tried on random ladders in the tests beside this file, where the rates of each answer are stated.

mod fit;
mod judge;
mod ladder;
mod observe;
mod time;
mod trend;

pub use fit::{Interval, LineFit, fit_line};
pub use judge::{Judgement, Outcome, Reason, judge};
pub use ladder::{BLOWN_UP, FLOORS, Ladder, LadderError, Level, RESOLVED, SetAside};
pub use observe::{Observed, Settings, observe};
pub use time::{TimeError, ladder_from_differences, ladder_of_differences};
pub use trend::{Slope, Trend};

#[cfg(test)]
mod random_tests;
#[cfg(test)]
mod tests;
