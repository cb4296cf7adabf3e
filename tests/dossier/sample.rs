//! Results to lay out, made from closed forms: what is shown is believable, and nothing is run.

use std::collections::BTreeMap;
use std::f64::consts::{PI, TAU};

use gridassay::record::*;
use num_complex::Complex64;

/// A linear one-step scheme for advection, by its amplification factor.
pub struct Scheme {
    pub name: &'static str,
    pub order: f64,
    pub stable_up_to: f64,
    /// G(theta, Courant number).
    pub factor: fn(f64, f64) -> Complex64,
}

/// First-order upwind, Lax-Wendroff and Beam-Warming: textbook factors (Hirsch, 2007, chapter 7).
pub const SCHEMES: [Scheme; 3] = [
    Scheme {
        name: "upwind",
        order: 1.0,
        stable_up_to: 1.0,
        factor: |theta, c| 1.0 - c * (1.0 - Complex64::cis(-theta)),
    },
    Scheme {
        name: "lax-wendroff",
        order: 2.0,
        stable_up_to: 1.0,
        factor: |theta, c| Complex64::new(1.0 - c * c * (1.0 - theta.cos()), -c * theta.sin()),
    },
    Scheme {
        name: "beam-warming",
        order: 2.0,
        stable_up_to: 2.0,
        factor: |theta, c| {
            let z = Complex64::cis(-theta);
            1.0 - c * (3.0 - 4.0 * z + z * z) / 2.0 + c * c * (1.0 - 2.0 * z + z * z) / 2.0
        },
    },
];

/// The modes of `scheme` on `cells` cells at Courant number `c`.
pub fn modes(scheme: &Scheme, cells: usize, c: f64) -> ModesRecord {
    let half = cells as i64 / 2;
    let mode = |i: i64| {
        let theta = i as f64 * TAU / cells as f64;
        let g = (scheme.factor)(theta, c);
        let exact = Complex64::cis(-c * theta);
        // The factors of these schemes never turn by more than half a turn against the exact one.
        let error = (g * exact.conj()).arg();
        let ratio = (theta != 0.0).then(|| 1.0 - error / (c * theta));
        ModeRecord {
            theta: vec![theta],
            branch: "u".into(),
            amplification: [g.re, g.im],
            exact: Some([exact.re, exact.im]),
            modulus: g.norm(),
            exact_modulus: Some(exact.norm()),
            damping_error: finite(g.norm() - exact.norm()),
            phase_error: finite(error),
            phase_speed_ratio: ratio.and_then(finite),
            group_speed_ratio: None,
            points_per_wavelength: (theta != 0.0).then(|| TAU / theta.abs()),
            damping_error_per_period: None,
            phase_error_per_period: None,
            share: None,
            leaked: None,
        }
    };
    ModesRecord {
        equation: "advection".into(),
        parameters: Parameters::from([("velocity".into(), vec![1.3])]),
        cells: vec![cells],
        courant: Some(c),
        diffusion_number: None,
        step: c / 1.3 / cells as f64,
        linear: Some(true),
        linearity: Some(Linearity { superposition: 2.3e-16, shift: 1.9e-16, time: 0.0, allowed: 1.4e-14 }),
        uncertainty: Some(2.3e-16),
        modes: (1 - half..=half).map(mode).collect(),
        amplitude_dependence: None,
        claimed_symbol: None,
        stencil: Vec::new(),
        modified_equation: Some(ModifiedEquation {
            formal_order: Some(scheme.order as usize),
            terms: vec![(scheme.order as usize + 1, -0.083_21)],
        }),
        resolution: Vec::new(),
        directions: Vec::new(),
        worst_directions: Vec::new(),
        semi_discrete: None,
    }
}

/// A ladder whose errors are the closed form's own at the first wavelength.
pub fn order(scheme: &Scheme, cells: &[usize], c: f64) -> OrderRecord {
    let time = 0.7;
    let level = |&cells: &usize| {
        let h = 1.0 / cells as f64;
        let steps = (time * 1.3 / (c * h)).round();
        let error = ((scheme.factor)(TAU * h, c).powf(steps) - Complex64::cis(-c * TAU * h * steps)).norm();
        // Norms of a sine of amplitude `error`.
        let norms = Norms { l1: Some(error * 2.0 / PI), l2: Some(error / 2f64.sqrt()), linf: Some(error) };
        Level {
            cells: vec![cells],
            h,
            step: Some(c * h / 1.3),
            steps: Some(steps as usize),
            errors: BTreeMap::from([("u".into(), norms)]),
            floor: BTreeMap::from([("u".into(), Norms { l1: Some(1e-15), l2: Some(1e-15), linf: Some(3e-15) })]),
            ..Level::default()
        }
    };
    let levels: Vec<_> = cells.iter().map(level).collect();
    let observed = Norms::NAMES.map(|norm| {
        let error = |level: &Level| level.errors["u"].get(norm);
        let slopes = levels.windows(2).map(|pair| finite((error(&pair[0])? / error(&pair[1])?).log2()));
        let slopes: Vec<_> = slopes.collect();
        let order = slopes.last().copied().flatten().filter(|_| slopes.len() > 1);
        let observed = Observed {
            order,
            interval: order.map(|order| [order - 0.013_7, order + 0.011_9]),
            note: order
                .is_none()
                .then(|| "two levels give one slope, and one slope cannot show that it has settled".into()),
            used: (0..levels.len()).collect(),
            slopes,
        };
        (norm.to_owned(), observed)
    });
    OrderRecord {
        equation: "advection".into(),
        problem: "travelling-sine".into(),
        parameters: Parameters::from([("velocity".into(), vec![1.3])]),
        refine: Refinement::SpaceTime,
        operation: "advance".into(),
        times: Some([0.0, time]),
        courant: Some(c),
        diffusion_number: None,
        step_power: Some(1.0),
        solution_size: BTreeMap::from([(
            "u".into(),
            Norms { l1: Some(2.0 / PI), l2: Some(0.5f64.sqrt()), linf: Some(1.0) },
        )]),
        observed: BTreeMap::from([("u".into(), BTreeMap::from(observed))]),
        levels,
        ..OrderRecord::default()
    }
}

/// The scan of a scheme's largest growth.
pub fn stability(scheme: &Scheme) -> StabilityRecord {
    let growth = |c: f64| (0..=180).map(|i| (scheme.factor)(f64::from(i) * PI / 180.0, c).norm()).fold(0.0, f64::max);
    let limit = scheme.stable_up_to;
    StabilityRecord {
        equation: "advection".into(),
        parameters: Parameters::from([("velocity".into(), vec![1.3])]),
        cells: vec![64, 96],
        number: StepNumber::Courant,
        held: None,
        stable_up_to: Some(limit),
        scanned_up_to: 4.0,
        intervals: vec![[0.0, limit]],
        worst_theta: Some(PI),
        weak_growth: None,
        by_runs_alone: false,
        refused_from: None,
        scan: (1..=200).map(|i| (f64::from(i) / 50.0, finite(growth(f64::from(i) / 50.0)))).collect(),
        confirmation: vec![
            Confirmation { number: limit * 0.99, steps: 2000, growth: Some(0.713), agrees: true },
            Confirmation { number: limit * 1.01, steps: 2000, growth: None, agrees: true },
        ],
        growth_at_limit: None,
        predicted: Vec::new(),
        map: Vec::new(),
    }
}

fn study(id: &str, scheme: &str, study: Study) -> StudyRecord {
    StudyRecord { id: id.into(), scheme: scheme.into(), study, stopped: None, notes: Vec::new() }
}

fn verdict(claim: &str, scheme: &str, text: &str, verdict: Verdict, reason: &str, evidence: &[&str]) -> VerdictRecord {
    VerdictRecord {
        claim: claim.into(),
        scheme: scheme.into(),
        text: text.into(),
        claimed: None,
        verdict,
        reason: reason.into(),
        decided_by: None,
        evidence: evidence.iter().map(|id| (*id).into()).collect(),
    }
}

fn claimed(quantity: &str, value: f64, norm: Option<&str>) -> Option<Claimed> {
    let norm = norm.map(Into::into);
    Some(Claimed { quantity: quantity.into(), value, tolerance: Some(0.1), field: None, norm })
}

fn scheme_record(name: &str) -> SchemeRecord {
    SchemeRecord {
        name: name.into(),
        version: "0.1.0".into(),
        route: "classical".into(),
        digest: Some("9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08".into()),
        fault: None,
    }
}

fn frame(scheme: SchemeRecord, studies: Vec<StudyRecord>, verdicts: Vec<VerdictRecord>) -> Results {
    Results {
        format: FORMAT.into(),
        version: VERSION,
        scheme,
        schemes: BTreeMap::new(),
        run: RunRecord {
            gridassay: "0.1.0".into(),
            command_line: ["gridassay", "judge", "my claims.toml"].map(Into::into).to_vec(),
            claims: Some(ClaimsRecord {
                path: "my claims.toml".into(),
                digest: "2c26b46b68ffc68ff99b453c1d30413413422d706483bfa0f98a5e886266e7ae".into(),
            }),
            seed: 20_251,
            started: "2026-11-30T08:15:00Z".into(),
            seconds: 3.482,
        },
        overall: Verdict::overall(verdicts.iter().map(|verdict| verdict.verdict)),
        studies,
        verdicts,
    }
}

/// One scheme with an upheld, a refuted and an undecided claim, and a study that was stopped.
pub fn one_scheme() -> Results {
    let scheme = &SCHEMES[1];
    let mut stopped = study("order-3", scheme.name, Study::Order(order(scheme, &[32], 0.5)));
    stopped.stopped = Some("The scheme ended with signal 11 on 64 cells, after 12 of 45 steps.".into());
    let mut noted = study("order-1", scheme.name, Study::Order(order(scheme, &[32, 64, 128, 256], 0.5)));
    noted
        .notes
        .push("The velocity is positive throughout: an upwind switch that never switches would not be seen.".into());
    let studies = vec![
        noted,
        study("order-2", scheme.name, Study::Order(order(scheme, &[32, 64], 0.5))),
        stopped,
        study("modes-1", scheme.name, Study::Modes(modes(scheme, 64, 0.5))),
        study("stability-1", scheme.name, Study::Stability(stability(scheme))),
    ];
    let mut verdicts = vec![
        verdict(
            "order-1",
            scheme.name,
            "Order 2 in L2 on travelling-sine, space and time refined together",
            Verdict::Upheld,
            "The observed order lies within 1.99 to 2.01, above 2 less the tolerance 0.1.",
            &["order-1"],
        ),
        verdict(
            "order-2",
            scheme.name,
            "Order 3 in L2 on travelling-sine",
            Verdict::Refuted,
            "The whole interval of the observed order, 1.99 to 2.01, lies below 3 less the tolerance 0.1.",
            &["order-1"],
        ),
        verdict(
            "order-3",
            scheme.name,
            "Order 2 in L2 on travelling-sine, two levels",
            Verdict::Undecided,
            "Two levels give one slope, and one slope cannot show that it has settled.",
            &["order-2"],
        ),
        verdict(
            "order-4",
            scheme.name,
            "Order 2 on 32, 64, 128 cells",
            Verdict::Undecided,
            "The scheme crashed.",
            &["order-3"],
        ),
        verdict(
            "modes-1",
            scheme.name,
            "Phase speed within 1 % from 20 cells per wavelength",
            Verdict::Upheld,
            "The largest error of the phase speed from 20 cells per wavelength on is 0.0122.",
            &["modes-1"],
        ),
        verdict(
            "stability-1",
            scheme.name,
            "Stable up to Courant number 1",
            Verdict::Upheld,
            "Stable up to Courant number 1.",
            &["stability-1"],
        ),
    ];
    verdicts[0].claimed = claimed("order", 2.0, Some("l2"));
    verdicts[2].claimed = claimed("order", 2.0, Some("l2"));
    verdicts[2].decided_by = Some("A third level, of 128 cells, would decide it.".into());
    verdicts[5].claimed = claimed("stable_up_to", 1.0, None);
    frame(scheme_record(scheme.name), studies, verdicts)
}

/// `count` schemes with three studies and three claims each.
pub fn many_schemes(count: usize) -> Results {
    let (mut studies, mut verdicts, mut schemes) = (Vec::new(), Vec::new(), BTreeMap::new());
    for index in 0..count {
        let scheme = &SCHEMES[index % SCHEMES.len()];
        let name = &*format!("{}-{}", scheme.name, index + 1);
        let id = |kind: &str| format!("{kind}-{}", index + 1);
        let mut ladder = order(scheme, &[32, 64, 128, 256], 0.5);
        for level in &mut ladder.levels {
            // An invented machine: so long for a cell and a step, longer from scheme to scheme.
            let work = (level.cells[0] * level.steps.unwrap_or(0)) as f64;
            level.seconds = Some(work * 2.3e-8 * (1.0 + 0.17 * index as f64));
        }
        studies.push(study(&id("order"), name, Study::Order(ladder)));
        studies.push(study(&id("modes"), name, Study::Modes(modes(scheme, 256, 0.5))));
        studies.push(study(&id("stability"), name, Study::Stability(stability(scheme))));
        let outcome = if index % 5 == 3 { Verdict::Refuted } else { Verdict::Upheld };
        verdicts.push(verdict(
            &id("order"),
            name,
            "Order 2 in L2 on travelling-sine",
            outcome,
            "As measured.",
            &[&id("order")],
        ));
        verdicts.push(verdict(&id("modes"), name, "Never amplifies", Verdict::Upheld, "As measured.", &[&id("modes")]));
        let outcome = if index % 7 == 2 { Verdict::Undecided } else { Verdict::Upheld };
        verdicts.push(verdict(
            &id("stability"),
            name,
            "Stable up to Courant number 1",
            outcome,
            "As scanned.",
            &[&id("stability")],
        ));
        schemes.insert(name.to_owned(), scheme_record(name));
    }
    let mut results = frame(scheme_record("classical schemes"), studies, verdicts);
    results.schemes = schemes;
    results
}

/// What a hostile or careless scheme may put into its names and sentences.
pub const HOSTILE: &str =
    "<script>alert(1)</script>\u{1b}[31m\u{0}|`x`\n\"'&amp; 100% $a_1^2$ \\input{x} #1 @all \u{202e}x";

/// Results in which every text is hostile, numbers are missing, and nothing is measured twice.
pub fn hostile() -> Results {
    let scheme = &SCHEMES[0];
    let text = HOSTILE.to_owned();
    let mut order = order(scheme, &[16, 32, 64], 0.5);
    order.problem = text.clone();
    order.equation = text.clone();
    order.operation = text.clone();
    let norms = Norms { l1: Some(0.1), l2: None, linf: None };
    for level in &mut order.levels {
        level.errors.insert(text.clone(), norms);
        level.note = Some(text.clone());
    }
    order.levels[1].errors.insert("u".into(), Norms::default());
    order.observed.insert(
        text.clone(),
        BTreeMap::from([("l1".into(), Observed { note: Some(text.clone()), ..Observed::default() })]),
    );
    order.parameters.insert(text.clone(), vec![1.0, -2.0]);
    let mut modes = modes(scheme, 16, 0.5);
    modes.linear = None;
    for mode in &mut modes.modes[..4] {
        mode.branch = text.clone();
        mode.exact = None;
        mode.exact_modulus = None;
        mode.damping_error = None;
    }
    let mut stability = stability(scheme);
    stability.stable_up_to = None;
    stability.intervals.clear();
    stability.scan[3].1 = None;
    let mut studies = vec![
        study(&text, &text, Study::Order(order)),
        study(&text, &text, Study::Modes(modes)),
        study("stability-1", &text, Study::Stability(stability)),
    ];
    for study in &mut studies {
        study.stopped = Some(text.clone());
        study.notes.push(text.clone());
    }
    let mut verdicts = vec![verdict(&text, &text, &text, Verdict::Undecided, &text, &[&text, "not there"])];
    verdicts[0].decided_by = Some(text.clone());
    let mut record = scheme_record(&text);
    (record.version, record.route, record.fault) = (text.clone(), text.clone(), Some(text.clone()));
    let mut results = frame(record, studies, verdicts);
    results.run.command_line = vec!["gridassay".into(), text.clone()];
    results.run.started = text;
    results
}
