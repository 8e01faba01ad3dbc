//! Numbers and words of a line, as engines write them.
//!
//! Here: reals with Fortran exponents, blanks, lines. Not here: what a number is for.

use nom::branch::alt;
use nom::bytes::complete::{take_while, take_while1};
use nom::character::complete::{digit1, one_of};
use nom::combinator::{opt, recognize, verify};
use nom::{IResult, Parser};
use std::ops::Range;

/// Blanks, tabs and the carriage return before a line's end.
#[must_use]
pub fn is_blank(byte: u8) -> bool {
    matches!(byte, b' ' | b'\t' | b'\r' | 0x0b | 0x0c)
}

/// Lines of `bytes[range]` as ranges without their ends.
pub fn lines(bytes: &[u8], range: Range<usize>) -> impl Iterator<Item = Range<usize>> + '_ {
    let mut at = range.start;
    let end = range.end.min(bytes.len());
    std::iter::from_fn(move || {
        if at >= end {
            return None;
        }
        let stop = memchr::memchr(b'\n', &bytes[at..end]).map_or(end, |step| at + step);
        let line = at..stop;
        at = stop + 1;
        Some(line)
    })
}

/// Words of a line as ranges.
#[must_use]
pub fn words(bytes: &[u8], line: Range<usize>) -> Vec<Range<usize>> {
    let mut found = Vec::new();
    let mut start = None;
    for at in line.clone() {
        match (is_blank(bytes[at]), start) {
            (false, None) => start = Some(at),
            (true, Some(first)) => {
                found.push(first..at);
                start = None;
            }
            _ => {}
        }
    }
    if let Some(first) = start {
        found.push(first..line.end);
    }
    found
}

/// ```text
/// real     = [ sign ] mantissa [ exponent ]
/// mantissa = digits [ "." [ digits ] ] | "." digits
/// exponent = ( "e" | "E" | "d" | "D" ) [ sign ] digits | sign digits
/// ```
/// The exponent without a letter is Fortran's way to fit three digits in: `0.25-101`. It needs a point before it.
fn real_text(input: &[u8]) -> IResult<&[u8], &[u8]> {
    let sign = || opt(one_of("+-"));
    let mantissa = alt((
        recognize((digit1, opt((nom::character::complete::char('.'), take_while(|byte: u8| byte.is_ascii_digit()))))),
        recognize((nom::character::complete::char('.'), take_while1(|byte: u8| byte.is_ascii_digit()))),
    ));
    let (rest, text) = recognize((sign(), mantissa)).parse(input)?;
    let lettered = recognize((one_of("eEdD"), sign(), digit1));
    let bare = verify(recognize((one_of("+-"), digit1)), |_: &[u8]| text.contains(&b'.'));
    let (rest, _) = opt(alt((lettered, bare))).parse(rest)?;
    Ok((rest, &input[..input.len() - rest.len()]))
}

/// The text with `e` before its exponent, whatever stands there; None where it is plain already.
fn with_letter(text: &[u8]) -> Option<Vec<u8>> {
    if text.iter().any(|byte| matches!(byte, b'e' | b'E')) {
        return None;
    }
    let at = text.iter().skip(1).position(|byte| matches!(byte, b'd' | b'D' | b'+' | b'-'))? + 1;
    let exponent = text[at..].strip_prefix(b"d").or_else(|| text[at..].strip_prefix(b"D")).unwrap_or(&text[at..]);
    Some([&text[..at], b"e", exponent].concat())
}

/// A finite real number and what follows it; None when none stands here.
#[must_use]
pub fn leading_real(input: &[u8]) -> Option<(f64, &[u8])> {
    let (rest, text) = real_text(input).ok()?;
    let value: f64 = match with_letter(text) {
        Some(plain) => fast_float2::parse(&plain).ok()?,
        None => fast_float2::parse(text).ok()?,
    };
    value.is_finite().then_some((value, rest))
}

/// A word that is one finite real number.
#[must_use]
pub fn real(word: &[u8]) -> Option<f64> {
    leading_real(word).filter(|(_, rest)| rest.is_empty()).map(|(value, _)| value)
}

/// A word that is one whole number, not negative.
#[must_use]
pub fn whole(word: &[u8]) -> Option<usize> {
    std::str::from_utf8(word).ok()?.parse().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reals_as_engines_write_them() {
        for (text, value) in [
            ("1", 1.0),
            ("-.1408E-01", -0.014_08),
            ("8.29D-002", 0.0829),
            ("+3.", 3.0),
            ("1.0d0", 1.0),
            ("-0.5e+1", -5.0),
            ("0.25-101", 0.25e-101),
            ("-1.5+10", -1.5e10),
        ] {
            assert_eq!(real(text.as_bytes()), Some(value), "{text}");
        }
        for text in ["", "0.12,5", "nan", "inf", "1e999", "***", "1.0.0", "--1", "e5", ".", "12-3", "1.0e", "1.0-"] {
            assert_eq!(real(text.as_bytes()), None, "{text}");
        }
    }
}
