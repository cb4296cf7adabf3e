//! The table is complete and in order.

use gridassay_flawed::{flaws, names, scheme};

#[test]
fn names_are_unique_and_in_kebab_case_and_lead_to_their_schemes() {
    let mut all = names();
    assert!(all.iter().all(|name| name.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-')));
    let count = all.len();
    all.sort_unstable();
    all.dedup();
    assert_eq!(all.len(), count);
    assert!(all.iter().all(|name| scheme(name).expect("listed").describe().name == *name));
}

#[test]
fn at_least_sixty_are_to_be_exposed_and_some_are_not() {
    let exposed = flaws().iter().filter(|flaw| !flaw.exposed_by.is_empty()).count();
    assert!(exposed >= 60, "{exposed}");
    assert!(flaws().len() > exposed);
}

#[test]
fn every_row_says_what_is_wrong_and_why_it_shows() {
    for flaw in flaws() {
        assert!(flaw.mistake.ends_with('.') && flaw.mistake.len() > 20, "{}", flaw.name);
        assert!(flaw.why.len() > 10 && !flaw.why.ends_with('.'), "{}", flaw.name);
    }
}

#[test]
fn a_flawed_scheme_offers_no_more_than_its_twin() {
    for flaw in flaws() {
        let (twin, flawed) = (flaw.right_twin().describe().offers, flaw.scheme().describe().offers);
        for offer in flawed {
            let held = twin.iter().any(|right| {
                right.equation == offer.equation
                    && right.dimensions == offer.dimensions
                    && right.values == offer.values
                    && right.placement == offer.placement
                    && offer.operations.iter().all(|operation| right.has(*operation))
                    && offer.boundaries.iter().all(|kind| right.boundaries.contains(kind))
            });
            assert!(held, "{}: {}", flaw.name, offer.equation);
        }
    }
}
