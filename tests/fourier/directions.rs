//! Waves in every direction, which no grid holds, against closed forms.

use std::f64::consts::TAU;

use gridassay::record::DirectedQuantity;
use num_complex::Complex64;

use super::common::{I, agree, at_courant, classical, modes_of};

#[test]
fn every_direction_has_its_closed_form_and_the_worst_one_is_named() {
    let record = modes_of(classical("lax-wendroff-2d"), &at_courant("advection", &[24, 20], 0.4));
    let spacing = [1.7 / 24.0, 1.3 / 20.0];
    let a = &record.parameters["velocity"];
    let c = [0, 1].map(|d| a[d] * record.step / spacing[d]);
    let factor = |t: [f64; 2]| {
        let second = c[0] * c[0] * (1.0 - t[0].cos()) + c[1] * c[1] * (1.0 - t[1].cos());
        1.0 - I * (c[0] * t[0].sin() + c[1] * t[1].sin()) - second - c[0] * c[1] * t[0].sin() * t[1].sin()
    };
    assert_eq!(record.directions.len(), 4 * 72);
    let speed = |d: &[f64]| a[0] * d[0] + a[1] * d[1];
    let fastest = record.directions.iter().map(|wave| speed(&wave.direction).abs()).fold(0.0, f64::max);
    for wave in &record.directions {
        // The wavelength counts cells of the wider direction.
        let wavenumber = TAU / (wave.points_per_wavelength * spacing[0].max(spacing[1]));
        let theta = [0, 1].map(|d| wavenumber * wave.direction[d] * spacing[d]);
        let g: Complex64 = factor(theta);
        agree("|G|", wave.modulus, g.norm(), 1e-13);
        agree("damping", wave.damping_error, g.norm() - 1.0, 1e-13);
        // At these Courant numbers no wave of four cells turns by half a turn in a step.
        let numerical = -g.arg() / (record.step * wavenumber);
        let exact = speed(&wave.direction);
        let expected = (numerical - exact) * exact.signum() / fastest;
        agree("phase", wave.phase_speed_error.unwrap(), expected, 1e-12);
        // The group velocity by differences of the closed form.
        let d = 1e-5;
        let along = |axis: usize| {
            let at = |sign: f64| {
                let mut t = theta;
                t[axis] += sign * d;
                factor(t)
            };
            -(at(1.0) / at(-1.0)).arg() / (2.0 * d) * spacing[axis] / record.step
        };
        let expected = along(0).hypot(along(1)) / a[0].hypot(a[1]);
        agree("group", wave.group_speed_ratio.unwrap(), expected, 1e-8);
    }
    for quantity in DirectedQuantity::ALL {
        let worst = record.worst_directions.iter().find(|w| w.quantity == quantity && w.points_per_wavelength == 8.0);
        let worst = worst.expect("one for each quantity and wavelength");
        let own = record.directions.iter().filter(|wave| wave.points_per_wavelength == 8.0);
        let largest = own.map(|wave| quantity.error(wave).unwrap().abs()).fold(0.0, f64::max);
        agree(quantity.words(), worst.error.abs(), largest, 0.0);
    }
}

#[test]
fn space_has_its_axes_among_the_directions() {
    let record = modes_of(classical("upwind-3d"), &at_courant("advection", &[10, 12, 8], 0.3));
    let axis = record.directions.iter().find(|w| w.direction == [0.0, 1.0, 0.0] && w.points_per_wavelength == 8.0);
    let h = [1.7 / 10.0, 1.3 / 12.0, 2.1 / 8.0];
    let c = record.parameters["velocity"][1] * record.step / h[1];
    let theta = TAU / (8.0 * h[2]) * h[1];
    let g = 1.0 - c * (1.0 - Complex64::cis(-theta));
    agree("along y", axis.unwrap().modulus, g.norm(), 1e-13);
}
