//! What a scheme asks back, answered from the harness of the case.

use gridassay_scheme::conversation::decode::{known_keys, member, number};
use gridassay_scheme::conversation::{Arrays, Body, Message, MessageError, Outgoing, Transport, boundary_value, code};
use gridassay_scheme::{BoundaryData, Fields, Harness, SchemeError, Side};
use serde_json::{Map, Value, json};

use super::FaultKind;
use super::wire::Wire;

/// More layers than any stencil has.
const MOST_LAYERS: usize = 64;

/// Why a question has no answer.
enum No {
    /// The question makes no sense: a fault of the scheme.
    Nonsense(String),
    /// The case has no such data, or it cannot be evaluated.
    Scheme(SchemeError),
}

impl From<MessageError> for No {
    fn from(error: MessageError) -> Self {
        Self::Nonsense(error.to_string())
    }
}

impl From<SchemeError> for No {
    fn from(error: SchemeError) -> Self {
        Self::Scheme(error)
    }
}

/// What the harness knows, to be written.
enum Known {
    Source(Fields),
    Boundary(BoundaryData, usize),
    Sides(Vec<(Side, BoundaryData)>, usize),
    Coefficient(Fields),
}

/// Answers one question. A question that makes no sense is answered by an error too, and then is the scheme's fault.
pub(super) fn answer(
    wire: &mut Wire,
    question: &Message,
    names: &[String],
    harness: &mut dyn Harness,
) -> Result<(), FaultKind> {
    let id = question.id.clone();
    match known(question, harness) {
        Ok(known) => {
            let mut arrays = Arrays::default();
            let value = written(&known, names, &mut arrays);
            wire.send(&Outgoing::answer(id, value, arrays))
        }
        Err(No::Scheme(error)) => wire.send(&Outgoing::refusal(id, &error)),
        Err(No::Nonsense(reason)) => {
            wire.send(&Outgoing::error(id, code::INVALID_PARAMETERS, &reason))?;
            Err(FaultKind::BadQuestion { reason })
        }
    }
}

fn known(question: &Message, harness: &mut dyn Harness) -> Result<Known, No> {
    let Body::Request { method, params } = &question.body else {
        return Err(No::Nonsense("an answer is no question".to_owned()));
    };
    let object = question.object(params, method)?;
    match method.as_str() {
        "source" => {
            known_keys(object, method, &["time", "points"])?;
            let points = points(question, object, method)?;
            Ok(Known::Source(harness.source(time(object, method)?, points.as_deref())?))
        }
        "boundary" => boundary(question, object, harness),
        "coefficient" => {
            known_keys(object, method, &["time", "name", "points"])?;
            let name = question.restored(member(object, "name", method)?);
            let name = name.as_str().ok_or_else(|| No::Nonsense("coefficient.name is no text".to_owned()))?;
            let points = points(question, object, method)?;
            Ok(Known::Coefficient(harness.coefficient(name, time(object, method)?, points.as_deref())?))
        }
        other => Err(No::Nonsense(format!("`{other}` is none of `source`, `boundary` and `coefficient`"))),
    }
}

fn boundary(question: &Message, object: &Map<String, Value>, harness: &mut dyn Harness) -> Result<Known, No> {
    known_keys(object, "boundary", &["time", "side", "sides", "layers"])?;
    let time = time(object, "boundary")?;
    let layers = match object.get("layers") {
        Some(value) => {
            let layers = value.as_u64().filter(|layers| *layers <= MOST_LAYERS as u64);
            layers.ok_or_else(|| No::Nonsense(format!("boundary.layers is {value}, not 0 to {MOST_LAYERS}")))? as usize
        }
        None => 0,
    };
    match (object.get("side"), object.get("sides")) {
        (Some(name), None) => Ok(Known::Boundary(harness.boundary(time, side(name)?, layers)?, layers)),
        (None, Some(list)) => {
            let list = question.restored(list);
            let names = list.as_array().ok_or_else(|| No::Nonsense("boundary.sides is no list".to_owned()))?;
            let mut data = Vec::with_capacity(names.len());
            for name in names {
                let side = side(name)?;
                data.push((side, harness.boundary(time, side, layers)?));
            }
            Ok(Known::Sides(data, layers))
        }
        _ => Err(No::Nonsense("boundary has to have either `side` or `sides`".to_owned())),
    }
}

fn side(name: &Value) -> Result<Side, No> {
    name.as_str().and_then(Side::named).ok_or_else(|| {
        let known = Side::ALL.map(Side::name).join(", ");
        let mut found = name.to_string();
        if let Some((end, _)) = found.char_indices().nth(40) {
            found.truncate(end);
        }
        No::Nonsense(format!("boundary.side is {found}; the sides are {known}"))
    })
}

fn time(object: &Map<String, Value>, method: &str) -> Result<f64, No> {
    let time = number(object, "time", method)?;
    if time.is_finite() { Ok(time) } else { Err(No::Nonsense(format!("{method}.time is not finite"))) }
}

fn points(question: &Message, object: &Map<String, Value>, method: &str) -> Result<Option<Fields>, No> {
    let Some(value) = object.get("points") else { return Ok(None) };
    let points = question.arrays(value, &format!("{method}.points"))?;
    match points.iter().find(|axis| axis.len() != points[0].len()) {
        Some(axis) => Err(No::Nonsense(format!(
            "{method}.points has {} and {} coordinates for different dimensions",
            points[0].len(),
            axis.len()
        ))),
        None => Ok(Some(points)),
    }
}

fn written<'a>(known: &'a Known, names: &[String], arrays: &mut Arrays<'a>) -> Value {
    match known {
        Known::Source(fields) => arrays.table(names, fields),
        Known::Boundary(data, layers) => boundary_value(names, data, *layers, arrays),
        Known::Sides(sides, layers) => {
            let mut table = json!({});
            for (side, data) in sides {
                table[side.name()] = boundary_value(names, data, *layers, arrays);
            }
            table
        }
        Known::Coefficient(fields) if fields.len() == 1 => arrays.array(&fields[0]),
        Known::Coefficient(fields) => arrays.list(fields),
    }
}
