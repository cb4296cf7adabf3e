//! A conversation with a scheme, step by step: what was understood, what is wrong with an answer, how to mend it.

mod combinations;
mod listener;
mod studies;
mod trial;

use gridassay_scheme::ArrayEncoding;

use self::combinations::{Combination, all};
use crate::host::{HostError, SchemeSource, Session};
use trial::Trial;

/// How a step went.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    /// It was understood and is right.
    Good,
    /// A person should know of it; it breaks no rule.
    Note,
    /// It is wrong.
    Wrong,
}

/// One step of a greeting.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Step {
    /// How it went.
    pub standing: Standing,
    /// What was found.
    pub text: String,
    /// How to mend it.
    pub mend: Option<&'static str>,
}

impl Step {
    fn good(text: impl Into<String>) -> Self {
        Self { standing: Standing::Good, text: text.into(), mend: None }
    }

    fn note(text: impl Into<String>, mend: &'static str) -> Self {
        Self { standing: Standing::Note, text: text.into(), mend: Some(mend) }
    }

    fn wrong(text: impl Into<String>, mend: &'static str) -> Self {
        Self { standing: Standing::Wrong, text: text.into(), mend: Some(mend) }
    }
}

/// Most steps that are told of one offer: a mistake that shows in every combination is told once or twice, not a hundred times.
const TOLD: usize = 4;

/// Greets a scheme; `tell` hears each step as it is taken. Answers whether nothing was wrong.
///
/// # Errors
/// The scheme could not be started, or did not say who it is.
pub fn greet(source: &SchemeSource, tell: &mut dyn FnMut(&Step)) -> Result<bool, HostError> {
    let mut session = Session::open(source)?;
    introduce(&session, tell);
    let mut well = true;
    let description = session.description().clone();
    for offer in &description.offers {
        for dimensions in &offer.dimensions {
            let name = format!("`{}` in {dimensions}-D", offer.equation);
            let combinations = match all(offer, *dimensions) {
                Ok(combinations) => combinations,
                Err(sentence) => {
                    tell(&Step::note(format!("{name}: not tried: {sentence}"), "a problem file tries it"));
                    continue;
                }
            };
            let mut steps = Vec::new();
            for combination in &combinations {
                for step in tried(&mut session, combination) {
                    if !steps.contains(&step) {
                        steps.push(step);
                    }
                }
            }
            let wrong = steps.iter().filter(|step| step.standing == Standing::Wrong).count();
            well &= wrong == 0;
            let count = combinations.len();
            let found = if wrong == 0 { "each was answered as the contract asks" } else { "not all is well" };
            let plural = if count == 1 { "combination" } else { "combinations" };
            let heading =
                format!("{name}: {count} {plural} of boundaries, grids, callbacks and operations tried; {found}");
            let standing = if wrong == 0 { Standing::Good } else { Standing::Wrong };
            tell(&Step { standing, text: heading, mend: None });
            steps.sort_by_key(|step| std::cmp::Reverse(step.standing == Standing::Wrong));
            steps.iter().take(TOLD).for_each(&mut *tell);
            if steps.len() > TOLD {
                tell(&Step {
                    standing: Standing::Note,
                    text: format!("and {} more of the kind", steps.len() - TOLD),
                    mend: None,
                });
            }
        }
    }
    studies::list(session.description()).iter().for_each(tell);
    Ok(well)
}

fn introduce(session: &Session, tell: &mut dyn FnMut(&Step)) {
    let description = session.description();
    let version = if description.version.is_empty() { "(no version)" } else { &description.version };
    tell(&Step::good(format!("it is `{}`, version {version}, and speaks version 1 of the contract", description.name)));
    if !session.identity().digest.is_empty() {
        tell(&Step::good(format!("its files have the SHA-256 {}", session.identity().digest)));
    }
    if session.identity().flush_to_zero == Some(true) {
        let text = "loading it switches flush-to-zero on; the harness switched it off again";
        tell(&Step::note(text, "link without -ffast-math, so that it computes the same elsewhere"));
    }
    if session.identity().route == "command" {
        match description.arrays.contains(&ArrayEncoding::Base64) {
            true => tell(&Step::good("it understands arrays as base64, which the harness will use")),
            false => tell(&Step::note(
                "it understands arrays as text alone",
                "offer `\"arrays\": [\"text\", \"base64\"]`: many times faster from some thousand values on",
            )),
        }
    }
}

/// What there is to say of one combination; a scheme that understands both encodings must answer the same in both.
fn tried(session: &mut Session, combination: &Combination) -> Vec<Step> {
    let understood = session.description().arrays.clone();
    let both = session.identity().route == "command" && understood.len() > 1;
    session.use_encoding(None);
    let (mut steps, answer) = Trial::new(session, combination).run();
    if let (true, Some(answer)) = (both, answer) {
        session.use_encoding(Some(ArrayEncoding::Text));
        let (_, as_text) = Trial::new(session, combination).run();
        if as_text.is_some_and(|as_text| as_text != answer) {
            steps.push(Step::wrong(
                format!("{combination}: arrays as text and as base64 lead to different answers"),
                "write every number with 17 significant digits, and bytes in little-endian order",
            ));
        }
        session.use_encoding(None);
    }
    steps
}
