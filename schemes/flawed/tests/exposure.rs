//! Trusted: the right twins, whose closed forms and orders the classical crate tests. Every study that the table
//! names must tell the flawed scheme from its twin, and none may for those that the table calls unseen.

mod common;

use common::measures;
use gridassay_flawed::{Flaw, Setting, Study, flaws};
use gridassay_scheme::{Case, Parameter};

fn exposes(study: Study, flaw: &Flaw) -> bool {
    match study {
        Study::Modes => measures::modes(flaw),
        Study::OrderSpace => measures::order_space(flaw),
        Study::OrderTime => measures::order_time(flaw),
        Study::Invariants => measures::invariants(flaw),
        Study::Stability => measures::stability(flaw),
        Study::Repeatability => measures::repeatability(flaw),
    }
}

fn check(study: Study) {
    let tagged: Vec<&Flaw> = flaws().iter().filter(|flaw| flaw.exposed_by.contains(&study)).collect();
    assert!(!tagged.is_empty());
    let blind: Vec<&str> = tagged.into_iter().filter(|flaw| !exposes(study, flaw)).map(|flaw| flaw.name).collect();
    assert!(blind.is_empty(), "{study:?} does not expose {blind:?}");
}

#[test]
fn modes_expose_what_the_table_says() {
    check(Study::Modes);
}

#[test]
fn orders_in_space_expose_what_the_table_says() {
    check(Study::OrderSpace);
}

#[test]
fn orders_in_time_expose_what_the_table_says() {
    check(Study::OrderTime);
}

#[test]
fn invariants_expose_what_the_table_says() {
    check(Study::Invariants);
}

#[test]
fn stability_exposes_what_the_table_says() {
    check(Study::Stability);
}

#[test]
fn repeatability_exposes_what_the_table_says() {
    check(Study::Repeatability);
}

#[test]
fn what_the_table_calls_unseen_is_unseen() {
    for flaw in flaws().iter().filter(|flaw| flaw.exposed_by.is_empty()) {
        for study in [Study::OrderSpace, Study::OrderTime, Study::Invariants, Study::Stability, Study::Repeatability] {
            assert!(!exposes(study, flaw), "{study:?} exposes {}", flaw.name);
        }
    }
}

/// Leaves out what the setting says, so that the flawed scheme must answer as its twin does; false where a case
/// cannot do without it, or where the setting is none that can be left out of periodic cases.
fn without(setting: Setting, case: &mut Case) -> bool {
    match setting {
        Setting::Advection => case.equation == "diffusion",
        Setting::Diffusion => case.equation == "advection",
        // Periodic cases have neither source nor walls.
        Setting::Source
        | Setting::VaryingSource
        | Setting::Walls
        | Setting::UpperWall
        | Setting::VaryingBoundaryValue
        | Setting::GradientWall
        | Setting::LowerGradientWall => true,
        Setting::NegativeVelocity => case.vector("velocity").is_ok_and(|v| v.iter().all(|a| *a >= 0.0)),
        Setting::UnequalSpacings => {
            case.grid.cells[1] = case.grid.cells[0];
            case.grid.upper[1] = case.grid.lower[1] + case.grid.upper[0] - case.grid.lower[0];
            true
        }
        Setting::Parameter(name) => {
            let neutral = match name {
                "velocity" => 0.0,
                "gamma" => 1.4,
                _ => 1.0,
            };
            case.parameters.insert(name.to_owned(), Parameter::Scalar(neutral));
            true
        }
        _ => false,
    }
}

#[test]
fn without_the_setting_the_flawed_scheme_answers_as_its_twin_does() {
    for flaw in flaws() {
        assert!(!measures::modes_where(flaw, |case| without(flaw.setting, case)), "{}: {:?}", flaw.name, flaw.setting);
    }
}
