//! The integrators that semi-discrete schemes are tried with.

use super::{AdamsBashforth, Integrator, RungeKutta};

/// Names that [`by_name`] knows.
pub const NAMES: [&str; 15] = [
    "rk1",
    "rk2",
    "rk3",
    "rk4",
    "rk5",
    "rk6",
    "rk7",
    "ssp-rk2",
    "ssp-rk3",
    "ssp-rk3-four-stages",
    "low-storage-rk3",
    "low-storage-rk4",
    "ab2",
    "ab3",
    "ab4",
];

/// The integrator of a name in [`NAMES`].
///
/// `rk1` to `rk7` are the Taylor polynomials of that degree. `ssp-rk2` and `ssp-rk3` are the optimal methods of Shu & Osher (1988),
/// `ssp-rk3-four-stages` that of Spiteri & Ruuth (2002), `low-storage-rk3` that of Williamson (1980), `low-storage-rk4` the
/// five-stage one of Carpenter & Kennedy (1994, NASA TM-109112); coefficients from memory, and checked by the order conditions.
pub fn by_name(name: &str) -> Option<Integrator> {
    let runge_kutta = match name {
        "rk1" | "rk2" | "rk3" | "rk4" | "rk5" | "rk6" | "rk7" => {
            RungeKutta::taylor(usize::from(name.as_bytes()[2] - b'0'))
        }
        "ssp-rk2" => RungeKutta::from_butcher(&[&[], &[1.0]], &[0.5, 0.5]),
        "ssp-rk3" => RungeKutta::from_butcher(&[&[], &[1.0], &[0.25, 0.25]], &[1.0 / 6.0, 1.0 / 6.0, 2.0 / 3.0]),
        "ssp-rk3-four-stages" => {
            let sixth = 1.0 / 6.0;
            RungeKutta::from_butcher(&[&[], &[0.5], &[0.5, 0.5], &[sixth, sixth, sixth]], &[sixth, sixth, sixth, 0.5])
        }
        "low-storage-rk3" => {
            RungeKutta::from_low_storage(&[0.0, -5.0 / 9.0, -153.0 / 128.0], &[1.0 / 3.0, 15.0 / 16.0, 8.0 / 15.0])
        }
        "low-storage-rk4" => RungeKutta::from_low_storage(&CARPENTER_KENNEDY_A, &CARPENTER_KENNEDY_B),
        "ab2" | "ab3" | "ab4" => {
            return AdamsBashforth::new(usize::from(name.as_bytes()[2] - b'0')).map(Integrator::AdamsBashforth);
        }
        _ => return None,
    };
    Some(Integrator::RungeKutta(runge_kutta))
}

const CARPENTER_KENNEDY_A: [f64; 5] = [
    0.0,
    -567_301_805_773.0 / 1_357_537_059_087.0,
    -2_404_267_990_393.0 / 2_016_746_695_238.0,
    -3_550_918_686_646.0 / 2_091_501_179_385.0,
    -1_275_806_237_668.0 / 842_570_457_699.0,
];

const CARPENTER_KENNEDY_B: [f64; 5] = [
    1_432_997_174_477.0 / 9_575_080_441_755.0,
    5_161_836_677_717.0 / 13_612_068_292_357.0,
    1_720_146_321_549.0 / 2_090_206_949_498.0,
    3_134_564_353_537.0 / 4_481_467_310_338.0,
    2_277_821_191_437.0 / 14_882_151_754_819.0,
];

#[cfg(test)]
mod tests {
    //! Trusted: order conditions (a_k = 1/k!) and limits on both axes: closed forms where there are any; elsewhere roots computed to 12
    //! digits and more with mpmath. Printed values: Durran (1991), Mon. Wea. Rev. 119:702-720, for Adams-Bashforth (from memory); Hairer &
    //! Wanner, Solving Ordinary Differential Equations II, for Runge-Kutta (2.51, 2.78; from memory).
    use super::*;
    use crate::analysis::compare::{agree, all_agree};
    use crate::analysis::stability::StableRange;
    use num_complex::Complex64;
    use std::f64::consts::{FRAC_PI_2, PI};

    fn limit(name: &str, angle: f64) -> f64 {
        match by_name(name).unwrap().ray(angle, 6.0).range {
            StableRange::LimitedTo { limit, .. } => limit,
            StableRange::NoStableStep { .. } => 0.0,
            StableRange::Unlimited => f64::INFINITY,
        }
    }

    #[test]
    fn polynomials_meet_the_order_conditions() {
        let taylor = |n: usize| RungeKutta::taylor(n).coefficients().to_vec();
        for (name, order, last) in [
            ("ssp-rk2", 2, None),
            ("ssp-rk3", 3, None),
            ("low-storage-rk3", 3, None),
            ("ssp-rk3-four-stages", 3, Some(1.0 / 48.0)),
            ("low-storage-rk4", 4, Some(1.0 / 200.0)),
        ] {
            let Some(Integrator::RungeKutta(method)) = by_name(name) else { panic!("{name}") };
            let mut expected = taylor(order);
            expected.extend(last);
            // Carpenter & Kennedy's fractions were rounded to about 13 digits by their authors.
            all_agree(method.coefficients(), &expected, 2e-13).unwrap();
        }
    }

    #[test]
    fn limits_on_the_negative_real_axis() {
        for (name, expected) in [
            ("rk1", 2.0),
            ("rk2", 2.0),
            ("rk3", 2.512_745_326_618_329),
            ("rk4", 2.785_293_563_405_282),
            ("rk5", 3.217_047_866_640_106),
            ("rk6", 3.553_441_258_462_305),
            ("rk7", 3.954_129_730_631_186),
            ("ab2", 1.0),
            ("ab3", 6.0 / 11.0),
            ("ab4", 0.3),
        ] {
            agree(limit(name, PI), expected, 1e-9).unwrap();
        }
    }

    #[test]
    fn limits_on_the_imaginary_axis() {
        for (name, expected) in [
            ("rk1", 0.0),
            ("rk2", 0.0),
            ("rk3", 3.0_f64.sqrt()),
            ("ssp-rk3", 3.0_f64.sqrt()),
            ("rk4", 8.0_f64.sqrt()),
            ("rk5", 0.0),
            ("rk6", 0.0),
            ("rk7", 1.764_421_324_553_417),
            ("ab2", 0.0),
            ("ab3", 12.0 / (5.0 * 11.0_f64.sqrt())),
            ("ab4", 0.429_987_079_910),
        ] {
            agree(limit(name, FRAC_PI_2), expected, 1e-9).map_err(|e| format!("{name}: {e}")).unwrap();
        }
    }

    #[test]
    fn weak_growth_is_told_with_its_power_and_coefficient() {
        for (name, power, coefficient) in [
            ("rk1", 2.0, 0.5),
            ("rk2", 4.0, 0.125),
            ("rk5", 6.0, 1.0 / 720.0),
            ("rk6", 8.0, 1.0 / 5760.0),
            ("ab2", 4.0, 0.25),
        ] {
            let StableRange::NoStableStep { growth: Some(growth) } = by_name(name).unwrap().ray(FRAC_PI_2, 3.0).range
            else {
                panic!("{name}")
            };
            agree(growth.power, power, 0.02).map_err(|e| format!("{name}: {e}")).unwrap();
            agree(growth.coefficient / coefficient, 1.0, 0.1).map_err(|e| format!("{name}: {e}")).unwrap();
        }
    }

    #[test]
    fn principal_roots_follow_the_exponential() {
        for name in NAMES {
            let z = Complex64::new(-0.01, 0.02);
            assert!((by_name(name).unwrap().factor(z) - z.exp()).norm() < 3e-4, "{name}");
        }
        assert!(by_name("rk8").is_none() && by_name("").is_none());
    }
}
