//! A shared library that exports the C ABI, as a scheme.

use std::ffi::{CStr, CString, c_char};
use std::path::Path;

use gridassay_scheme::abi::{CState, CaseArrays, functions};
use gridassay_scheme::{
    Advance, CONTRACT, Case, Description, Fields, Harness, March, Nodes, Offer, Scheme, SchemeError, Solution, Values,
};
use libloading::os::unix::{Library as Handle, RTLD_LOCAL, RTLD_NOW, Symbol};

use super::bridge::Bridge;
use super::float_mode;

/// More nodes per cell and direction than any element has.
const MOST_NODES: i32 = 1 << 12;

/// Why a library cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum LibraryError {
    /// The system's loader refuses it.
    #[error("it cannot be loaded: {reason}")]
    NotLoaded {
        /// What the loader said.
        reason: String,
    },
    /// An entry point that every library has.
    #[error(
        "it does not export `{symbol}`; export it with C linkage (extern \"C\", bind(c), export_scheme!) \
         as gridassay_scheme.h says"
    )]
    NoEntryPoint {
        /// The missing function.
        symbol: &'static str,
    },
    /// A name was asked for, and the library does not choose by name.
    #[error("it does not export `gridassay_select`, so that `{name}` cannot be chosen; leave the name out")]
    NoSelect {
        /// The name.
        name: String,
    },
    /// The library has no scheme of that name.
    #[error("it has no scheme `{name}`: {message}")]
    UnknownName {
        /// The name.
        name: String,
        /// What the library said.
        message: String,
    },
    /// Built for another version of the contract.
    #[error(
        "it was built for version {found} of the scheme contract, this gridassay speaks version {CONTRACT}; rebuild it"
    )]
    OtherContract {
        /// The version found.
        found: i32,
    },
    /// The description is no JSON of the contract.
    #[error("`gridassay_describe` {reason}")]
    BadDescription {
        /// What is wrong with it.
        reason: String,
    },
}

/// A loaded library. It is never unloaded: its threads and its exit handlers may still need it.
pub struct Library {
    handle: Handle,
    description: Description,
    /// Whether loading switched flush-to-zero on; it was switched off again.
    flush_to_zero: bool,
    /// Of the prepared case.
    dimensions: usize,
}

impl Library {
    /// Loads a library, chooses the scheme `name` where the library carries several, and asks who it is.
    ///
    /// # Errors
    /// The library is none, or does not keep to the header.
    pub fn load(path: &Path, name: Option<&str>) -> Result<Self, LibraryError> {
        // A name without a slash would be looked for on the system's search path.
        let path = path.canonicalize().map_err(|error| not_loaded(format!("{}: {error}", path.display())))?;
        let before = float_mode::read();
        // SAFETY: the person asks for this library to be run; it has this child process to itself.
        let opened = unsafe { Handle::open(Some(&path), RTLD_NOW | RTLD_LOCAL) };
        let flush_to_zero = float_mode::flushes_to_zero();
        float_mode::write(before);
        let handle = opened.map_err(|error| not_loaded(with_cause(&error)))?;
        let mut library =
            Self { handle, description: Description::new("", "", Vec::new()), flush_to_zero, dimensions: 1 };
        library.check_version()?;
        if let Some(name) = name {
            library.select(name)?;
        }
        library.description = library.read_description()?;
        Ok(library)
    }

    /// Whether loading the library switched flush-to-zero on.
    pub fn flush_to_zero(&self) -> bool {
        self.flush_to_zero
    }

    fn check_version(&self) -> Result<(), LibraryError> {
        let contract: Symbol<functions::Contract> = self.required("gridassay_contract")?;
        // SAFETY: the header's signature.
        match unsafe { contract() } {
            found if found == CONTRACT as i32 => Ok(()),
            found => Err(LibraryError::OtherContract { found }),
        }
    }

    fn select(&self, name: &str) -> Result<(), LibraryError> {
        let select: Symbol<functions::Select> =
            self.symbol("gridassay_select").ok_or_else(|| LibraryError::NoSelect { name: name.to_owned() })?;
        let unknown = |message| LibraryError::UnknownName { name: name.to_owned(), message };
        let text = CString::new(name).map_err(|_| unknown("the name holds a zero byte".to_owned()))?;
        // SAFETY: the header's signature; the text lives through the call.
        let code = unsafe { select(text.as_ptr()) };
        if code == 0 { Ok(()) } else { Err(unknown(self.error(code).message().to_owned())) }
    }

    fn read_description(&self) -> Result<Description, LibraryError> {
        let bad = |reason: String| LibraryError::BadDescription { reason };
        let describe: Symbol<functions::Text> = self.required("gridassay_describe")?;
        // SAFETY: the header's signature; the library answers for its text.
        let text = unsafe { describe() };
        if text.is_null() {
            return Err(bad(format!("returns NULL: {}", self.error(SchemeError::FAILED))));
        }
        // SAFETY: not null, and the library answers for its end.
        let text = unsafe { CStr::from_ptr(text) }.to_bytes();
        let value: serde_json::Value =
            serde_json::from_slice(text).map_err(|error| bad(format!("is no JSON: {error}")))?;
        if let Some(found) = value.get("contract").and_then(serde_json::Value::as_i64)
            && found != i64::from(CONTRACT)
        {
            return Err(LibraryError::OtherContract { found: found as i32 });
        }
        serde_json::from_value(value).map_err(|error| bad(format!("does not fit the contract: {error}")))
    }

    fn symbol<T>(&self, name: &str) -> Option<Symbol<T>> {
        // SAFETY: the type is that of the header for this name.
        unsafe { self.handle.get::<T>(name).ok() }
    }

    fn required<T>(&self, name: &'static str) -> Result<Symbol<T>, LibraryError> {
        self.symbol(name).ok_or(LibraryError::NoEntryPoint { symbol: name })
    }

    fn operation<T>(&self, name: &str) -> Result<Symbol<T>, SchemeError> {
        self.symbol(name).ok_or_else(|| SchemeError::NotOffered(format!("the library does not export `{name}`")))
    }

    fn error(&self, code: i32) -> SchemeError {
        let text = self.symbol::<functions::Text>("gridassay_message").map_or(std::ptr::null(), |message| {
            // SAFETY: the header's signature.
            unsafe { message() }
        });
        SchemeError::from_code(code, text_or(text, code))
    }

    /// The outcome of a call, with the library's message, or the harness's own where a question failed.
    fn settled(&self, code: i32, bridge: &Bridge<'_>) -> Result<(), SchemeError> {
        match (code, bridge.failure()) {
            (0, _) => Ok(()),
            (code, Some(failure)) if self.symbol::<functions::Text>("gridassay_message").is_none() => {
                Err(SchemeError::from_code(code, failure.message()))
            }
            (code, _) => Err(self.error(code)),
        }
    }
}

impl Scheme for Library {
    fn describe(&self) -> Description {
        self.description.clone()
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        let offer: Offer = self
            .description
            .offer_for(case)
            .cloned()
            .ok_or_else(|| SchemeError::NotOffered(format!("equation `{}` as asked", case.equation)))?;
        let names = offer.field_names(case.dimensions).unwrap_or_default();
        self.dimensions = case.dimensions;
        let arrays = CaseArrays::new(case, &names)?;
        let prepare: Symbol<functions::Prepare> = self.operation("gridassay_prepare")?;
        let mut bridge = Bridge::new(harness, self.dimensions);
        // SAFETY: the header's signature; all pointers live through the call.
        let code = unsafe { prepare(arrays.as_c(), &bridge.as_c()) };
        self.settled(code, &bridge)?;
        if offer.values == Values::CellNodes { self.nodes().map(Some) } else { Ok(None) }
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        let advance: Symbol<functions::Advance> = self.operation("gridassay_advance")?;
        let (mut bridge, mut state) = (Bridge::new(harness, self.dimensions), StateArrays::new(request.state));
        let mut older: Vec<StateArrays> = request.earlier.iter_mut().map(|level| StateArrays::new(level)).collect();
        let mut older: Vec<CState> = older.iter_mut().map(StateArrays::as_c).collect();
        let earlier = if older.is_empty() { std::ptr::null_mut() } else { older.as_mut_ptr() };
        let steps = i64::try_from(request.steps).unwrap_or(i64::MAX);
        // SAFETY: the header's signature; all pointers live through the call.
        let code = unsafe { advance(request.time, request.step, steps, &mut state.as_c(), earlier, &bridge.as_c()) };
        self.settled(code, &bridge)
    }

    fn march(&mut self, request: March<'_>, harness: &mut dyn Harness) -> Result<usize, SchemeError> {
        let march: Symbol<functions::March> = self.operation("gridassay_march")?;
        let (mut bridge, mut state) = (Bridge::new(harness, self.dimensions), StateArrays::new(request.state));
        let (tolerance, mut steps) = (request.tolerance.unwrap_or(0.0), 0i64);
        // SAFETY: the header's signature; all pointers live through the call.
        let code =
            unsafe { march(request.time, request.until, tolerance, &mut state.as_c(), &mut steps, &bridge.as_c()) };
        self.settled(code, &bridge)?;
        usize::try_from(steps).map_err(|_| SchemeError::Failed(format!("gridassay_march wrote {steps} steps")))
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        let function: Symbol<functions::Rate> = self.operation("gridassay_rate")?;
        // A copy, so that a library that writes to its input changes nothing of ours.
        let (mut input, mut rate) = (state.to_vec(), zeros_like(state));
        let (mut input, mut output) = (StateArrays::new(&mut input), StateArrays::new(&mut rate));
        let mut bridge = Bridge::new(harness, self.dimensions);
        // SAFETY: the header's signature; all pointers live through the call.
        let code = unsafe { function(time, &input.as_c(), &mut output.as_c(), &bridge.as_c()) };
        self.settled(code, &bridge)?;
        Ok(rate)
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        let solve: Symbol<functions::Solve> = self.operation("gridassay_solve")?;
        let mut state = guess.to_vec();
        let (mut arrays, mut bridge) = (StateArrays::new(&mut state), Bridge::new(harness, self.dimensions));
        let (mut iterations, mut residual) = (-1i64, f64::NAN);
        // SAFETY: the header's signature; all pointers live through the call.
        let code = unsafe { solve(&mut arrays.as_c(), &mut iterations, &mut residual, &bridge.as_c()) };
        self.settled(code, &bridge)?;
        let residual = (!residual.is_nan()).then_some(residual);
        Ok(Solution { state, iterations: usize::try_from(iterations).ok(), residual })
    }
}

impl Library {
    fn nodes(&self) -> Result<Nodes, SchemeError> {
        let nodes: Symbol<functions::Nodes> = self.operation("gridassay_nodes")?;
        // SAFETY: the header allows null where the capacity is 0.
        let count = unsafe { nodes(0, std::ptr::null_mut(), std::ptr::null_mut()) };
        if !(1..=MOST_NODES).contains(&count) {
            return Err(SchemeError::Failed(format!("gridassay_nodes returns {count} nodes per cell")));
        }
        let (mut offsets, mut weights) = (vec![0.0; count as usize], vec![0.0; count as usize]);
        // SAFETY: both arrays have room for `count` values.
        let again = unsafe { nodes(count, offsets.as_mut_ptr(), weights.as_mut_ptr()) };
        if again == count {
            Ok(Nodes { offsets, weights })
        } else {
            Err(SchemeError::Failed(format!("gridassay_nodes returns {count} nodes per cell and then {again}")))
        }
    }
}

/// The pointers of a C state.
struct StateArrays {
    lengths: Vec<i64>,
    values: Vec<*mut f64>,
}

impl StateArrays {
    fn new(fields: &mut [Vec<f64>]) -> Self {
        let lengths = fields.iter().map(|field| field.len() as i64).collect();
        Self { lengths, values: fields.iter_mut().map(|field| field.as_mut_ptr()).collect() }
    }

    fn as_c(&mut self) -> CState {
        CState { fields: self.values.len() as i32, lengths: self.lengths.as_ptr(), values: self.values.as_ptr() }
    }
}

fn zeros_like(fields: &[Vec<f64>]) -> Fields {
    fields.iter().map(|field| vec![0.0; field.len()]).collect()
}

fn not_loaded(reason: String) -> LibraryError {
    LibraryError::NotLoaded { reason }
}

/// The error with its causes: the loader's own words are the cause of what is shown.
fn with_cause(error: &dyn std::error::Error) -> String {
    let mut text = error.to_string();
    let mut cause = error.source();
    while let Some(error) = cause {
        text = format!("{text}: {error}");
        cause = error.source();
    }
    text
}

fn text_or(text: *const c_char, code: i32) -> String {
    if text.is_null() {
        return format!("code {code}, without a message");
    }
    // SAFETY: not null, and the library answers for its end.
    unsafe { CStr::from_ptr(text) }.to_string_lossy().into_owned()
}
