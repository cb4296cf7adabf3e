//! Data changed in the last bit, from a seed: how far a scheme's answer moves then is the floor below which no error can be read.

use gridassay_scheme::{BoundaryData, Fields, Harness, SchemeError, Side};

/// A source of changes by one part in 2^52, up or down.
#[derive(Clone, Debug)]
pub struct Jitter {
    state: u64,
}

impl Jitter {
    /// The changes that belong to `seed`.
    pub fn new(seed: u64) -> Self {
        Self { state: seed }
    }

    /// The next 64 random bits (SplitMix64: Steele, Lea & Flood 2014, "Fast splittable pseudorandom number generators").
    pub fn bits(&mut self) -> u64 {
        self.state = self.state.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.state;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    /// The next random number in [-1, 1).
    pub fn uniform(&mut self) -> f64 {
        (self.bits() >> 11) as f64 * 2.0_f64.powi(-52) - 1.0
    }

    /// Changes each value by one part in 2^52, up or down at random.
    pub fn shake(&mut self, values: &mut [f64]) {
        for value in values {
            let sign = if self.bits() >> 63 == 0 { 1.0 } else { -1.0 };
            *value *= 1.0 + sign * f64::EPSILON;
        }
    }

    /// The same for every field.
    pub fn shake_fields(&mut self, fields: &mut [Vec<f64>]) {
        fields.iter_mut().for_each(|field| self.shake(field));
    }
}

/// A harness whose answers are changed in the last bit.
pub struct Shaken<'a> {
    /// Who answers.
    pub inner: &'a mut dyn Harness,
    /// What changes the answers.
    pub jitter: Jitter,
}

impl Harness for Shaken<'_> {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let mut fields = self.inner.source(time, points)?;
        self.jitter.shake_fields(&mut fields);
        Ok(fields)
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let mut data = self.inner.boundary(time, side, layers)?;
        self.jitter.shake_fields(&mut data.value);
        self.jitter.shake_fields(&mut data.gradient);
        data.ghost.iter_mut().for_each(|layers| self.jitter.shake_fields(layers));
        Ok(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let mut fields = self.inner.coefficient(name, time, points)?;
        self.jitter.shake_fields(&mut fields);
        Ok(fields)
    }
}
