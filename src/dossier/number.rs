//! Numbers as people read them. Every number on a page passes through here, so that all of them look alike.

/// Digits of a number in tables and sentences.
pub(crate) const DIGITS: usize = 5;

/// `value` rounded to `digits` significant digits: plain between 0.001 and 100000, else with a power of ten.
///
/// The power is written as `e-7`. Not finite values are spelled out: `not a number`, `infinite`.
pub(crate) fn plain(value: f64, digits: usize) -> String {
    match split(value, digits) {
        Split::Word(word) => word.into(),
        Split::Plain(text) => text,
        Split::Power { mantissa, exponent } => format!("{mantissa}e{exponent}"),
    }
}

/// Like [`plain`], with the power of ten set in superscripts and a true minus sign, for pages and figures.
pub(crate) fn typeset(value: f64, digits: usize) -> String {
    match split(value, digits) {
        Split::Word(word) => word.into(),
        Split::Plain(text) => text.replace('-', "−"),
        Split::Power { mantissa, exponent } => {
            format!("{}×10{}", mantissa.replace('-', "−"), superscript(exponent))
        }
    }
}

/// Like [`plain`], for LaTeX's mathematics.
pub(crate) fn latex(value: f64, digits: usize) -> String {
    match split(value, digits) {
        Split::Word(word) => format!("\\text{{{word}}}"),
        Split::Plain(text) => text,
        Split::Power { mantissa, exponent } => format!("{mantissa} \\times 10^{{{exponent}}}"),
    }
}

/// Like [`typeset`], with a power of ten whatever the size, for columns that run over decades.
pub(crate) fn typeset_power(value: f64, digits: usize) -> String {
    match powers(value, digits) {
        Some((mantissa, exponent)) => format!("{}×10{}", mantissa.replace('-', "−"), superscript(exponent)),
        None => typeset(value, digits),
    }
}

/// Like [`latex`], with a power of ten whatever the size.
pub(crate) fn latex_power(value: f64, digits: usize) -> String {
    match powers(value, digits) {
        Some((mantissa, exponent)) => format!("{mantissa} \\times 10^{{{exponent}}}"),
        None => latex(value, digits),
    }
}

/// `value` with all its digits: reading it gives the same bits back.
pub(crate) fn exact(value: f64) -> String {
    // The shortest text that reads back, in the form that the results file has.
    serde_json::Number::from_f64(value).map_or_else(|| "null".into(), |number| number.to_string())
}

/// An integer power in superscripts.
pub(crate) fn superscript(power: i32) -> String {
    power
        .to_string()
        .chars()
        .map(|digit| match digit {
            '-' => '⁻',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            other => char::from_u32('⁰' as u32 + other.to_digit(10).unwrap_or(0)).unwrap_or(other),
        })
        .collect()
}

/// Like [`typeset`], without the zeros that a short number would end with: for numbers that stand alone, not in a column.
pub(crate) fn typeset_short(value: f64) -> String {
    typeset(value, digits_needed(value))
}

/// Like [`plain`], without the zeros that a short number would end with.
pub(crate) fn plain_short(value: f64) -> String {
    plain(value, digits_needed(value))
}

/// How many significant digits show `value` exactly, at most [`DIGITS`].
fn digits_needed(value: f64) -> usize {
    (1..DIGITS).find(|&digits| format!("{value:.*e}", digits - 1).parse() == Ok(value)).unwrap_or(DIGITS)
}

enum Split {
    Word(&'static str),
    Plain(String),
    Power { mantissa: String, exponent: i32 },
}

fn split(value: f64, digits: usize) -> Split {
    if value.is_nan() {
        return Split::Word("not a number");
    }
    if value.is_infinite() {
        return Split::Word(if value > 0.0 { "infinite" } else { "minus infinite" });
    }
    if value == 0.0 {
        return Split::Plain("0".into());
    }
    let Some((mantissa, exponent)) = powers(value, digits) else { return Split::Plain(value.to_string()) };
    if (-3..=4).contains(&exponent) {
        let decimals = (digits as i32 - 1 - exponent).max(0) as usize;
        Split::Plain(format!("{value:.decimals$}"))
    } else {
        Split::Power { mantissa, exponent }
    }
}

/// Mantissa and exponent of a number other than zero; `None` for zero and what is not finite.
fn powers(value: f64, digits: usize) -> Option<(String, i32)> {
    if value == 0.0 || !value.is_finite() {
        return None;
    }
    // Rust's own formatting rounds correctly; the exponent is read after rounding, so that 0.99999999 becomes 1.0000.
    let rounded = format!("{value:.*e}", digits.saturating_sub(1));
    let (mantissa, exponent) = rounded.split_once('e')?;
    Some((mantissa.into(), exponent.parse().ok()?))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_keep_their_digits_and_round_correctly() {
        let pairs = [
            (2.0, "2.0000"),
            (0.999_999_99, "1.0000"),
            (-0.012_345_67, "-0.012346"),
            (1.234_567e-9, "1.2346e-9"),
            (123_456.0, "1.2346e5"),
            (0.0, "0"),
            (f64::NAN, "not a number"),
        ];
        for (value, text) in pairs {
            assert_eq!(plain(value, 5), text);
        }
        assert_eq!(typeset(-1.5e-12, 2), "−1.5×10⁻¹²");
        assert_eq!([0.5, 1.0, 120.0, 1.0 / 3.0].map(plain_short), ["0.5", "1", "120", "0.33333"]);
        assert_eq!(latex(1.5e-12, 2), "1.5 \\times 10^{-12}");
    }

    #[test]
    fn exact_text_reads_back_to_the_same_bits() {
        for value in [0.1, 1.0 / 3.0, 1e-300, -5e-324, 2.0, 1e22] {
            assert_eq!(exact(value).parse::<f64>().map(f64::to_bits), Ok(value.to_bits()));
        }
    }
}
