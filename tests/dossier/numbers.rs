//! Every number that an output shows is a number of the results file.

use std::collections::BTreeSet;

use roxmltree::Node;
use serde_json::Value;

use crate::page::{has_class, parse, without_script};
use crate::{dossier, read, sample};

/// All numbers and all texts of a results file.
#[derive(Default)]
struct Known {
    numbers: BTreeSet<u64>,
    texts: Vec<String>,
}

impl Known {
    fn of(results: &str) -> Self {
        let mut known = Self::default();
        known.collect(&serde_json::from_str(results).unwrap());
        // The longest first, so that taking one out leaves no piece of another.
        known.texts.sort_by_key(|text| std::cmp::Reverse(text.len()));
        known
    }

    fn collect(&mut self, value: &Value) {
        match value {
            Value::Number(number) => {
                self.numbers.insert(number.as_f64().unwrap().to_bits());
            }
            Value::String(text) => self.texts.push(text.clone()),
            Value::Array(items) => items.iter().for_each(|item| self.collect(item)),
            Value::Object(items) => {
                for (key, item) in items {
                    self.texts.push(key.clone());
                    self.collect(item);
                }
            }
            Value::Null | Value::Bool(_) => {}
        }
    }

    fn holds(&self, number: f64) -> bool {
        self.numbers.contains(&number.to_bits())
    }
}

/// A number as the page writes it, read back.
fn read_back(shown: &str) -> f64 {
    let plain = shown.replace('−', "-");
    let Some((mantissa, power)) = plain.split_once("×10") else { return plain.parse().unwrap() };
    let digits: String = power
        .chars()
        .map(|c| "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().position(|digit| digit == c).map_or('-', |digit| char::from(b'0' + digit as u8)))
        .collect();
    format!("{mantissa}e{digits}").parse().unwrap()
}

#[test]
fn every_number_on_the_page_is_in_the_results_and_rounded_correctly() {
    for (name, results) in [("numbers-one", sample::one_scheme()), ("numbers-many", sample::many_schemes(5))] {
        let folder = dossier(name, &results);
        let known = Known::of(&read(&folder, "results.json"));
        let text = without_script(&folder);
        let page = parse(&text);
        let shown: Vec<_> = page.descendants().filter(|node| node.has_tag_name("data")).collect();
        assert!(shown.len() > 300, "{name}: only {} numbers", shown.len());
        for node in shown {
            let value: f64 = node.attribute("value").unwrap().parse().unwrap();
            assert!(known.holds(value), "{name}: {value} is not in the results");
            let rounded = read_back(node.text().unwrap());
            // Five digits: half a unit of the fifth is at most 5e-5 of the number.
            assert!((rounded - value).abs() <= 5.000_01e-5 * value.abs(), "{name}: {value} is shown as {rounded}");
        }
    }
}

#[test]
fn no_digit_on_the_page_comes_from_elsewhere() {
    let results = sample::one_scheme();
    let folder = dossier("digits", &results);
    let known = Known::of(&read(&folder, "results.json"));
    let text = without_script(&folder);
    let page = parse(&text);
    for node in page.descendants().filter(Node::is_text) {
        // Drawn figures have ticks; the others are numbers with a test of their own, or counts of what stands on the page.
        let exempt = |above: Node<'_, '_>| {
            ["svg", "script", "style", "data"].contains(&above.tag_name().name())
                || ["count", "sentence"].into_iter().any(|class| has_class(above, class))
        };
        if node.ancestors().any(exempt) {
            continue;
        }
        let mut rest = node.text().unwrap().to_owned();
        for text in known.texts.iter().map(String::as_str).chain(["L1", "L2", "SHA-256"]) {
            rest = rest.replace(text, "");
        }
        assert!(!rest.contains(|c: char| c.is_ascii_digit()), "a digit that is not of the results: {:?}", node.text());
    }
}

#[test]
fn every_point_of_every_chart_is_in_the_results() {
    for (name, results) in [("points", sample::one_scheme()), ("points-many", sample::many_schemes(5))] {
        points_are_known(&dossier(name, &results));
    }
}

fn points_are_known(folder: &std::path::Path) {
    let known = Known::of(&read(folder, "results.json"));
    let text = without_script(folder);
    let page = parse(&text);
    let mut points = 0;
    for node in page.descendants().filter(|node| node.attribute("type") == Some("application/json")) {
        let chart: Value = serde_json::from_str(node.text().unwrap()).unwrap();
        // A guide to the eye is drawn from the claimed slope; it is not read out.
        let measured = chart["series"].as_array().unwrap().iter().filter(|series| series["role"] != "guide");
        for point in measured.flat_map(|series| series["points"].as_array().unwrap()) {
            points += 1;
            for number in point.as_array().unwrap() {
                assert!(known.holds(number.as_f64().unwrap()), "{}: {number} is not in the results", chart["id"]);
            }
        }
    }
    assert!(points > 300, "only {points} points");
}

#[test]
fn every_number_of_a_table_file_is_in_the_results_to_the_last_bit() {
    let folder = dossier("tables", &sample::one_scheme());
    let known = Known::of(&read(&folder, "results.json"));
    for file in ["order-1-levels", "modes-1-modes", "stability-1-scan"] {
        let csv = read(&folder, &format!("tables/{file}.csv"));
        let cells: Vec<_> =
            csv.lines().skip(1).flat_map(|line| line.split(',')).filter(|cell| !cell.is_empty()).collect();
        assert!(cells.len() > 20, "{file}");
        for cell in cells {
            assert!(known.holds(cell.parse().unwrap()), "{file}: {cell} is not in the results");
        }
    }
}
