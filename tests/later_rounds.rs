//! What is done with results afterwards: contrast, redraw, splice.
//!
//! Trusted: the program's own results of schemes whose textbook limits and factors are known; each change is made by hand.

use std::path::{Path, PathBuf};
use std::process::Command;

use gridassay::record::{Results, Study, Verdict, read_results, write_results};

fn folder(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

/// Exit status and stdout.
fn gridassay(folder: &Path, arguments: &[&str]) -> (i32, String) {
    let output = Command::new(env!("CARGO_BIN_EXE_gridassay")).args(arguments).current_dir(folder).output().unwrap();
    (output.status.code().unwrap(), String::from_utf8(output.stdout).unwrap())
}

/// Results of one scheme: its factors, its limit and its order.
fn results(folder: &Path, scheme: &str) -> Results {
    let claims = format!(
        "[scheme]\nclassical = \"{scheme}\"\n[[modes]]\nequation = \"advection\"\ncourant = 0.7\nphase_speed_error_within = 0.05\n\
         [[stability]]\nequation = \"advection\"\ncourant_up_to = 0.9\n\
         [[order]]\nproblem = \"travelling-sine\"\ncells = [80, 160, 320, 640]\ncourant = 0.7\nexpect = 1\n"
    );
    std::fs::write(folder.join("claims.toml"), claims).unwrap();
    assert_eq!(gridassay(folder, &["judge", "claims.toml", "--quiet", "--out", scheme]).0, 0);
    read_results(&folder.join(scheme).join("results.json")).unwrap()
}

#[test]
fn the_same_scheme_again_contrasts_with_nothing() {
    let folder = folder("contrast-same");
    results(&folder, "upwind");
    let (status, said) = gridassay(&folder, &["contrast", "upwind/results.json", "upwind/results.json"]);
    assert_eq!(status, 0);
    assert!(said.starts_with("Nothing changed"), "{said}");
}

#[test]
fn a_change_is_told_for_what_it_is() {
    let folder = folder("contrast-changes");
    let before = results(&folder, "upwind");
    let contrast = |name: &str, change: &dyn Fn(&mut Results)| {
        let mut after = before.clone();
        change(&mut after);
        write_results(&folder.join(name), &after).unwrap();
        gridassay(&folder, &["contrast", "upwind/results.json", name])
    };
    let moved = |by: f64| {
        move |results: &mut Results| {
            if let Study::Modes(record) = &mut results.studies[2].study {
                record.modes[7].amplification[0] += by;
            }
        }
    };
    let is_modes = matches!(before.studies[2].study, Study::Modes(_));
    assert!(is_modes, "the third study is that of modes");
    // A change of the size of rounding is none; a larger one is told, and is nothing worse by itself.
    assert!(contrast("rounding.json", &moved(1e-15)).1.starts_with("Nothing changed"));
    let (status, said) = contrast("moved.json", &moved(1e-9));
    assert!(status == 0 && said.contains("moved: ") && said.contains("1.000e-9"), "{said}");
    // A verdict that falls and a limit that shrinks are worse.
    let (status, said) = contrast("verdict.json", &|results| results.verdicts[0].verdict = Verdict::Undecided);
    assert!(status == 1 && said.contains("upheld -> undecided"), "{said}");
    let (status, said) = contrast("limit.json", &|results| {
        for study in &mut results.studies {
            if let Study::Stability(record) = &mut study.study {
                record.stable_up_to = Some(0.95);
            }
        }
    });
    assert!(status == 1 && said.contains("1 -> 0.95"), "{said}");
    let (status, said) = contrast("gone.json", &|results| drop(results.verdicts.remove(0)));
    assert!(status == 1 && said.contains("upheld -> absent"), "{said}");
}

#[test]
fn a_dossier_is_redrawn_from_its_results_alone() {
    let folder = folder("redraw");
    results(&folder, "upwind");
    assert_eq!(gridassay(&folder, &["redraw", "upwind/results.json", "--out", "again"]).0, 0);
    for file in ["results.json", "index.html", "summary.md", "junit.xml"] {
        let read = |dossier: &str| std::fs::read(folder.join(dossier).join(file)).unwrap();
        assert!(read("upwind") == read("again"), "{file} differs");
    }
    assert_eq!(gridassay(&folder, &["redraw", "upwind/results.json", "--out", "part", "--study", "modes-1"]).0, 0);
    assert_eq!(read_results(&folder.join("part/results.json")).unwrap().studies.len(), 1);
    assert_eq!(
        gridassay(&folder, &["redraw", "upwind/results.json", "--study", "modes-1"]).0,
        2,
        "a selection replaces nothing"
    );
}

#[test]
fn results_that_were_computed_apart_are_spliced() {
    let folder = folder("splice");
    let (one, two) = (results(&folder, "upwind"), results(&folder, "lax-friedrichs"));
    let parts = ["splice", "upwind/results.json", "lax-friedrichs/results.json", "--out", "both"];
    assert_eq!(gridassay(&folder, &parts).0, 0);
    let both = read_results(&folder.join("both/results.json")).unwrap();
    assert_eq!(both.studies.len(), one.studies.len() + two.studies.len());
    assert_eq!(both.schemes.len(), 2);
    let ids: std::collections::BTreeSet<_> = both.studies.iter().map(|study| &study.id).collect();
    assert_eq!(ids.len(), both.studies.len(), "ids are unique");
    assert!(both.verdicts.iter().flat_map(|verdict| &verdict.evidence).all(|id| ids.contains(id)));
}
