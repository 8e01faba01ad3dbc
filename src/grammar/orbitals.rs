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

/// The keys as far as they tell each other apart, and the places of the first three.
const KEYS: [&[u8]; 4] = [b"sym", b"ene", b"spin", b"occ"];
const SYM: usize = 0;
const ENE: usize = 1;
const SPIN: usize = 2;

/// Whether nothing but blanks stands in the span.
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
        let place = KEYS.iter().position(|name| key.starts_with(name));
        if place.is_none() {
            let shown = String::from_utf8_lossy(&key[..key.len().min(40)]).into_owned();
            findings.warning(
                key_span,
                format!("expected one of Sym=, Ene=, Spin=, Occup=; `{shown}=` is passed over"),
                "the value of a misspelt key is lost",
            );
        }
        let numbers_between = !is_empty(bytes, end_of_last..start);
        if found.is_empty() && numbers_between {
            findings.error(
                trim(bytes, first_line(bytes, end_of_last..start)),
                "expected Sym=, Ene=, Spin= or Occup= before the first coefficients",
                "each orbital opens with its keys",
            );
        }
        let new = found.last().is_none_or(|last| numbers_between || place.is_some_and(|place| last.seen[place]));
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
        orbital.header.end = end;
        orbital.numbers = (end + 1).min(body.end)..body.end;
        end_of_last = end;
        let Some(place) = place else { continue };
        orbital.seen[place] = true;
        let value = trim(bytes, at + 1..end);
        let text = &bytes[value.clone()];
        match place {
            SYM => orbital.symmetry = Some(value),
            SPIN if text.eq_ignore_ascii_case(b"alpha") => {}
            SPIN if text.eq_ignore_ascii_case(b"beta") => orbital.beta = true,
            SPIN => findings.expected(bytes, value, "Alpha or Beta"),
            ENE => match real(text) {
                Some(number) => orbital.energy = Some(number),
                None if text.starts_with(b"**") => findings.warning(
                    value,
                    "the energy was too wide for its field and is lost",
                    "the orbital is labelled without its energy",
                ),
                None => findings.expected(bytes, value, "a real number"),
            },
            _ => match real(text) {
                Some(number) => orbital.occupation = Some(number),
                None => findings.expected(bytes, value, "a real number"),
            },
        }
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

/// An index above the number of functions.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Beyond {
    /// The first line with one.
    pub line: Span,
    /// The largest of the orbital.
    pub largest: usize,
}

/// Reads the numbers of one orbital into its row; functions not listed are left at zero.
///
/// The plain form `index value` goes past nom: these lines are nearly all of a file. What indices beyond
/// the row may mean is for the caller to tell, who sees all orbitals.
pub fn fill_row(bytes: &[u8], numbers: Span, row: &mut [f64], findings: &mut Findings) -> Option<Beyond> {
    let mut beyond: Option<Beyond> = None;
    let mut seen = vec![0_u64; row.len().div_ceil(64)];
    for line in lines(bytes, numbers) {
        let text = &bytes[line.clone()];
        let Some((index, value)) = plain_line(text).or_else(|| odd_line(text)) else {
            if !text.iter().all(|&byte| is_blank(byte)) {
                bad_line(bytes, line, findings);
            }
            continue;
        };
        if index > row.len() {
            let first = beyond.get_or_insert_with(|| Beyond { line: trim(bytes, line), largest: index });
            first.largest = first.largest.max(index);
            continue;
        }
        let Some(cell) = index.checked_sub(1).and_then(|index| row.get_mut(index)) else {
            findings.expected(bytes, trim(bytes, line), "an index from 1 up and a coefficient");
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
    beyond
}

/// Points to the coefficient where only that is wrong, else to the whole line.
fn bad_line(bytes: &[u8], line: Span, findings: &mut Findings) {
    let line = trim(bytes, line);
    let number = memchr::memchr2(b' ', b'\t', &bytes[line.clone()])
        .filter(|&blank| bytes[line.start..line.start + blank].iter().all(u8::is_ascii_digit))
        .map(|blank| trim(bytes, line.start + blank..line.end))
        .filter(|number| {
            !bytes[number.clone()].iter().any(|&byte| is_blank(byte)) && real(&bytes[number.clone()]).is_none()
        });
    match number {
        Some(number) => findings.expected(bytes, number, "a real number"),
        None => findings.expected(bytes, line, "a function's index and its coefficient"),
    }
}

/// None when the line is blank or has another form.
fn plain_line(text: &[u8]) -> Option<(usize, f64)> {
    let mut at = 0;
    while at < text.len() && is_blank(text[at]) {
        at += 1;
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
    plain.then_some((index, value))
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
            let read = plain_line(text.as_bytes()).or_else(|| odd_line(text.as_bytes()));
            assert_eq!(read, Some(entry), "{text}");
        }
        for text in ["1 ***", "1", "x 1.0", "1 nan", "1 1.0 2.0", "1 1e999"] {
            assert_eq!(plain_line(text.as_bytes()).or_else(|| odd_line(text.as_bytes())), None, "{text}");
        }
    }
}
