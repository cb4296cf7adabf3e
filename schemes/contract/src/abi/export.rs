//! Exports a Rust scheme over the C ABI.

use std::ffi::{CStr, CString, c_char};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::ptr::null;
use std::sync::{Mutex, MutexGuard, PoisonError};

use super::layout::{CCase, CHarness, CState};
use super::plugin_harness::PluginHarness;
use super::problem::{case_from_c, slice, text};
use crate::{Advance, CONTRACT, Fields, March, Nodes, Scheme, SchemeError, panic_message};

/// Makes a scheme by name; `None` asks for the default one.
type Make = fn(Option<&str>) -> Option<Box<dyn Scheme>>;

/// The one scheme of a plugin with its case.
pub struct Plugin {
    make: Make,
    state: Mutex<State>,
}

struct State {
    scheme: Option<Box<dyn Scheme>>,
    description: Option<CString>,
    message: Option<CString>,
    nodes: Option<Nodes>,
    fields: usize,
    levels: usize,
    /// Kept between calls, so that large states are not allocated anew.
    buffer: Fields,
}

impl Plugin {
    /// A plugin whose schemes `make` makes.
    pub const fn new(make: Make) -> Self {
        let state = State {
            scheme: None,
            description: None,
            message: None,
            nodes: None,
            fields: 0,
            levels: 1,
            buffer: Vec::new(),
        };
        Self { make, state: Mutex::new(state) }
    }

    fn lock(&self) -> MutexGuard<'_, State> {
        self.state.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// Runs `call` with the scheme; a panic and an error become a code and a message.
    fn call(&self, call: impl FnOnce(&mut State) -> Result<(), SchemeError>) -> i32 {
        let mut state = self.lock();
        let outcome = catch_unwind(AssertUnwindSafe(|| {
            if state.scheme.is_none() {
                state.scheme = (self.make)(None);
            }
            call(&mut state)
        }));
        let error = match outcome {
            Ok(Ok(())) => return 0,
            Ok(Err(error)) => error,
            Err(panic) => SchemeError::Panicked(panic_message(panic.as_ref())),
        };
        state.message = CString::new(error.message().replace('\0', "")).ok();
        error.code()
    }
}

impl State {
    fn scheme(&mut self) -> Result<&mut dyn Scheme, SchemeError> {
        match &mut self.scheme {
            Some(scheme) => Ok(scheme.as_mut()),
            None => Err(SchemeError::Failed("the plugin has no default scheme; name one".to_owned())),
        }
    }

    fn prepared(&self) -> Result<(), SchemeError> {
        if self.fields == 0 { Err(SchemeError::NotPrepared) } else { Ok(()) }
    }

    /// Copies a C state into the buffer and hands the buffer out.
    ///
    /// # Safety
    /// `state` points to a state of the harness.
    unsafe fn take(&mut self, state: *const CState) -> Fields {
        let mut fields = std::mem::take(&mut self.buffer);
        // SAFETY: the caller answers for the state.
        unsafe { read_state(&*state, &mut fields) };
        fields
    }
}

/// # Safety
/// The pointers of `state` fit its numbers.
unsafe fn read_state(state: &CState, fields: &mut Fields) {
    let count = state.fields.max(0) as usize;
    fields.resize_with(count, Vec::new);
    // SAFETY: the caller answers for the state.
    let (lengths, values) = unsafe { (slice(state.lengths, count), slice(state.values, count)) };
    for ((field, length), values) in fields.iter_mut().zip(lengths).zip(values) {
        field.clear();
        // SAFETY: as above.
        field.extend_from_slice(unsafe { slice(values.cast_const(), *length as usize) });
    }
}

/// # Safety
/// The pointers of `state` fit its numbers.
unsafe fn write_state(fields: &[Vec<f64>], state: &CState, what: &str) -> Result<(), SchemeError> {
    let count = state.fields.max(0) as usize;
    // SAFETY: the caller answers for the state.
    let (lengths, values) = unsafe { (slice(state.lengths, count), slice(state.values, count)) };
    let same = fields.len() == count && fields.iter().zip(lengths).all(|(field, length)| field.len() as i64 == *length);
    if !same {
        let found: Vec<usize> = fields.iter().map(Vec::len).collect();
        return Err(SchemeError::Failed(format!("{what} has lengths {found:?} where {lengths:?} are needed")));
    }
    for (field, values) in fields.iter().zip(values) {
        // SAFETY: as above, and the lengths are the same.
        unsafe { std::ptr::copy_nonoverlapping(field.as_ptr(), *values, field.len()) };
    }
    Ok(())
}

/// What the entry points do. Each is `unsafe` where the harness must keep to the header: pointers fit the numbers beside them.
#[allow(clippy::missing_safety_doc)]
pub mod entry {
    use super::*;

    /// `gridassay_contract`.
    pub fn contract() -> i32 {
        CONTRACT as i32
    }

    /// `gridassay_describe`.
    pub fn describe(plugin: &Plugin) -> *const c_char {
        let code = plugin.call(|state| {
            let description = state.scheme()?.describe();
            let text = serde_json::to_string(&description).map_err(|e| SchemeError::Failed(e.to_string()))?;
            state.description = CString::new(text).ok();
            Ok(())
        });
        match &plugin.lock().description {
            Some(description) if code == 0 => description.as_ptr(),
            _ => null(),
        }
    }

    /// `gridassay_message`.
    pub fn message(plugin: &Plugin) -> *const c_char {
        plugin.lock().message.as_deref().map_or(null(), CStr::as_ptr)
    }

    /// `gridassay_select`.
    pub unsafe fn select(plugin: &Plugin, name: *const c_char) -> i32 {
        plugin.call(|state| {
            // SAFETY: the harness keeps to the header.
            let name = unsafe { text(name)? };
            let unknown = || SchemeError::NotOffered(format!("there is no scheme `{name}` in this library"));
            state.scheme = Some((plugin.make)(Some(&name)).ok_or_else(unknown)?);
            state.fields = 0;
            Ok(())
        })
    }

    /// `gridassay_prepare`.
    pub unsafe fn prepare(plugin: &Plugin, case: *const CCase, harness: *const CHarness) -> i32 {
        plugin.call(|state| {
            state.fields = 0;
            // SAFETY: the harness keeps to the header.
            let ((case, names), harness) = unsafe { (case_from_c(&*case)?, &*harness) };
            let mut harness = PluginHarness { harness, fields: names.len() };
            let scheme = state.scheme()?;
            let levels = scheme.describe().offer_for(&case).map_or(1, |offer| offer.levels);
            let nodes = scheme.prepare(&case, &mut harness)?;
            (state.nodes, state.fields, state.levels) = (nodes, names.len(), levels);
            Ok(())
        })
    }

    /// `gridassay_nodes`.
    pub unsafe fn nodes(plugin: &Plugin, capacity: i32, offsets: *mut f64, weights: *mut f64) -> i32 {
        let state = plugin.lock();
        let Some(nodes) = &state.nodes else { return 0 };
        let count = nodes.offsets.len();
        if count <= capacity.max(0) as usize && nodes.weights.len() == count {
            // SAFETY: both arrays have room for `capacity` values.
            unsafe {
                std::ptr::copy_nonoverlapping(nodes.offsets.as_ptr(), offsets, count);
                std::ptr::copy_nonoverlapping(nodes.weights.as_ptr(), weights, count);
            }
        }
        count as i32
    }

    /// `gridassay_advance`; `times` are the time and the step.
    pub unsafe fn advance(
        plugin: &Plugin,
        [time, step]: [f64; 2],
        steps: i64,
        c_state: *mut CState,
        c_earlier: *mut CState,
        harness: *const CHarness,
    ) -> i32 {
        plugin.call(|state| {
            state.prepared()?;
            // SAFETY: the harness keeps to the header: one older state for each further level of the offer.
            let (mut fields, harness, older) = unsafe {
                let older: &[CState] = slice(c_earlier.cast_const(), state.levels - 1);
                (state.take(c_state), &*harness, older)
            };
            let mut earlier: Vec<Fields> = vec![Vec::new(); older.len()];
            for (level, fields) in older.iter().zip(&mut earlier) {
                // SAFETY: as above.
                unsafe { read_state(level, fields) };
            }
            let mut harness = PluginHarness { harness, fields: state.fields };
            let steps = usize::try_from(steps).unwrap_or(0);
            let request = Advance { time, step, steps, state: &mut fields, earlier: &mut earlier };
            let mut outcome = state.scheme()?.advance(request, &mut harness);
            if outcome.is_ok() {
                // SAFETY: as above.
                outcome = unsafe { write_state(&fields, &*c_state, "state") };
                for (level, fields) in older.iter().zip(&earlier) {
                    // SAFETY: as above.
                    outcome = outcome.and_then(|()| unsafe { write_state(fields, level, "earlier") });
                }
            }
            state.buffer = fields;
            outcome
        })
    }

    /// `gridassay_march`; `times` are the time, the time to reach and the tolerance.
    pub unsafe fn march(
        plugin: &Plugin,
        [time, until, tolerance]: [f64; 3],
        c_state: *mut CState,
        steps: *mut i64,
        harness: *const CHarness,
    ) -> i32 {
        plugin.call(|state| {
            state.prepared()?;
            // SAFETY: the harness keeps to the header.
            let (mut fields, harness) = unsafe { (state.take(c_state), &*harness) };
            let mut harness = PluginHarness { harness, fields: state.fields };
            let tolerance = (tolerance > 0.0).then_some(tolerance);
            let taken = state.scheme()?.march(March { time, until, state: &mut fields, tolerance }, &mut harness)?;
            // SAFETY: as above.
            unsafe {
                *steps = taken as i64;
                write_state(&fields, &*c_state, "state")
            }
        })
    }

    /// `gridassay_rate`.
    pub unsafe fn rate(
        plugin: &Plugin,
        time: f64,
        c_state: *const CState,
        c_rate: *mut CState,
        harness: *const CHarness,
    ) -> i32 {
        plugin.call(|state| {
            state.prepared()?;
            // SAFETY: the harness keeps to the header.
            let (fields, harness) = unsafe { (state.take(c_state), &*harness) };
            let mut harness = PluginHarness { harness, fields: state.fields };
            let rate = state.scheme()?.rate(time, &fields, &mut harness)?;
            state.buffer = fields;
            // SAFETY: as above.
            unsafe { write_state(&rate, &*c_rate, "rate") }
        })
    }

    /// `gridassay_solve`.
    pub unsafe fn solve(
        plugin: &Plugin,
        c_state: *mut CState,
        iterations: *mut i64,
        residual: *mut f64,
        harness: *const CHarness,
    ) -> i32 {
        plugin.call(|state| {
            state.prepared()?;
            // SAFETY: the harness keeps to the header.
            let (fields, harness) = unsafe { (state.take(c_state), &*harness) };
            let mut harness = PluginHarness { harness, fields: state.fields };
            let solution = state.scheme()?.solve(&fields, &mut harness)?;
            // SAFETY: as above.
            unsafe {
                if let Some(taken) = solution.iterations {
                    *iterations = taken as i64;
                }
                if let Some(left) = solution.residual {
                    *residual = left;
                }
                write_state(&solution.state, &*c_state, "state")
            }
        })
    }
}
