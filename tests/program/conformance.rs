//! One checker for every way to a scheme: in this process, a plugin's child, an executable with text and with base64.
//!
//! Trusted: the scheme in this process, called as the trait says, with a harness whose answers are formulas. Every other way has to
//! give the same numbers to the last bit and the same refusals. `upwind` is a scheme as people write it, in Rust, C and Python;
//! `everything` folds all that it is told into its answers, so that nothing can be lost on the way unseen.

#[path = "../schemes/rust/src/everything.rs"]
mod everything;
#[path = "../schemes/rust/src/upwind.rs"]
mod upwind;

use crate::support::{
    self, Formulas, advection, c_library, command, periodic, plugin, python, rust_executable, rust_plugin, schemes,
};
use gridassay::host::{HostError, Route, Session};
use gridassay_scheme::{Advance, BoundaryKind, Callback, Case, Fields, Grid, March, Parameter, SchemeError, SideKinds};

/// What was answered, in a form that can be compared: bits of numbers, words of refusals.
#[derive(Debug, PartialEq)]
enum Told {
    Numbers(String, Vec<Vec<u64>>),
    Refused(String, SchemeError),
}

/// Bits of a value; values that are not finite count as one, since text has no other word for them than null.
fn bits(value: f64) -> u64 {
    if value.is_finite() { value.to_bits() } else { f64::NAN.to_bits() }
}

fn told(what: &str, outcome: Result<Fields, HostError>) -> Told {
    match outcome {
        Ok(fields) => {
            Told::Numbers(what.to_owned(), fields.iter().map(|f| f.iter().map(|v| bits(*v)).collect()).collect())
        }
        Err(HostError::Refused(error)) => Told::Refused(what.to_owned(), error),
        Err(error) => panic!("{what}: {error}"),
    }
}

/// Asks everything that the contract knows of one case.
fn conversation(session: &mut Session, case: &Case, lengths: &[usize], levels: usize, story: &mut Vec<Told>) {
    let mut harness = Formulas { lengths: lengths.to_vec() };
    let nodes = session.prepare(case, &mut harness);
    story.push(told("prepare", nodes.map(|n| n.map_or(Vec::new(), |n| vec![n.offsets, n.weights]))));
    for (time, step, steps) in [(0.0, 0.013, 3), (1.7, 0.05, 1), (0.2, 0.0, 0), (0.2, 1.5, 1), (2000.0, 0.01, 1)] {
        let mut state = support::state(lengths);
        let mut earlier: Vec<Fields> = (1..levels).map(|_| support::state(lengths)).collect();
        let request = Advance { time, step, steps, state: &mut state, earlier: &mut earlier };
        let outcome = session.advance(request, &mut harness);
        story.push(told("advance", outcome.map(|()| state.into_iter().chain(earlier.into_iter().flatten()).collect())));
    }
    for tolerance in [None, Some(1e-3)] {
        let mut state = support::state(lengths);
        let request = March { time: 0.3, until: 0.9, state: &mut state, tolerance };
        let outcome = session.march(request, &mut harness);
        story.push(told("march", outcome.map(|steps| state.into_iter().chain([vec![steps as f64]]).collect())));
    }
    let state = support::state(lengths);
    story.push(told("rate", session.rate(0.4, &state, &mut harness)));
    let solved = session.solve(&state, &mut harness).map(|found| {
        let known = vec![found.iterations.map_or(-1.0, |n| n as f64), found.residual.unwrap_or(-1.0)];
        found.state.into_iter().chain([known]).collect()
    });
    story.push(told("solve", solved));
    let mut broken = support::state(lengths);
    broken[0][1] = f64::NAN;
    broken[0][2] = f64::INFINITY;
    story.push(told("rate of what is not finite", session.rate(0.4, &broken, &mut harness)));
}

fn upwind_story(session: &mut Session) -> Vec<Told> {
    let mut story = Vec::new();
    let inflow = [BoundaryKind::Value, BoundaryKind::None];
    for case in [periodic(16), advection(9, 1.3, inflow, false), advection(21, 0.4, inflow, true), periodic(3)] {
        let lengths = [case.grid.cells[0]];
        conversation(session, &case, &lengths, 1, &mut story);
    }
    story
}

fn everything_story(session: &mut Session) -> Vec<Told> {
    let mut story = Vec::new();
    let mut line = Case { equation: "everything".to_owned(), source: true, ..periodic(5) };
    line.boundaries = vec![[SideKinds::Same(BoundaryKind::None), SideKinds::Same(BoundaryKind::None)]];
    conversation(session, &line, &[5, 6], 3, &mut story);
    let by_field = [("p".to_owned(), BoundaryKind::Gradient), ("flux".to_owned(), BoundaryKind::Value)].into();
    let mut plane = Case {
        dimensions: 2,
        parameters: [
            ("density".to_owned(), Parameter::Scalar(1.17)),
            ("velocity".to_owned(), Parameter::Vector(vec![0.31, -0.77])),
        ]
        .into(),
        coefficients: vec!["wind".to_owned(), "bed".to_owned()],
        grid: Grid {
            edges: Some(vec![vec![0.0, 0.25, 0.4, 1.0], vec![-1.0, 0.5, 2.0]]),
            ..Grid::uniform(&[3, 2], &[0.0, -1.0], &[1.0, 2.0])
        },
        boundaries: vec![
            [SideKinds::ByField(by_field), SideKinds::Same(BoundaryKind::Value)],
            [SideKinds::Same(BoundaryKind::Periodic), SideKinds::Same(BoundaryKind::Periodic)],
        ],
        steady: vec![Callback::Boundary],
        ..line.clone()
    };
    conversation(session, &plane, &[6, 8], 3, &mut story);
    let vertex = |scale: f64| (0..12).map(|k| (scale * f64::from(k)).sin()).collect();
    plane.grid.edges = None;
    plane.grid.vertices = Some(vec![vertex(0.3), vertex(1.1)]);
    conversation(session, &plane, &[6, 8], 3, &mut story);
    let elements = Case { parameters: Default::default(), ..periodic(4) };
    conversation(session, &elements, &[12], 1, &mut story);
    story
}

/// The in-process story is trusted; the others must tell the same one, twice: a session can be used again.
fn all_tell_the_same(trusted: &mut Session, story: fn(&mut Session) -> Vec<Told>, routes: Vec<(&str, Route)>) {
    let expected = story(trusted);
    let numbers = expected.iter().filter(|told| matches!(told, Told::Numbers(..))).count();
    assert!(numbers > expected.len() / 3, "a story of refusals proves nothing");
    for (name, route) in routes {
        let mut session = Session::open(&support::source(route)).unwrap_or_else(|error| panic!("{name}: {error}"));
        let early = session.rate(0.0, &[vec![1.0]], &mut Formulas { lengths: vec![1] });
        assert!(matches!(early, Err(HostError::Refused(SchemeError::NotPrepared))), "{name}");
        assert_eq!(session.description().offers, trusted.description().offers, "{name}");
        for time in 1..=2 {
            let found = story(&mut session);
            for (found, expected) in found.iter().zip(&expected) {
                // A refusal is the same kind of refusal; its words may be the route's own where an operation is missing.
                if let (
                    Told::Refused(_, a @ SchemeError::NotOffered(_)),
                    Told::Refused(_, SchemeError::NotOffered(_)),
                ) = (found, expected)
                {
                    assert!(!a.message().is_empty());
                    continue;
                }
                assert_eq!(found, expected, "{name}, time {time}; its log:\n{}", session.stderr_tail());
            }
            assert_eq!(found.len(), expected.len());
        }
    }
}

#[test]
fn a_scheme_of_python_c_and_rust_gives_the_same_bits_on_every_route() {
    let mut trusted = Session::in_process(Box::new(upwind::Upwind::default()));
    let script = schemes().join("upwind.py").to_str().unwrap().to_owned();
    let routes = vec![
        ("C library", plugin(c_library(&schemes().join("upwind.c"), &[]))),
        ("Rust plugin crate", rust_plugin("upwind")),
        ("Rust executable, text", command(&[&rust_executable(), "upwind"])),
        ("Rust executable, base64", command(&[&rust_executable(), "upwind", "base64"])),
    ];
    all_tell_the_same(&mut trusted, upwind_story, routes);
    // Python's script knows no errors: it is asked what it offers.
    for words in [vec![python(), script.clone()], vec![python(), script, "base64".to_owned()]] {
        let mut session = Session::open(&support::source(Route::Command(words))).unwrap();
        let inflow = [BoundaryKind::Value, BoundaryKind::None];
        for case in [periodic(16), advection(21, 0.4, inflow, true)] {
            let lengths = [case.grid.cells[0]];
            let ask = |session: &mut Session| {
                let mut harness = Formulas { lengths: lengths.to_vec() };
                session.prepare(&case, &mut harness).unwrap();
                let (mut state, rate) = (support::state(&lengths), support::state(&lengths));
                let request = Advance { time: 0.1, step: 0.013, steps: 5, state: &mut state, earlier: &mut [] };
                session.advance(request, &mut harness).unwrap();
                state.extend(session.rate(0.4, &rate, &mut harness).unwrap());
                told("upwind", Ok(state))
            };
            assert_eq!(ask(&mut session), ask(&mut trusted));
        }
    }
}

#[test]
fn a_scheme_that_uses_everything_gives_the_same_bits_on_every_route() {
    let mut trusted = Session::in_process(Box::new(everything::Everything::default()));
    let routes = vec![
        ("Rust plugin crate", rust_plugin("everything")),
        ("Rust executable, text", command(&[&rust_executable(), "everything"])),
        ("Rust executable, base64", command(&[&rust_executable(), "everything", "base64"])),
    ];
    all_tell_the_same(&mut trusted, everything_story, routes);
}

#[test]
fn a_changed_last_bit_is_seen() {
    // The checker itself must be able to fail: one unit in the last place of one value of one case.
    let mut trusted = Session::in_process(Box::new(upwind::Upwind::default()));
    let (one, mut other) = (upwind_story(&mut trusted), upwind_story(&mut trusted));
    assert!(one == other);
    let changed = other.iter_mut().find_map(|told| match told {
        Told::Numbers(_, fields) if !fields.is_empty() => Some(&mut fields[0][0]),
        _ => None,
    });
    *changed.unwrap() += 1;
    assert!(one != other);
}

#[test]
fn the_identity_names_what_was_run() {
    let library = c_library(&schemes().join("upwind.c"), &[]);
    let session = Session::open(&support::source(plugin(library.clone()))).unwrap();
    let identity = session.identity();
    assert_eq!((identity.name.as_str(), identity.version.as_str(), identity.route), ("upwind", "1.0", "plugin"));
    // Checked against the system's own tool.
    let sum = std::process::Command::new("sha256sum").arg(&library).output().unwrap();
    assert!(String::from_utf8(sum.stdout).unwrap().starts_with(&identity.digest));
    assert_eq!(identity.flush_to_zero, Some(false));
}

#[test]
fn a_library_that_flushes_to_zero_is_reported_and_changes_nothing() {
    let library = c_library(&schemes().join("upwind.c"), &["-Ofast", "-ffp-contract=off"]);
    let mut session = Session::open(&support::source(plugin(library))).unwrap();
    if session.identity().flush_to_zero == Some(false) {
        // Compilers since gcc 13 leave the mode alone when they link a shared library.
        return;
    }
    let mut harness = Formulas { lengths: vec![4] };
    session.prepare(&periodic(4), &mut harness).unwrap();
    let mut state = vec![vec![f64::MIN_POSITIVE / 8.0; 4]];
    let request = Advance { time: 0.0, step: 0.0, steps: 1, state: &mut state, earlier: &mut [] };
    session.advance(request, &mut harness).unwrap();
    assert_eq!(state[0], [f64::MIN_POSITIVE / 8.0; 4]);
}
