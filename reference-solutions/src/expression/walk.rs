//! Walks over an expression: substitution, names used, simplification.

use std::collections::{BTreeSet, HashMap, HashSet};

use super::{Expression, Node, Number};

impl Expression {
    /// Replaces names by expressions, all at once.
    pub fn substitute(&self, replacements: &HashMap<String, Expression>) -> Expression {
        self.rebuilt(&mut HashMap::new(), &mut |expression| match expression.node() {
            Node::Symbol(name) => replacements.get(&**name).cloned(),
            _ => None,
        })
    }

    /// The free names, sorted.
    pub fn symbols(&self) -> BTreeSet<String> {
        let mut names = BTreeSet::new();
        self.visit(&mut HashSet::new(), &mut |expression| {
            if let Node::Symbol(name) = expression.node() {
                names.insert(name.to_string());
            }
        });
        names
    }

    /// The same expression with named parts replaced by their definitions.
    pub fn without_names(&self) -> Expression {
        self.rebuilt(&mut HashMap::new(), &mut |expression| match expression.node() {
            Node::Named(_, definition) => Some(definition.without_names()),
            _ => None,
        })
    }

    /// The simplest of the forms tried: as it is, with named parts opened, and with numbers multiplied into sums. Fewest operations
    /// wins, so that the result is never larger than what it was made from.
    pub fn simplified(&self) -> Expression {
        Expression::simplified_together(std::slice::from_ref(self)).remove(0)
    }

    /// The simplest form of several expressions that are evaluated together.
    pub fn simplified_together(expressions: &[Expression]) -> Vec<Expression> {
        let opened: Vec<Expression> = expressions.iter().map(Expression::without_names).collect();
        let distributed: Vec<Expression> = opened.iter().map(Expression::distributed).collect();
        let forms = [expressions.to_vec(), opened, distributed];
        forms.into_iter().min_by_key(|form| Expression::operations(form)).expect("there are three forms")
    }

    /// Operations that one evaluation of `expressions` takes when equal parts are computed once.
    pub fn operations(expressions: &[Expression]) -> usize {
        let (mut count, mut seen) = (0, HashSet::new());
        let mut add = |expression: &Expression| {
            count += match expression.node() {
                Node::Sum(constant, terms) => {
                    let scaled = terms.iter().filter(|(c, _)| !c.is_one() && *c != Number::MINUS_ONE).count();
                    terms.len() - usize::from(constant.is_zero()) + scaled
                }
                Node::Product(coefficient, factors) => {
                    let powers = factors.iter().filter(|(_, e)| !e.is_one()).count();
                    factors.len() + powers - usize::from(coefficient.is_one())
                }
                Node::Power(..) | Node::Call(..) => 1,
                _ => 0,
            };
        };
        expressions.iter().for_each(|expression| expression.visit(&mut seen, &mut add));
        count
    }

    /// Multiplies numeric coefficients into sums, everywhere, so that like terms of different sums meet.
    fn distributed(&self) -> Expression {
        self.rebuilt(&mut HashMap::new(), &mut |expression| match expression.node() {
            Node::Sum(constant, terms) => {
                let mut spread = vec![(Number::ONE, Expression::number(*constant))];
                for (coefficient, term) in terms {
                    let (inner, rest) = term.distributed().coefficient();
                    let coefficient = coefficient.times(inner);
                    match rest.node() {
                        Node::Sum(constant, terms) => {
                            spread.push((coefficient, Expression::number(*constant)));
                            spread.extend(terms.iter().map(|(c, term)| (coefficient.times(*c), term.clone())));
                        }
                        _ => spread.push((coefficient, rest)),
                    }
                }
                Some(Expression::sum(spread))
            }
            _ => None,
        })
    }

    /// Calls `see` once for every different part, parts before wholes.
    pub fn visit(&self, seen: &mut HashSet<u128>, see: &mut impl FnMut(&Expression)) {
        if !seen.insert(self.key()) {
            return;
        }
        match self.node() {
            Node::Number(_) | Node::Pi | Node::Symbol(_) => {}
            Node::Named(_, inner) | Node::Derivative(inner, _) => inner.visit(seen, see),
            Node::Sum(_, terms) => terms.iter().for_each(|(_, term)| term.visit(seen, see)),
            Node::Product(_, factors) => factors.iter().for_each(|(base, _)| base.visit(seen, see)),
            Node::Power(base, exponent) => {
                base.visit(seen, see);
                exponent.visit(seen, see);
            }
            Node::Call(_, arguments) => arguments.iter().for_each(|argument| argument.visit(seen, see)),
        }
        see(self);
    }

    /// Builds the expression anew, bottom up; where `replace` gives something, that stands instead.
    pub(super) fn rebuilt(
        &self,
        done: &mut HashMap<u128, Expression>,
        replace: &mut impl FnMut(&Expression) -> Option<Expression>,
    ) -> Expression {
        if let Some(known) = done.get(&self.key()) {
            return known.clone();
        }
        let result = replace(self).unwrap_or_else(|| self.rebuilt_parts(done, replace));
        done.insert(self.key(), result.clone());
        result
    }

    fn rebuilt_parts(
        &self,
        done: &mut HashMap<u128, Expression>,
        replace: &mut impl FnMut(&Expression) -> Option<Expression>,
    ) -> Expression {
        match self.node() {
            Node::Number(_) | Node::Pi | Node::Symbol(_) => self.clone(),
            Node::Named(name, definition) => Expression::named(name, definition.rebuilt(done, replace)),
            Node::Sum(constant, terms) => {
                let terms: Vec<_> = terms.iter().map(|(c, term)| (*c, term.rebuilt(done, replace))).collect();
                Expression::sum(terms.into_iter().chain([(*constant, Expression::one())]))
            }
            Node::Product(coefficient, factors) => {
                let factors: Vec<_> = factors.iter().map(|(base, e)| (base.rebuilt(done, replace), *e)).collect();
                Expression::product(factors.into_iter().chain([(Expression::number(*coefficient), Number::ONE)]))
            }
            Node::Power(base, exponent) => base.rebuilt(done, replace).power(&exponent.rebuilt(done, replace)),
            Node::Call(function, arguments) => {
                Expression::call(*function, arguments.iter().map(|argument| argument.rebuilt(done, replace)).collect())
            }
            Node::Derivative(operand, names) => Expression::open_derivative(&operand.rebuilt(done, replace), names),
        }
    }
}
