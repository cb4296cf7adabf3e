//! The page as a document, read by an XML parser: the layout is written so that it is well-formed XML apart from its script.

use std::collections::BTreeSet;
use std::path::Path;

use roxmltree::{Document, Node, ParsingOptions};

use crate::{dossier, read, sample};

/// The page without its script, which is no XML.
pub fn without_script(folder: &Path) -> String {
    let page = read(folder, "index.html");
    let start = page.rfind("<script>").expect("the page ends with its script");
    let end = page.rfind("</script>").unwrap();
    format!("{}{}", &page[..start], &page[end + "</script>".len()..])
}

pub fn parse(page: &str) -> Document<'_> {
    let options = ParsingOptions { allow_dtd: true, ..ParsingOptions::default() };
    Document::parse_with_options(page, options).unwrap_or_else(|error| panic!("the page is not well-formed: {error}"))
}

pub fn has_class(node: Node<'_, '_>, class: &str) -> bool {
    node.attribute("class").is_some_and(|classes| classes.split_whitespace().any(|one| one == class))
}

#[test]
fn every_link_leads_somewhere_and_no_anchor_stands_twice() {
    for (name, results) in [("links-one", sample::one_scheme()), ("links-many", sample::many_schemes(11))] {
        let folder = dossier(name, &results);
        let text = without_script(&folder);
        let page = parse(&text);
        let mut anchors = BTreeSet::new();
        for node in page.descendants() {
            if let Some(id) = node.attribute("id") {
                assert!(anchors.insert(id), "{name}: the anchor {id} stands twice");
            }
        }
        let links: Vec<_> = page.descendants().filter_map(|node| node.attribute("href")).collect();
        assert!(links.len() > 20, "{name}: {} links", links.len());
        for link in links {
            match link.strip_prefix('#') {
                Some(anchor) => assert!(anchors.contains(anchor), "{name}: nothing has the anchor {anchor}"),
                None => assert!(folder.join(link).is_file(), "{name}: there is no file {link}"),
            }
        }
    }
}

#[test]
fn a_verdict_is_told_by_word_and_shape_and_leads_to_its_evidence() {
    let results = sample::one_scheme();
    let text = without_script(&dossier("words", &results));
    let page = parse(&text);
    let claims: Vec<_> = page.descendants().filter(|node| has_class(*node, "claim")).collect();
    assert_eq!(claims.len(), results.verdicts.len());
    for (claim, verdict) in claims.iter().zip(&results.verdicts) {
        let stamp = claim.descendants().find(|node| has_class(*node, "stamp")).unwrap();
        let word: String = stamp.descendants().filter(Node::is_text).filter_map(|node| node.text()).collect();
        assert_eq!(word.trim(), verdict.verdict.word());
        let shape = stamp.descendants().find_map(|node| node.attribute("href"));
        assert_eq!(shape, Some(format!("#mark-{}", verdict.verdict.word())).as_deref());
        let evidence: Vec<_> =
            claim.descendants().filter_map(|node| node.attribute("href")?.strip_prefix('#')).collect();
        for study in &verdict.evidence {
            assert!(evidence.contains(&study.as_str()), "{} does not lead to {study}", verdict.claim);
        }
    }
}

#[test]
fn the_page_asks_nothing_of_the_network() {
    let page = read(&dossier("network", &sample::one_scheme()), "index.html");
    let policy = "default-src 'none'";
    assert!(page.contains(policy));
    let outside = page.replace("http://www.w3.org/2000/svg", "").replace("http://www.w3.org/1999/xhtml", "");
    assert!(!outside.contains("http://") && !outside.contains("https://"));
}
