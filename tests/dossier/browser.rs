//! The page in a real browser: headless Chromium, where there is one; CI must have one.

use std::path::{Path, PathBuf};
use std::process::Command;

use serde_json::Value;

use crate::{dossier, read, sample};

/// What is run in the page after its own script; it leaves its findings as JSON in an element.
const PROBE: &str = include_str!("probe.js");

fn browser() -> Option<&'static str> {
    let found = ["chromium", "chromium-browser", "google-chrome"]
        .into_iter()
        .find(|name| Command::new(name).arg("--version").output().is_ok_and(|output| output.status.success()));
    assert!(found.is_some() || std::env::var_os("CI").is_none(), "CI needs Chromium to look at the page");
    found
}

fn run(browser: &str, page: &Path, arguments: &[&str]) -> std::process::Output {
    let profile = tempfile::tempdir().unwrap();
    Command::new(browser)
        .args(["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--hide-scrollbars"])
        .args(["--disable-background-networking", "--disable-component-update", "--disable-sync"])
        .arg(format!("--user-data-dir={}", profile.path().display()))
        .args(arguments)
        .arg(format!("file://{}", page.display()))
        .output()
        .unwrap()
}

/// What the probe found on a dossier's page.
fn probe(folder: &Path, width: usize) -> Option<Value> {
    let browser = browser()?;
    let page = read(folder, "index.html");
    let (before, after) = page.split_once("<head>").unwrap();
    // Errors are caught from the first script on.
    let listen = "<head><script>window.faults = []; addEventListener('error', (e) => faults.push(e.message));\
        addEventListener('securitypolicyviolation', (e) => faults.push('blocked ' + e.blockedURI));</script>";
    let (body, end) = after.rsplit_once("</body>").unwrap();
    let probed: PathBuf = folder.join("probed.html");
    std::fs::write(&probed, format!("{before}{listen}{body}<script>{PROBE}</script></body>{end}")).unwrap();
    let output =
        run(browser, &probed, &["--dump-dom", "--virtual-time-budget=4000", &format!("--window-size={width},900")]);
    let dom = String::from_utf8_lossy(&output.stdout).into_owned();
    let (_, found) =
        dom.split_once("<pre id=\"findings\">").unwrap_or_else(|| panic!("the probe did not end: {dom:.2000}"));
    let (found, _) = found.split_once("</pre>").unwrap();
    Some(serde_json::from_str(&found.replace("&lt;", "<").replace("&gt;", ">").replace("&amp;", "&")).unwrap())
}

#[test]
fn read_outs_themes_filters_sorting_and_folding_work_without_an_error_or_a_request() {
    let results = sample::one_scheme();
    let Some(found) = probe(&dossier("browser", &results), 1280) else { return };
    assert_eq!(found["faults"], serde_json::json!([]));
    assert_eq!(found["requests"], 0);
    // Read-outs: the keyboard's first and last place, and a pointer in the middle, against the results.
    let modes = serde_json::to_value(&results).unwrap()["studies"][3]["modes"].clone();
    let modes: Vec<_> =
        modes.as_array().unwrap().iter().filter(|mode| mode["theta"][0].as_f64() >= Some(0.0)).collect();
    let triple = |mode: &Value| [&mode["theta"][0], &mode["exact_modulus"], &mode["modulus"]].map(Value::as_f64);
    let read_out = |key: &str| found[key].as_array().unwrap().iter().map(Value::as_f64).collect::<Vec<_>>();
    assert_eq!(read_out("first"), triple(modes[0]));
    assert_eq!(read_out("second"), triple(modes[1]));
    assert_eq!(read_out("last"), triple(modes[modes.len() - 1]));
    assert!(modes.iter().any(|mode| triple(mode)[..] == read_out("pointed")), "{}", found["pointed"]);
    // Zooming to small wavenumbers keeps fewer places, hiding a series takes it out of the read-out.
    assert!(found["zoomed"].as_f64() < Some(modes.len() as f64));
    assert_eq!(found["hidden"].as_array().map(Vec::len), Some(2));
    assert_eq!(found["themes"], serde_json::json!(["light", "dark", "auto"]));
    assert_eq!(found["filtered"], serde_json::json!({"refuted": 1, "all": 6}));
    assert_eq!(found["sorted"], serde_json::json!(["256", "128", "64", "32"]));
    assert_eq!(found["folded"], 0);
    assert_eq!(found["revealed"], true);
    assert_eq!(found["charts"], serde_json::json!({"live": 5, "drawn": 0}));
}

#[test]
fn nothing_is_wider_than_a_phone() {
    for (name, results) in [("phone", sample::one_scheme()), ("phone-many", sample::many_schemes(11))] {
        let Some(found) = probe(&dossier(name, &results), 500) else { return };
        // Headless Chromium makes no window narrower than 500 pixels; the frame that the probe opens is 360 wide.
        assert_eq!(found["narrow"], serde_json::json!([]), "{name}: these are wider than the page");
    }
}

#[test]
fn with_scripts_off_every_chart_is_shown_as_drawn() {
    let results = sample::one_scheme();
    let folder = dossier("scriptless", &results);
    let page = crate::page::without_script(&folder);
    let page = crate::page::parse(&page);
    let drawn =
        page.descendants().filter(|node| node.tag_name().name() == "svg" && node.attribute("role") == Some("img"));
    let charts = page.descendants().filter(|node| crate::page::has_class(*node, "chart")).count();
    assert_eq!((drawn.count(), charts), (5, 5));
}
