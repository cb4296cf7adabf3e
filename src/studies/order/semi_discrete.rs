//! A semi-discrete scheme taken to the end of a problem by the harness: exact in time but for a tolerance far below any error in space.

use gridassay_reference::problem::{BoundaryKind, Problem};
use gridassay_scheme::{Fields, Harness, Side};

use super::control::Addition;
use crate::analysis::integrators::{Equations, Unfinished, integrate};
use crate::host::Session;
use crate::studies::Stop;
use crate::studies::layout::{FieldLayout, Layout};

/// Error in time over the whole run, relative to the largest value of the state.
pub(super) const TOLERANCE: f64 = 1e-11;

/// The scheme's rate as a system of ordinary differential equations.
pub(super) struct SemiDiscrete<'a> {
    pub session: &'a mut Session,
    pub harness: &'a mut dyn Harness,
    pub problem: &'a Problem,
    pub layout: &'a Layout,
    /// An error to add to the rate, with the time over which it is added.
    pub addition: Option<(&'a Addition, f64)>,
}

impl SemiDiscrete<'_> {
    /// The state at `until` from the state at `start`.
    ///
    /// # Errors
    /// The scheme says no or fails, or steps become too small.
    pub fn run(&mut self, start: f64, until: f64, state: Fields) -> Result<Fields, Stop> {
        match integrate(self, start, until, state, TOLERANCE) {
            Ok((state, _)) => Ok(state),
            Err(Unfinished::Equations(stop)) => Err(stop),
            Err(Unfinished::Steps { time, step }) => Err(Stop::Analysis(format!(
                "integrating the scheme's rate came to t = {time} only, with steps of {step:.1e}: the semi-discrete scheme grows or is too stiff; end earlier, or claim the order through `advance`"
            ))),
        }
    }
}

impl Equations for SemiDiscrete<'_> {
    type Error = Stop;

    fn rate(&mut self, time: f64, state: &Fields) -> Result<Fields, Stop> {
        let mut rate = self.session.rate(time, state, self.harness)?;
        if let Some((addition, over)) = self.addition {
            addition.add(1.0 / over, &mut rate);
        }
        Ok(rate)
    }

    /// Nodes on a side with prescribed values, where the scheme's rate is to be ignored.
    fn prescribe(&mut self, time: f64, state: &mut Fields) -> Result<(), Stop> {
        for (axis, kinds) in self.problem.boundaries().iter().enumerate() {
            for (upper, kind) in [false, true].into_iter().zip(kinds) {
                let end = if upper { self.problem.upper()[axis] } else { self.problem.lower()[axis] };
                let on_end = |layout: &FieldLayout| {
                    let along = &layout.axes[axis];
                    (if upper { along.last() } else { along.first() }) == Some(&end)
                };
                if *kind != BoundaryKind::Value || !self.layout.fields.iter().any(on_end) {
                    continue;
                }
                let data =
                    self.harness.boundary(time, side(axis, upper), 0).map_err(crate::host::HostError::Refused)?;
                for (index, layout) in self.layout.fields.iter().enumerate().filter(|(_, layout)| on_end(layout)) {
                    set_side(layout, axis, upper, &data.value[index], &mut state[index]);
                }
            }
        }
        Ok(())
    }
}

fn side(axis: usize, upper: bool) -> Side {
    let sides = [[Side::XLower, Side::XUpper], [Side::YLower, Side::YUpper], [Side::ZLower, Side::ZUpper]];
    sides[axis][usize::from(upper)]
}

/// Writes the values along a side (x fastest over the other directions) into a field.
fn set_side(layout: &FieldLayout, axis: usize, upper: bool, values: &[f64], field: &mut [f64]) {
    let stride: usize = layout.axes[..axis].iter().map(Vec::len).product();
    let count = layout.axes[axis].len();
    let at = if upper { count - 1 } else { 0 };
    for (index, value) in values.iter().enumerate() {
        let (inner, outer) = (index % stride, index / stride);
        field[outer * stride * count + at * stride + inner] = *value;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_along_a_side_land_on_that_side() {
        let counted = |n: usize| (0..n).map(|i| i as f64).collect::<Vec<_>>();
        let axes = vec![counted(3), counted(2), counted(4)];
        let layout = FieldLayout { axes: axes.clone(), lower: axes.clone(), upper: axes.clone(), widths: axes };
        let points = layout.points();
        for (axis, along) in points.iter().enumerate() {
            for upper in [false, true] {
                let end = if upper { layout.axes[axis].len() - 1 } else { 0 } as f64;
                let mut field = vec![0.0; 24];
                let values = vec![1.0; 24 / layout.axes[axis].len()];
                set_side(&layout, axis, upper, &values, &mut field);
                for (index, value) in field.iter().enumerate() {
                    assert_eq!(*value == 1.0, along[index] == end, "axis {axis}, upper {upper}, value {index}");
                }
            }
        }
    }
}
