//! Text that came from outside (names, sentences of a scheme) made fit for each kind of output.

/// `text` without control characters (each becomes a blank), so that no output carries what a terminal or a parser would obey.
///
/// Bidirectional overrides go too: they make a line read as what it is not.
pub(crate) fn visible(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            _ if c.is_control() => ' ',
            '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{fffe}' | '\u{ffff}' => ' ',
            _ => c,
        })
        .collect()
}

/// `text` as Markdown prose or a cell of a table: every character that Markdown or HTML would obey is escaped.
pub(crate) fn markdown(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in visible(text).chars() {
        match c {
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '&' => out.push_str("&amp;"),
            // An at sign would call a person, a hash sign link an issue: a zero-width joiner's entity keeps them text.
            '@' => out.push_str("&#64;"),
            '#' => out.push_str("&#35;"),
            '\\' | '`' | '*' | '_' | '[' | ']' | '|' | '~' => {
                out.push('\\');
                out.push(c);
            }
            _ => out.push(c),
        }
    }
    out
}

/// `text` for LaTeX's text mode.
pub(crate) fn latex(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in visible(text).chars() {
        match c {
            '\\' => out.push_str("\\textbackslash{}"),
            '~' => out.push_str("\\textasciitilde{}"),
            '^' => out.push_str("\\textasciicircum{}"),
            '<' => out.push_str("\\textless{}"),
            '>' => out.push_str("\\textgreater{}"),
            '|' => out.push_str("\\textbar{}"),
            '"' => out.push_str("\\textquotedbl{}"),
            '&' | '%' | '$' | '#' | '_' | '{' | '}' => {
                out.push('\\');
                out.push(c);
            }
            'θ' => out.push_str("$\\theta$"),
            'π' => out.push_str("$\\pi$"),
            'Δ' => out.push_str("$\\Delta$"),
            '×' => out.push_str("$\\times$"),
            '−' => out.push_str("$-$"),
            _ => out.push(c),
        }
    }
    out
}

/// `text` as a file name and an anchor: letters, digits, dots and hyphens of ASCII; never empty, never hidden.
pub(crate) fn slug(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        if c.is_ascii_alphanumeric() || (c == '.' && !out.is_empty()) {
            out.push(c);
        } else if !out.ends_with('-') && !out.is_empty() {
            out.push('-');
        }
    }
    let trimmed = out.trim_end_matches(['-', '.']);
    if trimmed.is_empty() { "unnamed".into() } else { trimmed.into() }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hostile_text_is_disarmed_in_every_form() {
        assert_eq!(visible("a\u{1b}[31mb\nc\u{202e}d"), "a [31mb c d");
        assert_eq!(markdown("a|b <i> @x"), "a\\|b &lt;i&gt; &#64;x");
        assert_eq!(latex("50% of $x_1^2$ \\"), "50\\% of \\$x\\_1\\textasciicircum{}2\\$ \\textbackslash{}");
        assert_eq!(slug("../../etc/passwd"), "etc-passwd");
        assert_eq!(slug("order-1"), "order-1");
        assert_eq!(slug("<>"), "unnamed");
    }
}
