//! The harness's side of the conversation with a scheme in another process.

use std::time::Instant;

use gridassay_scheme::conversation::decode::{count, known_keys, member, typed};
use gridassay_scheme::conversation::{Arrays, Body, Message, MessageError, Outgoing, Transport};
use gridassay_scheme::{
    Advance, CONTRACT, Case, Description, Fields, Harness, March, NoCallbacks, Nodes, Offer, SchemeError, Solution,
};
use serde_json::{Value, json};

use super::wire::Wire;
use super::{FaultKind, questions};

/// A scheme that is asked over a wire.
pub(super) struct Remote {
    pub wire: Wire,
    next: u64,
    names: Vec<String>,
}

/// Why a request has no answer.
#[derive(Debug)]
pub(super) enum Failure {
    Refused(SchemeError),
    Fault(FaultKind),
}

impl From<FaultKind> for Failure {
    fn from(kind: FaultKind) -> Self {
        Self::Fault(kind)
    }
}

impl From<MessageError> for Failure {
    fn from(error: MessageError) -> Self {
        Self::Fault(error.into())
    }
}

type Answer<T> = Result<T, Failure>;

impl Remote {
    pub fn new(wire: Wire) -> Self {
        Self { wire, next: 1, names: Vec::new() }
    }

    /// Asks, answers what is asked back, and gives the answer.
    fn ask(
        &mut self,
        method: &str,
        params: Value,
        arrays: Arrays<'_>,
        harness: &mut dyn Harness,
    ) -> Answer<(Message, Value)> {
        let id = self.next;
        self.next += 1;
        self.wire.send(&Outgoing::request(id, method, params, arrays))?;
        loop {
            let Some(message) = self.wire.receive()? else { return Err(self.wire.process.closed("stdout").into()) };
            let mut message = message?;
            if let Body::Request { .. } = &message.body {
                let begun = Instant::now();
                questions::answer(&mut self.wire, &message, &self.names, harness)?;
                self.wire.give_back(begun.elapsed());
                continue;
            }
            // An error without an id says that the scheme could not read the request at all.
            let unread = message.id.is_null() && matches!(message.body, Body::Error { .. });
            if message.id.as_u64() != Some(id) && !unread {
                return Err(other_id(&message.id, id).into());
            }
            return match std::mem::replace(&mut message.body, Body::Answer(Value::Null)) {
                Body::Error { code, message } => Err(Failure::Refused(SchemeError::from_code(code, message))),
                Body::Answer(value) => Ok((message, value)),
                Body::Request { .. } => unreachable!("requests were answered above"),
            };
        }
    }

    /// Asks a library's child process to load the library.
    pub fn load(&mut self, path: &str, name: Option<&str>) -> Answer<bool> {
        let params = json!({"path": path, "name": name});
        let (_, value) = self.ask("load", params, Arrays::default(), &mut NoCallbacks)?;
        Ok(value.get("flush_to_zero").and_then(Value::as_bool).unwrap_or(false))
    }

    pub fn describe(&mut self) -> Answer<Description> {
        let (message, value) = self.ask("describe", json!({}), Arrays::default(), &mut NoCallbacks)?;
        Ok(description(message.restored(&value))?)
    }

    /// `names` are the fields of the offer that takes the case.
    pub fn prepare(&mut self, case: &Case, names: Vec<String>, harness: &mut dyn Harness) -> Answer<Option<Nodes>> {
        self.wire.process.allow_request();
        self.wire.set_encoding(case.arrays);
        self.names = names;
        let params = serde_json::to_value(case).expect("a case is plain data");
        let (message, value) = self.ask("prepare", params, Arrays::default(), harness)?;
        let place = "the answer to `prepare`";
        let object = message.object(&value, place)?;
        known_keys(object, place, &["offsets", "weights"])?;
        if object.is_empty() {
            return Ok(None);
        }
        Ok(Some(typed(message.restored(&value), place)?))
    }

    pub fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Answer<()> {
        self.wire.process.allow_request();
        let names = self.names.clone();
        let mut arrays = Arrays::default();
        let mut params = json!({"time": request.time, "step": request.step, "steps": request.steps});
        params["state"] = arrays.table(&names, request.state);
        if !request.earlier.is_empty() {
            params["earlier"] = request.earlier.iter().map(|level| arrays.table(&names, level)).collect();
        }
        let (message, value) = self.ask("advance", params, arrays, harness)?;
        let place = "the answer to `advance`";
        let object = message.object(&value, place)?;
        known_keys(object, place, &["state", "earlier"])?;
        message.table(member(object, "state", place)?, "state", &names, request.state, true)?;
        if request.earlier.is_empty() {
            return Ok(());
        }
        let levels = message.members(member(object, "earlier", place)?, "earlier")?;
        let (found, expected) = (levels.len(), request.earlier.len());
        if found != expected {
            return Err(MessageError::WrongLength { place: "earlier".to_owned(), expected, found }.into());
        }
        for (index, (level, fields)) in levels.iter().zip(request.earlier).enumerate() {
            message.table(level, &format!("earlier[{index}]"), &names, fields, true)?;
        }
        Ok(())
    }

    pub fn march(&mut self, request: March<'_>, harness: &mut dyn Harness) -> Answer<usize> {
        self.wire.process.allow_request();
        let names = self.names.clone();
        let mut arrays = Arrays::default();
        let mut params = json!({"time": request.time, "until": request.until});
        params["state"] = arrays.table(&names, request.state);
        if let Some(tolerance) = request.tolerance {
            params["tolerance"] = json!(tolerance);
        }
        let (message, value) = self.ask("march", params, arrays, harness)?;
        let place = "the answer to `march`";
        let object = message.object(&value, place)?;
        known_keys(object, place, &["state", "steps"])?;
        message.table(member(object, "state", place)?, "state", &names, request.state, true)?;
        Ok(count(object, "steps", place)?)
    }

    pub fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Answer<Fields> {
        self.wire.process.allow_request();
        let names = self.names.clone();
        let mut arrays = Arrays::default();
        let mut params = json!({"time": time});
        params["state"] = arrays.table(&names, state);
        let (message, value) = self.ask("rate", params, arrays, harness)?;
        let place = "the answer to `rate`";
        let object = message.object(&value, place)?;
        known_keys(object, place, &["rate"])?;
        let mut rate: Fields = state.iter().map(|field| vec![0.0; field.len()]).collect();
        message.table(member(object, "rate", place)?, "rate", &names, &mut rate, true)?;
        Ok(rate)
    }

    pub fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Answer<Solution> {
        self.wire.process.allow_request();
        let names = self.names.clone();
        let mut arrays = Arrays::default();
        let params = json!({"guess": arrays.table(&names, guess)});
        let (message, value) = self.ask("solve", params, arrays, harness)?;
        let place = "the answer to `solve`";
        let object = message.object(&value, place)?;
        known_keys(object, place, &["state", "iterations", "residual"])?;
        let mut state: Fields = guess.iter().map(|field| vec![0.0; field.len()]).collect();
        message.table(member(object, "state", place)?, "state", &names, &mut state, true)?;
        let given = |key: &str| object.get(key).is_some_and(|value| !value.is_null());
        let iterations = if given("iterations") { Some(count(object, "iterations", place)?) } else { None };
        let residual = object.get("residual").and_then(Value::as_f64);
        Ok(Solution { state, iterations, residual })
    }
}

fn other_id(found: &Value, expected: u64) -> FaultKind {
    match found.as_u64() {
        Some(id) if id < expected && id > 0 => FaultKind::AnsweredTwice { id },
        _ => {
            let mut found = found.to_string();
            if let Some((end, _)) = found.char_indices().nth(40) {
                found.truncate(end);
            }
            FaultKind::OtherId { expected, found }
        }
    }
}

/// Reads a description; the version comes first, since another version may have other keys.
fn description(value: Value) -> Result<Description, FaultKind> {
    match value.get("contract") {
        Some(version) if version.as_u64() != Some(u64::from(CONTRACT)) => {
            return Err(FaultKind::OtherContract { found: version.to_string(), ours: CONTRACT });
        }
        _ => {}
    }
    typed(value, "the answer to `describe`").map_err(|error| FaultKind::BadDescription { reason: error.to_string() })
}

/// What no study could use.
pub(super) fn check_description(description: &Description) -> Result<(), FaultKind> {
    let bad = |reason: String| Err(FaultKind::BadDescription { reason });
    if description.contract != CONTRACT {
        return Err(FaultKind::OtherContract { found: description.contract.to_string(), ours: CONTRACT });
    }
    if description.name.trim().is_empty() {
        return bad("its name is empty".to_owned());
    }
    if description.offers.is_empty() {
        return bad("it offers nothing".to_owned());
    }
    for (index, offer) in description.offers.iter().enumerate() {
        let offer_of = format!("offers[{index}] (`{}`)", offer.equation);
        let dimensions_fit = !offer.dimensions.is_empty() && offer.dimensions.iter().all(|d| (1..=3).contains(d));
        if !dimensions_fit {
            return bad(format!("{offer_of} has dimensions {:?}, not some of 1, 2 and 3", offer.dimensions));
        }
        if offer.operations.is_empty() {
            return bad(format!("{offer_of} has no operation"));
        }
        if offer.levels == 0 || offer.shared_order == 0 || offer.cells.multiple == 0 {
            return bad(format!("{offer_of} has a zero for `levels`, `shared_order` or `cells.multiple`"));
        }
        if let Some(fields) = &offer.fields {
            let mut sorted = fields.clone();
            sorted.sort();
            sorted.dedup();
            if sorted.len() != fields.len() || fields.is_empty() || fields.iter().any(String::is_empty) {
                return bad(format!("{offer_of} has fields {fields:?}; each must have a name of its own"));
            }
        }
    }
    Ok(())
}

/// Nodes are needed exactly where the offer says `cell_nodes`, and must be a quadrature.
pub(super) fn check_nodes(description: &Description, case: &Case, nodes: Option<Nodes>) -> Answer<Option<Nodes>> {
    let misfit =
        |reason: String| Failure::from(MessageError::Misfit { place: "the answer to `prepare`".to_owned(), reason });
    let several = |offer: &Offer| offer.values == gridassay_scheme::Values::CellNodes;
    let needed = description.offer_for(case).is_some_and(several);
    let Some(nodes) = nodes else {
        return if needed { Err(misfit("`cell_nodes` needs `offsets` and `weights`".to_owned())) } else { Ok(None) };
    };
    if !needed {
        return Err(misfit("`offsets` and `weights` belong to `cell_nodes` alone".to_owned()));
    }
    let Nodes { offsets, weights } = &nodes;
    if offsets.is_empty() || offsets.len() != weights.len() {
        return Err(misfit(format!("{} offsets and {} weights", offsets.len(), weights.len())));
    }
    let ascending = offsets.windows(2).all(|pair| pair[0] < pair[1]);
    if !ascending || !offsets.iter().all(|offset| (0.0..=1.0).contains(offset)) {
        return Err(misfit(format!("offsets {offsets:?} are not ascending within [0, 1]")));
    }
    // Weights are sums of a few roundings each; eps x count covers what a quadrature table in f64 may miss.
    let sum: f64 = weights.iter().sum();
    let tolerance = 16.0 * f64::EPSILON * weights.len() as f64;
    if (sum - 1.0).abs() <= tolerance { Ok(Some(nodes)) } else { Err(misfit(format!("weights sum to {sum}, not 1"))) }
}
