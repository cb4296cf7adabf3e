//! Trusted: the right twins, whose closed forms and orders the classical crate tests. Every study that the table
//! names must tell the flawed scheme from its twin, and none may for those that the table calls unseen.

mod common;

use common::measures;
use gridassay_flawed::{Flaw, Study, flaws};

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
