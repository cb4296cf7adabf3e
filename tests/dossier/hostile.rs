//! Names and sentences that would be obeyed if any output forgot to escape them.

use std::path::Path;

use gridassay::dossier::terminal::{study_text, verdict_table};
use unicode_width::UnicodeWidthStr;

use crate::page::{parse, without_script};
use crate::{dossier, read, sample};

fn files(folder: &Path, extension: &str) -> Vec<(String, String)> {
    let mut found = Vec::new();
    for place in ["", "figures", "tables"] {
        for entry in std::fs::read_dir(folder.join(place)).unwrap() {
            let path = entry.unwrap().path();
            if path.extension().is_some_and(|end| end == extension) {
                let text = std::fs::read_to_string(&path).unwrap();
                found.push((path.file_name().unwrap().to_string_lossy().into_owned(), text));
            }
        }
    }
    assert!(!found.is_empty(), "no .{extension} at all");
    found
}

#[test]
fn a_page_of_hostile_names_is_well_formed_and_runs_one_script_only() {
    let folder = dossier("hostile-page", &sample::hostile());
    let text = without_script(&folder);
    let page = parse(&text);
    let scripts = page.descendants().filter(|node| node.has_tag_name("script"));
    for script in scripts {
        assert_eq!(script.attribute("type"), Some("application/json"), "a script came in: {:?}", script.text());
    }
    assert!(!text.contains("<script>alert"));
    assert!(!text.contains(|c: char| c.is_control() && c != '\n'), "a control character");
    assert!(page.descendants().any(|node| node.text().is_some_and(|text| text.contains("<script>alert(1)</script>"))));
}

#[test]
fn xml_of_hostile_names_is_well_formed() {
    let folder = dossier("hostile-xml", &sample::hostile());
    for (name, text) in files(&folder, "svg").into_iter().chain(files(&folder, "xml")) {
        roxmltree::Document::parse(&text).unwrap_or_else(|error| panic!("{name}: {error}"));
    }
}

#[test]
fn markdown_of_hostile_names_holds_no_tag_and_no_broken_row() {
    let summary = read(&dossier("hostile-markdown", &sample::hostile()), "summary.md");
    assert!(!summary.replace("<sub>", "").replace("</sub>", "").contains('<'));
    let row = summary.lines().find(|line| line.starts_with("| ?")).unwrap();
    let bars = row.matches('|').count() - row.matches("\\|").count();
    assert_eq!(bars, 4, "{row}");
    assert!(!summary.contains("@all") && !summary.contains(" `x`"));
}

#[test]
fn latex_of_hostile_names_obeys_nothing() {
    for (name, text) in files(&dossier("hostile-latex", &sample::hostile()), "tex") {
        assert!(!text.contains("\\input{x}"), "{name}");
        assert!(!text.contains("$a_1"), "{name}");
    }
}

#[test]
fn a_terminal_gets_no_control_character_and_no_line_over_80_columns() {
    for results in [sample::hostile(), sample::one_scheme(), sample::many_schemes(4)] {
        let mut text = verdict_table(&results, false);
        for study in &results.studies {
            text += &study_text(study, false);
        }
        for line in text.lines() {
            assert!(line.width() <= 80, "{} columns: {line}", line.width());
            assert!(!line.contains(char::is_control), "{line:?}");
        }
    }
}
