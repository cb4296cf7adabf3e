//! The scheme's side of the conversation: answers requests from a [`Scheme`].

use std::io::{self, BufReader};
use std::panic::{AssertUnwindSafe, catch_unwind};

use serde_json::{Map, Value, json};

use super::decode::{count, known_keys, member, number, typed};
use super::{Arrays, Body, Lines, Message, MessageError, Outgoing, Transport, code};
use crate::{
    Advance, BoundaryData, Case, Description, Fields, Harness, March, Offer, Scheme, SchemeError, Side, panic_message,
};

/// Why serving ended before the conversation did.
#[derive(Debug, thiserror::Error)]
pub enum ServeError {
    /// The pipes failed.
    #[error("the conversation's pipes failed: {0}")]
    Io(io::Error),
    /// The harness broke the rules in the middle of a request.
    #[error("the harness broke the rules of the conversation: {0}")]
    Message(#[from] MessageError),
    /// The harness closed the conversation in the middle of a request.
    #[error("the harness closed the conversation in the middle of a request")]
    Closed,
}

/// Serves `scheme` on stdin and stdout until the harness closes stdin. Descriptor 1 is kept for the conversation, and what the
/// program prints goes to stderr.
///
/// # Errors
/// The pipes failed, or the harness broke the rules.
pub fn serve(mut scheme: impl Scheme) -> Result<(), ServeError> {
    let writer = conversation_output()?;
    let mut lines = Lines::new(BufReader::with_capacity(1 << 16, io::stdin()), writer);
    serve_over(&mut scheme, &mut lines)
}

#[cfg(unix)]
fn conversation_output() -> io::Result<std::fs::File> {
    use std::os::fd::AsFd;
    let kept = io::stdout().as_fd().try_clone_to_owned()?;
    rustix::stdio::dup2_stdout(io::stderr())?;
    Ok(std::fs::File::from(kept))
}

#[cfg(not(unix))]
fn conversation_output() -> io::Result<io::Stdout> {
    Ok(io::stdout())
}

/// Serves `scheme` over a transport until the other side closes it. A panic of the scheme is answered as an error.
///
/// # Errors
/// The transport failed, or the harness broke the rules in the middle of a request.
pub fn serve_over<T: Transport>(scheme: &mut dyn Scheme, transport: &mut T) -> Result<(), T::Error>
where
    ServeError: Into<T::Error>,
{
    let description = scheme.describe();
    let mut server = Server { scheme, description, names: None, levels: 1 };
    while let Some(message) = transport.receive()? {
        match message {
            Ok(message) => server.answer(&message, transport)?,
            Err(error) => transport.send(&Outgoing::error(Value::Null, code::PARSE, &error.to_string()))?,
        }
    }
    Ok(())
}

struct Server<'s> {
    scheme: &'s mut dyn Scheme,
    description: Description,
    /// The names of the fields of the prepared case.
    names: Option<Vec<String>>,
    levels: usize,
}

/// Why a request gets an error for an answer.
enum No {
    Scheme(SchemeError),
    Parameters(MessageError),
}

impl From<SchemeError> for No {
    fn from(error: SchemeError) -> Self {
        Self::Scheme(error)
    }
}

impl From<MessageError> for No {
    fn from(error: MessageError) -> Self {
        Self::Parameters(error)
    }
}

impl Server<'_> {
    fn answer<T: Transport>(&mut self, message: &Message, transport: &mut T) -> Result<(), T::Error>
    where
        ServeError: Into<T::Error>,
    {
        let Body::Request { method, params } = &message.body else {
            let text = "an answer came where no question was open";
            return transport.send(&Outgoing::error(Value::Null, code::INVALID_REQUEST, text));
        };
        let id = || message.id.clone();
        let mut work = Work { message, params, state: Vec::new(), earlier: Vec::new() };
        let mut asker = Asker { transport, next: 1, names: self.names.clone().unwrap_or_default(), broken: None };
        let outcome = catch_unwind(AssertUnwindSafe(|| self.work(method, &mut work, &mut asker)));
        let broken = asker.broken.take();
        if let Some(error) = broken {
            return Err(error);
        }
        match outcome {
            Ok(Ok(Reply { mut value, state, earlier })) => {
                let mut arrays = Arrays::default();
                let names = self.names.as_deref().unwrap_or_default();
                if let Some(key) = state {
                    value.insert(key.to_owned(), arrays.table(names, &work.state));
                }
                if earlier {
                    let levels = work.earlier.iter().map(|level| arrays.table(names, level)).collect();
                    value.insert("earlier".to_owned(), levels);
                }
                transport.send(&Outgoing::answer(id(), Value::Object(value), arrays))
            }
            Ok(Err(No::Scheme(error))) => transport.send(&Outgoing::refusal(id(), &error)),
            Ok(Err(No::Parameters(error))) => {
                transport.send(&Outgoing::error(id(), code::INVALID_PARAMETERS, &error.to_string()))
            }
            Err(panic) => {
                let error = SchemeError::Panicked(panic_message(panic.as_ref()));
                transport.send(&Outgoing::refusal(id(), &error))
            }
        }
    }

    fn work<T: Transport>(&mut self, method: &str, work: &mut Work<'_>, asker: &mut Asker<'_, T>) -> Result<Reply, No>
    where
        ServeError: Into<T::Error>,
    {
        match method {
            "describe" => {
                let value = serde_json::to_value(&self.description).expect("a description is plain data");
                Ok(Reply::of(value))
            }
            "prepare" => self.prepare(work, asker),
            "advance" | "march" | "rate" | "solve" if self.names.is_none() => Err(SchemeError::NotPrepared.into()),
            "advance" => {
                self.read_state(work, "state")?;
                self.read_earlier(work)?;
                let params = work.object()?;
                let (time, step) = (number(params, "time", "params")?, number(params, "step", "params")?);
                let steps = count(params, "steps", "params")?;
                let request = Advance { time, step, steps, state: &mut work.state, earlier: &mut work.earlier };
                self.scheme.advance(request, asker)?;
                Ok(Reply { earlier: self.levels > 1, ..Reply::state("state") })
            }
            "march" => {
                self.read_state(work, "state")?;
                let params = work.object()?;
                let (time, until) = (number(params, "time", "params")?, number(params, "until", "params")?);
                let tolerance = params.get("tolerance").and_then(Value::as_f64);
                let steps = self.scheme.march(March { time, until, state: &mut work.state, tolerance }, asker)?;
                Ok(Reply::state("state").with("steps", json!(steps)))
            }
            "rate" => {
                self.read_state(work, "state")?;
                let time = number(work.object()?, "time", "params")?;
                work.state = self.scheme.rate(time, &work.state, asker)?;
                Ok(Reply::state("rate"))
            }
            "solve" => {
                self.read_state(work, "guess")?;
                let solution = self.scheme.solve(&work.state, asker)?;
                work.state = solution.state;
                let mut reply = Reply::state("state");
                if let Some(iterations) = solution.iterations {
                    reply = reply.with("iterations", json!(iterations));
                }
                if let Some(residual) = solution.residual {
                    reply = reply.with("residual", json!(residual));
                }
                Ok(reply)
            }
            other => Err(SchemeError::NotOffered(format!("method `{other}`")).into()),
        }
    }

    fn prepare<T: Transport>(&mut self, work: &mut Work<'_>, asker: &mut Asker<'_, T>) -> Result<Reply, No>
    where
        ServeError: Into<T::Error>,
    {
        self.names = None;
        let case: Case = typed(work.message.restored(work.params), "params")?;
        let offer = self.description.offer_for(&case);
        let offer = offer.ok_or_else(|| SchemeError::NotOffered(format!("equation `{}` as asked", case.equation)))?;
        let names = offer.field_names(case.dimensions).ok_or_else(|| unnamed(offer))?;
        self.levels = offer.levels;
        asker.transport.set_encoding(case.arrays);
        asker.names.clone_from(&names);
        let nodes = self.scheme.prepare(&case, asker)?;
        self.names = Some(names);
        Ok(match nodes {
            Some(nodes) => Reply::of(json!({"offsets": nodes.offsets, "weights": nodes.weights})),
            None => Reply::of(json!({})),
        })
    }

    fn read_state(&self, work: &mut Work<'_>, key: &str) -> Result<(), No> {
        let names = self.names.as_deref().unwrap_or_default();
        let value = member(work.object()?, key, "params")?;
        work.state = work.message.new_table(value, key, names)?;
        Ok(())
    }

    fn read_earlier(&self, work: &mut Work<'_>) -> Result<(), No> {
        let names = self.names.as_deref().unwrap_or_default();
        let earlier = work.object()?.get("earlier");
        let levels = earlier.map_or(Ok(&[][..]), |value| work.message.members(value, "earlier"))?;
        let (found, expected) = (levels.len(), self.levels - 1);
        if found != expected {
            return Err(MessageError::WrongLength { place: "earlier".to_owned(), expected, found }.into());
        }
        let read = |level| work.message.new_table(level, "earlier", names);
        work.earlier = levels.iter().map(read).collect::<Result<_, _>>()?;
        Ok(())
    }
}

fn unnamed(offer: &Offer) -> SchemeError {
    SchemeError::Failed(format!(
        "the offer of `{}` must list its fields: the contract does not know them",
        offer.equation
    ))
}

/// A request being worked on.
struct Work<'m> {
    message: &'m Message,
    params: &'m Value,
    state: Fields,
    earlier: Vec<Fields>,
}

impl<'m> Work<'m> {
    fn object(&self) -> Result<&'m Map<String, Value>, MessageError> {
        self.message.object(self.params, "params")
    }
}

/// What is answered: an object, and under which key the state goes into it.
struct Reply {
    value: Map<String, Value>,
    state: Option<&'static str>,
    earlier: bool,
}

impl Reply {
    fn of(value: Value) -> Self {
        let value = if let Value::Object(object) = value { object } else { Map::new() };
        Self { value, state: None, earlier: false }
    }

    fn state(key: &'static str) -> Self {
        Self { value: Map::new(), state: Some(key), earlier: false }
    }

    fn with(mut self, key: &str, value: Value) -> Self {
        self.value.insert(key.to_owned(), value);
        self
    }
}

/// Asks the harness over the transport.
struct Asker<'t, T: Transport> {
    transport: &'t mut T,
    next: u64,
    names: Vec<String>,
    /// A failure of the transport, after which the conversation cannot go on.
    broken: Option<T::Error>,
}

impl<T: Transport> Asker<'_, T>
where
    ServeError: Into<T::Error>,
{
    fn ask(&mut self, method: &str, params: Value, arrays: Arrays<'_>) -> Result<Message, SchemeError> {
        if self.broken.is_some() {
            return Err(SchemeError::Failed("the conversation is broken".to_owned()));
        }
        match self.exchange(&Outgoing::request(self.next, method, params, arrays)) {
            Ok(message) => match &message.body {
                Body::Error { code, message } => Err(SchemeError::from_code(*code, message.clone())),
                _ => Ok(message),
            },
            Err(error) => {
                let text = SchemeError::Failed("the conversation is broken".to_owned());
                self.broken = Some(error);
                Err(text)
            }
        }
    }

    fn exchange(&mut self, question: &Outgoing<'_>) -> Result<Message, T::Error> {
        self.next += 1;
        self.transport.send(question)?;
        Ok(self.transport.receive()?.ok_or_else(|| ServeError::Closed.into())??)
    }

    fn read<R>(&mut self, result: Result<R, MessageError>) -> Result<R, SchemeError> {
        result.map_err(|error| SchemeError::Failed(format!("the harness's answer: {error}")))
    }
}

impl<T: Transport> Harness for Asker<'_, T>
where
    ServeError: Into<T::Error>,
{
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let mut arrays = Arrays::default();
        let mut params = json!({"time": time});
        if let Some(points) = points {
            params["points"] = arrays.list(points);
        }
        let message = self.ask("source", params, arrays)?;
        let Body::Answer(value) = &message.body else { return Err(no_answer()) };
        let fields = message.new_table(value, "source", &self.names);
        self.read(fields)
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let mut params = json!({"time": time, "side": side.name()});
        if layers > 0 {
            params["layers"] = json!(layers);
        }
        let message = self.ask("boundary", params, Arrays::default())?;
        let Body::Answer(value) = &message.body else { return Err(no_answer()) };
        let data = boundary_data(&message, value, &self.names, layers);
        self.read(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let mut arrays = Arrays::default();
        let mut params = json!({"time": time, "name": name});
        if let Some(points) = points {
            params["points"] = arrays.list(points);
        }
        let message = self.ask("coefficient", params, arrays)?;
        let Body::Answer(value) = &message.body else { return Err(no_answer()) };
        let fields = match value {
            Value::Array(_) => message.arrays(value, "coefficient"),
            _ => {
                let mut values = Vec::new();
                message.array(value, "coefficient", &mut values).map(|()| vec![values])
            }
        };
        self.read(fields)
    }
}

fn no_answer() -> SchemeError {
    SchemeError::Failed("the harness asked where an answer was due".to_owned())
}

fn boundary_data(
    message: &Message,
    value: &Value,
    names: &[String],
    layers: usize,
) -> Result<BoundaryData, MessageError> {
    let object = message.object(value, "boundary")?;
    known_keys(object, "boundary", &["value", "gradient", "ghost"])?;
    let table = |key| message.new_table(member(object, key, "boundary")?, key, names);
    let mut data = BoundaryData { value: table("value")?, gradient: table("gradient")?, ghost: Vec::new() };
    if layers > 0 {
        let ghost = message.object(member(object, "ghost", "boundary")?, "ghost")?;
        let field = |name: &String| message.arrays(member(ghost, name, "ghost")?, "ghost");
        data.ghost = names.iter().map(field).collect::<Result<_, _>>()?;
    }
    Ok(data)
}
