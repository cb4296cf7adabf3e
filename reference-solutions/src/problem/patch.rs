//! The second method by which solutions are checked: residuals on a small patch of Chebyshev points.
//!
//! Derivatives are taken of the *evaluated* solution, by the derivative of the polynomial through its values (Trefethen,
//! "Spectral Methods in MATLAB", chapter 6). Nothing of the symbolic differentiation is used.

use std::collections::HashMap;

use crate::expression::{Expression, Node};

/// Chebyshev extreme points along each of the patch's directions, `t` last where the problem is unsteady.
pub(super) struct Patch {
    /// Name of each direction.
    names: Vec<String>,
    /// Coordinates along each direction.
    lines: Vec<Vec<f64>>,
    /// Half width along each direction.
    reach: Vec<f64>,
    /// d/ds on [-1, 1].
    matrix: Vec<Vec<f64>>,
}

/// A residual at the middle of a patch.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Residual {
    pub value: f64,
    /// The largest of its terms.
    pub scale: f64,
    /// What rounding may have added through the differentiation.
    pub noise: f64,
}

/// Arrays over the patch by the key of the expression.
type Known = HashMap<u128, Vec<f64>>;

impl Patch {
    /// `directions`: name, middle and half width; `count` points along each (odd, so that the middle is one of them).
    pub fn new(directions: &[(String, f64, f64)], count: usize) -> Self {
        let degree = count - 1;
        let nodes: Vec<f64> = (0..count).map(|k| -(std::f64::consts::PI * k as f64 / degree as f64).cos()).collect();
        let line = |middle: f64, reach: f64| nodes.iter().map(|node| middle + reach * node).collect();
        Self {
            names: directions.iter().map(|(name, ..)| name.clone()).collect(),
            lines: directions.iter().map(|(_, middle, reach)| line(*middle, *reach)).collect(),
            reach: directions.iter().map(|(.., reach)| *reach).collect(),
            matrix: differentiation_matrix(&nodes),
        }
    }

    fn count(&self) -> usize {
        self.matrix.len()
    }

    /// Number of points of the whole patch.
    pub fn size(&self) -> usize {
        self.count().pow(self.lines.len() as u32)
    }

    /// Coordinates along one direction of all points, the first direction fastest.
    pub fn coordinates(&self, direction: usize) -> Vec<f64> {
        let stride = self.count().pow(direction as u32);
        (0..self.size()).map(|index| self.lines[direction][index / stride % self.count()]).collect()
    }

    /// The residual at the middle, with the arrays of fields and varying coefficients given by name.
    pub fn residual(&self, residual: &Expression, given: &HashMap<String, Vec<f64>>) -> Result<Residual, String> {
        let mut known = Known::new();
        let mut noise = 0.0;
        let middle = self.size() / 2;
        let value = self.array(residual, given, &mut known, &mut noise)?[middle];
        let mut scale = value.abs();
        if let Node::Sum(constant, terms) = residual.without_names().node() {
            scale = scale.max(constant.to_f64().abs());
            for (coefficient, term) in terms {
                let term = self.array(term, given, &mut known, &mut noise)?[middle];
                scale = scale.max((coefficient.to_f64() * term).abs());
            }
        }
        Ok(Residual { value, scale, noise })
    }

    fn array(
        &self,
        expression: &Expression,
        given: &HashMap<String, Vec<f64>>,
        known: &mut Known,
        noise: &mut f64,
    ) -> Result<Vec<f64>, String> {
        if let Some(array) = known.get(&expression.key()) {
            return Ok(array.clone());
        }
        let array = match expression.node() {
            Node::Symbol(name) => self.symbol(name, given)?,
            Node::Named(_, definition) => self.array(definition, given, known, noise)?,
            Node::Derivative(operand, names) => {
                let mut array = self.array(operand, given, known, noise)?;
                for name in names {
                    array = self.differentiated(&array, name, noise)?;
                }
                array
            }
            node => self.combined(node, given, known, noise)?,
        };
        known.insert(expression.key(), array.clone());
        Ok(array)
    }

    fn symbol(&self, name: &str, given: &HashMap<String, Vec<f64>>) -> Result<Vec<f64>, String> {
        if let Some(array) = given.get(name) {
            return Ok(array.clone());
        }
        let direction = self.names.iter().position(|known| known == name);
        direction.map(|direction| self.coordinates(direction)).ok_or_else(|| name.to_string())
    }

    /// Sums, products, powers and calls, point by point, by the expression's own evaluation of one operation.
    fn combined(
        &self,
        node: &Node,
        given: &HashMap<String, Vec<f64>>,
        known: &mut Known,
        noise: &mut f64,
    ) -> Result<Vec<f64>, String> {
        let mut array = |part: &Expression| self.array(part, given, known, noise);
        let mut result;
        match node {
            Node::Number(number) => result = vec![number.to_f64(); self.size()],
            Node::Pi => result = vec![std::f64::consts::PI; self.size()],
            Node::Sum(constant, terms) => {
                result = vec![constant.to_f64(); self.size()];
                for (coefficient, term) in terms {
                    let coefficient = coefficient.to_f64();
                    result.iter_mut().zip(array(term)?).for_each(|(sum, term)| *sum += coefficient * term);
                }
            }
            Node::Product(coefficient, factors) => {
                result = vec![coefficient.to_f64(); self.size()];
                for (base, exponent) in factors {
                    let exponent = exponent.to_f64();
                    result.iter_mut().zip(array(base)?).for_each(|(product, base)| *product *= base.powf(exponent));
                }
            }
            Node::Power(base, exponent) => {
                result = array(base)?;
                result.iter_mut().zip(array(exponent)?).for_each(|(base, exponent)| *base = base.powf(exponent));
            }
            Node::Call(function, arguments) => {
                let arguments = arguments.iter().map(array).collect::<Result<Vec<_>, _>>()?;
                let at = |index: usize| arguments.iter().map(|values| values[index]).collect::<Vec<_>>();
                result = (0..self.size()).map(|index| function.value(&at(index))).collect();
            }
            Node::Symbol(_) | Node::Named(..) | Node::Derivative(..) => unreachable!("array() handles these"),
        }
        Ok(result)
    }

    fn differentiated(&self, array: &[f64], name: &str, noise: &mut f64) -> Result<Vec<f64>, String> {
        let Some(direction) = self.names.iter().position(|known| known == name) else {
            // A steady problem does not change in time.
            return if name == "t" { Ok(vec![0.0; array.len()]) } else { Err(name.to_string()) };
        };
        let (count, reach) = (self.count(), self.reach[direction]);
        let stride = count.pow(direction as u32);
        let largest = array.iter().fold(0.0_f64, |largest, value| largest.max(value.abs()));
        *noise = noise.max(largest * f64::EPSILON * (count * count) as f64 / reach);
        let derivative = |index: usize| {
            let row = index / stride % count;
            let first = index - row * stride;
            let terms = self.matrix[row].iter().enumerate();
            terms.map(|(column, weight)| weight * array[first + column * stride]).sum::<f64>() / reach
        };
        Ok((0..array.len()).map(derivative).collect())
    }
}

/// Rows that give the derivative, at each node, of the polynomial through values at all nodes. The diagonal is minus the
/// sum of the rest, so that constants have no derivative at all.
fn differentiation_matrix(nodes: &[f64]) -> Vec<Vec<f64>> {
    let count = nodes.len();
    let end = |index: usize| if index == 0 || index == count - 1 { 2.0 } else { 1.0 };
    let sign = |index: usize| if index.is_multiple_of(2) { 1.0 } else { -1.0 };
    let mut matrix = vec![vec![0.0; count]; count];
    for row in 0..count {
        for column in (0..count).filter(|column| *column != row) {
            let weight = end(row) / end(column) * sign(row + column);
            matrix[row][column] = weight / (nodes[row] - nodes[column]);
        }
        matrix[row][row] = -matrix[row].iter().sum::<f64>();
    }
    matrix
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::expression::Scope;

    /// u = exp(-t) sin(2 x) has u_t - u_xx = 3 u.
    #[test]
    fn differentiates_an_evaluated_solution() {
        let scope = Scope::new(["u", "x", "t"]).with_derivatives(["x", "t"]);
        let residual = Expression::parse("d(u,t) - d(u,x,x)", &scope).unwrap();
        let directions = [("x".to_string(), 0.4, 0.05), ("t".to_string(), 0.3, 0.02)];
        let patch = Patch::new(&directions, 9);
        let (x, t) = (patch.coordinates(0), patch.coordinates(1));
        let u = x.iter().zip(&t).map(|(x, t)| (-t).exp() * (2.0 * x).sin());
        let given = HashMap::from([("u".to_string(), u.collect())]);
        let found = patch.residual(&residual, &given).unwrap();
        let expected = 3.0 * (-0.3_f64).exp() * 0.8_f64.sin();
        assert!((found.value - expected).abs() <= 1e-9, "{found:?} against {expected}");
        assert!(found.scale > found.value && found.noise < 1e-11, "{found:?}");
    }
}
