//! The catalogue as a list, and one problem in full with a picture of its solution.

use gridassay_reference::equation::Equation;
use gridassay_reference::problem::{BoundaryKind, Problem, Quantity};

use super::{left, wrapped};

/// Columns of a picture.
const WIDTH: usize = 64;

/// Rows of a picture.
const HEIGHT: usize = 14;

/// Marks from the least to the greatest value of a field in two dimensions.
const SHADES: [char; 9] = [' ', '.', ':', '-', '=', '+', '*', '#', '@'];

/// The problems of the catalogue, grouped by equation.
pub fn catalogue_text(problems: &[Problem]) -> String {
    let mut equations: Vec<&str> = problems.iter().map(Problem::equation).collect();
    equations.sort_unstable();
    equations.dedup();
    let width = problems.iter().map(|problem| problem.name().len()).max().unwrap_or(0);
    let mut out = String::new();
    for equation in equations {
        out += &format!("{equation}\n");
        for problem in problems.iter().filter(|problem| problem.equation() == equation) {
            let dimensions = problem.dimensions();
            out += &format!("  {}  {dimensions}-D  {}\n", left(problem.name(), width), problem.title());
        }
    }
    out
}

/// One problem in full.
pub fn problem_text(problem: &Problem) -> String {
    let mut out = format!("{}: {}\n", problem.name(), problem.title());
    let mut line = |label: &str, text: &str| {
        for (number, part) in wrapped(text, 16).iter().enumerate() {
            out += &format!("  {}{part}\n", left(if number == 0 { label } else { "" }, 14));
        }
    };
    let form = Equation::named(problem.equation()).map(|equation| equation.form().to_owned()).unwrap_or_default();
    line("equation", &format!("{} in {}-D  {form}", problem.equation(), problem.dimensions()));
    line("published in", problem.reference());
    for (name, values) in problem.parameters() {
        line("parameter", &format!("{name} = {}", values.iter().map(f64::to_string).collect::<Vec<_>>().join(", ")));
    }
    for (name, value) in problem.constants() {
        line("constant", &format!("{name} = {value}"));
    }
    for (name, text) in problem.formulas() {
        line(if problem.fields().contains(&name) { "solution" } else { "where" }, &format!("{name} = {text}"));
    }
    let ends = problem.lower().iter().zip(problem.upper()).zip(problem.boundaries());
    for (name, ((from, to), [lower, upper])) in ["x", "y", "z"].iter().zip(ends) {
        let kinds = format!("{} and {}", boundary_word(*lower), boundary_word(*upper));
        line("domain", &format!("{name} from {from} to {to}: {kinds}"));
    }
    match problem.is_steady() {
        true => line("time", "steady"),
        false => line("time", &format!("from {} to {}", problem.start_time(), problem.final_time())),
    }
    line("source term", if problem.has_source() { "yes" } else { "none" });
    if let Some(order) = problem.expected_order() {
        line("weak", &format!("a jump: a first-order scheme converges in L1 with order {order}"));
    }
    out + &picture(problem)
}

fn boundary_word(kind: BoundaryKind) -> &'static str {
    match kind {
        BoundaryKind::Periodic => "periodic",
        BoundaryKind::Value => "value prescribed",
        BoundaryKind::Gradient => "gradient prescribed",
        BoundaryKind::None => "nothing prescribed",
    }
}

/// The first field at the end of the run: a curve in one dimension, shades in the middle plane otherwise.
fn picture(problem: &Problem) -> String {
    let time = if problem.is_steady() { 0.0 } else { problem.final_time() };
    // A character of a curve holds two columns of dots.
    let (rows, columns) = if problem.dimensions() == 1 { (1, 2 * WIDTH) } else { (HEIGHT, WIDTH) };
    let along = |axis: usize, index: usize, count: usize| {
        let (lower, upper) = (problem.lower()[axis], problem.upper()[axis]);
        lower + (upper - lower) * (index as f64 + 0.5) / count as f64
    };
    let mut points: Vec<Vec<f64>> = vec![Vec::new(); problem.dimensions()];
    for row in (0..rows).rev() {
        for column in 0..columns {
            for (axis, coordinates) in points.iter_mut().enumerate() {
                coordinates.push(match axis {
                    0 => along(0, column, columns),
                    1 => along(1, row, rows),
                    _ => along(2, 0, 1),
                });
            }
        }
    }
    let slices: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
    let mut values = vec![0.0; rows * columns];
    if problem.evaluate(Quantity::Value(0), time, &slices, &mut values).is_err() {
        return String::new();
    }
    let (least, greatest) = values.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, g), v| (l.min(*v), g.max(*v)));
    let height = |value: f64| if greatest > least { (value - least) / (greatest - least) } else { 0.5 };
    let lines: Vec<String> = match rows {
        1 => curve(&values.iter().map(|value| height(*value)).collect::<Vec<_>>()),
        _ => values.chunks(WIDTH).map(|row| row.iter().map(|value| shade(height(*value))).collect()).collect(),
    };
    let mut out = format!("  {} at the end, from {least:.4} to {greatest:.4}\n", problem.fields()[0]);
    for line in lines {
        out += &format!("    {}\n", line.trim_end_matches([' ', '\u{2800}']));
    }
    out
}

fn shade(height: f64) -> char {
    let last = SHADES.len() - 1;
    SHADES[((height * last as f64).round() as usize).min(last)]
}

/// A curve in Braille dots, four to a row and two to a column.
fn curve(heights: &[f64]) -> Vec<String> {
    const DOTS: [[u32; 2]; 4] = [[0x01, 0x08], [0x02, 0x10], [0x04, 0x20], [0x40, 0x80]];
    let tall = 4 * HEIGHT;
    let mut cells = vec![vec![0_u32; heights.len() / 2]; HEIGHT];
    for pair in 0..heights.len() / 2 * 2 {
        let at = |height: f64| ((1.0 - height) * (tall - 1) as f64).round() as usize;
        let here = at(heights[pair]);
        let before = if pair == 0 { here } else { at(heights[pair - 1]) };
        // Steep stretches are drawn down to the value before, so that the curve has no gaps.
        for dot in here.min(before)..=here.max(before) {
            cells[dot / 4][pair / 2] |= DOTS[dot % 4][pair % 2];
        }
    }
    let text = |row: Vec<u32>| row.into_iter().map(|dots| char::from_u32(0x2800 + dots).unwrap_or(' ')).collect();
    cells.into_iter().map(text).collect()
}
