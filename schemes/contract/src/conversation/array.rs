//! How arrays of numbers are written: as text that reads back to the same bits, or as base64 of the little-endian bytes.

use std::io::Write;

/// What is wrong with an array.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ArrayError {
    /// A text array holds something that is no number.
    #[error("value {index} begins with `{found}`, which is no number (a value that is not finite is written null)")]
    NotANumber {
        /// Which value, counted from 0.
        index: usize,
        /// The beginning of the text found there.
        found: String,
    },
    /// The text of a list ends early or goes on behind its end.
    #[error("the list is not closed properly after {count} values")]
    NotClosed {
        /// How many values were read.
        count: usize,
    },
    /// A string that is no base64.
    #[error("the string is no base64 of RFC 4648 (standard alphabet, padded)")]
    NotBase64,
    /// Bytes that are no whole number of values.
    #[error("the string holds {bytes} bytes, which is no multiple of 8 (little-endian f64)")]
    OddBytes {
        /// How many bytes the string holds.
        bytes: usize,
    },
}

/// Longest text of a finite f64 with its comma (`-2.2250738585072014e-308,`).
const LONGEST: usize = 25;

/// Appends `[1.0,0.5,...]`. Every finite value reads back to the same bits; one that is not finite is written `null`.
///
/// ```
/// let mut text = Vec::new();
/// gridassay_scheme::conversation::write_text(&[1.0, -0.0, f64::NAN, 0.1], &mut text);
/// assert_eq!(text, b"[1.0,-0.0,null,0.1]");
/// ```
pub fn write_text(values: &[f64], out: &mut Vec<u8>) {
    out.reserve(2 + values.len().saturating_mul(20));
    let mut buffer = zmij::Buffer::new();
    out.push(b'[');
    for (index, value) in values.iter().enumerate() {
        if out.capacity() - out.len() < LONGEST {
            out.reserve(LONGEST * (values.len() - index));
        }
        if index > 0 {
            out.push(b',');
        }
        if value.is_finite() {
            out.extend_from_slice(buffer.format_finite(*value).as_bytes());
        } else {
            out.extend_from_slice(b"null");
        }
    }
    out.push(b']');
}

/// Reads a list of numbers with its brackets into `out`, replacing what was there. `null` and `NaN` read as NaN, `Infinity` and
/// `-Infinity` as they say; so do numbers beyond the range of f64.
///
/// # Errors
/// Something in the list is no number.
pub fn read_text(text: &[u8], out: &mut Vec<f64>) -> Result<(), ArrayError> {
    out.clear();
    // A number takes two characters at least, so that this bound cannot be driven beyond the message itself.
    out.reserve((text.len() / 16).max(1));
    let mut rest = skip_space(text.strip_prefix(b"[").ok_or(ArrayError::NotClosed { count: 0 })?);
    if rest.first() == Some(&b']') {
        return closed(&rest[1..], 0);
    }
    loop {
        let (value, used) = number(rest).ok_or_else(|| not_a_number(out.len(), rest))?;
        out.push(value);
        rest = &rest[used..];
        match rest.first() {
            Some(b',') => rest = &rest[1..],
            Some(b']') => return closed(&rest[1..], out.len()),
            _ => {
                rest = skip_space(rest);
                match rest.first() {
                    Some(b',') => rest = &rest[1..],
                    Some(b']') => return closed(&rest[1..], out.len()),
                    _ => return Err(ArrayError::NotClosed { count: out.len() }),
                }
            }
        }
        rest = skip_space(rest);
    }
}

/// The number at the head of `text` and its length; names of what is not finite as the contract spells them.
fn number(text: &[u8]) -> Option<(f64, usize)> {
    match text.first()? {
        b'0'..=b'9' => fast_float2::parse_partial(text).ok(),
        b'-' if text.get(1)?.is_ascii_digit() => fast_float2::parse_partial(text).ok(),
        b'n' if text.starts_with(b"null") => Some((f64::NAN, 4)),
        b'N' if text.starts_with(b"NaN") => Some((f64::NAN, 3)),
        b'I' if text.starts_with(b"Infinity") => Some((f64::INFINITY, 8)),
        b'-' if text.starts_with(b"-Infinity") => Some((f64::NEG_INFINITY, 9)),
        _ => None,
    }
}

fn skip_space(text: &[u8]) -> &[u8] {
    match text.first() {
        Some(b' ' | b'\t' | b'\n' | b'\r') => text.trim_ascii_start(),
        _ => text,
    }
}

fn closed(rest: &[u8], count: usize) -> Result<(), ArrayError> {
    if rest.is_empty() { Ok(()) } else { Err(ArrayError::NotClosed { count }) }
}

fn not_a_number(index: usize, rest: &[u8]) -> ArrayError {
    let end = rest.iter().position(|byte| b",] \t".contains(byte)).unwrap_or(rest.len()).clamp(0, 24);
    ArrayError::NotANumber { index, found: String::from_utf8_lossy(&rest[..end]).into_owned() }
}

/// Appends the base64 string with its quotes.
pub fn write_base64(values: &[f64], out: &mut Vec<u8>) {
    out.push(b'"');
    #[cfg(target_endian = "little")]
    let bytes: &[u8] = bytemuck::cast_slice(values);
    #[cfg(target_endian = "big")]
    let bytes: &[u8] = &values.iter().flat_map(|value| value.to_le_bytes()).collect::<Vec<u8>>();
    base64_simd::STANDARD.encode_append(bytes, out);
    out.push(b'"');
}

/// Reads a base64 string without its quotes into `out`, replacing what was there.
///
/// # Errors
/// No base64, or no whole number of values.
pub fn read_base64(text: &[u8], out: &mut Vec<f64>) -> Result<(), ArrayError> {
    let length = base64_simd::STANDARD.decoded_length(text).map_err(|_| ArrayError::NotBase64)?;
    if !length.is_multiple_of(8) {
        return Err(ArrayError::OddBytes { bytes: length });
    }
    out.clear();
    out.resize(length / 8, 0.0);
    let bytes: &mut [u8] = bytemuck::cast_slice_mut(out);
    base64_simd::STANDARD.decode(text, base64_simd::Out::from_slice(bytes)).map_err(|_| ArrayError::NotBase64)?;
    #[cfg(target_endian = "big")]
    out.iter_mut().for_each(|value| *value = f64::from_bits(value.to_bits().swap_bytes()));
    Ok(())
}

/// Appends the raw little-endian bytes.
pub(crate) fn read_raw(bytes: &[u8], out: &mut Vec<f64>) {
    out.clear();
    out.extend(bytes.as_chunks::<8>().0.iter().map(|chunk| f64::from_le_bytes(*chunk)));
}

/// Writes the values as raw little-endian bytes.
///
/// # Errors
/// The writer's own.
pub(crate) fn write_raw(values: &[f64], out: &mut impl Write) -> std::io::Result<()> {
    #[cfg(target_endian = "little")]
    return out.write_all(bytemuck::cast_slice(values));
    #[cfg(target_endian = "big")]
    values.iter().try_for_each(|value| out.write_all(&value.to_le_bytes()))
}

#[cfg(test)]
mod tests {
    //! Trusted: the bits of an f64, and the standard library's correctly rounded parser.
    use super::*;

    /// Every exponent with hard and simple mantissas, both signs, subnormals and the ends of the range: the values that
    /// shortest-digits printers and fast readers get wrong first.
    fn hard_values() -> Vec<f64> {
        let mantissas = [0, 1, 2, 0x8_0000_0000_0000, 0xF_FFFF_FFFF_FFFF, 0x5_5555_5555_5555, 0xA_AAAA_AAAA_AAAB];
        let positive = (0..2047u64).flat_map(|exponent| mantissas.map(|m| f64::from_bits(exponent << 52 | m)));
        let mut values: Vec<f64> = positive.flat_map(|value| [value, -value]).collect();
        // A fixed multiplicative sequence spreads over all bit patterns.
        let mut bits = 0x9E37_79B9_7F4A_7C15u64;
        for _ in 0..20_000 {
            bits = bits.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            let value = f64::from_bits(bits);
            if value.is_finite() {
                values.push(value);
            }
        }
        values
    }

    fn same_bits(found: &[f64], expected: &[f64]) {
        assert_eq!(found.len(), expected.len());
        for (a, b) in found.iter().zip(expected) {
            assert_eq!(a.to_bits(), b.to_bits(), "{a:e} came back for {b:e}");
        }
    }

    #[test]
    fn text_reads_back_to_the_same_bits() {
        let values = hard_values();
        let (mut text, mut back) = (Vec::new(), Vec::new());
        write_text(&values, &mut text);
        read_text(&text, &mut back).unwrap();
        same_bits(&back, &values);
        // And the standard library agrees with what was written, so that writer and reader do not share one mistake.
        let inner = std::str::from_utf8(&text[1..text.len() - 1]).unwrap();
        same_bits(&inner.split(',').map(|word| word.parse().unwrap()).collect::<Vec<f64>>(), &values);
    }

    #[test]
    fn base64_reads_back_to_the_same_bits_and_is_standard() {
        let mut values = hard_values();
        values.extend([f64::NAN, f64::INFINITY, f64::NEG_INFINITY]);
        let (mut text, mut back) = (Vec::new(), Vec::new());
        write_base64(&values, &mut text);
        read_base64(&text[1..text.len() - 1], &mut back).unwrap();
        same_bits(&back, &values);
        // 1.0 is 00 00 00 00 00 00 f0 3f: RFC 4648 worked out by hand.
        text.clear();
        write_base64(&[1.0], &mut text);
        assert_eq!(text, b"\"AAAAAAAA8D8=\"");
    }

    #[test]
    fn what_is_not_finite_is_read_in_every_spelling() {
        let mut values = Vec::new();
        read_text(b"[ null, NaN ,Infinity,\t-Infinity, 1e400 ]", &mut values).unwrap();
        assert!(values[0].is_nan() && values[1].is_nan());
        assert_eq!(values[2..], [f64::INFINITY, f64::NEG_INFINITY, f64::INFINITY]);
    }

    #[test]
    fn what_is_no_list_of_numbers_is_refused() {
        let read = |text: &str| read_text(text.as_bytes(), &mut Vec::new());
        assert_eq!(read("[]"), Ok(()));
        assert_eq!(read("[1,x]"), Err(ArrayError::NotANumber { index: 1, found: "x".into() }));
        assert_eq!(read("[1,]"), Err(ArrayError::NotANumber { index: 1, found: String::new() }));
        assert_eq!(read("[1 2]"), Err(ArrayError::NotClosed { count: 1 }));
        assert_eq!(read("[1"), Err(ArrayError::NotClosed { count: 1 }));
        assert_eq!(read("[1]]"), Err(ArrayError::NotClosed { count: 1 }));
        assert!(read("[inf]").is_err() && read("[nan]").is_err() && read("[true]").is_err());
        assert_eq!(read_base64(b"AAAA", &mut Vec::new()), Err(ArrayError::OddBytes { bytes: 3 }));
        assert_eq!(read_base64(b"???????????=", &mut Vec::new()), Err(ArrayError::NotBase64));
    }
}
