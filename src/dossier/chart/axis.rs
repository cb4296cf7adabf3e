//! Ranges and ticks.

use super::{Axis, Scale, Ticks};
use crate::dossier::number;

/// A labelled tick.
pub(super) struct Tick {
    pub value: f64,
    pub label: String,
}

impl Axis {
    /// Where `value` lies along the axis, 0 at its beginning and 1 at its end.
    pub(super) fn place(&self, value: f64) -> f64 {
        let [low, high] = self.range;
        match self.scale {
            Scale::Linear => (value - low) / (high - low),
            Scale::Log => (value / low).ln() / (high / low).ln(),
        }
    }

    /// The labelled ticks, ascending.
    pub(super) fn ticks(&self) -> Vec<Tick> {
        match (self.scale, self.ticks) {
            (Scale::Log, _) => self.log_ticks(),
            (Scale::Linear, Ticks::Pi) => self.pi_ticks(),
            (Scale::Linear, Ticks::Numbers) => self.linear_ticks(),
        }
    }

    fn pi_ticks(&self) -> Vec<Tick> {
        let labels = ["0", "π/4", "π/2", "3π/4", "π"];
        let quarter = std::f64::consts::FRAC_PI_4;
        let ticks = (-4i32..=4).map(|i| {
            let label = labels[i.unsigned_abs() as usize];
            Tick { value: f64::from(i) * quarter, label: if i < 0 { format!("−{label}") } else { label.into() } }
        });
        ticks.filter(|tick| self.holds(tick.value)).collect()
    }

    fn linear_ticks(&self) -> Vec<Tick> {
        let [low, high] = self.range;
        let rough = (high - low) / 5.0;
        let magnitude = 10f64.powf(rough.log10().floor());
        let nice =
            [1.0, 2.0, 2.5, 5.0, 10.0].into_iter().find(|nice| nice * magnitude >= rough * 0.999).unwrap_or(10.0);
        let step = nice * magnitude;
        let mut decimals = (-step.log10().floor()).max(0.0) as usize;
        if nice == 2.5 {
            decimals += 1;
        }
        let first = (low / step - 1e-9).ceil() as i64;
        let last = (high / step + 1e-9).floor() as i64;
        (first..=last)
            .map(|i| {
                let value = i as f64 * step;
                Tick { value, label: format!("{value:.decimals$}").replace('-', "−") }
            })
            .collect()
    }

    fn log_ticks(&self) -> Vec<Tick> {
        let [low, high] = self.range;
        let (first, last) = (low.log10().floor() as i32, high.log10().ceil() as i32);
        let decades = (first..=last).filter(|&power| self.holds(10f64.powi(power))).collect::<Vec<_>>();
        if decades.len() >= 3 {
            let every = decades.len().div_ceil(6);
            let kept = decades.into_iter().filter(|power| power.rem_euclid(every as i32) == 0);
            return kept
                .map(|power| Tick { value: 10f64.powi(power), label: format!("10{}", number::superscript(power)) })
                .collect();
        }
        let within = |factors: &[f64]| {
            (first..=last)
                .flat_map(|power| factors.iter().map(move |factor| factor * 10f64.powi(power)))
                .filter(|&value| self.holds(value))
                .map(|value| Tick { value, label: number::typeset(value, 1) })
                .collect::<Vec<_>>()
        };
        let ticks = within(&[1.0, 2.0, 5.0]);
        if ticks.len() >= 2 { ticks } else { within(&[1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0]) }
    }

    fn holds(&self, value: f64) -> bool {
        let place = self.place(value);
        (-1e-9..=1.0 + 1e-9).contains(&place)
    }
}

/// A range that holds all finite `values`, with a margin; `fallback` where there are none.
pub(super) fn linear_range(values: impl Iterator<Item = f64>, margin: f64, fallback: [f64; 2]) -> [f64; 2] {
    let Some([low, high]) = extent(values) else { return fallback };
    let width = if high > low { high - low } else { high.abs().max(1.0) * 0.1 };
    [low - margin * width, high + margin * width]
}

/// A range for a logarithmic axis that holds all positive `values`, widened by `factor` on both sides.
pub(super) fn log_range(values: impl Iterator<Item = f64>, factor: f64, fallback: [f64; 2]) -> [f64; 2] {
    let Some([low, high]) = extent(values.filter(|&value| value > 0.0)) else { return fallback };
    [low / factor, high * factor]
}

fn extent(values: impl Iterator<Item = f64>) -> Option<[f64; 2]> {
    values.filter(|value| value.is_finite()).fold(None, |range, value| match range {
        None => Some([value, value]),
        Some([low, high]) => Some([f64::min(low, value), f64::max(high, value)]),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(scale: Scale, range: [f64; 2]) -> Vec<String> {
        let axis = Axis { label: String::new(), symbol: String::new(), scale, range, ticks: Ticks::Numbers };
        axis.ticks().into_iter().map(|tick| tick.label).collect()
    }

    #[test]
    fn ticks_are_round_numbers_and_powers_of_ten() {
        assert_eq!(labels(Scale::Linear, [0.0, 1.05]), ["0.00", "0.25", "0.50", "0.75", "1.00"]);
        assert_eq!(labels(Scale::Log, [5e-6, 2e-2]), ["10⁻⁵", "10⁻⁴", "10⁻³", "10⁻²"]);
        assert_eq!(labels(Scale::Log, [0.008, 0.06]), ["0.01", "0.02", "0.05"]);
    }
}
