//! Largest Courant numbers of schemes as built.
//!
//! Trusted: closed forms, and values recomputed for this project by a scan over 20 001 angles with mpmath; Baldauf (2008), J. Comput. Phys.
//! 227:6638-6660, prints those of orders one to six to three or four digits (from memory), with which they agree.

use std::f64::consts::FRAC_PI_2;

use gridassay::expect;
use gridassay_classical::advection_diffusion::central::CentralSpace;
use gridassay_classical::numerics::method_of_lines::MethodOfLines;
use gridassay_classical::numerics::runge_kutta::RK2;
use gridassay_classical::one_step::Repeated;

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

/// |R(iy)| = 1 + y^4 / 8: there is no stable step, and any tolerance would make up a limit.
#[test]
fn second_order_runge_kutta_with_central_differences_has_no_stable_step() {
    let scheme = || Repeated::new(MethodOfLines::new(CentralSpace::second_order(), RK2));
    let record = stability_of(Box::new(scheme()), "advection", 4.0);
    assert_eq!(record.stable_up_to, Some(0.0));
    let weak = record.weak_growth.unwrap();
    agree("power", weak.power, 4.0, 0.01);
    agree("coefficient", weak.coefficient, 0.125, 0.005);
    // ln 10 / (c^4 / 8) at c = 0.1.
    agree("steps to tenfold", weak.steps_to_tenfold / (10.0_f64.ln() * 8e4), 1.0, 0.05);
    let failed = std::panic::catch_unwind(|| expect(scheme()).stable_up_to_courant("advection", 0.05));
    let message = *failed.unwrap_err().downcast::<String>().unwrap();
    assert!(message.contains("refuted") && message.contains("to the power 4.00"), "{message}");
}

/// At Courant number 1 both roots of leapfrog meet at theta = pi / 2: |G| = 1, and yet the mode grows like n.
#[test]
fn leapfrog_grows_at_its_limit_and_the_staggered_scheme_too_but_du_fort_frankel_has_none() {
    let record = stability_of(classical("leapfrog"), "advection", 2.0);
    agree("limit", record.stable_up_to.unwrap(), 1.0, 1e-6);
    agree("worst theta", record.worst_theta.unwrap(), FRAC_PI_2, 1e-2);
    agree("power", record.growth_at_limit.expect("a defective eigenvalue"), 1.0, 0.2);
    let record = stability_of(classical("upwind"), "advection", 2.0);
    assert_eq!((record.growth_at_limit, record.weak_growth), (None, None));
    assert_eq!(stability_of(classical("du-fort-frankel"), "diffusion", 4.0).stable_up_to, None);
}
