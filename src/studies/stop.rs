//! Why a study ends before its time.

use gridassay_reference::problem::EvaluationError;
use gridassay_scheme::SchemeError;

use crate::host::HostError;

/// Why a study ends before its time: one sentence for the record. What was measured until then stands.
#[derive(Debug, thiserror::Error)]
pub enum Stop {
    /// No offer of the scheme can take the study.
    #[error("{0}")]
    NotOffered(String),
    /// The scheme refused, crashed, hung or broke the conversation.
    #[error("{0}")]
    Host(#[from] HostError),
    /// The reference solution cannot be evaluated.
    #[error("the reference solution: {0}")]
    Reference(#[from] EvaluationError),
    /// The request makes no sense for this scheme or problem.
    #[error("{0}")]
    Request(String),
    /// What the scheme answered cannot be analysed.
    #[error("{0}")]
    Analysis(String),
}

impl Stop {
    /// Whether the scheme refused this step as too large: a bound that it sets itself, not a fault.
    pub fn is_step_refused(&self) -> bool {
        matches!(self, Self::Host(HostError::Refused(SchemeError::StepRefused(_))))
    }
}
