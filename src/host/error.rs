//! What can go wrong between the harness and a scheme, one clear sentence each.

use std::fmt;
use std::io;
use std::time::Duration;

use gridassay_scheme::SchemeError;
use gridassay_scheme::conversation::MessageError;

/// Why a session could not be opened, or gave no numbers.
#[derive(Debug, thiserror::Error)]
pub enum HostError {
    /// The scheme said no. It is still there and can be asked again.
    #[error("the scheme answers: {0}")]
    Refused(SchemeError),
    /// The scheme crashed, hung or broke the conversation. The next `prepare` starts a fresh process.
    #[error(transparent)]
    Fault(Box<Fault>),
    /// There is no built-in scheme of that name.
    #[error("there is no classical scheme `{name}`; there are: {known}")]
    UnknownClassical {
        /// The name asked for.
        name: String,
        /// All names.
        known: String,
    },
    /// The equation is none of the contract's, and the offer does not name its fields.
    #[error(
        "the offer of `{equation}` does not list its fields and the contract does not know them; add `fields` to the offer"
    )]
    FieldsUnknown {
        /// The equation.
        equation: String,
    },
    /// Schemes outside this process need the gridassay executable beside them.
    #[error(
        "a plugin or a command runs under the gridassay program, and this program is another; \
         set GRIDASSAY_EXECUTABLE to the path of gridassay, or use the scheme in process"
    )]
    NoExecutable,
    /// A crate's folder did not become a library.
    #[error(transparent)]
    Build(#[from] super::BuildError),
}

impl From<SchemeError> for HostError {
    fn from(error: SchemeError) -> Self {
        Self::Refused(error)
    }
}

/// A fault of a scheme, with what is known of its circumstances.
#[derive(Debug)]
pub struct Fault {
    /// What happened.
    pub kind: FaultKind,
    /// The scheme as the person named it.
    pub scheme: String,
    /// What the scheme was doing: `start-up` or the name of a request.
    pub during: String,
    /// The last lines that it wrote to stderr (and to stdout beside the conversation), control characters as escapes.
    pub stderr: String,
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "the scheme `{}` {} (during {})", self.scheme, self.kind, self.during)?;
        if !self.stderr.is_empty() {
            write!(f, "; its last lines on stderr:")?;
            for line in self.stderr.lines() {
                write!(f, "\n    {line}")?;
            }
        }
        Ok(())
    }
}

impl std::error::Error for Fault {
    fn source(&self) -> Option<&(dyn std::error::Error + 'static)> {
        self.kind.source()
    }
}

/// What happened. Each sentence goes on from "the scheme `NAME`".
#[derive(Debug, thiserror::Error)]
pub enum FaultKind {
    /// The process could not be started.
    #[error("could not be started: {reason}; {remedy}")]
    NotStarted {
        /// What the system said.
        reason: io::Error,
        /// What to do.
        remedy: &'static str,
    },
    /// The process left by itself.
    #[error("left with exit status {status} before it answered; it must go on answering until its stdin is closed")]
    Exited {
        /// Its exit status.
        status: i32,
    },
    /// The process was ended by a signal that the harness did not send.
    #[error("was ended by signal {signal} ({name}){hint}")]
    Signalled {
        /// The number of the signal.
        signal: i32,
        /// Its name.
        name: &'static str,
        /// What the cause often is.
        hint: String,
    },
    /// The time limit passed.
    #[error("did not {what} within {seconds} s and was ended; mend the hang or raise `{key}`", seconds = limit.as_secs_f64())]
    TimedOut {
        /// What it did not do.
        what: &'static str,
        /// The limit.
        limit: Duration,
        /// The key of the claims file that sets it.
        key: &'static str,
    },
    /// The process lives and has closed its end of the conversation.
    #[error("closed its {pipe} and is still running; keep it open until the harness closes stdin")]
    ClosedPipe {
        /// `stdin` or `stdout`.
        pipe: &'static str,
    },
    /// A message longer than the limit.
    #[error("sent a message of more than {limit} bytes without an end of line; raise `message_limit` if that is meant")]
    TooLong {
        /// The limit in bytes.
        limit: u64,
    },
    /// More processes than the limit.
    #[error(
        "had {found} processes at once and was ended; the limit is {limit}, raise `process_limit` if that is meant"
    )]
    TooManyProcesses {
        /// How many there were.
        found: u32,
        /// The limit.
        limit: u32,
    },
    /// A message that breaks the rules, or an answer that does not fit the question.
    #[error("broke the conversation: {0}")]
    Message(#[from] MessageError),
    /// An answer to another question.
    #[error("answered id {found} where id {expected} was asked; each answer carries the id of its request")]
    OtherId {
        /// The id that was open.
        expected: u64,
        /// The id that came.
        found: String,
    },
    /// A second answer to a question that has been answered.
    #[error("answered id {id} a second time; each request has one answer")]
    AnsweredTwice {
        /// The id.
        id: u64,
    },
    /// A question back that the contract does not know, or with parameters that make no sense.
    #[error("asked back what cannot be answered: {reason}")]
    BadQuestion {
        /// What is wrong with it.
        reason: String,
    },
    /// Another version of the contract.
    #[error("speaks version {found} of the scheme contract, this gridassay speaks version {ours}; use a matching pair")]
    OtherContract {
        /// The version found.
        found: String,
        /// Ours.
        ours: u32,
    },
    /// A description that no study can use.
    #[error("describes itself in a way that does not fit the contract: {reason}")]
    BadDescription {
        /// What is wrong with it.
        reason: String,
    },
    /// A panic.
    #[error("panicked: {message}")]
    Panicked {
        /// The panic's message.
        message: String,
    },
    /// The library could not be used.
    #[error("is no usable plugin: {reason}")]
    Library {
        /// What is wrong with it.
        reason: String,
    },
    /// The system refused something to the harness itself.
    #[error("could not be reached: {0}")]
    System(io::Error),
}
