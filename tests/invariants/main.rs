//! Invariants as measured, against what is known of each scheme in closed form.
//!
//! Trusted: a scheme in flux form conserves (Lax & Wendroff 1960); monotone and limited schemes do not increase the total variation, second-order linear ones do
//! (Harten 1983; Godunov 1959); hydrostatic reconstruction keeps still water (Audusse et al. 2004); closed cells keep a uniform state. Each has a twin with one
//! mistake that must be found, at its place.

mod common;
mod flawed;
mod water;

use std::path::Path;

use common::{checked, expect, request, study};
use flawed::{Mapped, Mistake, Upwind};
use gridassay::claims::{ClaimKind, plan_of};
use gridassay::host::Session;
use gridassay::record::Invariant::{self, *};
use gridassay::record::{InvariantsRecord, Study, StudyRecord, Verdict};
use gridassay::studies::invariants;
use gridassay::verdict;
use water::Water;

const HOLDS: Option<bool> = Some(true);
const FAILS: Option<bool> = Some(false);

fn classical(name: &str, equation: &str) -> InvariantsRecord {
    study(gridassay_classical::scheme(name).expect("a known name"), &request(equation))
}

/// What every scheme in flux form that treats both directions alike must hold.
const SOUND: [(Invariant, Option<bool>); 4] =
    [(Conservation, HOLDS), (UniformState, HOLDS), (Mirror, HOLDS), (Repeatability, HOLDS)];

#[test]
fn monotone_and_limited_schemes_hold_everything_that_advection_holds() {
    for name in ["upwind", "lax-friedrichs", "muscl-minmod", "muscl-superbee", "muscl-van-leer"] {
        let record = classical(name, "advection");
        assert_eq!(record.settings.len(), 2, "both signs of the velocity");
        expect(name, &record, &SOUND);
        expect(name, &record, &[(TotalVariation, HOLDS), (Bounds, HOLDS), (Positivity, HOLDS)]);
        expect(name, &record, &[(Exchange, None), (StillWater, None), (FreeStream, None)]);
    }
}

#[test]
fn linear_schemes_of_second_order_conserve_but_gain_variation() {
    for name in ["lax-wendroff", "beam-warming", "fromm", "leapfrog"] {
        let record = classical(name, "advection");
        expect(name, &record, &SOUND);
        expect(name, &record, &[(TotalVariation, FAILS), (Bounds, FAILS), (Positivity, FAILS)]);
    }
}

#[test]
fn diffusion_holds_its_bounds_and_implicit_solves_conserve_to_rounding() {
    for name in ["explicit-euler-diffusion", "implicit-euler-diffusion"] {
        let record = classical(name, "diffusion");
        expect(name, &record, &SOUND);
        expect(name, &record, &[(TotalVariation, HOLDS), (Bounds, HOLDS), (Positivity, HOLDS)]);
    }
}

#[test]
fn schemes_of_the_plane_are_tried_in_every_quadrant_and_exchange_x_and_y() {
    let record = classical("upwind-2d", "advection");
    assert_eq!(record.settings.len(), 4);
    expect("upwind-2d", &record, &SOUND);
    expect("upwind-2d", &record, &[(Exchange, HOLDS), (Bounds, HOLDS), (TotalVariation, None)]);
    expect("lax-wendroff-2d", &classical("lax-wendroff-2d", "advection"), &[(Exchange, HOLDS), (Bounds, FAILS)]);
}

#[test]
fn godunov_for_burgers_and_systems_in_flux_form_hold_what_their_equations_hold() {
    let record = classical("burgers-godunov", "burgers");
    expect("burgers-godunov", &record, &SOUND);
    expect("burgers-godunov", &record, &[(TotalVariation, HOLDS), (Bounds, HOLDS), (Positivity, HOLDS)]);
    for (name, equation) in
        [("euler-rusanov", "euler"), ("acoustics-upwind", "acoustics"), ("acoustics-staggered", "acoustics")]
    {
        let record = classical(name, equation);
        expect(name, &record, &SOUND);
        expect(name, &record, &[(TotalVariation, None), (Bounds, None)]);
    }
    expect("euler-rusanov", &classical("euler-rusanov", "euler"), &[(Positivity, HOLDS)]);
    expect("dg-p2", &classical("dg-p2", "advection"), &SOUND);
}

fn upwind(equation: &'static str, mistake: Mistake) -> InvariantsRecord {
    study(Upwind::boxed(equation, mistake), &request(equation))
}

#[test]
fn the_right_twin_of_the_flawed_schemes_holds_everything() {
    let record = upwind("advection", Mistake::None);
    assert_eq!(record.settings.len(), 6, "two signs on the line, four quadrants");
    expect("upwind", &record, &SOUND);
    expect("upwind", &record, &[(TotalVariation, HOLDS), (Bounds, HOLDS), (Positivity, HOLDS), (Exchange, HOLDS)]);
    expect("burgers", &upwind("burgers", Mistake::None), &SOUND);
}

#[test]
fn a_wrong_flux_that_both_cells_feel_conserves_but_spoils_a_uniform_state_at_its_face() {
    let record = upwind("advection", Mistake::WrongFace);
    expect("wrong face", &record, &[(Conservation, HOLDS), (UniformState, FAILS), (Mirror, FAILS)]);
    let place = checked(&record, UniformState).worst.clone().expect("a place");
    assert!([11, 12].contains(&place.cell.expect("a cell")[0]));
}

#[test]
fn a_flux_that_one_cell_alone_feels_is_lost_and_its_cell_is_named() {
    let record = upwind("advection", Mistake::TornFace);
    expect("torn face", &record, &[(Conservation, FAILS)]);
    let check = checked(&record, Conservation);
    let cell = check.worst.clone().expect("a place").cell.expect("a cell");
    assert!([11, 12].contains(&cell[0]), "{cell:?}: {}", check.sentence);
}

#[test]
fn the_advective_form_loses_what_a_shock_carries() {
    expect("advective", &upwind("burgers", Mistake::Advective), &[(Conservation, FAILS), (UniformState, HOLDS)]);
}

#[test]
fn what_depends_on_earlier_questions_or_on_the_grouping_of_steps_is_not_repeatable() {
    for mistake in [Mistake::Stale, Mistake::OneStepTooMany] {
        expect("stale", &upwind("advection", mistake), &[(Repeatability, FAILS)]);
    }
    expect("one step too many", &upwind("advection", Mistake::OneStepTooMany), &[(Conservation, HOLDS)]);
}

#[test]
fn an_offset_answer_conserves_but_is_not_its_own_mirror_image() {
    let record = upwind("advection", Mistake::Offset);
    expect("offset", &record, &[(Conservation, HOLDS), (Bounds, HOLDS), (Mirror, FAILS)]);
}

#[test]
fn a_width_taken_from_the_other_direction_is_felt_by_the_exchange_alone() {
    let record = upwind("advection", Mistake::WidthOfX);
    expect("width of x", &record, &[(Conservation, HOLDS), (Mirror, HOLDS), (Exchange, FAILS)]);
}

#[test]
fn still_water_needs_a_balanced_scheme() {
    for (balanced, holds) in [(true, HOLDS), (false, FAILS)] {
        let record = study(Water::boxed(balanced), &request("shallow_water"));
        expect("water", &record, &SOUND);
        expect("water", &record, &[(StillWater, holds), (Positivity, HOLDS)]);
    }
}

#[test]
fn a_free_stream_needs_closed_cells() {
    for (straight, holds) in [(false, HOLDS), (true, FAILS)] {
        let record = study(Mapped::boxed(straight), &request("advection"));
        expect("mapped", &record, &SOUND);
        expect("mapped", &record, &[(FreeStream, holds)]);
    }
}

/// The verdict on the one claim of a claims file about a classical scheme.
fn judged(scheme: &str, claim: &str) -> verdict::Judgement {
    let text = format!("[scheme]\nclassical = \"{scheme}\"\n[[invariants]]\n{claim}\n");
    let plan = plan_of(Path::new("claims.toml"), &text, Path::new(".")).expect("a claims file");
    let ClaimKind::Invariants(claim) = &plan.claims[0].kind else { panic!("another claim") };
    let mut session = Session::in_process(gridassay_classical::scheme(scheme).expect("a known name"));
    let made = invariants::run(&mut session, &claim.request, plan.seed);
    let Study::Invariants(record) = &made.study else { panic!("another study") };
    let study = StudyRecord {
        id: plan.claims[0].id.clone(),
        scheme: scheme.to_owned(),
        study: made.study.clone(),
        stopped: made.stopped.clone(),
        notes: made.notes.clone(),
    };
    let text = serde_json::to_string(&study).expect("a record is JSON");
    assert_eq!(serde_json::from_str::<StudyRecord>(&text).expect("it reads back"), study);
    verdict::invariants::judge(claim, &study, record)
}

#[test]
fn claims_are_upheld_refuted_with_figure_and_place_or_undecided() {
    let held =
        judged("upwind", "equation = \"advection\"\ncourant = 0.9\nhold = [\"conservation\", \"total_variation\"]");
    assert_eq!(held.verdict, Verdict::Upheld, "{}", held.reason);
    let refuted = judged("lax-wendroff", "equation = \"advection\"\nhold = [\"conservation\", \"total_variation\"]");
    assert_eq!(refuted.verdict, Verdict::Refuted);
    assert!(refuted.reason.contains("after") && refuted.reason.contains("at cell"), "{}", refuted.reason);
    let unknown = judged("upwind", "equation = \"advection\"\nhold = [\"conservation\", \"exchange\"]");
    assert_eq!(unknown.verdict, Verdict::Undecided, "{}", unknown.reason);
    let unstable = judged("upwind", "equation = \"advection\"\ncourant = 40.0\nhold = [\"conservation\"]");
    assert_ne!(unstable.verdict, Verdict::Refuted, "growth is no loss: {}", unstable.reason);
}

#[test]
fn a_claim_that_claims_nothing_or_something_unknown_is_no_claim() {
    for (claim, says) in [
        ("equation = \"advection\"\nhold = []", "claims nothing"),
        ("equation = \"advection\"\nhold = [\"symmetry\"]", "symmetry"),
        ("equation = \"advection\"\ncells = [0]\nhold = [\"mirror\"]", "cells"),
    ] {
        let text = format!("[scheme]\nclassical = \"upwind\"\n[[invariants]]\n{claim}\n");
        let error = plan_of(Path::new("claims.toml"), &text, Path::new(".")).expect_err("no claim").to_string();
        assert!(error.contains(says), "{error}");
    }
}
