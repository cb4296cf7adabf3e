//! The harness as a C library sees it: questions one field at a time, answered from one answer of the harness for all fields.

use std::collections::VecDeque;
use std::ffi::{CStr, CString, c_char, c_void};
use std::panic::{AssertUnwindSafe, catch_unwind};

use gridassay_scheme::abi::CHarness;
use gridassay_scheme::{BoundaryData, Fields, Harness, SchemeError, Side};

/// Answers that are remembered: those of a step's stages and sides, asked field by field.
const REMEMBERED: usize = 16;

/// What was asked, as far as the answer depends on it. Times are compared by their bits.
#[derive(Clone, Debug, PartialEq)]
enum Question {
    Source { time: u64, points: Option<Fields> },
    Boundary { time: u64, side: Side, layers: usize },
    Coefficient { time: u64, name: String, points: Option<Fields> },
}

#[derive(Clone, Debug)]
enum Answer {
    Fields(Fields),
    Boundary(BoundaryData),
}

/// Between a harness and a library, for the time of one call.
pub(super) struct Bridge<'h> {
    harness: &'h mut dyn Harness,
    dimensions: usize,
    remembered: VecDeque<(Question, Answer)>,
    failure: Option<SchemeError>,
    message: CString,
}

impl<'h> Bridge<'h> {
    /// For a case in `dimensions` dimensions.
    pub fn new(harness: &'h mut dyn Harness, dimensions: usize) -> Self {
        Self { harness, dimensions, remembered: VecDeque::new(), failure: None, message: CString::default() }
    }

    /// The C form; it points to this value.
    pub fn as_c(&mut self) -> CHarness {
        CHarness {
            context: std::ptr::from_mut(self).cast(),
            source,
            boundary,
            ghost,
            coefficient,
            source_length,
            boundary_length,
            coefficient_length,
            coefficient_components,
            message,
        }
    }

    /// The last question that had no answer.
    pub fn failure(&self) -> Option<&SchemeError> {
        self.failure.as_ref()
    }

    fn answer(&mut self, question: Question) -> Result<&Answer, SchemeError> {
        if let Some(at) = self.remembered.iter().position(|(known, _)| *known == question) {
            return Ok(&self.remembered[at].1);
        }
        let answer = match &question {
            Question::Source { time, points } => {
                Answer::Fields(self.harness.source(f64::from_bits(*time), points.as_deref())?)
            }
            Question::Boundary { time, side, layers } => {
                Answer::Boundary(self.harness.boundary(f64::from_bits(*time), *side, *layers)?)
            }
            Question::Coefficient { time, name, points } => {
                Answer::Fields(self.harness.coefficient(name, f64::from_bits(*time), points.as_deref())?)
            }
        };
        if self.remembered.len() == REMEMBERED {
            self.remembered.pop_front();
        }
        self.remembered.push_back((question, answer));
        Ok(&self.remembered[self.remembered.len() - 1].1)
    }

    fn field(&mut self, question: Question, index: i32) -> Result<&[f64], SchemeError> {
        match self.answer(question)? {
            Answer::Fields(fields) => member(fields, index).map(Vec::as_slice),
            Answer::Boundary(_) => Err(failed("an answer of another kind".to_owned())),
        }
    }

    fn boundary(&mut self, time: f64, code: i32, layers: usize) -> Result<&BoundaryData, SchemeError> {
        match self.answer(Question::Boundary { time: time.to_bits(), side: side(code)?, layers })? {
            Answer::Boundary(data) => Ok(data),
            Answer::Fields(_) => Err(failed("an answer of another kind".to_owned())),
        }
    }

    fn fail<N: From<i32>>(&mut self, error: SchemeError) -> N {
        let code = error.code();
        self.message = CString::new(error.message().replace('\0', "")).unwrap_or_default();
        self.failure = Some(error);
        N::from(code)
    }
}

fn failed(text: String) -> SchemeError {
    SchemeError::Failed(text)
}

fn member<T>(members: &[T], index: i32) -> Result<&T, SchemeError> {
    let found = usize::try_from(index).ok().and_then(|index| members.get(index));
    found.ok_or_else(|| failed(format!("there is no field or component {index}; there are {}", members.len())))
}

fn side(code: i32) -> Result<Side, SchemeError> {
    let found = usize::try_from(code).ok().and_then(|code| Side::ALL.get(code).copied());
    found.ok_or_else(|| failed(format!("there is no side {code}; the sides are 0 (x_lower) to 5 (z_upper)")))
}

/// Copies an answer to the library; `to` may be null where it is not wanted.
///
/// # Safety
/// `to` is null or has room for `length` values.
unsafe fn copy(values: &[f64], length: i64, to: *mut f64) -> Result<(), SchemeError> {
    if values.len() as i64 != length {
        return Err(failed(format!("the answer has {} values, there is room for {length}", values.len())));
    }
    if !to.is_null() {
        // SAFETY: the caller answers for the room, and the lengths are the same.
        unsafe { std::ptr::copy_nonoverlapping(values.as_ptr(), to, values.len()) };
    }
    Ok(())
}

/// Runs `call` on the bridge; an error, and a panic of the harness, become a code.
///
/// # Safety
/// `context` came from [`Bridge::as_c`] of a bridge that is still there.
unsafe fn with<N: From<i32>>(context: *mut c_void, call: impl FnOnce(&mut Bridge<'_>) -> Result<N, SchemeError>) -> N {
    // SAFETY: the caller answers for the context; the library calls from one thread, one question at a time.
    let bridge = unsafe { &mut *context.cast::<Bridge<'_>>() };
    match catch_unwind(AssertUnwindSafe(|| call(bridge))) {
        Ok(Ok(number)) => number,
        Ok(Err(error)) => bridge.fail(error),
        Err(_) => bridge.fail(failed("the harness panicked while it answered".to_owned())),
    }
}

/// # Safety
/// `points` is null or points to arrays of `length` coordinates, `dimensions` of them.
unsafe fn read_points(
    points: *const *const f64,
    length: i64,
    dimensions: usize,
) -> Result<Option<Fields>, SchemeError> {
    if points.is_null() {
        return Ok(None);
    }
    let length = usize::try_from(length).map_err(|_| failed(format!("{length} is no number of points")))?;
    // SAFETY: the caller answers for the pointers.
    let axis = |axis| unsafe { std::slice::from_raw_parts(*points.add(axis), length).to_vec() };
    Ok(Some((0..dimensions).map(axis).collect()))
}

/// # Safety
/// `name` is null or a text that ends with a zero byte.
unsafe fn read_name(name: *const c_char) -> Result<String, SchemeError> {
    if name.is_null() {
        return Err(failed("the name of a coefficient is NULL".to_owned()));
    }
    // SAFETY: not null, and the caller answers for its end.
    Ok(unsafe { CStr::from_ptr(name) }.to_string_lossy().into_owned())
}

unsafe extern "C" fn source(
    context: *mut c_void,
    time: f64,
    field: i32,
    points: *const *const f64,
    length: i64,
    values: *mut f64,
) -> i32 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let points = read_points(points, length, bridge.dimensions)?;
            copy(bridge.field(Question::Source { time: time.to_bits(), points }, field)?, length, values)?;
            Ok(0)
        })
    }
}

unsafe extern "C" fn boundary(
    context: *mut c_void,
    time: f64,
    code: i32,
    field: i32,
    length: i64,
    value: *mut f64,
    gradient: *mut f64,
) -> i32 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let data = bridge.boundary(time, code, 0)?;
            copy(member(&data.value, field)?, length, value)?;
            copy(member(&data.gradient, field)?, length, gradient)?;
            Ok(0)
        })
    }
}

unsafe extern "C" fn ghost(
    context: *mut c_void,
    time: f64,
    code: i32,
    field: i32,
    layers: i32,
    length: i64,
    values: *mut f64,
) -> i32 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let wanted = usize::try_from(layers).map_err(|_| failed(format!("{layers} is no number of layers")))?;
            let found = member(&bridge.boundary(time, code, wanted)?.ghost, field)?;
            let room = |layer: usize| values.add(layer * length.max(0) as usize);
            found.iter().enumerate().try_for_each(|(layer, array)| copy(array, length, room(layer)))?;
            Ok(0)
        })
    }
}

unsafe extern "C" fn coefficient(
    context: *mut c_void,
    name: *const c_char,
    time: f64,
    component: i32,
    points: *const *const f64,
    length: i64,
    values: *mut f64,
) -> i32 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let (name, points) = (read_name(name)?, read_points(points, length, bridge.dimensions)?);
            let question = Question::Coefficient { time: time.to_bits(), name, points };
            copy(bridge.field(question, component)?, length, values)?;
            Ok(0)
        })
    }
}

unsafe extern "C" fn source_length(context: *mut c_void, time: f64, field: i32) -> i64 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            Ok(bridge.field(Question::Source { time: time.to_bits(), points: None }, field)?.len() as i64)
        })
    }
}

unsafe extern "C" fn boundary_length(context: *mut c_void, time: f64, code: i32, field: i32) -> i64 {
    // SAFETY: the library keeps to the header.
    unsafe { with(context, |bridge| Ok(member(&bridge.boundary(time, code, 0)?.value, field)?.len() as i64)) }
}

unsafe extern "C" fn coefficient_length(context: *mut c_void, name: *const c_char, time: f64) -> i64 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let question = Question::Coefficient { time: time.to_bits(), name: read_name(name)?, points: None };
            Ok(bridge.field(question, 0)?.len() as i64)
        })
    }
}

unsafe extern "C" fn coefficient_components(context: *mut c_void, name: *const c_char, time: f64) -> i32 {
    // SAFETY: the library keeps to the header.
    unsafe {
        with(context, |bridge| {
            let question = Question::Coefficient { time: time.to_bits(), name: read_name(name)?, points: None };
            match bridge.answer(question)? {
                Answer::Fields(fields) => Ok(fields.len() as i32),
                Answer::Boundary(_) => Err(failed("an answer of another kind".to_owned())),
            }
        })
    }
}

unsafe extern "C" fn message(context: *mut c_void) -> *const c_char {
    // SAFETY: the library hands the context back as it came.
    unsafe { (*context.cast::<Bridge<'_>>()).message.as_ptr() }
}
