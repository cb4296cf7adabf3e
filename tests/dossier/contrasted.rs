//! Two results side by side, as a page.

use gridassay::dossier::contrast_page;
use gridassay::record::comparison::contrast;
use gridassay::record::{Study, Verdict};

use crate::page::parse;
use crate::sample;

#[test]
fn the_page_shows_each_change_and_says_whether_anything_got_worse() {
    let old = sample::one_scheme();
    let mut new = old.clone();
    new.verdicts[0].verdict = Verdict::Refuted;
    new.verdicts[0].reason = sample::HOSTILE.into();
    for study in &mut new.studies {
        match &mut study.study {
            Study::Modes(record) => record.modes[3].amplification[0] += 0.001_25,
            Study::Stability(record) => record.stable_up_to = Some(0.875),
            _ => {}
        }
    }
    let changed = contrast(&old, &new);
    assert!(changed.is_worse());
    let page = contrast_page(&changed, &old, &new).unwrap();
    let document = parse(&page);
    let numbers: Vec<_> =
        document.descendants().filter_map(|node| node.attribute("value")?.parse::<f64>().ok()).collect();
    assert!(numbers.contains(&0.875) && numbers.contains(&changed.modes[0].largest), "{numbers:?}");
    let rows = document.descendants().filter(|node| node.has_tag_name("tr")).count();
    assert_eq!(rows, 3 + 3, "three tables, each with its head and one change");
    assert!(document.descendants().all(|node| !node.has_tag_name("script")));
    assert!(page.contains("Something got worse"));
    let same = contrast(&old, &old);
    assert!(contrast_page(&same, &old, &old).unwrap().contains("Nothing changed"));
}
