//! The standard claims of a right scheme: chosen by rules from what it offers and from its formal orders, never for one flaw.

use std::path::Path;

use gridassay::claims::{ClaimKind, plan_of};
use gridassay::scheme::{BoundaryKind, Offer, Operation, Values};
use gridassay_reference::problem::Problem;

use super::formal::{Formal, formal};
use super::problems::{self, Walls};

/// A claim under the name by which the tables of these tests speak of it.
#[derive(Clone, Debug)]
pub struct Standard {
    pub id: String,
    pub kind: ClaimKind,
}

/// The claim of one table of a claims file; `own`: a problem that is not in the catalogue.
pub fn claim(id: &str, text: &str, own: Option<&str>) -> Standard {
    let file = format!("[scheme]\nclassical = \"upwind\"\n{text}");
    let plan = plan_of(Path::new("claims.toml"), &file, Path::new(".")).unwrap_or_else(|error| panic!("{id}: {error}"));
    let mut kind = plan.claims[0].kind.clone();
    if let (ClaimKind::Order(order), Some(own)) = (&mut kind, own) {
        let problem = Problem::from_text(id, own).unwrap_or_else(|error| panic!("{id}: {error}"));
        order.request.final_time = problem.final_time();
        order.request.problem = problem;
    }
    Standard { id: id.to_owned(), kind }
}

/// A claim about an order on a problem of the catalogue.
pub fn order(id: &str, problem: &str, rest: &str) -> Standard {
    claim(id, &format!("[[order]]\nproblem = \"{problem}\"\n{rest}"), None)
}

/// A claim about an order on a problem of these tests.
pub fn order_on(id: &str, own: &str, rest: &str) -> Standard {
    let stand_in = match own {
        _ if own.contains("dimensions = 3") => "oblique-sine-3d",
        _ if own.contains("dimensions = 2") => "oblique-sine",
        _ => "travelling-sine",
    };
    claim(id, &format!("[[order]]\nproblem = \"{stand_in}\"\n{rest}"), Some(own))
}

/// All standard claims of a classical scheme.
pub fn standard(twin: &'static str) -> Vec<Standard> {
    let formal = formal(twin);
    let offers = gridassay_classical::scheme(twin).expect("a classical scheme").describe().offers;
    let mut claims = Vec::new();
    for offer in &offers {
        claims.extend(of_offer(&formal, offer));
    }
    let mut seen = std::collections::BTreeSet::new();
    claims.retain(|claim| seen.insert(claim.id.clone()));
    claims
}

fn of_offer(formal: &Formal, offer: &Offer) -> Vec<Standard> {
    let takes = |kind| offer.boundaries.contains(&kind);
    let periodic = takes(BoundaryKind::Periodic);
    let steady = !offer.has(Operation::Advance);
    match (offer.equation.as_str(), offer.dimensions.as_slice()) {
        _ if steady => steady_orders(formal, offer),
        ("advection", [1]) => {
            [advection_orders(formal, offer), waves(formal), invariants(formal, "advection")].concat()
        }
        ("advection", [2]) => [plane_advection(formal), invariants(formal, "advection")].concat(),
        ("diffusion", [2]) => [plane_diffusion(), invariants(formal, "diffusion")].concat(),
        ("diffusion", _) => [diffusion_orders(formal, offer), decay(formal), invariants(formal, "diffusion")].concat(),
        ("advection_diffusion", _) if periodic => {
            [advection_diffusion_orders(formal), invariants(formal, "advection_diffusion")].concat()
        }
        ("advection_diffusion", _) => wall_orders(formal),
        ("burgers", _) if takes(BoundaryKind::Value) => viscous_burgers(formal),
        ("burgers", _) => [burgers_orders(formal), invariants(formal, "burgers")].concat(),
        ("acoustics", _) => [acoustics(formal), invariants(formal, "acoustics")].concat(),
        ("euler", _) => [euler_orders(formal), invariants(formal, "euler")].concat(),
        _ => Vec::new(),
    }
}

/// Space alone, the step falling fast enough, and time alone, where space and time are discretised apart; else both together.
fn advection_orders(formal: &Formal, offer: &Offer) -> Vec<Standard> {
    let nodes = offer.values == Values::CellNodes;
    let courant = formal.courant;
    let Formal { space, time, .. } = formal;
    let norm = if formal.limited { "norm = \"l1\"\ntolerance = 0.25\n" } else { "" };
    if !formal.lines {
        let expect = space.min(*time);
        let cells = if expect < 1.5 { "[160, 320, 640, 1280, 2560]" } else { "[40, 80, 160, 320, 640]" };
        let mut claims = vec![order(
            "order-advection",
            "travelling-sine",
            &format!("cells = {cells}\ncourant = {courant}\nexpect = {expect}\n"),
        )];
        if formal.implicit {
            claims.push(order(
                "order-advection-time",
                "travelling-sine",
                &format!("cells = [90]\nrefine = \"time\"\nstep = 0.019\nexpect = {time}\n"),
            ));
        }
        return claims;
    }
    let cells = match () {
        () if formal.limited => "[100, 200, 400, 800, 1600]",
        () if nodes => "[14, 28, 56, 112]",
        () if formal.name.starts_with("weno") => "[40, 80, 160, 320]",
        () if *space > 4.5 => "[20, 40, 80, 160]",
        () if *space > 2.5 => "[30, 60, 120, 240]",
        () => "[40, 80, 160, 320]",
    };
    let in_space = format!(
        "cells = {cells}\ncourant = {courant}\nrefine = \"space\"\ntime_order = {time}\nexpect = {space}\n{norm}"
    );
    let mut claims = vec![order("order-advection-space", "travelling-sine", &in_space)];
    if !formal.limited {
        let on = if nodes { 20 } else { 36 };
        let in_time = format!("cells = [{on}]\ncourant = {courant}\nrefine = \"time\"\nexpect = {time}\n");
        claims.push(order("order-advection-time", "travelling-sine", &in_time));
    }
    claims
}

/// The symbol where there is a closed form, else bounds on long waves; and the stable range.
fn waves(formal: &Formal) -> Vec<Standard> {
    let mut claims = Vec::new();
    if let Some(symbol) = &formal.advection_symbol {
        let text = format!("[[modes]]\nequation = \"advection\"\ncourant = {}\nsymbol = \"{symbol}\"", formal.courant);
        claims.push(claim("modes-advection", &text, None));
    } else if let Some(within) = formal.phase_speed_within {
        let text = format!(
            "[[modes]]\nequation = \"advection\"\ncourant = {}\nphase_speed_error_within = {within}\nfrom_points_per_wavelength = 20",
            formal.courant
        );
        claims.push(claim("modes-advection", &text, None));
    }
    if let Some((up_to, exactly)) = formal.stable_courant {
        let text = format!("[[stability]]\nequation = \"advection\"\ncourant_up_to = {up_to}\nexactly = {exactly}");
        claims.push(claim("stability-advection", &text, None));
    }
    claims
}

fn decay(formal: &Formal) -> Vec<Standard> {
    let mut claims = Vec::new();
    if let Some(symbol) = &formal.diffusion_symbol {
        let text = format!("[[modes]]\nequation = \"diffusion\"\ndiffusion_number = 0.23\nsymbol = \"{symbol}\"");
        claims.push(claim("modes-diffusion", &text, None));
    }
    if let Some((up_to, exactly)) = formal.stable_diffusion {
        let text =
            format!("[[stability]]\nequation = \"diffusion\"\ndiffusion_number_up_to = {up_to}\nexactly = {exactly}");
        claims.push(claim("stability-diffusion", &text, None));
    }
    claims
}

fn invariants(formal: &Formal, equation: &str) -> Vec<Standard> {
    let mut hold = vec!["conservation", "uniform_state", "mirror", "repeatability"];
    if formal.monotone {
        hold.extend(["bounds", "positivity"]);
    }
    if formal.monotone && !formal.plane {
        hold.push("total_variation");
    }
    if formal.plane {
        hold.push("exchange");
    }
    if equation == "euler" {
        hold.push("positivity");
    }
    let courant = formal.invariants_courant.map_or_else(String::new, |c| format!("courant = {c}\n"));
    let text = format!("[[invariants]]\nequation = \"{equation}\"\n{courant}hold = {hold:?}");
    vec![claim(&format!("invariants-{equation}"), &text, None)]
}

fn plane_advection(formal: &Formal) -> Vec<Standard> {
    let cells = if formal.space < 1.5 { "[40, 80, 160, 320]" } else { "[24, 48, 96, 192]" };
    let both = |id: &str, velocity: [f64; 2]| {
        let text = format!(
            "cells = {cells}\ncourant = 0.37\nexpect = {}\nparameters = {{ velocity = {velocity:?} }}\n",
            formal.space
        );
        order(id, "oblique-sine", &format!("{text}final_time = 0.3\n"))
    };
    vec![both("order-advection", [0.83, 0.57]), both("order-advection-quadrant", [0.83, -0.57])]
}

fn plane_diffusion() -> Vec<Standard> {
    let rest = "cells = [10, 20, 40, 64]\ndiffusion_number = 0.2\nexpect = 2\n";
    vec![
        order("order-diffusion", "decaying-sine-2d", rest),
        order_on("order-diffusion-source", &problems::plane_diffusion(), rest),
    ]
}

/// On every mix of walls that is offered, with values and gradients that vary in time, and a source.
fn diffusion_orders(formal: &Formal, offer: &Offer) -> Vec<Standard> {
    let mut claims = Vec::new();
    let space_only = format!("refine = \"space\"\ntime_order = {}\nexpect = {}\n", formal.time, formal.space);
    claims.push(order(
        "order-diffusion",
        "decaying-sine",
        &format!("cells = [20, 40, 80, 160]\ndiffusion_number = 0.2\n{space_only}"),
    ));
    for walls in Walls::of(offer) {
        let own = problems::diffusion(walls, 0.4);
        let id = format!("order-diffusion-{}", walls.word());
        claims.push(order_on(&id, &own, &format!("cells = [20, 40, 80, 160]\ndiffusion_number = 0.2\n{space_only}")));
        if formal.implicit {
            let rest = format!("cells = [24]\nrefine = \"time\"\nstep = 0.06\nexpect = {}\n", formal.time);
            claims.push(order_on(&format!("{id}-time"), &own, &rest));
        }
    }
    claims
}

fn advection_diffusion_orders(formal: &Formal) -> Vec<Standard> {
    let rest = format!(
        "cells = [20, 40, 80, 160]\ndiffusion_number = 0.15\nrefine = \"space\"\ntime_order = {}\nexpect = {}\n",
        formal.time, formal.space
    );
    vec![order("order-advection-diffusion", "travelling-decaying-sine", &rest)]
}

/// Between walls with values that vary in time: in space; in time alone; and both together where little diffuses, so that the step may fall
/// with the width and what happens in the stages is seen.
fn wall_orders(formal: &Formal) -> Vec<Standard> {
    let in_space = format!(
        "cells = [20, 40, 80, 160]\ndiffusion_number = 0.15\nrefine = \"space\"\ntime_order = {}\nexpect = {}\n",
        formal.time, formal.wall_space
    );
    let in_time = format!("cells = [24]\nstep = 0.02\nrefine = \"time\"\nexpect = {}\n", formal.time);
    let both = format!(
        "cells = [40, 80, 160, 320, 640]\ncourant = 0.6\nexpect = {}\nnorm = \"linf\"\ntolerance = 0.25\n",
        formal.both()
    );
    vec![
        order("order-walls", "moving-boundary-values", &in_space),
        order_on("order-walls-source", &problems::advection_diffusion(0.03), &in_space),
        order_on("order-walls-time", &problems::advection_diffusion(0.003), &in_time),
        order_on("order-walls-both", &problems::advection_diffusion(1e-3), &both),
    ]
}

fn steady_orders(formal: &Formal, offer: &Offer) -> Vec<Standard> {
    let one = |walls: Walls| {
        let own = problems::steady(&offer.equation, walls);
        let order = if formal.name == "poisson-compact4" { 4 } else { 2 };
        order_on(
            &format!("order-steady-{}-{}", offer.equation, walls.word()),
            &own,
            &format!("cells = [10, 20, 40, 80]\nexpect = {order}\nnorm = \"linf\"\n"),
        )
    };
    Walls::of(offer).into_iter().map(one).collect()
}

fn viscous_burgers(formal: &Formal) -> Vec<Standard> {
    let rest = format!("cells = [20, 40, 80, 160]\ndiffusion_number = 0.15\nexpect = {}\n", formal.space);
    vec![
        order("order-burgers", "burgers-periodic", &rest),
        order_on("order-burgers-walls", &problems::burgers_walls(), &rest),
    ]
}

fn burgers_orders(formal: &Formal) -> Vec<Standard> {
    let expect = formal.space.min(formal.time);
    let tolerance = if formal.limited { 0.25 } else { 0.1 };
    let smooth = format!(
        "cells = [100, 200, 400, 800, 1600]\ncourant = 0.37\nnorm = \"l1\"\nexpect = {expect}\ntolerance = {tolerance}\n"
    );
    // First order at jumps, less a logarithm in fans.
    let jumps = "cells = [100, 200, 400, 800, 1600]\ncourant = 0.37\nnorm = \"l1\"\nexpect = 0.85\ntolerance = 0.25\n";
    vec![
        order("order-burgers", "burgers-steepening", &smooth),
        order_on("order-burgers-jumps", &problems::burgers_jumps(), jumps),
    ]
}

fn acoustics(formal: &Formal) -> Vec<Standard> {
    let still = formal.name == "acoustics-staggered";
    let velocity = if still { "parameters = { velocity = [0] }\n" } else { "" };
    let cells = if formal.space < 1.5 { "[160, 320, 640, 1280, 2560]" } else { "[40, 80, 160, 320]" };
    let text = format!("cells = {cells}\ncourant = 0.6\nexpect = {}\n{velocity}", formal.space);
    let within = if formal.space < 1.5 { 0.01 } else { 0.005 };
    let velocity = if still { "" } else { "parameters = { velocity = [0.17] }\n" };
    let modes = format!(
        "[[modes]]\nequation = \"acoustics\"\ncourant = 0.6\nphase_speed_error_within = {within}\nfrom_points_per_wavelength = 20\n{velocity}"
    );
    let stability = format!("[[stability]]\nequation = \"acoustics\"\ncourant_up_to = 1\nexactly = true\n{velocity}");
    vec![
        order("order-acoustics", "acoustic-waves", &text),
        claim("modes-acoustics", &modes, None),
        claim("stability-acoustics", &stability, None),
    ]
}

fn euler_orders(formal: &Formal) -> Vec<Standard> {
    let first = formal.space < 1.5;
    let cells = if first { "[100, 200, 400, 800, 1600]" } else { "[50, 100, 200, 400, 800]" };
    let tolerance = if first { 0.1 } else { 0.25 };
    let rest =
        format!("cells = {cells}\ncourant = 0.4\nnorm = \"l1\"\nexpect = {}\ntolerance = {tolerance}\n", formal.space);
    vec![
        // Long enough for weak growth to be seen.
        order(
            "order-euler-waves",
            "acoustic-simple-wave",
            &format!("{rest}final_time = {}\n", if first { 1.7 } else { 0.6 }),
        ),
        order("order-euler-source", "manufactured-euler-1d", &rest.replace(", 1600]", "]")),
        order("order-euler-entropy", "entropy-wave", &rest),
    ]
}
