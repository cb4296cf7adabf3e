//! Loops over blocks of values. Each is written once and compiled twice, for AVX2 and for the baseline; additions and multiplications
//! stay separate, so that both give the same bits.

use super::super::function::Function;
use super::super::kernels;

/// An operand of a block operation.
#[derive(Clone, Copy)]
pub(super) enum Operand<'a> {
    /// One value for all.
    Scalar(f64),
    /// A value for each point.
    Block(&'a [f64]),
}

impl Operand<'_> {
    #[inline(always)]
    fn at(&self, i: usize) -> f64 {
        match self {
            Operand::Scalar(value) => *value,
            Operand::Block(values) => values[i],
        }
    }
}

#[inline(always)]
pub(super) fn unary(into: &mut [f64], a: Operand, f: impl Fn(f64) -> f64) {
    match a {
        Operand::Scalar(a) => into.fill(f(a)),
        Operand::Block(a) => into.iter_mut().zip(a).for_each(|(into, a)| *into = f(*a)),
    }
}

#[inline(always)]
pub(super) fn binary(into: &mut [f64], a: Operand, b: Operand, f: impl Fn(f64, f64) -> f64) {
    match (a, b) {
        (Operand::Block(a), Operand::Block(b)) => {
            into.iter_mut().zip(a).zip(b).for_each(|((into, a), b)| *into = f(*a, *b));
        }
        (Operand::Block(a), Operand::Scalar(b)) => into.iter_mut().zip(a).for_each(|(into, a)| *into = f(*a, b)),
        (Operand::Scalar(a), Operand::Block(b)) => into.iter_mut().zip(b).for_each(|(into, b)| *into = f(a, *b)),
        (Operand::Scalar(a), Operand::Scalar(b)) => into.fill(f(a, b)),
    }
}

#[inline(always)]
pub(super) fn ternary(into: &mut [f64], [a, b, c]: [Operand; 3], f: impl Fn(f64, f64, f64) -> f64) {
    use Operand::{Block, Scalar};
    match (a, b, c) {
        (Block(a), Block(b), Block(c)) => {
            into.iter_mut().zip(a).zip(b).zip(c).for_each(|(((into, a), b), c)| *into = f(*a, *b, *c));
        }
        (Scalar(a), Block(b), Block(c)) => {
            into.iter_mut().zip(b).zip(c).for_each(|((into, b), c)| *into = f(a, *b, *c));
        }
        (Block(a), Scalar(b), Block(c)) => {
            into.iter_mut().zip(a).zip(c).for_each(|((into, a), c)| *into = f(*a, b, *c));
        }
        (Block(a), Block(b), Scalar(c)) => {
            into.iter_mut().zip(a).zip(b).for_each(|((into, a), b)| *into = f(*a, *b, c));
        }
        (Scalar(a), Block(b), Scalar(c)) => into.iter_mut().zip(b).for_each(|(into, b)| *into = f(a, *b, c)),
        (Block(a), Scalar(b), Scalar(c)) => into.iter_mut().zip(a).for_each(|(into, a)| *into = f(*a, b, c)),
        _ => into.iter_mut().enumerate().for_each(|(i, into)| *into = f(a.at(i), b.at(i), c.at(i))),
    }
}

/// Sine and cosine of the same argument.
#[inline(always)]
pub(super) fn sin_cos(sine: &mut [f64], cosine: &mut [f64], a: &[f64]) {
    if all(a, kernels::trigonometric_range) {
        for ((sine, cosine), a) in sine.iter_mut().zip(cosine).zip(a) {
            (*sine, *cosine) = kernels::sin_cos_inside(*a);
        }
    } else {
        for ((sine, cosine), a) in sine.iter_mut().zip(cosine).zip(a) {
            (*sine, *cosine) = (kernels::sin(*a), kernels::cos(*a));
        }
    }
}

/// A function of one to three arguments.
#[inline(always)]
pub(super) fn call(into: &mut [f64], function: Function, arguments: [Operand; 3]) {
    let [a, b, _] = arguments;
    let block = |a: Operand, inside: fn(f64) -> bool| matches!(a, Operand::Block(a) if all(a, inside));
    let truth = |holds: bool| if holds { 1.0 } else { 0.0 };
    match function {
        Function::Sin if block(a, kernels::trigonometric_range) => unary(into, a, |x| kernels::sin_cos_inside(x).0),
        Function::Cos if block(a, kernels::trigonometric_range) => unary(into, a, |x| kernels::sin_cos_inside(x).1),
        Function::Exp if block(a, kernels::exponential_range) => unary(into, a, kernels::exp_inside),
        Function::Log if block(a, kernels::logarithmic_range) => unary(into, a, kernels::log_inside),
        Function::Abs => unary(into, a, f64::abs),
        Function::If => {
            ternary(into, arguments, |condition, then, otherwise| if condition != 0.0 { then } else { otherwise })
        }
        Function::Less => binary(into, a, b, |a, b| truth(a < b)),
        Function::LessEqual => binary(into, a, b, |a, b| truth(a <= b)),
        Function::Greater => binary(into, a, b, |a, b| truth(a > b)),
        Function::GreaterEqual => binary(into, a, b, |a, b| truth(a >= b)),
        _ if function.arguments() == 1 => unary(into, a, |a| function.value(&[a])),
        _ => ternary(into, arguments, |a, b, c| function.value(&[a, b, c])),
    }
}

/// Without a branch inside, so that the test is vectorised too.
#[inline(always)]
fn all(values: &[f64], holds: fn(f64) -> bool) -> bool {
    values.iter().fold(true, |all, value| all & holds(*value))
}
