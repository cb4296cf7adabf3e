//! Several schemes side by side.

use serde_json::Value;

use crate::page::{has_class, parse, without_script};
use crate::{dossier, read, sample};

/// The charts of the page by id.
fn charts(folder: &std::path::Path) -> Vec<Value> {
    let text = without_script(folder);
    let page = parse(&text);
    let data = page.descendants().filter(|node| node.attribute("type") == Some("application/json"));
    data.map(|node| serde_json::from_str(node.text().unwrap()).unwrap()).collect()
}

#[test]
fn curves_of_all_schemes_are_laid_over_each_other_and_errors_stand_against_cost() {
    let results = sample::many_schemes(4);
    let folder = dossier("compared", &results);
    let charts = charts(&folder);
    let measured = |id: &str| -> Vec<String> {
        let chart = charts.iter().find(|chart| chart["id"] == id).unwrap_or_else(|| panic!("there is no chart {id}"));
        let series = chart["series"].as_array().unwrap().iter().filter(|series| series["role"] == "measured");
        series.map(|series| series["name"].as_str().unwrap().to_owned()).collect()
    };
    let names: Vec<String> = ["upwind-1", "lax-wendroff-2", "beam-warming-3", "upwind-4"].map(Into::into).to_vec();
    for id in ["compared-1-amplification", "compared-1-phase-speed", "compared-work-1"] {
        assert_eq!(measured(id), names, "{id}");
        assert!(folder.join(format!("figures/{id}.svg")).is_file());
    }
    let exact = charts[0]["series"].as_array().unwrap().iter().filter(|series| series["role"] == "exact").count();
    assert_eq!(exact, 1, "the schemes share one exact curve");
    let table = read(&folder, "tables/compared-orders-and-limits.csv");
    assert_eq!(table.lines().count(), 1 + 2 * 4, "an order and a limit for each scheme: {table}");
}

#[test]
fn more_schemes_than_colours_make_further_charts_and_one_scheme_makes_none() {
    let many = charts(&dossier("compared-many", &sample::many_schemes(8)));
    let overlaid = many.iter().filter(|chart| chart["id"].as_str().unwrap().ends_with("amplification"));
    assert_eq!(overlaid.filter(|chart| chart["id"].as_str().unwrap().starts_with("compared")).count(), 2);
    let folder = dossier("compared-one", &sample::one_scheme());
    let text = without_script(&folder);
    assert!(
        parse(&text).descendants().all(|node| node.attribute("id") != Some("compared") && !has_class(node, "glance"))
    );
}
