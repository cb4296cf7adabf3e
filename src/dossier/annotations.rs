//! Verdicts as annotations beside the lines of a claims file, in the format of GitHub's workflow commands.

use std::fmt::Write as _;
use std::path::Path;

use super::clean::visible;
use crate::record::{Verdict, VerdictRecord};

/// One annotation for each claim that is not upheld: an error where it is refuted, a warning where it is undecided. `stated` holds the
/// line of each claim in the file `claims`.
pub fn annotations(claims: &Path, stated: &[(usize, &VerdictRecord)]) -> String {
    let mut out = String::new();
    for (line, verdict) in stated {
        let kind = match verdict.verdict {
            Verdict::Upheld => continue,
            Verdict::Refuted => "error",
            Verdict::Undecided => "warning",
        };
        let title = format!("{} {}: {}", verdict.scheme, verdict.claim, verdict.verdict.word());
        let mut message = format!("{}: {}", verdict.text, verdict.reason);
        if let Some(by) = &verdict.decided_by {
            let _ = write!(message, "; what would decide it: {by}");
        }
        let file = property(&claims.display().to_string());
        let _ = writeln!(out, "::{kind} file={file},line={line},title={}::{}", property(&title), data(&message));
    }
    out
}

/// `text` as the message of a workflow command.
fn data(text: &str) -> String {
    visible(text).replace('%', "%25")
}

/// `text` as a property of a workflow command, which a colon or a comma would end.
fn property(text: &str) -> String {
    data(text).replace(':', "%3A").replace(',', "%2C")
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The escapes are those of the format's own description: a line break, a colon or a comma of a scheme begins no command of its own.
    #[test]
    fn a_refuted_claim_is_an_error_on_its_line_and_an_upheld_one_is_silent() {
        let verdict = |verdict| VerdictRecord {
            claim: "order-1".into(),
            scheme: "a,b\n::error::c".into(),
            text: "order 2".into(),
            claimed: None,
            verdict,
            reason: "50% short\nof it".into(),
            decided_by: None,
            evidence: Vec::new(),
        };
        let (upheld, refuted) = (verdict(Verdict::Upheld), verdict(Verdict::Refuted));
        assert_eq!(
            annotations(Path::new("claims.toml"), &[(3, &upheld), (9, &refuted)]),
            "::error file=claims.toml,line=9,title=a%2Cb %3A%3Aerror%3A%3Ac order-1%3A refuted::order 2: 50%25 short of it\n"
        );
    }
}
