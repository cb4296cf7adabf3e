//! Values along the axes of a grid, spread over the points of a block.

use super::tape::{BLOCK, Tape};

/// Some points in a row.
#[derive(Clone, Copy)]
pub(super) struct Place {
    pub(super) start: usize,
    pub(super) length: usize,
}

/// Blocks filled from axes.
pub(super) struct Buffers {
    pub(super) blocks: Vec<Vec<f64>>,
    /// The number along its axis that a whole block is filled with.
    filled: Vec<Option<usize>>,
}

impl Buffers {
    pub(super) fn new(tape: &Tape) -> Buffers {
        let count = tape.externals.len();
        Buffers { blocks: vec![vec![0.0; BLOCK]; count], filled: vec![None; count] }
    }

    /// The values of an axis at the points of a block: each stands `stride` times, and the axis starts again at its end.
    pub(super) fn spread(&mut self, number: usize, values: &[f64], stride: usize, at: Place) {
        let (into, filled) = (&mut self.blocks[number], &mut self.filled[number]);
        let index = at.start / stride % values.len();
        if stride - at.start % stride >= at.length {
            if *filled != Some(index) {
                into.fill(values[index]);
                *filled = Some(index);
            }
            return;
        }
        *filled = None;
        let mut done = 0;
        while done < at.length {
            let point = at.start + done;
            let index = point / stride % values.len();
            let run = if stride == 1 { values.len() - index } else { stride - point % stride }.min(at.length - done);
            let target = &mut into[done..done + run];
            if stride == 1 {
                target.copy_from_slice(&values[index..index + run]);
            } else {
                target.fill(values[index]);
            }
            done += run;
        }
    }
}
