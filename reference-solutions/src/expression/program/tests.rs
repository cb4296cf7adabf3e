//! What is trusted: evaluation at one point by walking the expression, which shares no code with the block instructions but the
//! functions themselves.

use super::*;
use crate::expression::Scope;

fn expressions() -> Vec<Expression> {
    let scope = Scope::new(["x", "y", "t", "a"]);
    let parse = |text: &str| Expression::parse(text, &scope).unwrap();
    [
        "1 + 0.1*sin(pi*x)*cos(2*pi*y)*exp(-a*t)",
        "a*x*y*sin(x) - a*x*y*cos(x)*t + x^3/(1 + y^2)^(3/2)",
        "if(x < y, log(1 + x^2), tanh(y - t)) + max(x, y)*erf(t) - min(x, a)",
        "sin(x*y - a*t) - cos(x*y - a*t)*sin(x)/(2 + cos(y))",
        "-x - y + exp(t) - 2*(a - x)",
        "sin(1e7*x) + exp(1000*(y - 0.2)) + log(x - 1) + atan2(y, x)",
        "a*t",
        "cos(y) - a",
        "x^y + abs(x - y)*sign(y - x) + heaviside(x - 0.3)",
    ]
    .map(parse)
    .to_vec()
}

const A: f64 = 0.7;

fn same(a: f64, b: f64) -> bool {
    (a.is_nan() && b.is_nan()) || a == b || (a - b).abs() <= 1e-13 * a.abs().max(b.abs()).max(1.0)
}

fn grid(cells: [usize; 2]) -> [Vec<f64>; 2] {
    [0, 1].map(|k| {
        (0..cells[k]).map(|i| 0.05 + 1.9 * (i as f64 + 0.37) / cells[k] as f64 * (1.0 - 0.3 * k as f64)).collect()
    })
}

#[test]
fn blocks_agree_with_single_points() {
    let all = expressions();
    let program = Program::new(&all, &["x", "y", "t", "a"]).unwrap();
    let points = 1000;
    let x: Vec<f64> = (0..points).map(|i| (i as f64 * 0.618).fract() * 3.0).collect();
    let y: Vec<f64> = (0..points).map(|i| (i as f64 * 0.757).fract()).collect();
    let mut out = vec![vec![0.0; points]; all.len()];
    let mut slices: Vec<&mut [f64]> = out.iter_mut().map(Vec::as_mut_slice).collect();
    program.evaluate(&[Input::Points(&x), Input::Points(&y), Input::Scalar(0.3), Input::Scalar(A)], &mut slices);
    for i in 0..points {
        let single = program.at(&[x[i], y[i], 0.3, A]);
        for (k, expression) in all.iter().enumerate() {
            let walked = expression.evaluate(&[("x", x[i]), ("y", y[i]), ("t", 0.3), ("a", A)]).unwrap();
            assert!(same(out[k][i], walked), "{expression} at {i}: {} {walked}", out[k][i]);
            let bits = single[k].to_bits() == out[k][i].to_bits() || (single[k].is_nan() && out[k][i].is_nan());
            assert!(bits, "{expression}: blocks and single points differ in the last bit");
        }
    }
}

#[test]
fn cartesian_grids_and_times_give_the_same_bits_as_points() {
    let all = expressions();
    let program = Program::new(&all, &["x", "y", "t", "a"]).unwrap();
    // More times than are kept at once.
    let times = [0.1, 0.45, -2.0, 0.0, 1.0, 1.1, 1.2, 1.3, 1.4, 1.5, 3.0];
    for cells in [[300, 7], [5, 40], [1, 3], [128, 2]] {
        let [x, y] = grid(cells);
        let points = cells[0] * cells[1];
        let kinds = [Kind::Axis, Kind::Axis, Kind::Scalar, Kind::Scalar];
        let mut out = vec![vec![0.0; points]; all.len() * times.len()];
        let mut slices: Vec<&mut [f64]> = out.iter_mut().map(Vec::as_mut_slice).collect();
        let inputs = [Input::Axis(&x), Input::Axis(&y), Input::Scalar(0.0), Input::Scalar(A)];
        Plan::with_times(&program, &kinds, 2).evaluate_at_times(&inputs, &times, &mut slices);
        for (j, time) in times.iter().enumerate() {
            for point in 0..points {
                let expected = program.at(&[x[point % cells[0]], y[point / cells[0]], *time, A]);
                for (k, expected) in expected.iter().enumerate() {
                    let found = out[j * all.len() + k][point];
                    assert!(
                        found.to_bits() == expected.to_bits() || (found.is_nan() && expected.is_nan()),
                        "{}",
                        all[k]
                    );
                }
            }
        }
    }
}

#[test]
fn equal_parts_are_computed_once() {
    let scope = Scope::new(["u", "v", "w", "x"]);
    let parse = |text: &str| Expression::parse(text, &scope).unwrap();
    for (texts, operations) in [
        (vec!["u*v*w", "u*v*x"], 3),
        (vec!["u + v + w", "u + v + x"], 3),
        (vec!["2*(u - v)", "w - (u - v)"], 3),
        (vec!["sin(u*v)", "cos(u*v)"], 3),
        (vec!["x^4", "x^2"], 2),
        (vec!["u/(v*w)", "x/(v*w)"], 3),
        (vec!["2*pi*u"], 1),
        (vec!["-u - v"], 2),
        (vec!["u - v"], 1),
    ] {
        let expressions: Vec<Expression> = texts.iter().map(|text| parse(text)).collect();
        let program = Program::new(&expressions, &["u", "v", "w", "x"]).unwrap();
        assert_eq!(program.operations(), operations, "{texts:?}: {:?}", program.code());
    }
}

#[test]
fn free_names_that_are_no_inputs_are_refused() {
    let error = Program::new(&expressions(), &["x", "y", "t"]).unwrap_err();
    assert_eq!(error.to_string(), "`a` has no value; give one");
}

#[test]
fn every_instruction_set_gives_the_same_bits() {
    let all = expressions();
    let program = Program::new(&all, &["x", "y", "t", "a"]).unwrap();
    let (x, y): (Vec<f64>, Vec<f64>) = (0..100).map(|i| (i as f64 * 0.31, (i as f64 * 0.17).fract())).unzip();
    let is_scalar = |value: Value| program.dependencies[value] & 3 == 0;
    let is_member = |value: Value| !is_scalar(value) && !matches!(program.operations[value], Operation::Input(_));
    let tape = tape::Tape::new(&program, &is_member, &is_scalar, &program.outputs);
    let externals: Vec<&[f64]> = tape
        .externals
        .iter()
        .map(|value| if program.operations[*value] == Operation::Input(0) { x.as_slice() } else { y.as_slice() })
        .collect();
    let given = [0.0, 0.0, 0.3, A];
    let mut scalars: Vec<f64> = Vec::new();
    for operation in &program.operations {
        scalars.push(operation.result(&given, |value| scalars[value]));
    }
    let bits = |fast: bool| {
        let mut registers = tape.registers();
        match fast {
            true => tape.run(100, &scalars, &externals, &mut registers),
            false => tape.run_baseline(100, &scalars, &externals, &mut registers),
        }
        let block = |k| match tape.result(k, 100, &scalars, &externals, &registers) {
            block::Operand::Block(values) => values.iter().map(|value| value.to_bits()).collect::<Vec<_>>(),
            block::Operand::Scalar(value) => vec![value.to_bits()],
        };
        (0..all.len()).map(block).collect::<Vec<_>>()
    };
    assert_eq!(bits(true), bits(false));
}
