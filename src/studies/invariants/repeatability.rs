//! Repeatability: the answer depends on the question and the case alone.

use gridassay_scheme::{Fields, NoCallbacks};

use super::run::Moving;
use super::states::{self, Family, Pattern};
use super::tally::{self, Tally};
use super::trial::{Prepared, Trial};
use crate::host::Session;
use crate::record::WorstPlace;
use crate::studies::Stop;

/// Steps of the question; they are also asked for in two halves and one by one.
const STEPS: usize = 10;

/// Asks one question in many circumstances. `other` is a case to be prepared in between.
///
/// # Errors
/// The scheme refused or failed.
pub fn check(
    session: &mut Session,
    trial: &Trial,
    other: Option<&Trial>,
    prepared: &Prepared,
    seed: u64,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let question = Question { trial, prepared, seed };
    session.prepare(&trial.case, &mut NoCallbacks)?;
    let first = question.ask(session, &[STEPS])?;
    for (groups, words) in [(vec![5, 5], "2 x 5 steps against 10"), (vec![1; STEPS], "10 x 1 steps against 10")] {
        let grouped = question.ask(session, &groups)?;
        // A scheme may carry its state in another form from step to step, which it leaves at the end of a request.
        let allowed = tally::rounding(STEPS, trial.cell_count());
        question.note(&grouped, &first, words, allowed, tally);
    }
    question.disturb(session, trial, prepared)?;
    let again = question.ask(session, &[STEPS])?;
    question.note(&again, &first, "the same question after others", 0.0, tally);
    session.prepare(&trial.case, &mut NoCallbacks)?;
    let again = question.ask(session, &[STEPS])?;
    question.note(&again, &first, "the same question after the case was prepared again", 0.0, tally);
    if let Some(other) = other {
        let nodes = session.prepare(&other.case, &mut NoCallbacks)?;
        question.disturb(session, other, &other.prepared(nodes)?)?;
        session.prepare(&trial.case, &mut NoCallbacks)?;
        let again = question.ask(session, &[STEPS])?;
        question.note(&again, &first, "the same question after another case", 0.0, tally);
    }
    match session.reopened() {
        Some(fresh) => {
            let mut fresh = fresh?;
            fresh.prepare(&trial.case, &mut NoCallbacks)?;
            let again = question.ask(&mut fresh, &[STEPS])?;
            question.note(&again, &first, "the same question to the scheme started anew", 0.0, tally);
        }
        None => {
            let sentence = "the scheme lives in this process and was not started anew";
            if !tally.remarks.iter().any(|remark| remark == sentence) {
                tally.remarks.push(sentence.to_owned());
            }
        }
    }
    Ok(())
}

struct Question<'a> {
    trial: &'a Trial,
    prepared: &'a Prepared,
    seed: u64,
}

impl Question<'_> {
    fn pattern(&self) -> Pattern {
        if self.trial.case.equation == "incompressible" { Pattern::Smooth } else { Pattern::Noise }
    }

    /// The answer after steps in these groups, a request a group.
    fn ask(&self, session: &mut Session, groups: &[usize]) -> Result<Moving, Stop> {
        let fields = states::state(self.trial, self.prepared, self.pattern(), Family::Mixed, self.seed)?;
        let mut moving = Moving::new(self.trial, fields);
        groups.iter().try_for_each(|steps| moving.take(session, self.trial, *steps, &mut NoCallbacks))?;
        Ok(moving)
    }

    /// Asks something else: another state, another step, another number of steps, another time.
    fn disturb(&self, session: &mut Session, trial: &Trial, prepared: &Prepared) -> Result<(), Stop> {
        let trial = Trial { step: 0.61 * trial.step, ..trial.clone() };
        let fields = states::state(&trial, prepared, self.pattern(), Family::NonNegative, self.seed + 1)?;
        let mut moving = Moving { time: 17.3, ..Moving::new(&trial, fields) };
        moving.take(session, &trial, 3, &mut NoCallbacks)
    }

    fn note(&self, found: &Moving, expected: &Moving, words: &str, allowed: f64, tally: &mut Tally) {
        let levels = |moving: &Moving| -> Fields {
            std::iter::once(&moving.fields).chain(&moving.earlier).flatten().cloned().collect()
        };
        let (found, expected) = (levels(found), levels(expected));
        let (field, index, difference) = tally::farthest(&found, &expected);
        let relative = if difference == 0.0 { 0.0 } else { difference / tally::size(&expected) };
        if relative > 0.0 && relative <= allowed {
            let remark = format!("{words} differ by rounding, {relative:.1e}");
            tally.remarks.retain(|known| !known.starts_with(words));
            tally.remarks.push(remark);
        }
        tally.note(relative, allowed, || WorstPlace {
            setting: self.trial.setting,
            run: words.to_owned(),
            field: self.trial.names.get(field % self.trial.names.len()).cloned(),
            cell: super::cell_of_index(self.trial, index),
            step: Some(STEPS),
        });
    }
}
