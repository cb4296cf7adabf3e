//! The frame of a results file.

use std::collections::BTreeMap;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{InvariantsRecord, ModesRecord, OperatorRecord, OrderRecord, StabilityRecord, UncertaintyRecord};

/// What `format` says in every results file.
pub const FORMAT: &str = "gridassay-results";

/// The version of the frame.
pub const VERSION: u32 = 1;

/// Parameters of an equation by name; a scalar has one component.
pub type Parameters = BTreeMap<String, Vec<f64>>;

/// A whole results file.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Results {
    /// [`FORMAT`].
    pub format: String,
    /// [`VERSION`].
    pub version: u32,
    /// The scheme; where a run tried several, a name for all of them together.
    pub scheme: SchemeRecord,
    /// The schemes one by one, where a run tried several; absent otherwise.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub schemes: BTreeMap<String, SchemeRecord>,
    /// What was run, and by what.
    pub run: RunRecord,
    /// What was measured.
    pub studies: Vec<StudyRecord>,
    /// The measurements weighed against the claims.
    pub verdicts: Vec<VerdictRecord>,
    /// `refuted` where any claim is refuted, else `undecided` where any is undecided, else `upheld`; `null` without claims.
    pub overall: Option<Verdict>,
}

/// Who a scheme is.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SchemeRecord {
    /// The name that the scheme gives itself.
    pub name: String,
    /// The version that the scheme gives itself.
    pub version: String,
    /// How it was reached: `command`, `plugin`, `classical` or `in process`; `table` for values that no scheme answered.
    pub route: String,
    /// SHA-256 of the executable, script or library, in hexadecimal; `null` where there is no file of its own.
    pub digest: Option<String>,
    /// What stands in the way of measuring it at all, such as a missing executable.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub fault: Option<String>,
}

/// What was run, and by what.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RunRecord {
    /// Version of Gridassay.
    pub gridassay: String,
    /// The command line, the program's name first.
    pub command_line: Vec<String>,
    /// The claims file, where there was one.
    pub claims: Option<ClaimsRecord>,
    /// Seed of every random state.
    pub seed: u64,
    /// When the run began, UTC, RFC 3339.
    pub started: String,
    /// Wall time of the run in seconds.
    pub seconds: f64,
}

/// The claims file that was judged.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ClaimsRecord {
    /// Its path as it was given.
    pub path: String,
    /// SHA-256 of its bytes, in hexadecimal.
    pub digest: String,
}

/// One study: a measurement with an id of its own.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct StudyRecord {
    /// `order-1`, `modes-2`, ...: what a verdict names as its evidence.
    pub id: String,
    /// Which scheme of [`Results::schemes`], or the name of the only one.
    pub scheme: String,
    /// What was measured.
    #[serde(flatten)]
    pub study: Study,
    /// Why the study ended before its time, where it did: one sentence. What was measured until then stands.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub stopped: Option<String>,
    /// What a reader should know beside the numbers: a trap that a choice falls into, a symmetry, a note of the scheme.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub notes: Vec<String>,
}

/// The kinds of study; `kind` in the file.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Study {
    /// A refinement study.
    Order(OrderRecord),
    /// A Fourier study.
    Modes(ModesRecord),
    /// A study of the stable steps.
    Stability(StabilityRecord),
    /// A study of invariants.
    Invariants(InvariantsRecord),
    /// The uncertainty of a table of values.
    Uncertainty(UncertaintyRecord),
    /// A study of the operator of a bounded problem.
    Operator(OperatorRecord),
}

impl Study {
    /// The kind's name, as in the file and in ids.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Order(_) => "order",
            Self::Modes(_) => "modes",
            Self::Stability(_) => "stability",
            Self::Invariants(_) => "invariants",
            Self::Uncertainty(_) => "uncertainty",
            Self::Operator(_) => "operator",
        }
    }

    /// The equation's name; empty where there is none.
    pub fn equation(&self) -> &str {
        match self {
            Self::Order(record) => &record.equation,
            Self::Modes(record) => &record.equation,
            Self::Stability(record) => &record.equation,
            Self::Invariants(record) => &record.equation,
            Self::Uncertainty(_) => "",
            Self::Operator(record) => &record.equation,
        }
    }
}

/// What became of a claim.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Verdict {
    /// The evidence supports the claim.
    Upheld,
    /// The evidence does not suffice; the reason says why and what would decide it. Never upheld by default.
    Undecided,
    /// The evidence speaks against the claim.
    Refuted,
}

impl Verdict {
    /// The word, as on every page.
    pub fn word(self) -> &'static str {
        match self {
            Self::Upheld => "upheld",
            Self::Undecided => "undecided",
            Self::Refuted => "refuted",
        }
    }

    /// The verdict on several claims together; `None` without claims.
    pub fn overall(verdicts: impl IntoIterator<Item = Self>) -> Option<Self> {
        verdicts.into_iter().max()
    }
}

/// A claim with its verdict.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct VerdictRecord {
    /// The claim's id: its kind and its number in the claims file.
    pub claim: String,
    /// Which scheme of [`Results::schemes`], or the name of the only one.
    pub scheme: String,
    /// The claim in words.
    pub text: String,
    /// The number that was claimed, where the claim has one: pages draw it beside what was measured.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub claimed: Option<Claimed>,
    /// What became of it.
    pub verdict: Verdict,
    /// Why, in a sentence with its numbers.
    pub reason: String,
    /// What would decide it, where it is undecided.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub decided_by: Option<String>,
    /// Ids of the studies that the verdict rests on.
    pub evidence: Vec<String>,
}

/// The number in a claim.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Claimed {
    /// What it is a value of: `order`, `stable_up_to`, `phase_speed_error`, ...
    pub quantity: String,
    /// The value.
    pub value: f64,
    /// How far the measurement may miss it, where the verdict's rule has such a figure.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub tolerance: Option<f64>,
    /// The field it is about, where there are several.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub field: Option<String>,
    /// The norm it is about: `l1`, `l2` or `linf`.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub norm: Option<String>,
}

/// The time now, UTC, RFC 3339 to the second.
pub fn utc_now() -> String {
    humantime::format_rfc3339_seconds(std::time::SystemTime::now()).to_string()
}

/// `value` where it is finite: the null rule of results files.
pub fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}

/// `value` with at most nine significant digits, for sentences: limits are found by bisection, and more would be noise.
pub fn nine_digits(value: f64) -> String {
    format!("{value:.8e}").parse::<f64>().unwrap_or(value).to_string()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_refuted_claim_refutes_the_whole_and_no_claim_decides_nothing() {
        use Verdict::{Refuted, Undecided, Upheld};
        assert_eq!(Verdict::overall([Upheld, Undecided, Refuted, Upheld]), Some(Refuted));
        assert_eq!(Verdict::overall([Upheld, Undecided]), Some(Undecided));
        assert_eq!(Verdict::overall([Upheld]), Some(Upheld));
        assert_eq!(Verdict::overall([]), None);
    }
}
