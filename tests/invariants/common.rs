//! Asks for a study of invariants and reads its answer.

use gridassay::claims::InvariantsRequest;
use gridassay::host::Session;
use gridassay::record::{Invariant, InvariantCheck, InvariantsRecord, Parameters, Study};
use gridassay::scheme::Scheme;
use gridassay::studies::invariants;

/// Every invariant of `equation`, with everything left to the harness.
pub fn request(equation: &str) -> InvariantsRequest {
    InvariantsRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        cells: None,
        courant: None,
        diffusion_number: None,
        invariants: Invariant::ALL.to_vec(),
        tolerance: 0.0,
    }
}

/// The study of `scheme` as asked for.
pub fn study(scheme: Box<dyn Scheme>, request: &InvariantsRequest) -> InvariantsRecord {
    let mut session = Session::in_process(scheme);
    let made = invariants::run(&mut session, request, 1);
    assert_eq!(made.stopped, None);
    let Study::Invariants(record) = made.study else { panic!("another study") };
    record
}

/// The check of one invariant.
pub fn checked(record: &InvariantsRecord, invariant: Invariant) -> &InvariantCheck {
    record.check(invariant).expect("every invariant was asked for")
}

/// What was found of each invariant in `expected`, against it; the message shows the sentence.
pub fn expect(name: &str, record: &InvariantsRecord, expected: &[(Invariant, Option<bool>)]) {
    for (invariant, holds) in expected {
        let check = checked(record, *invariant);
        assert_eq!(check.holds, *holds, "{name}, {}: {}", invariant.name(), check.sentence);
        assert!(check.holds != Some(false) || check.worst.is_some(), "{name}: a violation without a place");
    }
}
