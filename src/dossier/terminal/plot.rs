//! A chart of Braille dots: eight dots a character, so that a curve shows its shape in a terminal.

use super::{DIM, paint, right};

/// A curve and what it is compared with.
pub(super) struct Plot<'a> {
    pub points: &'a [[f64; 2]],
    pub exact: &'a [[f64; 2]],
    pub x: [f64; 2],
    pub y: [f64; 2],
    /// Under the left end, the middle and the right end of the x axis.
    pub x_labels: [&'a str; 3],
}

const WIDTH: usize = 60;
const HEIGHT: usize = 9;

/// Bit of a dot within its Braille character, by row and column.
const DOTS: [[u8; 2]; 4] = [[0x01, 0x08], [0x02, 0x10], [0x04, 0x20], [0x40, 0x80]];

/// Draws the chart, 70 columns wide.
pub(super) fn draw(plot: &Plot<'_>, colour: bool) -> String {
    let measured = cells(plot.points, plot);
    let exact = cells(plot.exact, plot);
    let mut out = String::new();
    for row in 0..HEIGHT {
        let label = match row {
            0 => format!("{:.2}", plot.y[1]),
            _ if row == HEIGHT - 1 => format!("{:.2}", plot.y[0]),
            _ if row == HEIGHT / 2 => format!("{:.2}", (plot.y[0] + plot.y[1]) / 2.0),
            _ => String::new(),
        };
        out += &format!("  {} │", right(&label, 6));
        for column in 0..WIDTH {
            let (curve, other) = (measured[row][column], exact[row][column]);
            if curve != 0 {
                out.push(char::from_u32(0x2800 + u32::from(curve)).unwrap_or(' '));
            } else if other != 0 && column % 2 == 0 {
                out += &paint("·", DIM, colour);
            } else {
                out.push(' ');
            }
        }
        out.truncate(out.trim_end_matches(' ').len());
        out.push('\n');
    }
    out += &format!("  {} └{}\n", " ".repeat(6), "─".repeat(WIDTH));
    let [low, middle, high] = plot.x_labels;
    out + &format!("{}{low}{}{}\n", " ".repeat(10), right(middle, WIDTH / 2), right(high, WIDTH / 2 - 1))
}

/// The dots that a curve sets, character by character.
fn cells(points: &[[f64; 2]], plot: &Plot<'_>) -> Vec<Vec<u8>> {
    let mut cells = vec![vec![0; WIDTH]; HEIGHT];
    let (columns, rows) = ((2 * WIDTH - 1) as f64, (4 * HEIGHT - 1) as f64);
    let place = |[x, y]: [f64; 2]| {
        let across = (x - plot.x[0]) / (plot.x[1] - plot.x[0]) * columns;
        (across, (plot.y[1] - y) / (plot.y[1] - plot.y[0]) * rows)
    };
    for pair in points.windows(2) {
        let (from, to) = (place(pair[0]), place(pair[1]));
        let steps = (to.0 - from.0).abs().max((to.1 - from.1).abs()).ceil().clamp(1.0, 1000.0);
        for step in 0..=steps as usize {
            let share = step as f64 / steps;
            let (x, y) = ((from.0 + share * (to.0 - from.0)).round(), (from.1 + share * (to.1 - from.1)).round());
            if (0.0..=columns).contains(&x) && (0.0..=rows).contains(&y) {
                let (x, y) = (x as usize, y as usize);
                cells[y / 4][x / 2] |= DOTS[y % 4][x % 2];
            }
        }
    }
    cells
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_falling_line_runs_from_the_first_dot_to_the_last() {
        let plot = Plot {
            points: &[[0.0, 1.0], [1.0, 0.0]],
            exact: &[],
            x: [0.0, 1.0],
            y: [0.0, 1.0],
            x_labels: ["", "", ""],
        };
        let cells = cells(plot.points, &plot);
        assert_eq!((cells[0][0] & 0x01, cells[HEIGHT - 1][WIDTH - 1] & 0x80), (0x01, 0x80));
        assert_eq!((cells[0][WIDTH - 1], cells[HEIGHT - 1][0]), (0, 0));
    }
}
