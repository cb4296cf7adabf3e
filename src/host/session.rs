//! One conversation with one scheme, whatever the way to it.

use std::ffi::OsString;
use std::panic::{AssertUnwindSafe, catch_unwind};

use gridassay_scheme::conversation::MessageError;
use gridassay_scheme::{
    Advance, ArrayEncoding, Case, Description, Fields, Harness, March, Nodes, Operation, Scheme, SchemeError, Solution,
    panic_message,
};

use super::process::Process;
use super::remote::{Failure, Remote, check_description, check_nodes};
use super::wire::{Form, Wire};
use super::{
    Fault, FaultKind, HostError, Identity, Route, SchemeSource, crate_folder, digest, executable, plugin_child,
};

/// One conversation with one scheme. After a fault the next [`prepare`](Session::prepare) starts a fresh process.
pub struct Session {
    source: Option<SchemeSource>,
    runner: Runner,
    description: Description,
    identity: Identity,
    /// Whether the last `prepare` succeeded and no fault came since.
    prepared: bool,
    /// The encoding of arrays that the caller chose.
    encoding: Option<ArrayEncoding>,
    /// What the last process that ended had printed.
    last_words: String,
}

enum Runner {
    InProcess(Box<dyn Scheme>),
    Process(Box<Remote>),
    /// The process ended by a fault.
    Gone,
}

impl Session {
    /// Starts the scheme, asks who it is and checks the answer.
    ///
    /// # Errors
    /// The scheme cannot be found, built or started, or does not describe itself as the contract says.
    pub fn open(source: &SchemeSource) -> Result<Self, HostError> {
        if let Route::Classical(name) = &source.route {
            let mut session = Self::in_process(classical(name)?);
            session.identity.route = source.route.key();
            session.source = Some(source.clone());
            return Ok(session);
        }
        let source = &built(source)?;
        let files = match &source.route {
            Route::Command(command) => digest::command_files(command, &source.folder),
            Route::Plugin { path, .. } => digest::named_file(path, &source.folder),
            Route::Classical(_) => Vec::new(),
        };
        let Started { remote, description, flush_to_zero } = start(source)?;
        let identity = Identity {
            name: description.name.clone(),
            version: description.version.clone(),
            route: source.route.key(),
            digest: digest::joint_digest(&files),
            files,
            flush_to_zero,
        };
        let runner = Runner::Process(Box::new(remote));
        let source = Some(source.clone());
        Ok(Self { source, runner, description, identity, prepared: false, encoding: None, last_words: String::new() })
    }

    /// Takes a scheme of this process, such as the one that a solver's own tests judge.
    pub fn in_process(scheme: Box<dyn Scheme>) -> Self {
        let description = scheme.describe();
        let identity = Identity {
            name: description.name.clone(),
            version: description.version.clone(),
            route: "in process",
            digest: String::new(),
            files: Vec::new(),
            flush_to_zero: None,
        };
        let runner = Runner::InProcess(scheme);
        Self { source: None, runner, description, identity, prepared: false, encoding: None, last_words: String::new() }
    }

    /// A second conversation with the same scheme, started anew; `None` for a scheme that was handed over in this process.
    ///
    /// # Errors
    /// As [`Session::open`].
    pub fn reopened(&self) -> Option<Result<Self, HostError>> {
        self.source.as_ref().map(Self::open)
    }

    /// Who the scheme is and what it offers.
    pub fn description(&self) -> &Description {
        &self.description
    }

    /// What was run.
    pub fn identity(&self) -> &Identity {
        &self.identity
    }

    /// The last lines that the scheme printed, control characters as escapes; empty for a scheme in this process.
    pub fn stderr_tail(&self) -> String {
        match &self.runner {
            Runner::Process(remote) => remote.wire.process.stderr_tail(),
            _ => self.last_words.clone(),
        }
    }

    /// Forgets what the scheme has printed so far: what is shown beside a later fault is then of the work that led to it, whatever the
    /// same process did before.
    pub fn forget_log(&mut self) {
        self.last_words.clear();
        if let Runner::Process(remote) = &self.runner {
            remote.wire.process.forget_log();
        }
    }

    /// Gets the scheme ready for a case, in the encoding of arrays that suits the scheme best. Starts a fresh process where the
    /// last one ended by a fault.
    ///
    /// # Errors
    /// The case is outside the offers, the scheme says no, or it fails.
    pub fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, HostError> {
        self.prepared = false;
        let offer = self.description.offer_for(case).ok_or_else(|| outside(case))?;
        let unknown = || HostError::FieldsUnknown { equation: case.equation.clone() };
        let names = offer.field_names(case.dimensions).ok_or_else(unknown)?;
        let mut case = case.clone();
        case.arrays = self.encoding();
        if let (Runner::Gone, Some(source)) = (&self.runner, &self.source) {
            let Started { remote, description, .. } = start(source)?;
            if description != self.description {
                let reason = "after a restart it is another than before".to_owned();
                return Err(fault(source, FaultKind::BadDescription { reason }, "start-up", remote));
            }
            self.runner = Runner::Process(Box::new(remote));
        }
        let outcome = match &mut self.runner {
            Runner::InProcess(scheme) => guarded(|| scheme.prepare(&case, harness)),
            Runner::Process(remote) => remote.prepare(&case, names, harness),
            Runner::Gone => Err(Failure::Refused(SchemeError::NotPrepared)),
        };
        let checked = outcome.and_then(|nodes| check_nodes(&self.description, &case, nodes));
        let nodes = self.settled("prepare", checked)?;
        self.prepared = true;
        Ok(nodes)
    }

    /// Takes steps; see [`Scheme::advance`]. After an error the state is undefined.
    ///
    /// # Errors
    /// The scheme says no, or it fails.
    pub fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), HostError> {
        let outcome = match self.ready()? {
            Runner::InProcess(scheme) => {
                let Advance { time, step, steps, state, earlier } = request;
                let (shape, shapes) = (lengths(state), earlier.iter().map(|level| lengths(level)).collect::<Vec<_>>());
                let request = Advance { time, step, steps, state: &mut *state, earlier: &mut *earlier };
                guarded(|| scheme.advance(request, harness)).and_then(|()| same_shape("state", state, &shape)).and_then(
                    |()| {
                        let mut levels = earlier.iter().zip(&shapes);
                        levels.try_for_each(|(level, shape)| same_shape("earlier", level, shape))
                    },
                )
            }
            Runner::Process(remote) => remote.advance(request, harness),
            Runner::Gone => Err(Failure::Refused(SchemeError::NotPrepared)),
        };
        self.settled("advance", outcome)
    }

    /// Goes on to a time by steps of the scheme's choice; see [`Scheme::march`]. After an error the state is undefined.
    ///
    /// # Errors
    /// The scheme says no, or it fails.
    pub fn march(&mut self, request: March<'_>, harness: &mut dyn Harness) -> Result<usize, HostError> {
        let outcome = match self.ready()? {
            Runner::InProcess(scheme) => {
                let March { time, until, state, tolerance } = request;
                let shape = lengths(state);
                let request = March { time, until, state: &mut *state, tolerance };
                guarded(|| scheme.march(request, harness))
                    .and_then(|steps| same_shape("state", state, &shape).map(|()| steps))
            }
            Runner::Process(remote) => remote.march(request, harness),
            Runner::Gone => Err(Failure::Refused(SchemeError::NotPrepared)),
        };
        self.settled("march", outcome)
    }

    /// The semi-discrete right-hand side; see [`Scheme::rate`].
    ///
    /// # Errors
    /// The scheme says no, or it fails.
    pub fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, HostError> {
        let outcome = match self.ready()? {
            Runner::InProcess(scheme) => guarded(|| scheme.rate(time, state, harness))
                .and_then(|rate| same_shape("rate", &rate, &lengths(state)).map(|()| rate)),
            Runner::Process(remote) => remote.rate(time, state, harness),
            Runner::Gone => Err(Failure::Refused(SchemeError::NotPrepared)),
        };
        self.settled("rate", outcome)
    }

    /// The steady solution; see [`Scheme::solve`].
    ///
    /// # Errors
    /// The scheme says no, or it fails.
    pub fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, HostError> {
        let outcome = match self.ready()? {
            Runner::InProcess(scheme) => guarded(|| scheme.solve(guess, harness))
                .and_then(|found| same_shape("state", &found.state, &lengths(guess)).map(|()| found)),
            Runner::Process(remote) => remote.solve(guess, harness),
            Runner::Gone => Err(Failure::Refused(SchemeError::NotPrepared)),
        };
        self.settled("solve", outcome)
    }

    fn ready(&mut self) -> Result<&mut Runner, HostError> {
        if self.prepared { Ok(&mut self.runner) } else { Err(HostError::Refused(SchemeError::NotPrepared)) }
    }

    /// Uses this encoding from the next `prepare` on instead of the one that suits the scheme best; `None` goes back to that.
    pub fn use_encoding(&mut self, encoding: Option<ArrayEncoding>) {
        self.encoding = encoding;
    }

    fn encoding(&self) -> ArrayEncoding {
        if let Some(encoding) = self.encoding {
            return encoding;
        }
        let understood = self.description.arrays.contains(&ArrayEncoding::Base64);
        if understood { ArrayEncoding::Base64 } else { ArrayEncoding::Text }
    }

    /// Turns a failure into an error, and ends the process where it was a fault.
    fn settled<T>(&mut self, during: &str, outcome: Result<T, Failure>) -> Result<T, HostError> {
        match outcome {
            Ok(value) => Ok(value),
            Err(Failure::Refused(SchemeError::Panicked(message))) => {
                self.settled(during, Err(Failure::Fault(FaultKind::Panicked { message })))
            }
            Err(Failure::Refused(error)) => Err(HostError::Refused(error)),
            Err(Failure::Fault(kind)) => {
                self.prepared = false;
                let scheme = self.source.as_ref().map_or_else(|| self.identity.name.clone(), shown);
                if let Runner::Process(remote) = &mut self.runner {
                    remote.wire.process.end(false);
                    self.last_words = remote.wire.process.stderr_tail();
                    self.runner = Runner::Gone;
                }
                let stderr = self.last_words.clone();
                Err(HostError::Fault(Box::new(Fault { kind, scheme, during: during.to_owned(), stderr })))
            }
        }
    }
}

/// A crate's folder becomes the library that is built of it; everything else stays as it is.
fn built(source: &SchemeSource) -> Result<SchemeSource, HostError> {
    let mut source = source.clone();
    if let Route::Plugin { path, .. } = &mut source.route {
        let folder = source.folder.join(&*path);
        if folder.is_dir() {
            *path = crate_folder::build(&folder)?;
        }
    }
    Ok(source)
}

/// A process that has described itself.
struct Started {
    remote: Remote,
    description: Description,
    flush_to_zero: Option<bool>,
}

/// Starts a process and has it describe itself.
fn start(source: &SchemeSource) -> Result<Started, HostError> {
    let program = executable::executable()?;
    let (command, form): (Vec<OsString>, Form) = match &source.route {
        Route::Command(command) => (command.iter().map(OsString::from).collect(), Form::Lines(ArrayEncoding::Text)),
        _ => (vec![program.clone().into(), plugin_child::ARGUMENT.into()], Form::Frames),
    };
    let process = Process::start(&program, &command, &source.folder, source.limits);
    let process = process.map_err(|kind| {
        let (scheme, during) = (shown(source), "start-up".to_owned());
        HostError::Fault(Box::new(Fault { kind, scheme, during, stderr: String::new() }))
    })?;
    let mut remote = Remote::new(Wire::new(process, form));
    match introduce(source, &mut remote) {
        Ok((description, flush_to_zero)) => {
            remote.wire.process.has_started();
            Ok(Started { remote, description, flush_to_zero })
        }
        Err(kind) => Err(fault(source, kind, "start-up", remote)),
    }
}

/// Loads the library of a plugin, and asks who the scheme is.
fn introduce(source: &SchemeSource, remote: &mut Remote) -> Result<(Description, Option<bool>), FaultKind> {
    let mut flush_to_zero = None;
    if let Route::Plugin { path, name } = &source.route {
        let path = source.folder.join(path);
        flush_to_zero = match remote.load(&path.to_string_lossy(), name.as_deref()) {
            Ok(flushes) => Some(flushes),
            Err(Failure::Refused(error)) => return Err(FaultKind::Library { reason: error.message().to_owned() }),
            Err(Failure::Fault(kind)) => return Err(kind),
        };
    }
    match remote.describe() {
        Ok(description) => check_description(&description).map(|()| (description, flush_to_zero)),
        Err(Failure::Refused(error)) => {
            Err(FaultKind::BadDescription { reason: format!("it answers `describe` with an error: {error}") })
        }
        Err(Failure::Fault(kind)) => Err(kind),
    }
}

/// Ends a process that has failed, and tells why.
fn fault(source: &SchemeSource, kind: FaultKind, during: &str, mut remote: Remote) -> HostError {
    remote.wire.process.end(false);
    let stderr = remote.wire.process.stderr_tail();
    HostError::Fault(Box::new(Fault { kind, scheme: shown(source), during: during.to_owned(), stderr }))
}

/// The scheme as the person named it.
fn shown(source: &SchemeSource) -> String {
    match &source.route {
        Route::Classical(name) => name.clone(),
        Route::Plugin { path, name: None } => path.display().to_string(),
        Route::Plugin { path, name: Some(name) } => format!("{} ({name})", path.display()),
        Route::Command(command) => command.join(" "),
    }
}

fn classical(name: &str) -> Result<Box<dyn Scheme>, HostError> {
    let known = || gridassay_classical::names().join(", ");
    gridassay_classical::scheme(name)
        .ok_or_else(|| HostError::UnknownClassical { name: name.to_owned(), known: known() })
}

fn outside(case: &Case) -> HostError {
    let Case { equation, dimensions, .. } = case;
    let text = format!("no offer takes this case of `{equation}` in {dimensions} dimension(s)");
    HostError::Refused(SchemeError::NotOffered(text))
}

/// Runs a call into a scheme of this process; a panic is a fault.
fn guarded<T>(call: impl FnOnce() -> Result<T, SchemeError>) -> Result<T, Failure> {
    match catch_unwind(AssertUnwindSafe(call)) {
        Ok(outcome) => outcome.map_err(Failure::Refused),
        Err(panic) => Err(Failure::Fault(FaultKind::Panicked { message: panic_message(panic.as_ref()) })),
    }
}

fn lengths(fields: &[Vec<f64>]) -> Vec<usize> {
    fields.iter().map(Vec::len).collect()
}

fn same_shape(place: &str, fields: &[Vec<f64>], expected: &[usize]) -> Result<(), Failure> {
    let wrong = |place: String, expected, found| MessageError::WrongLength { place, expected, found };
    if fields.len() != expected.len() {
        return Err(wrong(format!("{place} (fields)"), expected.len(), fields.len()).into());
    }
    let differs = fields.iter().zip(expected).enumerate().find(|(_, (field, length))| field.len() != **length);
    match differs {
        Some((index, (field, length))) => Err(wrong(format!("{place}, field {index},"), *length, field.len()).into()),
        None => Ok(()),
    }
}

/// Whether some offer of `description` has `operation` for `case`.
pub fn offers(description: &Description, case: &Case, operation: Operation) -> bool {
    description.offer_for(case).is_some_and(|offer| offer.has(operation))
}
