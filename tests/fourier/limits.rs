//! Largest Courant numbers of schemes as built.
//!
//! Trusted: closed forms, and values recomputed for this project by a scan over 20 001 angles with mpmath; Baldauf (2008), J. Comput. Phys.
//! 227:6638-6660, prints those of orders one to six to three or four digits (from memory), with which they agree.

use super::common::{agree, classical, stability_of};

/// Limits with one to four stages of a Runge-Kutta method of that order; zero: no step is stable.
const TABLE: [(&str, [f64; 4]); 4] = [
    ("upwind1", [1.0, 1.0, 1.256_372_663_309_164, 1.392_646_781_702_641]),
    ("upwind2", [0.0, 0.5, 0.628_069, 0.696_323]),
    ("upwind3", [0.0, 0.873_580_46, 1.625_890_666, 1.745_268_99]),
    ("upwind5", [0.0, 0.0, 1.434_983_629, 1.731_974_84]),
];

#[test]
fn upwind_differences_with_runge_kutta_methods() {
    for (space, limits) in TABLE {
        for (stages, limit) in (1..).zip(limits) {
            let name = format!("{space}-rk{stages}");
            let record = stability_of(classical(&name), "advection", 4.0);
            agree(&name, record.stable_up_to.unwrap(), limit, 1e-6);
            assert_eq!(record.weak_growth.is_some(), limit == 0.0, "{name}: {:?}", record.weak_growth);
            assert!(record.confirmation.iter().all(|run| run.agrees), "{name}: {:?}", record.confirmation);
        }
    }
}

#[test]
fn central_and_compact_differences_with_runge_kutta_methods() {
    let (third, fourth) = (3.0_f64.sqrt(), 8.0_f64.sqrt());
    // The largest modified wavenumbers (Lele 1992, J. Comput. Phys. 103:16-42, recomputed); the limits are sqrt 3 and 2 sqrt 2 over them.
    let largest = [
        ("central2", 1.0),
        ("central4", 1.372_221_979_803_36),
        ("central6", 1.585_978_396_265_639),
        ("pade4", third),
        ("compact6", 1.989_441_485_372_63),
    ];
    for (space, largest) in largest {
        for (time, axis) in [("ssprk3", third), ("rk4", fourth)] {
            let name = format!("{space}-{time}");
            let record = stability_of(classical(&name), "advection", 4.0);
            agree(&name, record.stable_up_to.unwrap(), axis / largest, 1e-6);
        }
    }
}
