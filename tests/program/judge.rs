//! The whole program as its user meets it: claims in, verdicts, exit status and dossier out.
//!
//! Trusted: textbook orders and limits of the schemes at hand. Every test runs the program itself.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use crate::support;
use gridassay::record::{Results, Study, Verdict, read_results};

/// A fresh folder of this name.
fn folder(name: &str) -> PathBuf {
    let folder = support::scratch().join(name);
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

fn gridassay(folder: &Path, arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_gridassay")).args(arguments).current_dir(folder).output().unwrap()
}

/// Judges the text of a claims file: exit status, results (where there are any), what was said.
fn judge(name: &str, claims: &str) -> (i32, Option<Results>, String) {
    let folder = folder(name);
    std::fs::write(folder.join("claims.toml"), claims).unwrap();
    let output = gridassay(&folder, &["judge", "claims.toml", "--quiet"]);
    let said = format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr));
    (output.status.code().unwrap(), read_results(&folder.join("dossier/results.json")).ok(), said)
}

fn verdicts(results: &Results) -> Vec<Verdict> {
    results.verdicts.iter().map(|record| record.verdict).collect()
}

#[test]
fn the_embedded_claims_are_upheld_and_leave_a_dossier() {
    let folder = folder("embedded");
    let output = gridassay(&folder, &["judge"]);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stdout));
    let results = read_results(&folder.join("dossier/results.json")).unwrap();
    assert_eq!(results.overall, Some(Verdict::Upheld));
    assert!(results.schemes.len() >= 10, "at least ten schemes are judged");
    for file in [
        "index.html",
        "summary.md",
        "junit.xml",
        "figures/modes-1-amplification.svg",
        "figures/order-1-convergence.png",
    ] {
        assert!(folder.join("dossier").join(file).exists(), "{file} is missing");
    }
    // Progress stands on stderr, in plain lines, since this is no terminal.
    let progress = String::from_utf8_lossy(&output.stderr).into_owned();
    assert!(progress.contains(&format!("1/{}", results.verdicts.len())) && !progress.contains('\u{1b}'), "{progress}");
}

#[test]
fn a_false_claim_is_refuted_with_status_1() {
    let (status, results, said) = judge(
        "false-claim",
        "[scheme]\nclassical = \"upwind\"\n[[order]]\nproblem = \"travelling-sine\"\ncells = [80, 160, 320, 640]\ncourant = 0.7\nexpect = 2.0\n",
    );
    assert_eq!((status, verdicts(&results.unwrap())), (1, vec![Verdict::Refuted]), "{said}");
}

#[test]
fn two_levels_are_undecided_with_status_3_and_say_what_would_decide() {
    let (status, results, said) = judge(
        "two-levels",
        "[scheme]\nclassical = \"upwind\"\n[[order]]\nproblem = \"travelling-sine\"\ncells = [80, 160]\ncourant = 0.7\nexpect = 1.0\n",
    );
    assert_eq!((status, verdicts(&results.unwrap())), (3, vec![Verdict::Undecided]), "{said}");
    assert!(said.contains("add levels"), "{said}");
}

#[test]
fn a_ladder_that_nobody_named_is_chosen_and_lengthened_until_it_decides() {
    let (status, results, said) = judge(
        "own-ladder",
        "[scheme]\nclassical = \"lax-friedrichs\"\n[[order]]\nproblem = \"travelling-sine\"\ncourant = 0.3\nexpect = 1.0\n",
    );
    assert_eq!(status, 0, "{said}");
    let results = results.unwrap();
    let Study::Order(record) = &results.studies[0].study else { panic!("an order study") };
    assert!(record.levels.len() > 4, "first order settles late: the four levels of the start do not suffice");
}

#[test]
fn observed_orders_on_smooth_problems_are_the_textbooks() {
    // (scheme, arguments, order in the textbook)
    let table = [
        ("upwind", "--problem travelling-sine --cells 80,160,320,640,1280 --courant 0.7", 1.0),
        ("lax-wendroff", "--problem travelling-sine --cells 32,64,128,256 --courant 0.7", 2.0),
        ("crank-nicolson-advection", "--problem travelling-sine --cells 32,64,128,256,512 --courant 0.7", 2.0),
        ("central4-rk4", "--problem travelling-sine --cells 24,48,96,192 --courant 0.6", 4.0),
        (
            "weno5-ssprk3",
            "--problem travelling-sine --cells 40,80,160,320 --courant 0.4 --refine space --step-power 1.6667",
            5.0,
        ),
        ("poisson-central2", "--problem manufactured-poisson --cells 20,40,80,160", 2.0),
    ];
    for (scheme, arguments, order) in table {
        let mut words: Vec<&str> = vec!["order", "--classical", scheme, "--json"];
        words.extend(arguments.split(' '));
        let output = gridassay(&folder("orders"), &words);
        assert_eq!(output.status.code(), Some(0), "{scheme}: {}", String::from_utf8_lossy(&output.stderr));
        let results: Results = serde_json::from_slice(&output.stdout).unwrap();
        let Study::Order(record) = &results.studies[0].study else { panic!("an order study") };
        let observed = &record.observed["u"]["l2"];
        let [low, high] = observed.interval.unwrap();
        assert!((observed.order.unwrap() - order).abs() < 0.05, "{scheme}: {observed:?}");
        assert!(
            low <= observed.order.unwrap() && observed.order.unwrap() <= high && high - low < 0.2,
            "{scheme}: {observed:?}"
        );
    }
}

#[test]
fn stable_limits_are_within_1e_6_of_theory() {
    // Closed forms: Hirsch 2007; Runge-Kutta limits on the imaginary axis sqrt(3) and 2 sqrt(2) over the largest modified wavenumber,
    // 1 for second-order and 1.37222197980336 for fourth-order central differences (Lele 1992, recomputed).
    let table = [
        ("upwind", "advection", "4", Some(1.0)),
        ("lax-wendroff", "advection", "4", Some(1.0)),
        ("beam-warming", "advection", "4", Some(2.0)),
        ("explicit-euler-diffusion", "diffusion", "4", Some(0.5)),
        ("central2-rk4", "advection", "4", Some(8.0_f64.sqrt())),
        ("central4-rk4", "advection", "4", Some(8.0_f64.sqrt() / 1.37222197980336)),
        ("central2-ssprk3", "advection", "4", Some(3.0_f64.sqrt())),
        ("crank-nicolson-advection", "advection", "10", None),
        ("implicit-euler-advection", "advection", "10", None),
        ("crank-nicolson-diffusion", "diffusion", "10", None),
        ("implicit-euler-diffusion", "diffusion", "10", None),
    ];
    for (scheme, equation, scan_to, limit) in table {
        let words = ["stability", "--equation", equation, "--classical", scheme, "--scan-to", scan_to, "--json"];
        let output = gridassay(&folder("limits"), &words);
        assert_eq!(output.status.code(), Some(0), "{scheme}: {}", String::from_utf8_lossy(&output.stderr));
        let results: Results = serde_json::from_slice(&output.stdout).unwrap();
        let Study::Stability(record) = &results.studies[0].study else { panic!("a stability study") };
        assert!(record.confirmation.iter().all(|run| run.agrees), "{scheme}: {:?}", record.confirmation);
        match (record.stable_up_to, limit) {
            (Some(found), Some(limit)) => assert!((found - limit).abs() < 1e-6, "{scheme}: {found} for {limit}"),
            (found, limit) => assert_eq!(found, limit, "{scheme}"),
        }
    }
}

#[test]
fn the_same_scheme_in_python_c_and_rust_has_the_same_factors_and_verdicts() {
    let schemes = support::schemes();
    let library = support::c_library(&schemes.join("upwind.c"), &[]);
    let claims = format!(
        "[schemes.python]\ncommand = [{:?}, {:?}]\n[schemes.c]\nplugin = {:?}\n[schemes.rust]\nplugin = {:?}\nname = \"upwind\"\n\
         [[modes]]\nequation = \"advection\"\ncourant = 0.6\nsymbol = \"1 - c*(1 - exp(-i*theta))\"\n\
         [[order]]\nproblem = \"travelling-sine\"\ncells = [40, 80, 160]\ncourant = 0.6\nexpect = 2\n\
         [[stability]]\nequation = \"advection\"\ncourant_up_to = 1\nscan_to = 1.5\n",
        support::python(),
        schemes.join("upwind.py"),
        library,
        schemes.join("rust"),
    );
    let (status, results, said) = judge("three-languages", &claims);
    assert_eq!(status, 1, "{said}");
    let results = results.unwrap();
    let of = |scheme: &str| -> (Vec<Verdict>, Vec<[f64; 2]>) {
        let verdicts =
            results.verdicts.iter().filter(|record| record.scheme == scheme).map(|record| record.verdict).collect();
        let study =
            results.studies.iter().find(|study| study.scheme == scheme && study.id.starts_with("modes")).unwrap();
        let Study::Modes(record) = &study.study else { panic!("a modes study") };
        (verdicts, record.modes.iter().map(|mode| mode.amplification).collect())
    };
    let (python, factors) = of("python");
    assert_eq!(python, [Verdict::Refuted, Verdict::Upheld, Verdict::Upheld], "{said}");
    for other in ["c", "rust"] {
        let (verdicts, others) = of(other);
        assert_eq!(verdicts, python, "{other}: {said}");
        assert_eq!(others.len(), factors.len());
        for (a, b) in factors.iter().zip(&others) {
            assert!((a[0] - b[0]).abs() <= 1e-14 && (a[1] - b[1]).abs() <= 1e-14, "{other}: {a:?} {b:?}");
        }
    }
}

#[test]
fn what_is_wrong_with_a_claims_file_is_told_in_one_sentence_with_its_line() {
    let good = "[scheme]\nclassical = \"upwind\"\n[[order]]\nproblem = \"travelling-sine\"\ncells = [20, 40, 80]\nexpect = 1\n";
    // (what is written instead of what, the line, what the sentence says)
    let table = [
        ("expect", "expcet", 6, "unknown field `expcet`"),
        ("expect = 1", "expect = \"one\"", 6, "invalid type"),
        ("expect = 1", "expect = -1", 6, "`expect` is -1; it must be a finite number above zero"),
        ("travelling-sine", "traveling-sine", 4, "travelling-sine"),
        ("upwind", "upwnd", 1, "did you mean `upwind`?"),
        ("[20, 40, 80]", "[40, 20, 80]", 5, "write it from coarse to fine"),
        ("[20, 40, 80]", "[20]", 5, "at least two levels"),
        ("expect = 1", "expect = 1\nnorm = \"l3\"", 7, "there are `l1`, `l2` and `linf`"),
        ("expect = 1", "expect = 1\nfield = \"v\"", 7, "the problem has no field `v`"),
        ("expect = 1", "expect = 1\ncourant = 0.5\nstep = 0.1", 4, "give the step once"),
        ("classical = \"upwind\"", "classical = \"upwind\"\ncommand = [\"x\"]", 1, "exactly one of"),
        ("classical = \"upwind\"", "classical = \"upwind\"\ntime_limit = \"soon\"", 3, "`soon` is no duration"),
        ("[[order]]", "[[oder]]", 3, "unknown field `oder`"),
    ];
    for (number, (from, to, line, sentence)) in table.iter().enumerate() {
        let (status, results, said) = judge(&format!("wrong-{number}"), &good.replacen(from, to, 1));
        assert_eq!(status, 2, "{to}: {said}");
        assert!(results.is_none(), "{to}: nothing was measured");
        assert!(said.contains(&format!("claims.toml:{line}: ")) && said.contains(sentence), "{to}: {said}");
    }
}

#[test]
fn a_negative_diffusivity_is_refused_as_ill_posed() {
    let (status, _, said) = judge(
        "ill-posed",
        "[scheme]\nclassical = \"explicit-euler-diffusion\"\n[[order]]\nproblem = \"decaying-sine\"\nexpect = 2\n[order.parameters]\ndiffusivity = -0.1\n",
    );
    assert_eq!(status, 2, "{said}");
    assert!(said.contains("ill-posed"), "{said}");
}

#[test]
fn a_scheme_that_fails_costs_its_own_claims_and_no_others() {
    let schemes = support::schemes();
    let faulty =
        |fault: &str| format!("command = [{:?}, {:?}, {fault:?}]", support::python(), schemes.join("faulty.py"));
    let claims = format!(
        "[schemes.good]\nclassical = \"lax-wendroff\"\n[schemes.missing]\ncommand = [\"./no-such-program\"]\n[schemes.short]\n{}\n\
         [schemes.wrong_equation]\nclassical = \"explicit-euler-diffusion\"\n\
         [[order]]\nproblem = \"travelling-sine\"\ncells = [32, 64, 128, 256]\ncourant = 0.7\nexpect = 2\n",
        faulty("too short")
    );
    let (status, results, said) = judge("faults", &claims);
    assert_eq!(status, 3, "{said}");
    let results = results.unwrap();
    let verdict = |scheme: &str| results.verdicts.iter().find(|record| record.scheme == scheme).unwrap();
    assert_eq!(verdict("good").verdict, Verdict::Upheld, "{said}");
    for (scheme, sentence) in
        [("missing", "no-such-program"), ("short", "value"), ("wrong_equation", "`diffusion`, not `advection`")]
    {
        assert_eq!(verdict(scheme).verdict, Verdict::Undecided, "{said}");
        assert!(verdict(scheme).reason.contains(sentence), "{scheme}: {}", verdict(scheme).reason);
    }
}

#[test]
fn a_nonlinear_scheme_has_an_approximate_dispersion_relation_and_no_factor_is_claimed_of_it() {
    let (status, results, said) = judge(
        "nonlinear",
        "[scheme]\nclassical = \"weno5-ssprk3\"\n[[modes]]\nequation = \"advection\"\ncourant = 0.3\nphase_speed_error_within = 0.1\n",
    );
    assert_eq!(status, 3, "{said}");
    let results = results.unwrap();
    let Study::Modes(record) = &results.studies[0].study else { panic!("a modes study") };
    assert_eq!(record.linear, Some(false));
    assert!(record.modes.iter().any(|mode| mode.leaked.is_some_and(|leaked| leaked > 1e-6)), "short waves leak");
}

#[test]
fn bounded_runs_of_a_nonlinear_scheme_uphold_no_stable_range() {
    let (status, results, said) = judge(
        "nonlinear-stability",
        "[scheme]\nclassical = \"muscl-minmod\"\n[[stability]]\nequation = \"advection\"\ncourant_up_to = 0.5\n",
    );
    assert_eq!((status, verdicts(&results.unwrap())), (3, vec![Verdict::Undecided]), "{said}");
}

/// The published table of the second worked example of Celik et al. (2008), with a third column of its own.
const FORCES: &str = "cells,drag,lift\n980,10.605,6.0909\n4500,10.725,5.9624\n18000,10.788,6.0042\n";

#[test]
fn a_table_of_values_is_weighed_and_a_bad_one_is_told_with_its_line() {
    let folder = folder("uncertainty");
    std::fs::write(folder.join("forces.csv"), FORCES).unwrap();
    let output = gridassay(&folder, &["uncertainty", "forces.csv", "--dimensions", "2", "--json", "--out", "report"]);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    let results: Results = serde_json::from_slice(&output.stdout).unwrap();
    let Study::Uncertainty(record) = &results.studies[0].study else { panic!("a study of uncertainty") };
    // Printed: p = 0.75 and an index of 1.1 per cent.
    let drag = &record.quantities[0].triples[0];
    assert!((drag.order.unwrap() - 0.75).abs() < 0.005 && (drag.fine_index.unwrap() - 0.011).abs() < 5e-4, "{drag:?}");
    let page = std::fs::read_to_string(folder.join("report/index.html")).unwrap();
    assert!(page.contains("drag") && page.contains("oscillatory"), "the page shows what the terminal shows");
    let shown = gridassay(&folder, &["uncertainty", "forces.csv", "--dimensions", "2"]);
    let shown = String::from_utf8_lossy(&shown.stdout).into_owned();
    assert!(shown.contains("apparent order 0.75") && shown.contains("oscillatory"), "{shown}");
    std::fs::write(folder.join("forces.csv"), FORCES.replace("10.725", "ten")).unwrap();
    let output = gridassay(&folder, &["uncertainty", "forces.csv"]);
    assert_eq!(output.status.code(), Some(2));
    let said = String::from_utf8_lossy(&output.stderr).into_owned();
    assert!(said.contains("forces.csv:3: `ten` in the column `drag` is no finite number"), "{said}");
}

#[test]
fn a_rate_is_integrated_where_the_claim_says_so_and_an_unknown_operation_is_told_with_its_line() {
    let claims = |operation: &str| {
        format!(
            "[scheme]\nclassical = \"central4-rk4\"\n[[order]]\nproblem = \"travelling-sine\"\ncells = [24, 48, 96, 192]\noperation = \"{operation}\"\nexpect = 4\n"
        )
    };
    let (status, results, said) = judge("rate", &claims("rate"));
    assert_eq!(status, 0, "{said}");
    let results = results.unwrap();
    let Study::Order(record) = &results.studies[0].study else { panic!("an order study") };
    assert_eq!((record.operation.as_str(), record.levels[0].steps), ("rate", None));
    let control = record.control.as_ref().expect("an upheld claim has a control");
    assert!(control.smallest_refuted.is_some() && results.verdicts[0].reason.contains("added error of order 3"));
    let (status, _, said) = judge("no-such-operation", &claims("leap"));
    assert_eq!(status, 2, "{said}");
    assert!(said.contains("claims.toml:6") && said.contains("`advance`, `march` and `rate`"), "{said}");
}
