//! Two results side by side, as a page.

use serde::Serialize;

use super::layout;
use crate::dossier::DossierError;
use crate::record::comparison::{Contrast, LimitChange, OrderChange, VerdictChange};
use crate::record::{Results, RunRecord, Verdict};

#[derive(Serialize)]
struct View<'a> {
    name: &'a str,
    /// The mark beside the sentence.
    overall: &'static str,
    sentence: &'static str,
    old: &'a RunRecord,
    new: &'a RunRecord,
    contrast: &'a Contrast,
    verdicts: Vec<Judged<'a, VerdictChange>>,
    orders: Vec<Judged<'a, OrderChange>>,
    limits: Vec<Judged<'a, LimitChange>>,
}

#[derive(Serialize)]
struct Judged<'a, C> {
    worse: bool,
    change: &'a C,
}

/// The page of `contrast`, which holds `new` against `old`: one file that asks nothing of the network.
///
/// # Errors
/// The layout does not fit, which the tests exclude.
pub fn contrast_page(contrast: &Contrast, old: &Results, new: &Results) -> Result<String, DossierError> {
    fn judged<C>(changes: &[C], worse: impl Fn(&C) -> bool) -> Vec<Judged<'_, C>> {
        changes.iter().map(|change| Judged { worse: worse(change), change }).collect()
    }
    let view = View {
        name: &new.scheme.name,
        overall: if contrast.is_worse() { Verdict::Refuted } else { Verdict::Upheld }.word(),
        sentence: contrast.sentence(),
        old: &old.run,
        new: &new.run,
        contrast,
        verdicts: judged(&contrast.verdicts, VerdictChange::is_worse),
        orders: judged(&contrast.orders, OrderChange::is_worse),
        limits: judged(&contrast.limits, LimitChange::is_worse),
    };
    layout::render("contrast.html", &view).map_err(|source| DossierError::Layout { page: "the contrast", source })
}
