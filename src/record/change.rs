//! Whether two results files say the same: every value is compared, but when a run took place, how long it took and how it was called.

use serde_json::Value;

use super::{Results, Study};

/// One place at which two results differ.
#[derive(Clone, Debug, PartialEq)]
pub struct Change {
    /// Where: keys and numbers of members, separated by dots.
    pub place: String,
    /// What stood there; `None`: nothing.
    pub before: Option<Value>,
    /// What stands there; `None`: nothing.
    pub after: Option<Value>,
}

/// Every place at which `after` differs from `before`, in the order of the file. Numbers are compared to the last bit.
pub fn changes(before: &Results, after: &Results) -> Vec<Change> {
    let (before, after) = (lasting(before), lasting(after));
    let mut changes = Vec::new();
    compare(String::new(), Some(&before), Some(&after), &mut changes);
    changes
}

/// The results without what no two runs share.
fn lasting(results: &Results) -> Value {
    let mut results = results.clone();
    results.run.started.clear();
    results.run.seconds = 0.0;
    results.run.command_line.clear();
    for study in &mut results.studies {
        if let Study::Order(record) = &mut study.study {
            record.levels.iter_mut().for_each(|level| level.seconds = None);
        }
    }
    serde_json::to_value(results).expect("results hold only text, numbers and lists")
}

fn compare(place: String, before: Option<&Value>, after: Option<&Value>, changes: &mut Vec<Change>) {
    let within = |key: &str| if place.is_empty() { key.to_owned() } else { format!("{place}.{key}") };
    match (before, after) {
        (Some(before), Some(after)) if before == after => {}
        (Some(Value::Object(before)), Some(Value::Object(after))) => {
            let new: Vec<String> = after.keys().filter(|key| !before.contains_key(*key)).cloned().collect();
            let keys: Vec<String> = before.keys().cloned().chain(new).collect();
            for key in keys {
                compare(within(&key), before.get(&key), after.get(&key), changes);
            }
        }
        (Some(Value::Array(before)), Some(Value::Array(after))) => {
            for index in 0..before.len().max(after.len()) {
                compare(within(&index.to_string()), before.get(index), after.get(index), changes);
            }
        }
        (before, after) => {
            changes.push(Change { place, before: before.cloned(), after: after.cloned() });
        }
    }
}
