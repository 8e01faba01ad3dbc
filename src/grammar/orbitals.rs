//! `[MO]`: headers first, numbers later.
//!
//! ```text
//! mo      = { orbital }
//! orbital = { key "=" value } { index coefficient }        keys in any order, any of them missing
//! key     = "Sym" | "Ene" | "Spin" | "Occup"
//! ```
//! Only headers are read at once; each orbital keeps the span of its numbers, and [`fill_row`] reads them
//! straight into a row of the coefficient matrix. Not here: which functions the indices mean.

use super::Findings;
use super::numbers::{is_blank, leading_real, lines, real};
use super::sections::Section;
use crate::diagnostic::Span;
use memchr::{memchr, memchr_iter, memrchr};

/// One orbital without its numbers.
#[derive(Debug, Clone, PartialEq)]
pub struct RawOrbital {
    /// From the first key line to the end of the last.
    pub header: Span,
    /// Value of `Sym=`.
    pub symmetry: Option<Span>,
    /// Value of `Ene=`.
    pub energy: Option<f64>,
    /// Beta when `Spin=` says so.
    pub beta: bool,
    /// Value of `Occup=`.
    pub occupation: Option<f64>,
    /// Lines of index and coefficient.
    pub numbers: Span,
    seen: [bool; 4],
}

/// Whether anything but blanks stands in the span.
fn is_empty(bytes: &[u8], span: Span) -> bool {
    bytes[span].iter().all(|&byte| is_blank(byte) || byte == b'\n')
}

fn trim(bytes: &[u8], mut span: Span) -> Span {
    while span.start < span.end && is_blank(bytes[span.start]) {
        span.start += 1;
    }
    while span.start < span.end && is_blank(bytes[span.end - 1]) {
        span.end -= 1;
    }
    span
}

/// Headers of all orbitals: every line with an equals sign is one key.
pub fn orbitals(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<RawOrbital> {
    let body = section.body.clone();
    let mut found: Vec<RawOrbital> = Vec::new();
    let mut end_of_last = body.start;
    for step in memchr_iter(b'=', &bytes[body.clone()]) {
        let at = body.start + step;
        if at < end_of_last {
            continue; // a second equals sign on the same line
        }
        let start = memrchr(b'\n', &bytes[end_of_last..at]).map_or(end_of_last, |step| end_of_last + step + 1);
        let end = memchr(b'\n', &bytes[at..body.end]).map_or(body.end, |step| at + step);
        let key_span = trim(bytes, start..at);
        let key = bytes[key_span.clone()].to_ascii_lowercase();
        let Some(place) = [&b"sym"[..], b"ene", b"spin", b"occ"].iter().position(|name| key.starts_with(name)) else {
            findings.expected(bytes, key_span, "one of Sym=, Ene=, Spin=, Occup=");
            end_of_last = end;
            continue;
        };
        let numbers_between = !is_empty(bytes, end_of_last..start);
        if found.is_empty() && numbers_between {
            findings.error(
                trim(bytes, first_line(bytes, end_of_last..start)),
                "expected Sym=, Ene=, Spin= or Occup= before the first coefficients",
                "each orbital opens with its keys",
            );
        }
        let new = found.last().is_none_or(|last| numbers_between || last.seen[place]);
        if new {
            if let Some(last) = found.last_mut() {
                last.numbers.end = start;
            }
            found.push(RawOrbital {
                header: start..end,
                symmetry: None,
                energy: None,
                beta: false,
                occupation: None,
                numbers: end..end,
                seen: [false; 4],
            });
        }
        let Some(orbital) = found.last_mut() else { continue };
        orbital.seen[place] = true;
        orbital.header.end = end;
        orbital.numbers = (end + 1).min(body.end)..body.end;
        let value = trim(bytes, at + 1..end);
        let text = &bytes[value.clone()];
        match place {
            0 => orbital.symmetry = Some(value),
            2 if text.eq_ignore_ascii_case(b"alpha") => {}
            2 if text.eq_ignore_ascii_case(b"beta") => orbital.beta = true,
            2 => findings.expected(bytes, value, "Alpha or Beta"),
            place => match real(text) {
                Some(number) if place == 1 => orbital.energy = Some(number),
                Some(number) => orbital.occupation = Some(number),
                None => findings.expected(bytes, value, "a real number"),
            },
        }
        end_of_last = end;
    }
    if found.is_empty() && !is_empty(bytes, body.clone()) {
        findings.error(
            trim(bytes, first_line(bytes, body)),
            "expected Sym=, Ene=, Spin= or Occup=",
            "each orbital opens with its keys",
        );
    }
    found
}

fn first_line(bytes: &[u8], span: Span) -> Span {
    lines(bytes, span.clone()).find(|line| !is_empty(bytes, line.clone())).unwrap_or(span)
}

/// Reads the numbers of one orbital into its row; functions not listed are left at zero.
///
/// The plain form `index value` goes past nom: these lines are nearly all of a file.
pub fn fill_row(bytes: &[u8], numbers: Span, row: &mut [f64], findings: &mut Findings) {
    let mut seen = vec![0_u64; row.len().div_ceil(64)];
    for line in lines(bytes, numbers) {
        let text = &bytes[line.clone()];
        let (index, value) = match plain_line(text) {
            Some(Some(entry)) => entry,
            Some(None) => continue,
            None => match odd_line(text) {
                Some(entry) => entry,
                None => {
                    findings.expected(bytes, trim(bytes, line), "a function's index and its coefficient");
                    continue;
                }
            },
        };
        let Some(cell) = index.checked_sub(1).and_then(|index| row.get_mut(index)) else {
            let n = row.len();
            findings.error(
                trim(bytes, line),
                format!("expected an index from 1 to {n}, the number of functions in [GTO]; found {index}"),
                "shells may be missing from [GTO]: some engines leave out h and higher ones",
            );
            continue;
        };
        let (word, bit) = ((index - 1) / 64, 1_u64 << ((index - 1) % 64));
        if seen[word] & bit != 0 {
            findings.error(
                trim(bytes, line),
                format!("function {index} stands twice in one orbital"),
                "a key line may be missing between two orbitals",
            );
            continue;
        }
        seen[word] |= bit;
        *cell = value;
    }
}

/// `Some(None)` for a blank line, None when the line has another form.
fn plain_line(text: &[u8]) -> Option<Option<(usize, f64)>> {
    let mut at = 0;
    while at < text.len() && is_blank(text[at]) {
        at += 1;
    }
    if at == text.len() {
        return Some(None);
    }
    let digits = at;
    let mut index = 0_usize;
    while at < text.len() && text[at].is_ascii_digit() && at - digits < 9 {
        index = 10 * index + usize::from(text[at] - b'0');
        at += 1;
    }
    if at == digits || at == text.len() || !is_blank(text[at]) {
        return None;
    }
    while at < text.len() && is_blank(text[at]) {
        at += 1;
    }
    let (value, used) = fast_float2::parse_partial::<f64, _>(&text[at..]).ok()?;
    let plain = value.is_finite() && text[at + used..].iter().all(|&byte| is_blank(byte));
    plain.then_some(Some((index, value)))
}

/// Fortran exponents, and an index glued to a signed coefficient.
fn odd_line(text: &[u8]) -> Option<(usize, f64)> {
    let text = text.trim_ascii();
    let digits = text.iter().take_while(|byte| byte.is_ascii_digit()).count();
    let index = super::numbers::whole(&text[..digits])?;
    let rest = &text[digits..];
    let glued = matches!(rest.first(), Some(b'+' | b'-'));
    if !glued && !rest.first().is_some_and(|&byte| is_blank(byte)) {
        return None;
    }
    let (value, after) = leading_real(rest.trim_ascii_start())?;
    after.trim_ascii().is_empty().then_some((index, value))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_of_every_form_are_read() {
        for (text, entry) in [
            ("  12   -0.5", (12, -0.5)),
            ("131-126.59660", (131, -126.5966)),
            ("3 1.0D-02\r", (3, 0.01)),
            ("7\t-.25", (7, -0.25)),
        ] {
            let read = plain_line(text.as_bytes()).flatten().or_else(|| odd_line(text.as_bytes()));
            assert_eq!(read, Some(entry), "{text}");
        }
        for text in ["1 ***", "1", "x 1.0", "1 nan", "1 1.0 2.0", "1 1e999"] {
            assert_eq!(plain_line(text.as_bytes()).flatten().or_else(|| odd_line(text.as_bytes())), None, "{text}");
        }
    }
}
