//! Pairs of factors, and pairs of terms, that several products or sums have in common.
//!
//! Equal expressions are shared anyway. This finds equal parts of different ones: in `rho*u*v` and `rho*u*h` the pair `rho*u`. The
//! most frequent pairs are made into expressions of their own, round after round, until no pair occurs twice.

use std::collections::{HashMap, HashSet};

use super::super::{Expression, Node, Number};

/// Products and sums rewritten to use common pairs.
#[derive(Default)]
pub(super) struct Shared {
    products: HashMap<u128, (Number, Vec<(Expression, Number)>)>,
    sums: HashMap<u128, Vec<(Number, Expression)>>,
}

impl Shared {
    pub(super) fn factors(&self, product: &Expression) -> Option<(Number, Vec<(Expression, Number)>)> {
        self.products.get(&product.key()).cloned()
    }

    pub(super) fn terms(&self, sum: &Expression) -> Option<Vec<(Number, Expression)>> {
        self.sums.get(&sum.key()).cloned()
    }
}

pub(super) fn shared(expressions: &[Expression]) -> Shared {
    let (mut products, mut sums, mut seen) = (Vec::new(), Vec::new(), HashSet::new());
    let mut collect = |expression: &Expression| match expression.node() {
        Node::Product(coefficient, factors) if factors.len() > 1 => {
            products.push((expression.key(), *coefficient, factors.clone()))
        }
        Node::Sum(_, terms) if terms.len() > 1 => sums.push((expression.key(), terms.clone())),
        _ => {}
    };
    expressions.iter().for_each(|expression| expression.visit(&mut seen, &mut collect));
    let mut shared = Shared::default();
    let mut lists: Vec<Vec<(Expression, Number)>> = products.iter().map(|(.., factors)| factors.clone()).collect();
    pair_up(&mut lists, &ProductPairs);
    for ((key, coefficient, before), after) in products.into_iter().zip(lists) {
        if after.len() < before.len() {
            shared.products.insert(key, (coefficient, after));
        }
    }
    let swapped = |terms: &Vec<(Number, Expression)>| terms.iter().map(|(c, term)| (term.clone(), *c)).collect();
    let mut lists: Vec<Vec<(Expression, Number)>> = sums.iter().map(|(_, terms)| swapped(terms)).collect();
    pair_up(&mut lists, &SumPairs);
    for ((key, before), after) in sums.into_iter().zip(lists) {
        if after.len() < before.len() {
            shared.sums.insert(key, after.into_iter().map(|(term, c)| (c, term)).collect());
        }
    }
    shared
}

/// An item of a list: a factor with its exponent, or a term with its coefficient.
type Item = (Expression, Number);

/// What a pair is: how it is recognised, and what replaces it.
trait Pairs {
    /// Equal for pairs that can be computed once.
    fn key(&self, a: &Item, b: &Item) -> [u64; 4];
    /// The pair as one item.
    fn joined(&self, a: &Item, b: &Item) -> Item;
}

struct ProductPairs;

impl Pairs for ProductPairs {
    fn key(&self, a: &Item, b: &Item) -> [u64; 4] {
        let word = |(base, exponent): &Item| base.key() as u64 ^ exponent.to_f64().to_bits().rotate_left(17);
        let (a, b) = (word(a), word(b));
        [a.min(b), a.max(b), 0, 0]
    }

    fn joined(&self, a: &Item, b: &Item) -> Item {
        // Only quotients stay quotients: 1/(a*b) is made of a*b.
        let flip = a.1.is_negative() && b.1.is_negative();
        let exponent = |item: &Item| if flip { item.1.negated() } else { item.1 };
        let product = Expression::product([(a.0.clone(), exponent(a)), (b.0.clone(), exponent(b))]);
        (product, if flip { Number::MINUS_ONE } else { Number::ONE })
    }
}

struct SumPairs;

impl Pairs for SumPairs {
    /// Up to a common factor: a + 2 b and 3 a + 6 b.
    fn key(&self, a: &Item, b: &Item) -> [u64; 4] {
        let (a, b) = if a.0.key() <= b.0.key() { (a, b) } else { (b, a) };
        let ratio = b.1.times(a.1.power(Number::MINUS_ONE).unwrap_or(Number::ONE));
        [a.0.key() as u64, b.0.key() as u64, ratio.bits()[0], ratio.bits()[1]]
    }

    fn joined(&self, a: &Item, b: &Item) -> Item {
        let (a, b) = if a.0.key() <= b.0.key() { (a, b) } else { (b, a) };
        let ratio = b.1.times(a.1.power(Number::MINUS_ONE).unwrap_or(Number::ONE));
        (Expression::sum([(Number::ONE, a.0.clone()), (ratio, b.0.clone())]), a.1)
    }
}

fn pair_up(lists: &mut [Vec<Item>], pairs: &impl Pairs) {
    while joined_once(lists, pairs) {}
}

/// One round: joins every pair that occurs in two lists or more, the most frequent first. Tells whether there was one.
fn joined_once(lists: &mut [Vec<Item>], pairs: &impl Pairs) -> bool {
    let mut places: HashMap<[u64; 4], Vec<usize>> = HashMap::new();
    for (place, list) in lists.iter().enumerate() {
        for (i, a) in list.iter().enumerate() {
            for b in &list[i + 1..] {
                places.entry(pairs.key(a, b)).or_default().push(place);
            }
        }
    }
    let mut frequent: Vec<_> = places.into_iter().filter(|(_, places)| places.len() > 1).collect();
    // The key decides between equally frequent pairs: the result must not depend on the order of a hash table.
    frequent.sort_by(|a, b| b.1.len().cmp(&a.1.len()).then(a.0.cmp(&b.0)));
    let mut any = false;
    for (key, places) in frequent {
        let found = |list: &Vec<Item>| find(list, pairs, key);
        let present: Vec<usize> = places.into_iter().filter(|place| found(&lists[*place]).is_some()).collect();
        // A list that is the pair itself is where the pair is computed.
        let others = present.iter().filter(|place| lists[**place].len() > 2).count();
        if present.len() < 2 || others == 0 {
            continue;
        }
        for place in present {
            if let Some((i, j)) = found(&lists[place]).filter(|_| lists[place].len() > 2) {
                let joined = pairs.joined(&lists[place][i], &lists[place][j]);
                lists[place].remove(j);
                lists[place][i] = joined;
                any = true;
            }
        }
    }
    any
}

fn find(list: &[Item], pairs: &impl Pairs, key: [u64; 4]) -> Option<(usize, usize)> {
    let all = (0..list.len()).flat_map(|i| (i + 1..list.len()).map(move |j| (i, j)));
    all.into_iter().find(|(i, j)| pairs.key(&list[*i], &list[*j]) == key)
}
