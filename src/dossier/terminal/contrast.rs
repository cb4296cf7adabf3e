//! What changed between two results files, as text.

use super::wrapped;
use crate::dossier::clean::visible;
use crate::record::comparison::Contrast;
use crate::record::{Verdict, nine_digits};

/// What changed, in at most 80 columns.
pub fn contrast_text(contrast: &Contrast) -> String {
    let mut out = String::new();
    let mut paragraph = |text: String| {
        for (number, line) in wrapped(&visible(&text), 4).iter().enumerate() {
            out += &format!("{}{line}\n", if number == 0 { "  " } else { "    " });
        }
    };
    let word = |verdict: Option<Verdict>| verdict.map_or("absent", Verdict::word);
    for change in &contrast.verdicts {
        let mark = if change.is_worse() { "worse" } else { "changed" };
        let (old, new) = (word(change.old), word(change.new));
        paragraph(format!("{mark}: {}: {}: {old} -> {new}: {}", change.scheme, change.text, change.reason));
    }
    for change in &contrast.orders {
        let mark = if change.is_worse() { "worse" } else { "changed" };
        let interval = |[low, high]: [f64; 2]| format!("{low:.3} to {high:.3}");
        let (old, new) = (interval(change.old), interval(change.new));
        paragraph(format!(
            "{mark}: {}: {}: order of `{}` in {}: {old} -> {new}",
            change.scheme, change.study, change.field, change.norm
        ));
    }
    for change in &contrast.limits {
        let mark = if change.is_worse() { "worse" } else { "changed" };
        let limit = |limit: Option<f64>| limit.map_or("no limit".to_owned(), nine_digits);
        let (old, new) = (limit(change.old), limit(change.new));
        paragraph(format!("{mark}: {}: {}: stable up to {old} -> {new}", change.scheme, change.study));
    }
    for change in &contrast.modes {
        let theta: Vec<String> = change.theta.iter().map(|theta| format!("{theta:.4}")).collect();
        paragraph(format!(
            "moved: {}: {}: G at {} mode(s), most at k h = {} (branch {}): by {:.3e}, where {:.1e} is rounding",
            change.scheme,
            change.study,
            change.moved,
            theta.join(", "),
            change.branch,
            change.largest,
            change.allowed
        ));
    }
    out + &format!(
        "{}: {} claim(s) and stud(ies) were held against each other.\n",
        contrast.sentence(),
        contrast.compared
    )
}
