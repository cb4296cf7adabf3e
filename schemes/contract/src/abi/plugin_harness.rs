//! The harness as a Rust plugin sees it: questions over the function pointers of the header.

use std::ffi::CString;

use super::layout::CHarness;
use super::problem::{side_code, text};
use crate::{BoundaryData, Fields, Harness, SchemeError, Side};

/// Asks over the C ABI.
pub(super) struct PluginHarness<'a> {
    pub harness: &'a CHarness,
    /// Number of fields of the case.
    pub fields: usize,
}

impl PluginHarness<'_> {
    fn checked(&self, code: i32) -> Result<(), SchemeError> {
        if code == 0 { Ok(()) } else { Err(self.error(code)) }
    }

    fn count(&self, count: i64) -> Result<usize, SchemeError> {
        usize::try_from(count).map_err(|_| self.error(i32::try_from(count).unwrap_or(SchemeError::FAILED)))
    }

    fn error(&self, code: i32) -> SchemeError {
        // SAFETY: the harness's own function with its own context; the text is copied at once.
        let message = unsafe { text((self.harness.message)(self.harness.context)) };
        SchemeError::from_code(code, message.unwrap_or_else(|_| "the harness could not answer".to_owned()))
    }
}

/// Pointers to the coordinates, and how many points there are.
fn pointers(points: &[Vec<f64>]) -> (Vec<*const f64>, usize) {
    (points.iter().map(|axis| axis.as_ptr()).collect(), points.first().map_or(0, Vec::len))
}

impl Harness for PluginHarness<'_> {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let context = self.harness.context;
        let coordinates = points.map(pointers);
        let mut fields = Vec::with_capacity(self.fields);
        for field in 0..self.fields as i32 {
            let (pointer, length) = match &coordinates {
                Some((pointers, length)) => (pointers.as_ptr(), *length),
                // SAFETY: the harness's own function with its own context.
                None => (std::ptr::null(), self.count(unsafe { (self.harness.source_length)(context, time, field) })?),
            };
            let mut values = vec![0.0; length];
            // SAFETY: `values` has room for `length` values, and the coordinates have as many.
            let code =
                unsafe { (self.harness.source)(context, time, field, pointer, length as i64, values.as_mut_ptr()) };
            self.checked(code)?;
            fields.push(values);
        }
        Ok(fields)
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let (context, side) = (self.harness.context, side_code(side));
        let mut data = BoundaryData::default();
        for field in 0..self.fields as i32 {
            // SAFETY: the harness's own function with its own context.
            let length = self.count(unsafe { (self.harness.boundary_length)(context, time, side, field) })?;
            let (mut value, mut gradient) = (vec![0.0; length], vec![0.0; length]);
            // SAFETY: both arrays have room for `length` values.
            let code = unsafe {
                let (value, gradient) = (value.as_mut_ptr(), gradient.as_mut_ptr());
                (self.harness.boundary)(context, time, side, field, length as i64, value, gradient)
            };
            self.checked(code)?;
            data.value.push(value);
            data.gradient.push(gradient);
            if layers > 0 {
                let mut ghost = vec![0.0; length * layers];
                // SAFETY: the array has room for `layers` times `length` values.
                let code = unsafe {
                    let (layers, length) = (layers as i32, length as i64);
                    (self.harness.ghost)(context, time, side, field, layers, length, ghost.as_mut_ptr())
                };
                self.checked(code)?;
                data.ghost.push(ghost.chunks(length.max(1)).map(<[f64]>::to_vec).collect());
            }
        }
        Ok(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let context = self.harness.context;
        let zero = |_| SchemeError::Failed(format!("the name {name:?} holds a zero byte"));
        let name = CString::new(name).map_err(zero)?;
        // SAFETY: the harness's own functions with their own context; the name lives through the calls.
        let components =
            self.count(i64::from(unsafe { (self.harness.coefficient_components)(context, name.as_ptr(), time) }))?;
        let coordinates = points.map(pointers);
        let (pointer, length) = match &coordinates {
            Some((pointers, length)) => (pointers.as_ptr(), *length),
            None => {
                // SAFETY: as above.
                let count = unsafe { (self.harness.coefficient_length)(context, name.as_ptr(), time) };
                (std::ptr::null(), self.count(count)?)
            }
        };
        let mut fields = Vec::with_capacity(components);
        for component in 0..components as i32 {
            let mut values = vec![0.0; length];
            // SAFETY: `values` has room for `length` values, and the coordinates have as many.
            let code = unsafe {
                let (length, values) = (length as i64, values.as_mut_ptr());
                (self.harness.coefficient)(context, name.as_ptr(), time, component, pointer, length, values)
            };
            self.checked(code)?;
            fields.push(values);
        }
        Ok(fields)
    }
}
