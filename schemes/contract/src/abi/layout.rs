//! The structures and function types of the header. A test has a C compiler check the layout.

use std::ffi::{c_char, c_void};

use crate::BoundaryKind;

/// `gridassay_state`: one array a field.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct CState {
    /// Number of fields.
    pub fields: i32,
    /// Number of values of each.
    pub lengths: *const i64,
    /// The arrays.
    pub values: *const *mut f64,
}

/// `gridassay_parameter`: a parameter that is constant in the case.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct CParameter {
    /// Its name.
    pub name: *const c_char,
    /// Its values.
    pub values: *const f64,
    /// How many.
    pub count: i32,
    /// Whether the contract writes a list.
    pub is_vector: i32,
}

/// `gridassay_case`: what `gridassay_prepare` is asked with.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct CCase {
    /// The equation's name.
    pub equation: *const c_char,
    /// Names of the fields, in the order of every state.
    pub fields: *const *const c_char,
    /// The parameters that are constant.
    pub parameters: *const CParameter,
    /// Names of the parameters that vary.
    pub coefficients: *const *const c_char,
    /// Cells in each direction.
    pub cells: *const i64,
    /// Lower corner.
    pub lower: *const f64,
    /// Upper corner.
    pub upper: *const f64,
    /// Edges of a stretched grid for each direction, else null.
    pub edges: *const *const f64,
    /// Vertices of a mapped grid for each direction, else null.
    pub vertices: *const *const f64,
    /// Kind of each field at each side: `[side * field_count + field]`.
    pub boundaries: *const i32,
    /// Number of space dimensions.
    pub dimensions: i32,
    /// Number of fields.
    pub field_count: i32,
    /// Number of constant parameters.
    pub parameter_count: i32,
    /// Number of varying parameters.
    pub coefficient_count: i32,
    /// Whether there is a source term.
    pub source: i32,
    /// Whether the source term is steady.
    pub steady_source: i32,
    /// Whether the boundary data are steady.
    pub steady_boundary: i32,
    /// Whether the coefficients are steady.
    pub steady_coefficient: i32,
}

/// `gridassay_harness`: what a scheme may ask.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct CHarness {
    /// Handed back with every question.
    pub context: *mut c_void,
    /// The source term of a field.
    pub source: unsafe extern "C" fn(*mut c_void, f64, i32, *const *const f64, i64, *mut f64) -> i32,
    /// Value and gradient of a field on a side.
    pub boundary: unsafe extern "C" fn(*mut c_void, f64, i32, i32, i64, *mut f64, *mut f64) -> i32,
    /// The exact solution outside a side.
    pub ghost: unsafe extern "C" fn(*mut c_void, f64, i32, i32, i32, i64, *mut f64) -> i32,
    /// A component of a varying parameter.
    pub coefficient:
        unsafe extern "C" fn(*mut c_void, *const c_char, f64, i32, *const *const f64, i64, *mut f64) -> i32,
    /// Number of values of a source.
    pub source_length: unsafe extern "C" fn(*mut c_void, f64, i32) -> i64,
    /// Number of values along a side.
    pub boundary_length: unsafe extern "C" fn(*mut c_void, f64, i32, i32) -> i64,
    /// Number of values of a varying parameter.
    pub coefficient_length: unsafe extern "C" fn(*mut c_void, *const c_char, f64) -> i64,
    /// Number of components of a varying parameter.
    pub coefficient_components: unsafe extern "C" fn(*mut c_void, *const c_char, f64) -> i32,
    /// Why the last question failed.
    pub message: unsafe extern "C" fn(*mut c_void) -> *const c_char,
}

/// Types of the functions that a library exports.
pub mod functions {
    use super::{CCase, CHarness, CState, c_char};

    /// `gridassay_contract`.
    pub type Contract = unsafe extern "C" fn() -> i32;
    /// `gridassay_describe` and `gridassay_message`.
    pub type Text = unsafe extern "C" fn() -> *const c_char;
    /// `gridassay_select`.
    pub type Select = unsafe extern "C" fn(*const c_char) -> i32;
    /// `gridassay_prepare`.
    pub type Prepare = unsafe extern "C" fn(*const CCase, *const CHarness) -> i32;
    /// `gridassay_nodes`.
    pub type Nodes = unsafe extern "C" fn(i32, *mut f64, *mut f64) -> i32;
    /// `gridassay_advance`.
    pub type Advance = unsafe extern "C" fn(f64, f64, i64, *mut CState, *mut CState, *const CHarness) -> i32;
    /// `gridassay_march`.
    pub type March = unsafe extern "C" fn(f64, f64, f64, *mut CState, *mut i64, *const CHarness) -> i32;
    /// `gridassay_rate`.
    pub type Rate = unsafe extern "C" fn(f64, *const CState, *mut CState, *const CHarness) -> i32;
    /// `gridassay_solve`.
    pub type Solve = unsafe extern "C" fn(*mut CState, *mut i64, *mut f64, *const CHarness) -> i32;
}

const KINDS: [BoundaryKind; 4] =
    [BoundaryKind::Periodic, BoundaryKind::Value, BoundaryKind::Gradient, BoundaryKind::None];

/// The number of a kind of boundary in the header.
pub fn kind_code(kind: BoundaryKind) -> i32 {
    KINDS.iter().position(|known| *known == kind).map_or(3, |position| position as i32)
}

/// The kind of boundary of a number of the header.
pub fn kind_of_code(code: i32) -> Option<BoundaryKind> {
    KINDS.get(usize::try_from(code).ok()?).copied()
}
