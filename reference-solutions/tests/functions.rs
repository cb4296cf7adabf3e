//! Every function within the stated number of units in the last place.
//!
//! What is trusted: mpmath with 50 digits, at arguments from a fixed seed that cover each function's range, the neighbourhoods of its
//! zeros and the seams of its algorithm.

mod python;

use std::collections::BTreeMap;

use gridassay_reference::expression::Function;

const COUNT: usize = 3000;

/// Largest errors allowed, in ulp. sin, cos, exp and log are kernels of this project; the rest comes from the `libm` crate.
const FUNCTIONS: [(Function, [f64; 2], f64); 18] = [
    (Function::Sin, [-1e6, 1e6], 1.0),
    (Function::Cos, [-1e6, 1e6], 1.0),
    (Function::Exp, [-708.0, 708.0], 1.0),
    (Function::Log, [1e-300, 1e300], 1.0),
    (Function::Tan, [-1e6, 1e6], 1.0),
    (Function::Asin, [-1.0, 1.0], 1.0),
    (Function::Acos, [-1.0, 1.0], 1.0),
    (Function::Atan, [-1e6, 1e6], 1.0),
    (Function::Atan2, [-1e3, 1e3], 1.0),
    (Function::Sinh, [-700.0, 700.0], 1.0),
    (Function::Cosh, [-700.0, 700.0], 1.0),
    (Function::Tanh, [-20.0, 20.0], 1.0),
    (Function::Asinh, [-1e6, 1e6], 1.0),
    (Function::Acosh, [1.0, 1e6], 1.0),
    (Function::Atanh, [-1.0, 1.0], 1.0),
    (Function::Erf, [-6.0, 6.0], 1.0),
    (Function::Erfc, [-6.0, 26.0], 2.0),
    (Function::Sign, [-1.0, 1.0], 0.0),
];

struct Random(u64);

impl Random {
    fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// A third spread evenly, a third by magnitude, a third within [-2, 2] or what of it is inside.
    fn argument(&mut self, kind: usize, [low, high]: [f64; 2]) -> f64 {
        let even = low + (high - low) * self.next();
        let sign = if low < 0.0 && self.next() < 0.5 { -1.0 } else { 1.0 };
        let floor = if low > 0.0 { low } else { 1e-9 };
        let spread = sign * floor * (high / floor).powf(self.next());
        match kind % 3 {
            0 => even,
            1 => spread,
            _ => (-2.0 + 4.0 * self.next()).clamp(low, high),
        }
    }
}

#[test]
fn every_function_is_within_its_units_in_the_last_place() {
    let mut random = Random(20_261_201);
    let mut asked = BTreeMap::new();
    for (function, range, allowed) in FUNCTIONS {
        let arguments: Vec<Vec<f64>> =
            (0..COUNT).map(|i| (0..function.arguments()).map(|_| random.argument(i, range)).collect()).collect();
        let keep = |arguments: &&Vec<f64>| function.value(arguments).is_finite();
        let arguments: Vec<&Vec<f64>> = arguments.iter().filter(keep).collect();
        let values: Vec<f64> = arguments.iter().map(|arguments| function.value(arguments)).collect();
        asked
            .insert(function.name(), serde_json::json!({"arguments": arguments, "values": values, "allowed": allowed}));
    }
    println!("{}", python::ask("functions.py", &serde_json::to_string(&asked).unwrap()));
}
