//! Claims in the words of the trade.

use crate::claims::{ClaimKind, InvariantsClaim, ModesClaim, OperatorClaim, OrderClaim, StabilityClaim};
use crate::record::{Claimed, StepNumber};

/// A claim as a sentence without its scheme.
pub fn claim(kind: &ClaimKind) -> String {
    match kind {
        ClaimKind::Order(claim) => order(claim),
        ClaimKind::Modes(claim) => modes(claim),
        ClaimKind::Stability(claim) => stability(claim),
        ClaimKind::Invariants(claim) => invariants(claim),
        ClaimKind::Operator(claim) => operator(claim),
    }
}

/// The number in a claim; `None` where it is a formula or has none.
pub fn claimed(kind: &ClaimKind) -> Option<Claimed> {
    let bare = |quantity: &str, value| Claimed {
        quantity: quantity.to_owned(),
        value,
        tolerance: None,
        field: None,
        norm: None,
    };
    match kind {
        ClaimKind::Order(claim) => Some(Claimed {
            tolerance: Some(claim.tolerance),
            field: claim.field.clone(),
            norm: Some(claim.norm.clone()),
            ..bare("order", claim.expect)
        }),
        ClaimKind::Modes(claim) => {
            let phase = claim.phase_speed_error_within.map(|within| bare("phase_speed_error", within));
            let damping = claim.damping_error_within.map(|within| bare("damping_error", within));
            phase.or(damping).or(claim.formal_order.map(|order| bare("formal_order", order as f64)))
        }
        ClaimKind::Stability(claim) => Some(bare("stable_up_to", claim.up_to)),
        ClaimKind::Invariants(_) => None,
        ClaimKind::Operator(claim) => {
            let radius = claim.spectral_radius_at_most.map(|bound| bare("spectral_radius", bound));
            radius.or(claim.transient_growth_at_most.map(|bound| bare("transient_growth", bound)))
        }
    }
}

fn order(claim: &OrderClaim) -> String {
    let of = claim.field.as_ref().map_or_else(String::new, |field| format!(" of `{field}`"));
    let problem = &claim.request.problem;
    let refined = if problem.is_steady() { "space" } else { claim.request.refine.word() };
    format!("order {} in {}{of} on {}, refined in {refined}", claim.expect, norm(&claim.norm), problem.name())
}

/// A norm as it is written in papers.
pub fn norm(name: &str) -> &str {
    match name {
        "l1" => "L1",
        "l2" => "L2",
        "linf" => "Linf",
        other => other,
    }
}

fn modes(claim: &ModesClaim) -> String {
    let request = &claim.request;
    let from = claim.from_points_per_wavelength;
    let mut parts = Vec::new();
    if let Some(within) = claim.phase_speed_error_within {
        parts.push(format!("phase speed within {within} from {from} points per wavelength"));
    }
    if let Some(within) = claim.damping_error_within {
        parts.push(format!("damping within {within} a step from {from} points per wavelength"));
    }
    if let Some(order) = claim.formal_order {
        parts.push(format!("formal order {order}"));
    }
    if let Some(symbol) = &claim.symbol {
        parts.push(format!("G = {symbol}"));
    }
    let courant = request.courant.map(|c| format!(" at Courant number {c}"));
    let diffusion = request.diffusion_number.map(|r| format!(" at diffusion number {r}"));
    let at: String = courant.into_iter().chain(diffusion).collect();
    format!("{} for {}{at}", parts.join(" and "), request.equation)
}

fn stability(claim: &StabilityClaim) -> String {
    let number = claim.request.number.map_or("step", StepNumber::words);
    let exactly = if claim.exactly { " and no further" } else { "" };
    let with = claim.request.integrator.as_ref().map_or_else(String::new, |name| format!(" with {name}"));
    format!("stable up to {number} {}{exactly}{with} for {}", claim.up_to, claim.request.equation)
}

fn operator(claim: &OperatorClaim) -> String {
    let radius = claim.spectral_radius_at_most.map(|bound| format!("spectral radius of a step at most {bound}"));
    let transient = claim.transient_growth_at_most.map(|bound| format!("growth on the way at most {bound}"));
    let parts: Vec<String> = radius.into_iter().chain(transient).collect();
    let with = claim.request.integrator.as_ref().map_or_else(String::new, |name| format!(" with {name}"));
    format!("{} for {} between boundaries{with}", parts.join(" and "), claim.request.equation)
}

fn invariants(claim: &InvariantsClaim) -> String {
    let words: Vec<&str> = claim.request.invariants.iter().map(|invariant| invariant.words()).collect();
    format!("{} for {}", words.join(", "), claim.request.equation)
}
