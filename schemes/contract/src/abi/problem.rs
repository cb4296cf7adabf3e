//! A case to and from its C form.

use std::collections::BTreeMap;
use std::ffi::{CStr, CString, c_char};
use std::ptr::null;

use super::layout::{CCase, CParameter, kind_code, kind_of_code};
use crate::{ArrayEncoding, Callback, Case, Grid, Parameter, SchemeError, Side, SideKinds};

/// The C form of a case, with everything that it points to.
pub struct CaseArrays {
    case: CCase,
    // The buffers that `case` points into. Their heap blocks stay where they are when this value moves.
    _texts: Vec<CString>,
    _names: [Vec<*const c_char>; 2],
    _parameters: (Vec<Vec<f64>>, Vec<CParameter>),
    _grid: (Vec<i64>, Vec<f64>, Vec<f64>),
    _arrays: (Vec<Vec<f64>>, Vec<*const f64>),
    _boundaries: Vec<i32>,
}

impl CaseArrays {
    /// The C form of `case`, whose state has the fields `names`.
    ///
    /// # Errors
    /// A name holds a zero byte.
    pub fn new(case: &Case, names: &[String]) -> Result<Self, SchemeError> {
        let mut texts = Vec::new();
        let mut text = |text: &str| {
            let zero = |_| SchemeError::Failed(format!("the name {text:?} holds a zero byte"));
            texts.push(CString::new(text).map_err(zero)?);
            Ok::<_, SchemeError>(texts[texts.len() - 1].as_ptr())
        };
        let equation = text(&case.equation)?;
        let fields = names.iter().map(|name| text(name)).collect::<Result<Vec<_>, _>>()?;
        let coefficients = case.coefficients.iter().map(|name| text(name)).collect::<Result<Vec<_>, _>>()?;
        let values: Vec<Vec<f64>> = case.parameters.values().map(|value| value.components().to_vec()).collect();
        let mut parameters = Vec::with_capacity(values.len());
        for ((name, value), values) in case.parameters.iter().zip(&values) {
            let is_vector = i32::from(matches!(value, Parameter::Vector(_)));
            let count = values.len() as i32;
            parameters.push(CParameter { name: text(name)?, values: values.as_ptr(), count, is_vector });
        }
        let cells: Vec<i64> = case.grid.cells.iter().map(|cells| *cells as i64).collect();
        let (lower, upper) = (case.grid.lower.clone(), case.grid.upper.clone());
        let arrays: Vec<Vec<f64>> = case.grid.edges.iter().chain(&case.grid.vertices).flatten().cloned().collect();
        let pointers: Vec<*const f64> = arrays.iter().map(|array| array.as_ptr()).collect();
        let (edges, vertices) = match (&case.grid.edges, &case.grid.vertices) {
            (Some(edges), Some(_)) => (pointers.as_ptr(), pointers[edges.len()..].as_ptr()),
            (Some(_), None) => (pointers.as_ptr(), null()),
            (None, Some(_)) => (null(), pointers.as_ptr()),
            (None, None) => (null(), null()),
        };
        let sides = case.boundaries.iter().flatten();
        let kind = |side: &SideKinds| names.iter().map(|name| kind_code(side.of(name))).collect::<Vec<_>>();
        let boundaries: Vec<i32> = sides.flat_map(kind).collect();
        let steady = |callback| i32::from(case.is_steady(callback));
        let c_case = CCase {
            equation,
            fields: fields.as_ptr(),
            parameters: parameters.as_ptr(),
            coefficients: coefficients.as_ptr(),
            cells: cells.as_ptr(),
            lower: lower.as_ptr(),
            upper: upper.as_ptr(),
            edges,
            vertices,
            boundaries: boundaries.as_ptr(),
            dimensions: case.dimensions as i32,
            field_count: fields.len() as i32,
            parameter_count: parameters.len() as i32,
            coefficient_count: coefficients.len() as i32,
            source: i32::from(case.source),
            steady_source: steady(Callback::Source),
            steady_boundary: steady(Callback::Boundary),
            steady_coefficient: steady(Callback::Coefficient),
        };
        Ok(Self {
            case: c_case,
            _texts: texts,
            _names: [fields, coefficients],
            _parameters: (values, parameters),
            _grid: (cells, lower, upper),
            _arrays: (arrays, pointers),
            _boundaries: boundaries,
        })
    }

    /// The C form; it points into this value.
    pub fn as_c(&self) -> &CCase {
        &self.case
    }
}

/// The case that a C form stands for, and the names of its fields.
///
/// # Safety
/// Every pointer of `case` points to as many members as the header says.
///
/// # Errors
/// A text is no UTF-8, or a number is outside what the header says.
pub unsafe fn case_from_c(case: &CCase) -> Result<(Case, Vec<String>), SchemeError> {
    // SAFETY: the caller answers for pointers and lengths.
    let (names, coefficients, dimensions) = unsafe {
        let dimensions = case.dimensions.max(0) as usize;
        (texts(case.fields, case.field_count)?, texts(case.coefficients, case.coefficient_count)?, dimensions)
    };
    let mut parameters = BTreeMap::new();
    // SAFETY: as above.
    for parameter in unsafe { slice(case.parameters, case.parameter_count as usize) } {
        // SAFETY: as above.
        let (name, values) = unsafe { (text(parameter.name)?, slice(parameter.values, parameter.count as usize)) };
        let value = match (parameter.is_vector, values) {
            (0, [value]) => Parameter::Scalar(*value),
            (_, values) => Parameter::Vector(values.to_vec()),
        };
        parameters.insert(name, value);
    }
    // SAFETY: as above.
    let grid = unsafe { grid(case, dimensions) };
    // SAFETY: as above.
    let kinds = unsafe { slice(case.boundaries, 2 * dimensions * names.len()) };
    let mut sides = Vec::with_capacity(2 * dimensions);
    for side in kinds.chunks(names.len().max(1)) {
        let wrong = || SchemeError::Failed(format!("{side:?} are no kinds of boundary"));
        let kinds = side.iter().map(|code| kind_of_code(*code)).collect::<Option<Vec<_>>>().ok_or_else(wrong)?;
        sides.push(match kinds.as_slice() {
            [first, rest @ ..] if rest.iter().all(|kind| kind == first) => SideKinds::Same(*first),
            kinds => SideKinds::ByField(names.iter().cloned().zip(kinds.iter().copied()).collect()),
        });
    }
    let boundaries = sides.chunks(2).map(|pair| [pair[0].clone(), pair[pair.len() - 1].clone()]).collect();
    let flags = [
        (case.steady_source, Callback::Source),
        (case.steady_boundary, Callback::Boundary),
        (case.steady_coefficient, Callback::Coefficient),
    ];
    let steady = flags.into_iter().filter(|(flag, _)| *flag != 0).map(|(_, callback)| callback).collect();
    let case = Case {
        // SAFETY: as above.
        equation: unsafe { text(case.equation)? },
        dimensions,
        parameters,
        coefficients,
        grid,
        boundaries,
        source: case.source != 0,
        steady,
        arrays: ArrayEncoding::Text,
    };
    Ok((case, names))
}

/// # Safety
/// As [`case_from_c`].
unsafe fn grid(case: &CCase, dimensions: usize) -> Grid {
    // SAFETY: the caller answers for pointers and lengths.
    unsafe {
        let cells: Vec<usize> = slice(case.cells, dimensions).iter().map(|cells| *cells as usize).collect();
        let corners: usize = cells.iter().map(|cells| cells + 1).product();
        let read = |pointers: *const *const f64, length: &dyn Fn(usize) -> usize| {
            let arrays = slice(pointers, dimensions).iter().enumerate();
            let arrays = arrays.map(|(axis, array)| slice(*array, length(axis)).to_vec());
            (!pointers.is_null()).then(|| arrays.collect())
        };
        let edges = read(case.edges, &|axis| cells[axis] + 1);
        let vertices = read(case.vertices, &|_| corners);
        let (lower, upper) = (slice(case.lower, dimensions).to_vec(), slice(case.upper, dimensions).to_vec());
        Grid { cells, lower, upper, edges, vertices }
    }
}

/// A slice from a pointer that may be null where there is nothing.
///
/// # Safety
/// `pointer` is null or points to `length` members that live as long as the slice.
pub(super) unsafe fn slice<'a, T>(pointer: *const T, length: usize) -> &'a [T] {
    // SAFETY: the caller answers for the pointer.
    if pointer.is_null() || length == 0 { &[] } else { unsafe { std::slice::from_raw_parts(pointer, length) } }
}

/// # Safety
/// `pointer` is null or points to a text that ends with a zero byte.
pub(super) unsafe fn text(pointer: *const c_char) -> Result<String, SchemeError> {
    if pointer.is_null() {
        return Err(SchemeError::Failed("a text is a null pointer".to_owned()));
    }
    // SAFETY: not null, and the caller answers for its end.
    let text = unsafe { CStr::from_ptr(pointer) };
    text.to_str().map(str::to_owned).map_err(|_| SchemeError::Failed("a text is no UTF-8".to_owned()))
}

/// # Safety
/// `pointer` points to `count` texts.
unsafe fn texts(pointer: *const *const c_char, count: i32) -> Result<Vec<String>, SchemeError> {
    // SAFETY: the caller answers for pointers and lengths.
    unsafe { slice(pointer, count.max(0) as usize).iter().map(|pointer| text(*pointer)).collect() }
}

/// The side of a number of the header.
pub(super) fn side_code(side: Side) -> i32 {
    side as i32
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::BoundaryKind;

    #[test]
    fn a_case_comes_back_from_its_c_form_as_it_was() {
        let by_field = SideKinds::ByField(
            [("u".to_owned(), BoundaryKind::Value), ("p".to_owned(), BoundaryKind::Gradient)].into(),
        );
        let case = Case {
            equation: "acoustics".to_owned(),
            dimensions: 2,
            parameters: [
                ("density".to_owned(), Parameter::Scalar(1.25)),
                ("velocity".to_owned(), Parameter::Vector(vec![0.5, -0.25])),
            ]
            .into(),
            coefficients: vec!["sound_speed".to_owned()],
            grid: Grid {
                edges: Some(vec![vec![0.0, 0.25, 1.0], vec![0.0, 0.5, 0.75, 1.0]]),
                vertices: Some(vec![(0..12).map(f64::from).collect(), (0..12).map(|k| f64::from(-k)).collect()]),
                ..Grid::uniform(&[2, 3], &[0.0, 0.0], &[1.0, 1.0])
            },
            boundaries: vec![
                [by_field, SideKinds::Same(BoundaryKind::None)],
                [SideKinds::Same(BoundaryKind::Periodic), SideKinds::Same(BoundaryKind::Periodic)],
            ],
            source: true,
            steady: vec![Callback::Source, Callback::Coefficient],
            arrays: ArrayEncoding::Text,
        };
        let names = ["p".to_owned(), "u".to_owned()];
        let arrays = CaseArrays::new(&case, &names).unwrap();
        // SAFETY: the C form was made a line above and points into `arrays`.
        let (back, back_names) = unsafe { case_from_c(arrays.as_c()) }.unwrap();
        assert_eq!(back, case);
        assert_eq!(back_names, names);
    }
}
