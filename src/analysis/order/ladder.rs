//! The ladder: grid sizes with errors and round-off floors, coarse to fine.

/// One level of a refinement study.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Level {
    /// Cell size or step, positive.
    pub h: f64,
    /// Norm of the error; may be NaN or infinite where the run failed.
    pub error: f64,
    /// Size that round-off gives to this error, at least zero (zero: unknown). Estimated from the same run with data changed in the last bit.
    pub floor: f64,
}

/// Levels from coarse to fine, each finer than the one before.
#[derive(Debug, Clone, PartialEq)]
pub struct Ladder {
    levels: Vec<Level>,
    solution_size: Option<f64>,
}

/// Why levels are no ladder.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum LadderError {
    /// A size that is no positive number, or not below the one before.
    #[error(
        "level {level} has size {h}, after {before:?}; sizes must be positive and fall from level to level, so sort them coarse to fine"
    )]
    NotFalling {
        /// Index of the level, from zero.
        level: usize,
        /// Its size.
        h: f64,
        /// Size of the level before.
        before: Option<f64>,
    },
    /// A floor that is negative or not finite.
    #[error(
        "level {level} has the round-off floor {floor}; give a finite number that is not negative, zero where it is unknown"
    )]
    BadFloor {
        /// Index of the level, from zero.
        level: usize,
        /// Its floor.
        floor: f64,
    },
    /// Arrays of different lengths.
    #[error("{sizes} sizes were given with {values} values; give one value a level")]
    Length {
        /// Sizes given.
        sizes: usize,
        /// Values given.
        values: usize,
    },
}

/// Why a level does not count.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SetAside {
    /// Its error is within thirty times the round-off floor, or that of a coarser level is.
    RoundOff,
    /// Its error is more than half as large as the solution: nothing is resolved yet.
    Unresolved,
}

/// A level counts while its error is this many floors or more: round-off then changes a slope between halved grids by 0.1 at most.
pub const FLOORS: f64 = 30.0;

/// A level counts from where its error falls below this share of the solution. On coarser grids the error of a dissipative scheme
/// saturates, and slopes near zero say nothing.
pub const RESOLVED: f64 = 0.5;

/// A run has blown up where its error is larger than the solution by this factor. Whether it ends at 1e10 or beyond all numbers is chance.
pub const BLOWN_UP: f64 = 1e3;

impl Ladder {
    /// A ladder from its levels.
    ///
    /// # Errors
    /// Sizes that are not positive or do not fall; floors that are negative or not finite. Errors may be anything: a level that
    /// failed is told in the judgement.
    pub fn new(levels: Vec<Level>) -> Result<Self, LadderError> {
        let mut before = None;
        for (level, &Level { h, floor, .. }) in levels.iter().enumerate() {
            if !(h.is_finite() && h > 0.0 && before.is_none_or(|b| h < b)) {
                return Err(LadderError::NotFalling { level, h, before });
            }
            if !(floor.is_finite() && floor >= 0.0) {
                return Err(LadderError::BadFloor { level, floor });
            }
            before = Some(h);
        }
        Ok(Ladder { levels, solution_size: None })
    }

    /// A ladder from sizes and errors, with one floor for all.
    ///
    /// # Errors
    /// As for [`Ladder::new`], and arrays of different lengths.
    pub fn from_errors(sizes: &[f64], errors: &[f64], floor: f64) -> Result<Self, LadderError> {
        if sizes.len() != errors.len() {
            return Err(LadderError::Length { sizes: sizes.len(), values: errors.len() });
        }
        Ladder::new(sizes.iter().zip(errors).map(|(&h, &error)| Level { h, error, floor }).collect())
    }

    /// A ladder from triples of size, error and floor.
    ///
    /// # Errors
    /// As for [`Ladder::new`].
    pub fn from_series(series: &[(f64, f64, f64)]) -> Result<Self, LadderError> {
        Ladder::new(series.iter().map(|&(h, error, floor)| Level { h, error, floor }).collect())
    }

    /// The same ladder with the size of the solution in the norm of the errors, by which unresolved levels are known.
    #[must_use]
    pub fn with_solution_size(mut self, size: f64) -> Self {
        self.solution_size = (size.is_finite() && size > 0.0).then_some(size);
        self
    }

    /// All levels.
    pub fn levels(&self) -> &[Level] {
        &self.levels
    }

    /// Index of the first level that failed: its error is no number that a norm can have (NaN, infinite or negative), or the run blew up,
    /// which tells of the step and not of the order.
    pub fn first_failed(&self) -> Option<usize> {
        let most = self.solution_size.map_or(f64::MAX, |size| BLOWN_UP * size);
        self.levels.iter().position(|l| !(0.0..=most).contains(&l.error))
    }

    /// For each level why it does not count, or `None` where it does.
    pub fn set_aside(&self) -> Vec<Option<SetAside>> {
        // Past the first level at round-off the errors are noise, and noise may rise above the floor's estimate again.
        let at_floor = |l: &Level| l.error <= FLOORS * l.floor || l.error == 0.0;
        let first_at_floor = self.levels.iter().position(at_floor).unwrap_or(self.levels.len());
        let unresolved = |l: &Level| self.solution_size.is_some_and(|size| l.error > RESOLVED * size);
        // Only coarse levels are under-resolved; a large error after a small one is a failure, and counts.
        let first_resolved = self.levels.iter().position(|l| !unresolved(l)).unwrap_or(self.levels.len());
        let why = |i| match i {
            i if i >= first_at_floor => Some(SetAside::RoundOff),
            i if i < first_resolved => Some(SetAside::Unresolved),
            _ => None,
        };
        (0..self.levels.len()).map(why).collect()
    }
}
