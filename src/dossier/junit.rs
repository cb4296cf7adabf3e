//! `junit.xml`: verdicts in the form that CI systems read.
//!
//! A suite is a scheme, a test case is a claim. Refuted is a `failure` of type `refuted`: the claim was tried and is false. Undecided is
//! an `error` of type `undecided`: in JUnit's words a test that could not come to an end. Both make a CI job red: nothing is upheld by
//! default.

use std::time::Duration;

use quick_junit::{NonSuccessKind, Property, Report, TestCase, TestCaseStatus, TestSuite};

use super::{Dossier, DossierError, Exporter, OutputFile, clean::visible, words};
use crate::record::{Verdict, VerdictRecord};

/// The exporter.
pub(crate) struct JUnit;

impl Exporter for JUnit {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        let results = dossier.results;
        let mut report = Report::new("gridassay");
        report.set_time(Duration::try_from_secs_f64(results.run.seconds).unwrap_or_default());
        for (name, record) in words::schemes(results) {
            let mut suite = TestSuite::new(visible(name));
            suite.add_property(Property::new("scheme version", visible(&record.version)));
            suite.add_property(Property::new("route", visible(&record.route)));
            if let Some(digest) = &record.digest {
                suite.add_property(Property::new("sha256", visible(digest)));
            }
            suite.add_property(Property::new("gridassay version", visible(&results.run.gridassay)));
            suite.add_test_cases(words::verdicts_on(results, name).into_iter().map(|verdict| case(name, verdict)));
            report.add_test_suite(suite);
        }
        Ok(vec![OutputFile { path: "junit.xml".into(), bytes: report.to_string()?.into_bytes() }])
    }
}

fn case(scheme: &str, verdict: &VerdictRecord) -> TestCase {
    let status = match verdict.verdict {
        Verdict::Upheld => TestCaseStatus::success(),
        Verdict::Refuted => not_upheld(NonSuccessKind::Failure, verdict),
        Verdict::Undecided => not_upheld(NonSuccessKind::Error, verdict),
    };
    let mut case = TestCase::new(format!("{}: {}", visible(&verdict.claim), visible(&verdict.text)), status);
    case.set_classname(visible(scheme));
    case.set_system_out(format!("{}\nevidence: {}", visible(&verdict.reason), visible(&verdict.evidence.join(", "))));
    case
}

fn not_upheld(kind: NonSuccessKind, verdict: &VerdictRecord) -> TestCaseStatus {
    let mut status = TestCaseStatus::non_success(kind);
    status.set_type(verdict.verdict.word());
    status.set_message(visible(&verdict.reason));
    let decided_by = verdict.decided_by.as_deref().map(|by| format!("\nWhat would decide it: {}", visible(by)));
    status.set_description(format!("{}{}", visible(&verdict.text), decided_by.unwrap_or_default()));
    status
}
