//! Verdicts and measurements as text for a terminal of 80 columns.
//!
//! Every function takes whether to colour: whoever prints knows whether a person looks, and whether `NO_COLOR` is set. The words say the
//! same without colour.

mod contrast;
mod plot;
mod problem;
mod study;
mod verdicts;

use anstyle::{AnsiColor, Style};
use unicode_width::UnicodeWidthStr;

use crate::record::Verdict;

pub use contrast::contrast_text;
pub use problem::{catalogue_text, problem_text};
pub use study::study_text;
pub use verdicts::verdict_table;

/// Columns of a line.
const COLUMNS: usize = 80;

/// `text` in `style`, where colour is wanted.
fn paint(text: &str, style: Style, colour: bool) -> String {
    if colour { format!("{style}{text}{style:#}") } else { text.into() }
}

/// The style of a verdict's mark and word.
fn style(verdict: Verdict) -> Style {
    let colour = match verdict {
        Verdict::Upheld => AnsiColor::Green,
        Verdict::Refuted => AnsiColor::Red,
        Verdict::Undecided => AnsiColor::Yellow,
    };
    colour.on_default().bold()
}

const DIM: Style = Style::new().dimmed();
const BOLD: Style = Style::new().bold();

/// `text` with blanks to its right up to `width` columns.
fn left(text: &str, width: usize) -> String {
    format!("{text}{}", " ".repeat(width.saturating_sub(text.width())))
}

/// `text` with blanks to its left up to `width` columns.
fn right(text: &str, width: usize) -> String {
    format!("{}{text}", " ".repeat(width.saturating_sub(text.width())))
}

/// Lines of `text` that fit beside an indent of `indent` columns.
fn wrapped(text: &str, indent: usize) -> Vec<String> {
    let width = COLUMNS.saturating_sub(indent).max(20);
    textwrap::wrap(text, width).into_iter().map(|line| line.into_owned()).collect()
}
