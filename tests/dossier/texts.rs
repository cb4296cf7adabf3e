//! Snapshots of whole texts: nothing that people read changes unnoticed.

use gridassay::dossier::terminal::{study_text, verdict_table};
use gridassay::record::{Results, Verdict};

use crate::page::{has_class, parse, without_script};
use crate::{dossier, read, sample};

#[test]
fn summary() {
    insta::assert_snapshot!("summary-one", read(&dossier("summary-one", &sample::one_scheme()), "summary.md"));
    insta::assert_snapshot!("summary-many", read(&dossier("summary-many", &sample::many_schemes(5)), "summary.md"));
}

#[test]
fn statement() {
    insta::assert_snapshot!("statement", read(&dossier("statement", &sample::one_scheme()), "statement.md"));
}

#[test]
fn junit() {
    insta::assert_snapshot!("junit", read(&dossier("junit", &sample::one_scheme()), "junit.xml"));
}

#[test]
fn tables() {
    let folder = dossier("snapshot-tables", &sample::one_scheme());
    insta::assert_snapshot!("levels-tex", read(&folder, "tables/order-1-levels.tex"));
    // The numbers themselves are compared with the results elsewhere, and their last digits belong to the machine's mathematics.
    let csv = read(&folder, "tables/modes-1-modes.csv");
    insta::assert_snapshot!("modes-csv-head", csv.lines().next().unwrap());
}

#[test]
fn terminal() {
    let results = sample::one_scheme();
    insta::assert_snapshot!("verdicts", verdict_table(&results, false));
    let studies: Vec<_> = results.studies.iter().map(|study| study_text(study, false)).collect();
    insta::assert_snapshot!("studies", studies.join("\n"));
}

#[test]
fn colour_only_paints_what_is_said_without_it() {
    let results = sample::one_scheme();
    let coloured = verdict_table(&results, true);
    assert!(coloured.contains("\u{1b}[31m"));
    let mut plain = String::new();
    let mut rest = coloured.as_str();
    while let Some(start) = rest.find('\u{1b}') {
        plain += &rest[..start];
        rest = &rest[start + rest[start..].find('m').unwrap() + 1..];
    }
    assert_eq!(plain + rest, verdict_table(&results, false));
}

/// The page as somebody hears it who does not see it: all its words in order.
#[test]
fn words_of_the_page() {
    let text = without_script(&dossier("snapshot-page", &sample::one_scheme()));
    let page = parse(&text);
    let mut words = String::new();
    for node in page.descendants().filter(roxmltree::Node::is_text) {
        let silent = |above: roxmltree::Node<'_, '_>| {
            ["svg", "script", "style"].contains(&above.tag_name().name()) || has_class(above, "digest")
        };
        let said = node.text().unwrap().split_whitespace().collect::<Vec<_>>().join(" ");
        if !said.is_empty() && !node.ancestors().any(silent) {
            words += &(said + "\n");
        }
    }
    insta::assert_snapshot!("page", words);
}

#[test]
fn the_overall_sentence_counts_the_verdicts() {
    let mut results = sample::one_scheme();
    let mut sentence = |verdicts: &[Verdict]| {
        let first = results.verdicts[0].clone();
        results.verdicts =
            verdicts.iter().map(|&verdict| gridassay::record::VerdictRecord { verdict, ..first.clone() }).collect();
        results.overall = Verdict::overall(verdicts.iter().copied());
        last_line(&results)
    };
    use Verdict::{Refuted, Undecided, Upheld};
    assert_eq!(sentence(&[Upheld, Upheld]), "All 2 claims are upheld.");
    assert_eq!(sentence(&[Upheld]), "The one claim is upheld.");
    assert_eq!(sentence(&[Refuted, Upheld, Undecided, Refuted]), "2 claims are refuted; 1 upheld, 1 undecided.");
    assert_eq!(sentence(&[Refuted]), "1 claim is refuted.");
    assert_eq!(sentence(&[Undecided, Upheld]), "Nothing is refuted, but 1 claim is undecided, 1 upheld.");
    results.verdicts.clear();
    results.overall = None;
    assert_eq!(last_line(&results), "Nothing was claimed: what follows was measured and is not judged.");
}

fn last_line(results: &Results) -> String {
    verdict_table(results, false).lines().last().unwrap().to_owned()
}
