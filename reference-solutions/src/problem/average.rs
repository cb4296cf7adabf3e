//! Averages over boxes: Gauss rules of rising order, boxes split at known jumps, and halved where the rules do not settle.

use super::gauss::gauss_legendre;

/// Points along a direction, from rule to rule. A result is kept when it agrees with the rule before.
const ORDERS: [usize; 5] = [3, 5, 8, 11, 15];
/// Two rules agree when they differ by less than this beside the largest value.
const AGREEMENT: f64 = 3e-15;
/// For a function that is smooth over the box, rules with a and b points have errors e and e^(b/a): the better of two is good to
/// [`AGREEMENT`] where they differ by its power a/b. This fraction of it is asked for. Boxes that had to be halved may hold
/// a kink, and are given no such credit.
const CREDIT: f64 = 0.01;
/// Points evaluated at once.
const BLOCK: usize = 1 << 16;
/// How often a box is halved, by number of directions.
const DEEPEST: [u32; 4] = [0, 48, 7, 4];
/// Beside the largest value: where two rules differ by more than this, a jump is near, and halving is cheaper than a better rule.
const HOPELESS: f64 = 1e-2;

/// One coordinate range a direction. A direction in which the bounds coincide is not integrated over.
type Bounds = [[f64; 2]; 3];

/// A piece of a box that awaits its average.
#[derive(Clone)]
struct Piece {
    owner: usize,
    /// Part of the owner's measure.
    share: f64,
    bounds: Bounds,
    depth: u32,
}

/// What the averages came to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Accuracy {
    /// The largest difference of rules that was left over, beside the largest value.
    pub uncertainty: f64,
    /// The box in which it was left.
    pub worst: usize,
}

/// A function of points (one array a direction) that fills its values.
pub(super) type Integrand<'a, E> = dyn Fn(&[Vec<f64>], &mut [f64]) -> Result<(), E> + 'a;

/// Averages `integrand` over boxes given by one array of lower and one of upper bounds a direction.
pub(super) fn average<E>(
    lower: &[&[f64]],
    upper: &[&[f64]],
    breaks: &[Vec<f64>],
    integrand: &Integrand<'_, E>,
    out: &mut [f64],
) -> Result<Accuracy, E> {
    let dimensions = lower.len();
    out.fill(0.0);
    let mut pending = pieces(lower, upper, breaks, out.len());
    let mut largest = largest_at_centres(&pending, dimensions, integrand)?;
    let mut accuracy = Accuracy { uncertainty: 0.0, worst: 0 };
    while !pending.is_empty() {
        let mut halves = Vec::new();
        for (piece, estimate) in settle(pending, dimensions, integrand, &mut largest)? {
            let directions = directions(&piece.bounds, dimensions);
            let doubt = piece.share * estimate.difference;
            let settled = doubt <= estimate.allowed * largest;
            if settled || piece.depth >= DEEPEST[directions] {
                out[piece.owner] += piece.share * estimate.value;
                let uncertainty = if settled { 0.0 } else { doubt / largest };
                if uncertainty > accuracy.uncertainty || uncertainty.is_nan() {
                    accuracy = Accuracy { uncertainty, worst: piece.owner };
                }
            } else {
                halve(&piece, dimensions, &mut halves);
            }
        }
        pending = halves;
    }
    Ok(accuracy)
}

/// The boxes, each cut at the breaks that lie inside it.
fn pieces(lower: &[&[f64]], upper: &[&[f64]], breaks: &[Vec<f64>], count: usize) -> Vec<Piece> {
    let mut all = Vec::with_capacity(count);
    for owner in 0..count {
        let mut bounds = [[0.0; 2]; 3];
        for axis in 0..lower.len() {
            bounds[axis] = [lower[axis][owner], upper[axis][owner]];
        }
        let mut cut = vec![Piece { owner, share: 1.0, bounds, depth: 0 }];
        for (axis, positions) in breaks.iter().enumerate() {
            for position in positions {
                cut = cut.into_iter().flat_map(|piece| cut_at(piece, axis, *position)).collect();
            }
        }
        all.extend(cut);
    }
    all
}

fn cut_at(piece: Piece, axis: usize, position: f64) -> Vec<Piece> {
    let [low, high] = piece.bounds[axis];
    if !(low.min(high) < position && position < low.max(high)) {
        return vec![piece];
    }
    let part = |from: f64, to: f64| {
        let mut part = piece.clone();
        part.bounds[axis] = [from, to];
        part.share *= (to - from) / (high - low);
        part
    };
    vec![part(low, position), part(position, high)]
}

fn directions(bounds: &Bounds, dimensions: usize) -> usize {
    bounds[..dimensions].iter().filter(|[low, high]| low != high).count()
}

fn largest_at_centres<E>(pieces: &[Piece], dimensions: usize, integrand: &Integrand<'_, E>) -> Result<f64, E> {
    let centre = |axis: usize| pieces.iter().map(move |piece| 0.5 * (piece.bounds[axis][0] + piece.bounds[axis][1]));
    let points: Vec<Vec<f64>> = (0..dimensions).map(|axis| centre(axis).collect()).collect();
    let mut values = vec![0.0; pieces.len()];
    integrand(&points, &mut values)?;
    Ok(values.iter().fold(f64::MIN_POSITIVE, |largest, value| largest.max(value.abs())))
}

#[derive(Clone, Copy)]
struct Estimate {
    value: f64,
    /// From the rule before.
    difference: f64,
    /// Difference beside the largest value at which the estimate is good enough.
    allowed: f64,
}

impl Estimate {
    const NONE: Self = Self { value: f64::NAN, difference: f64::INFINITY, allowed: AGREEMENT };
}

/// Goes through the rules until each piece has settled or the rules are used up.
fn settle<E>(
    pieces: Vec<Piece>,
    dimensions: usize,
    integrand: &Integrand<'_, E>,
    largest: &mut f64,
) -> Result<Vec<(Piece, Estimate)>, E> {
    let mut settled: Vec<(Piece, Estimate)> = Vec::with_capacity(pieces.len());
    let mut open: Vec<(Piece, Estimate)> = pieces.into_iter().map(|piece| (piece, Estimate::NONE)).collect();
    for (round, order) in ORDERS.into_iter().enumerate() {
        apply_rule(&mut open, order, dimensions, integrand, largest)?;
        for (piece, estimate) in &mut open {
            let points = directions(&piece.bounds, dimensions) == 0;
            match round {
                // A piece without extent is a point: the first value is its average.
                0 => estimate.difference = if points { 0.0 } else { f64::INFINITY },
                _ if piece.depth > 0 => {}
                _ => estimate.allowed = CREDIT * AGREEMENT.powf(ORDERS[round - 1] as f64 / order as f64),
            }
        }
        let done = |(piece, estimate): &(Piece, Estimate)| {
            let agrees = piece.share * estimate.difference <= estimate.allowed * *largest;
            let hopeless = round > 0 && estimate.difference > HOPELESS * *largest;
            agrees || hopeless
        };
        let (done, rest): (Vec<_>, Vec<_>) = open.into_iter().partition(done);
        settled.extend(done);
        open = rest;
        if open.is_empty() {
            break;
        }
    }
    settled.extend(open);
    Ok(settled)
}

/// Evaluates one rule for every piece, block by block.
fn apply_rule<E>(
    open: &mut [(Piece, Estimate)],
    order: usize,
    dimensions: usize,
    integrand: &Integrand<'_, E>,
    largest: &mut f64,
) -> Result<(), E> {
    let rule = gauss_legendre(order);
    let mut begin = 0;
    while begin < open.len() {
        let mut points: Vec<Vec<f64>> = vec![Vec::new(); dimensions];
        let mut weights = Vec::new();
        let mut ends = Vec::new();
        let mut end = begin;
        while end < open.len() && (end == begin || weights.len() < BLOCK) {
            tensor_points(&open[end].0.bounds, rule, &mut points, &mut weights);
            ends.push(weights.len());
            end += 1;
        }
        let mut values = vec![0.0; weights.len()];
        integrand(&points, &mut values)?;
        let mut first = 0;
        for ((_, estimate), last) in open[begin..end].iter_mut().zip(ends) {
            let mut sum = 0.0;
            for (value, weight) in values[first..last].iter().zip(&weights[first..last]) {
                *largest = largest.max(value.abs());
                sum += value * weight;
            }
            estimate.difference = (sum - estimate.value).abs();
            estimate.value = sum;
            first = last;
        }
        begin = end;
    }
    Ok(())
}

/// Appends the points and weights of the product rule over a box.
fn tensor_points(bounds: &Bounds, rule: &[(f64, f64)], points: &mut [Vec<f64>], weights: &mut Vec<f64>) {
    let dimensions = points.len();
    let along = |axis: usize| -> Vec<(f64, f64)> {
        let [low, high] = if axis < dimensions { bounds[axis] } else { [0.0, 0.0] };
        if low == high {
            return vec![(low, 1.0)];
        }
        rule.iter().map(|(x, w)| (low + (high - low) * x, *w)).collect()
    };
    let lines = [along(0), along(1), along(2)];
    for (z, wz) in &lines[2] {
        for (y, wy) in &lines[1] {
            for (x, wx) in &lines[0] {
                for (axis, coordinate) in [x, y, z].into_iter().enumerate().take(dimensions) {
                    points[axis].push(*coordinate);
                }
                weights.push(wx * wy * wz);
            }
        }
    }
}

fn halve(piece: &Piece, dimensions: usize, halves: &mut Vec<Piece>) {
    let mut parts = vec![Piece { depth: piece.depth + 1, ..piece.clone() }];
    for axis in 0..dimensions {
        let [low, high] = piece.bounds[axis];
        if low != high {
            parts = parts.into_iter().flat_map(|part| cut_at(part, axis, 0.5 * (low + high))).collect();
        }
    }
    halves.extend(parts);
}

#[cfg(test)]
mod tests {
    //! Trusted: averages in closed form.
    use super::*;
    use std::convert::Infallible;

    fn average_of(
        lower: &[&[f64]],
        upper: &[&[f64]],
        breaks: &[Vec<f64>],
        f: impl Fn(&[f64]) -> f64,
    ) -> (Vec<f64>, Accuracy) {
        let mut out = vec![0.0; lower[0].len()];
        let integrand = |points: &[Vec<f64>], values: &mut [f64]| -> Result<(), Infallible> {
            for (index, value) in values.iter_mut().enumerate() {
                *value = f(&points.iter().map(|axis| axis[index]).collect::<Vec<_>>());
            }
            Ok(())
        };
        let accuracy = average(lower, upper, breaks, &integrand, &mut out).unwrap();
        (out, accuracy)
    }

    #[test]
    fn averages_smooth_functions_to_1e_14() {
        let lower: Vec<f64> = (0..20).map(|cell| 0.3 * f64::from(cell)).collect();
        let upper: Vec<f64> = lower.iter().map(|x| x + 0.3).collect();
        let (averages, accuracy) = average_of(&[&lower], &[&upper], &[], |p| (3.0 * p[0]).sin());
        for ((low, high), value) in lower.iter().zip(&upper).zip(averages) {
            let exact = ((3.0 * low).cos() - (3.0 * high).cos()) / (3.0 * (high - low));
            assert!((value - exact).abs() <= 1e-14, "{value} against {exact}");
        }
        assert_eq!(accuracy.uncertainty, 0.0);
    }

    /// A face in y of a box in three directions: the product of two averages and a point value.
    #[test]
    fn averages_over_faces_and_boxes_in_three_directions() {
        let (lower, upper) = ([[0.2], [0.7], [-0.4]], [[0.9], [0.7], [0.1]]);
        let (low, high) = (lower.each_ref().map(|a| &a[..]), upper.each_ref().map(|a| &a[..]));
        let (averages, _) = average_of(&low, &high, &[], |p| (p[0] + 2.0 * p[1] - 3.0 * p[2]).exp());
        let mean = |k: f64, a: f64, b: f64| ((k * b).exp() - (k * a).exp()) / (k * (b - a));
        let exact = mean(1.0, 0.2, 0.9) * 1.4_f64.exp() * mean(-3.0, -0.4, 0.1);
        assert!((averages[0] - exact).abs() <= 1e-14 * exact, "{} against {exact}", averages[0]);
    }

    /// exp(-x^2 / 2 s^2) with s = 0.01 on [-1, 1]: no rule resolves it before halving.
    #[test]
    fn halves_where_a_function_is_steep() {
        let (averages, accuracy) = average_of(&[&[-1.0]], &[&[1.0]], &[], |p| (-p[0] * p[0] / 2e-4).exp());
        let exact = 0.01 * (std::f64::consts::PI / 2.0).sqrt();
        assert!((averages[0] - exact).abs() <= 1e-14, "{} against {exact}", averages[0]);
        assert_eq!(accuracy.uncertainty, 0.0);
    }

    #[test]
    fn splits_at_declared_jumps_and_finds_undeclared_ones() {
        let step = |p: &[f64]| if p[0] < 0.3 { 1.0 + p[0] } else { 0.0 };
        let exact = 0.3 + 0.5 * 0.09;
        for breaks in [vec![vec![0.3]], vec![]] {
            let (averages, accuracy) = average_of(&[&[0.0]], &[&[1.0]], &breaks, step);
            assert!((averages[0] - exact).abs() <= 1e-14, "{} against {exact}", averages[0]);
            assert!(accuracy.uncertainty <= 1e-14);
        }
    }

    /// The part of a square inside a quarter circle: the jump crosses cells askew, and the doubt that is left is told.
    #[test]
    fn tells_the_doubt_that_a_slanted_jump_leaves() {
        let disc = |p: &[f64]| f64::from(u8::from(p[0].hypot(p[1]) < 1.0));
        let (averages, accuracy) = average_of(&[&[0.0], &[0.0]], &[&[1.0], &[1.0]], &[], disc);
        assert!((averages[0] - std::f64::consts::FRAC_PI_4).abs() <= 1e-3, "{}", averages[0]);
        assert!(accuracy.uncertainty > 0.0);
    }
}
