//! Published values: modified equations, group velocities.

use super::common::{agree, at_courant, classical, modes_of};

/// Warming & Hyett (1974), J. Comput. Phys. 14:159-179: the leading terms of upwind and Lax-Wendroff, as coefficients of h^n / dt (from memory,
/// and re-derived from the series of ln G).
#[test]
fn the_modified_equations_of_warming_and_hyett() {
    for c in [0.1, 0.45, 0.8] {
        let upwind = [(2, 0.5 * c * (1.0 - c)), (3, -c * (2.0 * c * c - 3.0 * c + 1.0) / 6.0)];
        let lax_wendroff = [(3, -c * (1.0 - c * c) / 6.0), (4, -c * c * (1.0 - c * c) / 8.0)];
        for (name, order, expected) in [("upwind", 1, upwind), ("lax-wendroff", 2, lax_wendroff)] {
            let record = modes_of(classical(name), &at_courant("advection", &[64], c));
            let equation = record.modified_equation.expect("a leading term");
            assert_eq!(equation.formal_order, Some(order), "{name}");
            let h: f64 = 1.7 / 64.0;
            for ((n, coefficient), (derivative, expected)) in equation.terms.iter().zip(expected) {
                assert_eq!(*n, derivative, "{name}");
                let found = coefficient * record.step / h.powi(derivative as i32);
                agree(&format!("{name}, c = {c}, derivative {n}"), found, expected, 1e-13);
            }
        }
    }
}

/// Trefethen (1982), SIAM Rev. 24:113-136: phase and group velocity of leapfrog and Crank-Nicolson with central differences.
#[test]
fn the_group_velocities_of_trefethen() {
    for c in [0.4, 0.5, 0.8] {
        for (name, closed) in [
            ("leapfrog", (|c, t| t.cos() / (1.0 - (c * t.sin()).powi(2)).sqrt()) as fn(f64, f64) -> f64),
            ("crank-nicolson-advection", |c, t| t.cos() / (1.0 + 0.25 * (c * t.sin()).powi(2))),
        ] {
            let record = modes_of(classical(name), &at_courant("advection", &[64], c));
            let physical: Vec<_> = record.modes.iter().filter(|mode| mode.exact.is_some()).collect();
            assert_eq!(physical.len(), 64);
            for mode in physical {
                // The derivative sums 64 coefficients times their offsets, and the condition of a root of leapfrog near c = 1 multiplies.
                let found = mode.group_speed_ratio.unwrap();
                agree(&format!("{name}, c = {c}, theta = {}", mode.theta[0]), found, closed(c, mode.theta[0]), 1e-11);
            }
        }
    }
    // Leapfrog, c = 0.4, eight points a wavelength: about 0.74 as printed (from memory), 0.73720978 recomputed.
    let record = modes_of(classical("leapfrog"), &at_courant("advection", &[64], 0.4));
    let mode = record
        .modes
        .iter()
        .find(|m| m.exact.is_some() && m.points_per_wavelength.is_some_and(|p| (p - 8.0).abs() < 1e-9));
    agree("eight points", mode.unwrap().group_speed_ratio.unwrap(), 0.737_209_78, 5e-9);
}
