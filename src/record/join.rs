//! Results that were computed apart, joined.

use super::{Results, Verdict};

/// All studies and verdicts in the order of the parts. Ids and scheme names that occur in several parts get the number of their part.
///
/// `None` where there are no parts.
pub fn join(parts: Vec<Results>) -> Option<Results> {
    let count = parts.len();
    let mut parts = parts.into_iter().enumerate();
    let (_, mut joined) = parts.next()?;
    name_alone(&mut joined, 1);
    for (number, mut part) in parts {
        name_alone(&mut part, number + 1);
        for study in &mut part.studies {
            study.id = format!("part{}-{}", number + 1, study.id);
        }
        for verdict in &mut part.verdicts {
            verdict.claim = format!("part{}-{}", number + 1, verdict.claim);
            verdict.evidence.iter_mut().for_each(|id| *id = format!("part{}-{id}", number + 1));
        }
        joined.run.seconds += part.run.seconds;
        joined.schemes.extend(part.schemes);
        joined.studies.extend(part.studies);
        joined.verdicts.extend(part.verdicts);
    }
    joined.scheme.name = format!("{count} results joined");
    joined.run.claims = None;
    joined.overall = Verdict::overall(joined.verdicts.iter().map(|record| record.verdict));
    Some(joined)
}

/// A part with one scheme gets it into the table of schemes, under a name of its own.
fn name_alone(part: &mut Results, number: usize) {
    if part.schemes.is_empty() {
        let name = format!("{} ({number})", part.scheme.name);
        part.studies.iter_mut().for_each(|study| study.scheme.clone_from(&name));
        part.verdicts.iter_mut().for_each(|verdict| verdict.scheme.clone_from(&name));
        part.schemes.insert(name, part.scheme.clone());
    }
}
