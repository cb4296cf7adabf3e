//! Observed orders of every classical scheme on at least three problems each.

use gridassay::claims::ClaimKind;
use gridassay::record::{Study, Verdict};
use gridassay::scheme::{BoundaryKind, Operation};

use super::formal::{Formal, formal};
use super::problems::{self, Walls};
use super::standard::{Standard, order, order_on};

/// Refinement, ladder and claim for a scheme on periodic waves.
fn on_waves(formal: &Formal, step: &str, narrow: bool) -> String {
    let Formal { space, time, .. } = formal;
    let expect = if formal.lines { *space } else { space.min(*time) };
    let refine = if formal.lines { format!("refine = \"space\"\ntime_order = {time}\n") } else { String::new() };
    // A narrow pulse is resolved on grids twice as fine.
    let cells: Vec<u32> = match () {
        () if formal.name.starts_with("dg-") => vec![14, 28, 56, 112],
        () if expect < 1.5 => vec![160, 320, 640, 1280, 2560],
        () if formal.limited => vec![100, 200, 400, 800, 1600],
        () if formal.name.starts_with("weno") => vec![40, 80, 160, 320],
        () if expect > 4.5 => vec![20, 40, 80, 160],
        () => vec![40, 80, 160, 320, 640],
    };
    let cells: Vec<u32> = cells.into_iter().map(|cells| if narrow { 2 * cells } else { cells }).collect();
    let norm = if formal.limited { "norm = \"l1\"\ntolerance = 0.25\n" } else { "" };
    format!("cells = {cells:?}\n{step}\n{refine}expect = {expect}\n{norm}")
}

/// At least three problems of the equation that a scheme was made for.
pub fn three(name: &'static str) -> Vec<Standard> {
    let formal = formal(name);
    let offers = gridassay_classical::scheme(name).expect("a classical scheme").describe().offers;
    let offer = &offers[0];
    let moving = format!("courant = {}", formal.courant);
    let named = |problems: &[&str], rest: &str| problems.iter().map(|problem| order(problem, problem, rest)).collect();
    let spreading = |first: &str| {
        format!(
            "cells = {first}\ndiffusion_number = 0.2\nrefine = \"space\"\ntime_order = {}\nexpect = {}\n",
            formal.time, formal.space
        )
    };
    match (offer.equation.as_str(), offer.dimensions.as_slice()) {
        _ if !offer.has(Operation::Advance) => {
            let own = |walls: Walls| {
                let order = if name == "poisson-compact4" { 4 } else { 2 };
                order_on(
                    walls.word(),
                    &problems::steady("poisson", walls),
                    &format!("cells = [20, 40, 80, 160]\nexpect = {order}\n"),
                )
            };
            let order = if name == "poisson-compact4" { 4 } else { 2 };
            let mut all: Vec<Standard> =
                named(&["manufactured-poisson"], &format!("cells = [10, 20, 40, 80]\nexpect = {order}\n"));
            all.extend(Walls::of(offer).into_iter().map(own));
            all.push(order_on(
                "steep",
                &problems::steep_poisson(),
                &format!("cells = [20, 40, 80, 160]\nexpect = {order}\n"),
            ));
            all
        }
        // These weights lose their order where the first two derivatives vanish together, as those of the wave of varying frequency do, until the grid is
        // very fine (Henrick, Aslam & Powers 2005).
        ("advection", [1]) if name.starts_with("weno") => {
            let rest = on_waves(&formal, &moving, false);
            let own = |id: &str, second: f64, phase: f64| order_on(id, &problems::two_waves(second, phase), &rest);
            vec![
                order("travelling-sine", "travelling-sine", &rest),
                own("two-waves", 0.1, 0.4),
                own("one-wave", 0.0, 2.2),
            ]
        }
        ("advection", [1]) => {
            let one =
                |problem: &str| order(problem, problem, &on_waves(&formal, &moving, problem == "travelling-gaussian"));
            ["travelling-sine", "travelling-gaussian", "varying-frequency-sine"].map(one).to_vec()
        }
        ("advection", [2]) => {
            let cells = if formal.space < 1.5 { "[40, 80, 160, 320]" } else { "[24, 48, 96, 192]" };
            let quadrant = |velocity: [f64; 2]| {
                let rest = format!(
                    "cells = {cells}\ncourant = 0.37\nfinal_time = 0.3\nexpect = {}\nparameters = {{ velocity = {velocity:?} }}\n",
                    formal.space
                );
                order(&format!("oblique-sine {velocity:?}"), "oblique-sine", &rest)
            };
            vec![quadrant([0.83, 0.57]), quadrant([-0.61, 0.83]), quadrant([0.41, -0.3])]
        }
        ("advection", _) => {
            let octant = |velocity: [f64; 3]| {
                let rest = format!(
                    "cells = [12, 24, 48, 96]\ncourant = 0.27\nfinal_time = 0.17\nexpect = 1\ntolerance = 0.2\nparameters = {{ velocity = {velocity:?} }}\n"
                );
                order(&format!("oblique-sine-3d {velocity:?}"), "oblique-sine-3d", &rest)
            };
            vec![octant([0.83, -0.57, 0.41]), octant([-0.31, 0.57, 0.41]), octant([0.2, 0.3, -0.7])]
        }
        ("diffusion", [3]) => {
            let with = |nu: f64| {
                let rest = "cells = [[10, 12, 8], [20, 24, 16], [40, 48, 32]]\ndiffusion_number = 0.11\nexpect = 2\n";
                order_on(&format!("decay in 3-D {nu}"), &problems::decay_3d(nu), rest)
            };
            vec![with(0.037), with(0.081), with(0.02)]
        }
        ("diffusion", [2]) => {
            let catalogue = "decaying-sine-2d";
            let with = |nu: f64, time: f64| {
                let rest = format!(
                    "cells = [12, 24, 48, 96]\ndiffusion_number = 0.13\nexpect = 2\nfinal_time = {time}\nparameters = {{ diffusivity = {nu} }}\n"
                );
                order(&format!("{catalogue} {nu}"), catalogue, &rest)
            };
            vec![with(0.037, 0.4), with(0.081, 0.3), with(0.02, 0.53)]
        }
        ("diffusion", _) if offer.boundaries.contains(&BoundaryKind::Gradient) => {
            let mut all: Vec<Standard> = named(&["decaying-sine"], &spreading("[20, 40, 80, 160]"));
            all.extend(
                Walls::of(offer)
                    .into_iter()
                    .map(|walls| order_on(walls.word(), &problems::diffusion(walls, 0.4), &spreading("[20, 40, 80]"))),
            );
            all
        }
        ("diffusion", _) => {
            let with = |nu: f64, time: f64| {
                order(
                    &format!("decaying-sine {nu}"),
                    "decaying-sine",
                    &format!(
                        "{}final_time = {time}\nparameters = {{ diffusivity = {nu} }}\n",
                        spreading("[20, 40, 80, 160]")
                    ),
                )
            };
            vec![with(0.037, 0.67), with(0.012, 0.9), with(0.06, 0.4)]
        }
        ("burgers", _) if offer.boundaries.contains(&BoundaryKind::Value) => {
            let rest = "cells = [20, 40, 80, 160, 320]\ndiffusion_number = 0.15\nexpect = 2\n";
            let mut all: Vec<Standard> = named(&["burgers-periodic", "burgers-front"], rest);
            all.push(order_on("burgers-walls", &problems::burgers_walls(), rest));
            all
        }
        ("burgers", _) => {
            let rest = "cells = [200, 400, 800, 1600]\ncourant = 0.37\nnorm = \"l1\"\nexpect = 1\n";
            let jumps =
                "cells = [100, 200, 400, 800, 1600]\ncourant = 0.37\nnorm = \"l1\"\nexpect = 0.85\ntolerance = 0.25\n";
            let mut all: Vec<Standard> = named(&["burgers-steepening"], rest);
            all.push(order_on("burgers-source", &problems::burgers_source(), rest));
            all.push(order_on("burgers-jumps", &problems::burgers_jumps(), jumps));
            all
        }
        ("acoustics", _) => {
            let cells = if formal.space < 1.5 { "[160, 320, 640, 1280, 2560]" } else { "[40, 80, 160, 320]" };
            let with = |sound: f64, density: f64| {
                let still = if formal.space > 1.5 { ", velocity = [0]" } else { "" };
                let rest = format!(
                    "cells = {cells}\ncourant = 0.6\nexpect = {}\nparameters = {{ sound_speed = {sound}, density = {density}{still} }}\n",
                    formal.space
                );
                order(&format!("acoustic-waves {sound}"), "acoustic-waves", &rest)
            };
            vec![with(0.9, 1.3), with(1.3, 0.7), with(0.5, 2.1)]
        }
        ("euler", _) => {
            let first = formal.space < 1.5;
            let cells = if first { "[200, 400, 800, 1600]" } else { "[50, 100, 200, 400, 800]" };
            let tolerance = if first { 0.1 } else { 0.25 };
            let rest = format!(
                "cells = {cells}\ncourant = 0.4\nnorm = \"l1\"\nexpect = {}\ntolerance = {tolerance}\n",
                formal.space
            );
            named(&["acoustic-simple-wave", "manufactured-euler-1d", "entropy-wave"], &rest)
        }
        (other, _) => panic!("no problems for {other}"),
    }
}

/// What was observed, in the norm and the fields of the claim, and whether the claim of the formal order was upheld.
pub fn observed(name: &str, claim: &Standard) -> (Vec<f64>, Verdict, String) {
    let attempt = super::attempt(gridassay_classical::scheme(name).expect("a classical scheme"), &claim.kind);
    let ClaimKind::Order(order) = &claim.kind else { panic!("an order") };
    let Study::Order(record) = &attempt.studies[0].study else { panic!("an order") };
    // Slopes that have not settled have no limit; the finest one stands in for it.
    let of = |observed: &gridassay::record::Observed| {
        observed.order.or(observed.slopes.iter().rev().find_map(|slope| *slope))
    };
    let orders = record.observed.values().filter_map(|norms| of(&norms[&order.norm])).collect();
    (orders, attempt.judgement.verdict, attempt.judgement.reason)
}
