//! Claims about what the tests around measure, through the program itself: both outcomes of each.

use std::path::Path;
use std::process::Command;

use gridassay::record::{Results, Verdict, read_results};

fn judged(name: &str, claims: &str) -> Results {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("fourier").join(name);
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    std::fs::write(folder.join("claims.toml"), claims).unwrap();
    let mut program = Command::new(env!("CARGO_BIN_EXE_gridassay"));
    let output = program.args(["judge", "claims.toml", "--quiet"]).current_dir(&folder).output().unwrap();
    assert!(folder.join("dossier/index.html").exists(), "{}", String::from_utf8_lossy(&output.stderr));
    read_results(&folder.join("dossier/results.json")).unwrap()
}

#[test]
fn a_formal_order_is_held_against_the_modified_equation() {
    let claim = |order: usize| format!("[[modes]]\nequation = \"advection\"\ncourant = 0.4\nformal_order = {order}\n");
    let scheme = "[scheme]\nclassical = \"lax-wendroff\"\n";
    let results = judged("formal-order", &format!("{scheme}{}{}{}", claim(1), claim(2), claim(3)));
    let verdicts: Vec<Verdict> = results.verdicts.iter().map(|record| record.verdict).collect();
    assert_eq!(verdicts, [Verdict::Upheld, Verdict::Upheld, Verdict::Refuted], "{:?}", results.verdicts);
    assert!(results.verdicts[2].reason.contains("formally of order 2, claimed 3"), "{}", results.verdicts[2].reason);
}

#[test]
fn a_range_with_an_integrator_is_claimed_of_the_rate() {
    let claim = |up_to: f64, integrator: &str| {
        format!("[[stability]]\nequation = \"advection\"\ncourant_up_to = {up_to}\nintegrator = \"{integrator}\"\n")
    };
    let scheme = "[scheme]\nclassical = \"central2-rk4\"\n";
    let claims = [claim(0.72, "ab3"), claim(0.73, "ab3"), claim(0.01, "rk2"), claim(2.828_427, "rk4")].concat();
    let results = judged("integrator", &format!("{scheme}{claims}"));
    let verdicts: Vec<Verdict> = results.verdicts.iter().map(|record| record.verdict).collect();
    assert_eq!(
        verdicts,
        [Verdict::Upheld, Verdict::Refuted, Verdict::Refuted, Verdict::Upheld],
        "{:?}",
        results.verdicts
    );
    assert!(results.verdicts[2].reason.contains("to the power 4"), "{}", results.verdicts[2].reason);
}

#[test]
fn an_operator_between_boundaries_is_stable_or_not() {
    let claim = |number: f64| {
        format!(
            "[[operator]]\nequation = \"diffusion\"\ncells = 20\ndiffusion_number = {number}\nintegrator = \"rk1\"\n\
             spectral_radius_at_most = 1.0\n"
        )
    };
    let results =
        judged("operator", &format!("[scheme]\nclassical = \"central2-rk4\"\n{}{}", claim(0.49), claim(0.55)));
    let verdicts: Vec<Verdict> = results.verdicts.iter().map(|record| record.verdict).collect();
    assert_eq!(verdicts, [Verdict::Upheld, Verdict::Refuted], "{:?}", results.verdicts);
}
