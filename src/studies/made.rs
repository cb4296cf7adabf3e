//! A study as made: what was measured, and why it ended early where it did.

use super::Stop;
use crate::record::Study;

/// What a study hands on.
#[derive(Clone, Debug)]
pub struct Made {
    /// What was measured, possibly in part.
    pub study: Study,
    /// Why it ended before its time.
    pub stopped: Option<String>,
    /// Whether it ended because no offer of the scheme can take it.
    pub not_offered: bool,
    /// What a reader should know beside the numbers.
    pub notes: Vec<String>,
}

impl Made {
    /// A study with the way it ended.
    pub fn new(study: Study, ended: Result<(), Stop>, notes: Vec<String>) -> Self {
        let not_offered = matches!(ended, Err(Stop::NotOffered(_)));
        Self { study, stopped: ended.err().map(|stop| stop.to_string()), not_offered, notes }
    }
}
