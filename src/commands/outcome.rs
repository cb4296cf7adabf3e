//! How a command ended.

use std::process::ExitCode;

use crate::record::{Results, Verdict};

/// Exit status where the request itself is wrong.
pub const WRONG_REQUEST: u8 = 2;

/// How a command ended that could do what was asked.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Outcome {
    /// Claims were judged.
    Judged(Verdict),
    /// There was no claim, and everything could be measured.
    Measured,
    /// Held against earlier results, something got worse.
    Worse,
    /// There was no claim, and something could not be measured.
    NotMeasured,
    /// The same was done again, and came out the same or changed.
    Repeated {
        /// Whether anything changed.
        changed: bool,
    },
}

impl Outcome {
    /// How a run with these results ended.
    pub fn of(results: &Results) -> Self {
        match results.overall {
            Some(verdict) => Self::Judged(verdict),
            None if results.studies.iter().any(|study| study.stopped.is_some()) => Self::NotMeasured,
            None => Self::Measured,
        }
    }

    /// The exit status.
    pub fn exit_code(self) -> ExitCode {
        match self {
            Self::Judged(Verdict::Upheld) | Self::Measured | Self::Repeated { changed: false } => ExitCode::SUCCESS,
            Self::Judged(Verdict::Refuted) | Self::Worse | Self::Repeated { changed: true } => 1.into(),
            Self::Judged(Verdict::Undecided) | Self::NotMeasured => 3.into(),
        }
    }
}
