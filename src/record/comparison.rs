//! Results held against earlier ones: what changed, by how much against rounding, and whether it got worse.

use std::collections::BTreeMap;

use serde::Serialize;

use super::{ModesRecord, OrderRecord, Results, StabilityRecord, Study, StudyRecord, Verdict, VerdictRecord};

/// A difference of two amplification factors counts as rounding up to this, beside the uncertainties that the studies state.
pub const ROUNDING: f64 = 64.0 * f64::EPSILON;

/// A stable limit counts as unchanged up to this share: limits are found by bisection from values that carry rounding.
pub const SAME_LIMIT: f64 = 1e-6;

/// What changed from one results file to another.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Contrast {
    /// Claims whose verdict changed, and claims that stand in one file only.
    pub verdicts: Vec<VerdictChange>,
    /// Studies of modes in which G moved by more than rounding.
    pub modes: Vec<ModesChange>,
    /// Observed orders whose intervals lie apart.
    pub orders: Vec<OrderChange>,
    /// Stable ranges that changed.
    pub limits: Vec<LimitChange>,
    /// How many claims and studies of the two files were held against each other.
    pub compared: usize,
}

impl Contrast {
    /// Whether anything got worse: a verdict, an observed order or a stable range.
    pub fn is_worse(&self) -> bool {
        self.verdicts.iter().any(VerdictChange::is_worse)
            || self.orders.iter().any(OrderChange::is_worse)
            || self.limits.iter().any(LimitChange::is_worse)
    }

    /// What came of it, in a few words.
    pub fn sentence(&self) -> &'static str {
        match (self.is_empty(), self.is_worse()) {
            (true, _) => "Nothing changed",
            (false, true) => "Something got worse",
            (false, false) => "Something changed, nothing got worse",
        }
    }

    /// Whether nothing changed beyond rounding.
    pub fn is_empty(&self) -> bool {
        self.verdicts.is_empty() && self.modes.is_empty() && self.orders.is_empty() && self.limits.is_empty()
    }
}

/// A claim whose verdict changed; `None` on the side where the claim does not stand.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct VerdictChange {
    /// The scheme.
    pub scheme: String,
    /// The claim in words.
    pub text: String,
    /// The verdict before.
    pub old: Option<Verdict>,
    /// The verdict now.
    pub new: Option<Verdict>,
    /// Why, now; before, where the claim is gone.
    pub reason: String,
}

impl VerdictChange {
    /// A claim that was upheld and no longer is, that is now refuted, or that is gone.
    pub fn is_worse(&self) -> bool {
        match (self.old, self.new) {
            (Some(old), Some(new)) => new > old,
            (Some(_), None) => true,
            (None, new) => new == Some(Verdict::Refuted),
        }
    }
}

/// A study of modes in which G moved.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ModesChange {
    /// The scheme.
    pub scheme: String,
    /// The study's id in the new file.
    pub study: String,
    /// At how many modes G moved by more than `allowed`.
    pub moved: usize,
    /// The largest |difference of G|.
    pub largest: f64,
    /// k h and branch of the largest difference.
    pub theta: Vec<f64>,
    /// The branch of the largest difference.
    pub branch: String,
    /// What counts as rounding.
    pub allowed: f64,
}

/// An observed order whose intervals lie apart.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct OrderChange {
    /// The scheme.
    pub scheme: String,
    /// The study's id in the new file.
    pub study: String,
    /// The field.
    pub field: String,
    /// The norm.
    pub norm: String,
    /// The interval before.
    pub old: [f64; 2],
    /// The interval now.
    pub new: [f64; 2],
}

impl OrderChange {
    /// A lower order than before.
    pub fn is_worse(&self) -> bool {
        self.new[1] < self.old[0]
    }
}

/// A stable range that changed; `None`: no limit was found.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LimitChange {
    /// The scheme.
    pub scheme: String,
    /// The study's id in the new file.
    pub study: String,
    /// The limit before.
    pub old: Option<f64>,
    /// The limit now.
    pub new: Option<f64>,
}

impl LimitChange {
    /// A smaller range than before.
    pub fn is_worse(&self) -> bool {
        match (self.old, self.new) {
            (_, None) => false,
            (None, Some(_)) => true,
            (Some(old), Some(new)) => new < old,
        }
    }
}

/// Holds `new` against `old`. Claims belong together by scheme and words, studies by scheme, kind and what was measured: numbers in a
/// claims file may have moved.
pub fn contrast(old: &Results, new: &Results) -> Contrast {
    let mut contrast = Contrast::default();
    verdicts(old, new, &mut contrast);
    let before: BTreeMap<_, _> = old.studies.iter().map(|study| (subject(study), study)).collect();
    for study in &new.studies {
        let Some(earlier) = before.get(&subject(study)) else { continue };
        contrast.compared += 1;
        match (&earlier.study, &study.study) {
            (Study::Modes(old), Study::Modes(new)) => contrast.modes.extend(modes(study, old, new)),
            (Study::Order(old), Study::Order(new)) => contrast.orders.extend(orders(study, old, new)),
            (Study::Stability(old), Study::Stability(new)) => contrast.limits.extend(limit(study, old, new)),
            _ => {}
        }
    }
    contrast
}

fn verdicts(old: &Results, new: &Results, contrast: &mut Contrast) {
    let key = |record: &VerdictRecord| (record.scheme.clone(), record.text.clone());
    let change = |record: &VerdictRecord, old, new| VerdictChange {
        scheme: record.scheme.clone(),
        text: record.text.clone(),
        old,
        new,
        reason: record.reason.clone(),
    };
    let before: BTreeMap<_, _> = old.verdicts.iter().map(|record| (key(record), record)).collect();
    for record in &new.verdicts {
        let earlier = before.get(&key(record)).map(|record| record.verdict);
        contrast.compared += usize::from(earlier.is_some());
        if earlier != Some(record.verdict) {
            contrast.verdicts.push(change(record, earlier, Some(record.verdict)));
        }
    }
    let now: Vec<_> = new.verdicts.iter().map(key).collect();
    let gone = old.verdicts.iter().filter(|record| !now.contains(&key(record)));
    contrast.verdicts.extend(gone.map(|record| change(record, Some(record.verdict), None)));
}

/// What a study is about, so that the same question of two files can be found.
fn subject(study: &StudyRecord) -> String {
    let about = match &study.study {
        Study::Order(record) => {
            let cells: Vec<_> = record.levels.iter().map(|level| &level.cells).collect();
            format!("{} {} {:?} {:?} {cells:?}", record.problem, record.operation, record.refine, record.parameters)
        }
        Study::Modes(record) => {
            format!(
                "{} {:?} {:?} {:?}",
                record.equation,
                record.cells,
                (record.courant, record.diffusion_number),
                record.parameters
            )
        }
        Study::Stability(record) => {
            format!("{} {:?} {:?} {:?}", record.equation, record.number, record.held, record.parameters)
        }
        Study::Invariants(record) => format!("{} {:?}", record.equation, record.parameters),
        // Values of the person's own, of which no scheme is asked.
        Study::Uncertainty(_) => study.id.clone(),
        Study::Operator(record) => format!("{} {:?} {:?}", record.equation, record.parameters, record.integrator),
    };
    format!("{} {} {about}", study.scheme, study.study.kind())
}

fn modes(study: &StudyRecord, old: &ModesRecord, new: &ModesRecord) -> Option<ModesChange> {
    let allowed = ROUNDING + old.uncertainty.unwrap_or(0.0) + new.uncertainty.unwrap_or(0.0);
    let pairs = old.modes.iter().zip(&new.modes);
    let distance = |[a, b]: [f64; 2], [c, d]: [f64; 2]| (a - c).hypot(b - d);
    let moved: Vec<_> = pairs
        .map(|(old, new)| (distance(old.amplification, new.amplification), new))
        // A difference that is NaN has moved.
        .filter(|(distance, _)| distance.is_nan() || *distance > allowed)
        .collect();
    let (largest, mode) = moved.iter().max_by(|a, b| a.0.total_cmp(&b.0))?;
    Some(ModesChange {
        scheme: study.scheme.clone(),
        study: study.id.clone(),
        moved: moved.len(),
        largest: *largest,
        theta: mode.theta.clone(),
        branch: mode.branch.clone(),
        allowed,
    })
}

fn orders(study: &StudyRecord, old: &OrderRecord, new: &OrderRecord) -> Vec<OrderChange> {
    let mut changes = Vec::new();
    for (field, norms) in &new.observed {
        for (norm, now) in norms {
            let before =
                old.observed.get(field).and_then(|norms| norms.get(norm)).and_then(|observed| observed.interval);
            let (Some(before), Some(now)) = (before, now.interval) else { continue };
            if now[1] < before[0] || before[1] < now[0] {
                changes.push(OrderChange {
                    scheme: study.scheme.clone(),
                    study: study.id.clone(),
                    field: field.clone(),
                    norm: norm.clone(),
                    old: before,
                    new: now,
                });
            }
        }
    }
    changes
}

fn limit(study: &StudyRecord, old: &StabilityRecord, new: &StabilityRecord) -> Option<LimitChange> {
    let same = match (old.stable_up_to, new.stable_up_to) {
        (Some(old), Some(new)) => (old - new).abs() <= SAME_LIMIT * old.abs().max(new.abs()),
        (old, new) => old == new,
    };
    let change = LimitChange {
        scheme: study.scheme.clone(),
        study: study.id.clone(),
        old: old.stable_up_to,
        new: new.stable_up_to,
    };
    (!same).then_some(change)
}
