//! Dossiers of results that closed forms made: what every output shows, and that hostile text stays text.

mod sample;

use std::path::PathBuf;

use gridassay::dossier::write_dossier;

/// Where the dossiers of a test are left for looking at.
fn folder(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join("dossiers").join(name)
}

#[test]
fn a_dossier_holds_its_files() {
    for (name, results) in
        [("one", sample::one_scheme()), ("many", sample::many_schemes(11)), ("hostile", sample::hostile())]
    {
        let folder = folder(name);
        let start = std::time::Instant::now();
        write_dossier(&folder, &results).unwrap();
        eprintln!("{name}: {:?}", start.elapsed());
        for file in ["results.json", "index.html", "summary.md", "junit.xml", "figures"] {
            assert!(folder.join(file).exists(), "{name}: {file}");
        }
    }
}
