//! Dossiers of results that closed forms made.
//!
//! What is trusted: the results themselves (`sample`), general parsers (an XML parser, a JSON parser, a browser), and people who read a
//! snapshot once. What is shown against them: every number on a page is one of the results file's, every text stays text whatever a
//! scheme puts into it, and nothing that people read changes unnoticed.

mod browser;
mod compared;
mod contrasted;
mod hostile;
mod numbers;
mod page;
mod sample;
mod schema;
mod texts;

use std::path::PathBuf;

use gridassay::dossier::write_dossier;
use gridassay::record::{Results, read_results};

/// Writes a dossier and returns its folder, which is left for looking at.
fn dossier(name: &str, results: &Results) -> PathBuf {
    let folder = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join("dossiers").join(name);
    // What an earlier run left would hide a file that is no longer written.
    if folder.exists() {
        std::fs::remove_dir_all(&folder).unwrap();
    }
    write_dossier(&folder, results).unwrap();
    folder
}

fn read(folder: &std::path::Path, file: &str) -> String {
    std::fs::read_to_string(folder.join(file)).unwrap_or_else(|error| panic!("{file}: {error}"))
}

#[test]
fn a_dossier_holds_its_files_and_its_results_read_back_to_the_same_bits() {
    let results = sample::one_scheme();
    let folder = dossier("files", &results);
    for file in ["index.html", "summary.md", "junit.xml", "tables/order-1-levels.csv", "tables/order-1-levels.tex"] {
        assert!(folder.join(file).is_file(), "{file} is missing");
    }
    let figures = ["order-1-convergence", "modes-1-amplification", "modes-1-phase-speed", "stability-1-stable-range"];
    for figure in figures {
        let svg = read(&folder, &format!("figures/{figure}.svg"));
        roxmltree::Document::parse(&svg).unwrap_or_else(|error| panic!("{figure}: {error}"));
        let png = std::fs::read(folder.join(format!("figures/{figure}.png"))).unwrap();
        assert_eq!(&png[1..4], b"PNG", "{figure}");
    }
    assert_eq!(read_results(&folder.join("results.json")).unwrap(), results);
}

#[test]
fn a_dossier_is_the_same_to_the_last_byte_when_it_is_written_again() {
    let results = sample::one_scheme();
    let (first, second) = (dossier("first", &results), dossier("second", &results));
    for file in ["index.html", "junit.xml", "figures/modes-1-amplification.png", "figures/modes-1-amplification.svg"] {
        assert!(
            std::fs::read(first.join(file)).unwrap() == std::fs::read(second.join(file)).unwrap(),
            "{file} differs"
        );
    }
}

#[test]
fn a_folder_that_cannot_be_made_is_named() {
    let file = dossier("blocked", &sample::one_scheme()).join("summary.md");
    let message = write_dossier(&file.join("within"), &sample::one_scheme()).unwrap_err().to_string();
    assert!(message.contains("summary.md/within: cannot be created") && message.contains("--out"), "{message}");
}

#[test]
fn fifty_studies_make_a_page_under_five_megabytes() {
    let folder = dossier("fifty", &sample::many_schemes(17));
    let bytes = std::fs::metadata(folder.join("index.html")).unwrap().len();
    assert!(bytes < 5_000_000, "{bytes} bytes");
}
