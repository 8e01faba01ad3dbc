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
use memchr::{memchr, memrchr};

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

/// Reads headers as it goes through `[MO]`: every line with an equals sign is one key.
#[derive(Debug)]
pub struct Headers<'a> {
    bytes: &'a [u8],
    body: Span,
    /// Equals signs not looked at yet.
    marks: &'a [usize],
    end_of_last: usize,
    /// The orbital whose numbers are not known to end yet.
    open: Option<RawOrbital>,
    begun: bool,
}

impl<'a> Headers<'a> {
    /// At the beginning of `section`; `marks` are the equals signs of the file.
    #[must_use]
    pub fn new(bytes: &'a [u8], section: &Section, marks: &'a [usize]) -> Self {
        let body = section.body.clone();
        let marks = &marks[marks.partition_point(|&at| at < body.start)..];
        let marks = &marks[..marks.partition_point(|&at| at < body.end)];
        Self { bytes, end_of_last: body.start, body, marks, open: None, begun: false }
    }

    /// Orbitals that end within about the next `reach` bytes; None behind the last.
    pub fn next_orbitals(&mut self, reach: usize, findings: &mut Findings) -> Option<Vec<RawOrbital>> {
        if self.begun && self.marks.is_empty() && self.open.is_none() {
            return None;
        }
        let until = self.end_of_last.saturating_add(reach);
        let mut ended = Vec::new();
        while let Some((&at, rest)) = self.marks.split_first().filter(|(at, _)| **at < until || ended.is_empty()) {
            self.marks = rest;
            // Not a second equals sign on the same line.
            if at >= self.end_of_last {
                ended.extend(self.key(at, findings));
            }
        }
        if self.marks.is_empty() {
            if !self.begun && !is_empty(self.bytes, self.body.clone()) {
                findings.error(
                    trim(self.bytes, first_line(self.bytes, self.body.clone())),
                    "expected Sym=, Ene=, Spin= or Occup=",
                    "each orbital opens with its keys",
                );
            }
            ended.extend(self.open.take());
        }
        self.begun = true;
        Some(ended)
    }

    /// All orbitals.
    pub fn all(mut self, findings: &mut Findings) -> Vec<RawOrbital> {
        let mut orbitals = Vec::new();
        while let Some(more) = self.next_orbitals(usize::MAX, findings) {
            orbitals.extend(more);
        }
        orbitals
    }

    /// The key with its equals sign at `at`; gives the orbital before when this opens a new one.
    fn key(&mut self, at: usize, findings: &mut Findings) -> Option<RawOrbital> {
        let (bytes, end_of_last) = (self.bytes, self.end_of_last);
        let start = memrchr(b'\n', &bytes[end_of_last..at]).map_or(end_of_last, |step| end_of_last + step + 1);
        let end = memchr(b'\n', &bytes[at..self.body.end]).map_or(self.body.end, |step| at + step);
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
        if !self.begun && numbers_between {
            findings.error(
                trim(bytes, first_line(bytes, end_of_last..start)),
                "expected Sym=, Ene=, Spin= or Occup= before the first coefficients",
                "each orbital opens with its keys",
            );
        }
        self.begun = true;
        let new = self.open.as_ref().is_none_or(|last| numbers_between || place.is_some_and(|place| last.seen[place]));
        let ended = if new { self.open.take() } else { None }.map(|mut last| {
            last.numbers.end = start;
            last
        });
        let orbital = self.open.get_or_insert(RawOrbital {
            header: start..end,
            symmetry: None,
            energy: None,
            beta: false,
            occupation: None,
            numbers: end..end,
            seen: [false; 4],
        });
        orbital.header.end = end;
        orbital.numbers = (end + 1).min(self.body.end)..self.body.end;
        self.end_of_last = end;
        if let Some(place) = place {
            orbital.seen[place] = true;
            orbital.set(place, bytes, trim(bytes, at + 1..end), findings);
        }
        ended
    }
}

impl RawOrbital {
    /// Takes the value of the key at `place` of [`KEYS`].
    fn set(&mut self, place: usize, bytes: &[u8], value: Span, findings: &mut Findings) {
        let text = &bytes[value.clone()];
        match place {
            SYM => self.symmetry = Some(value),
            SPIN if text.eq_ignore_ascii_case(b"alpha") => {}
            SPIN if text.eq_ignore_ascii_case(b"beta") => self.beta = true,
            SPIN => findings.expected(bytes, value, "Alpha or Beta"),
            ENE => match real(text) {
                Some(number) => self.energy = Some(number),
                None if text.starts_with(b"**") => findings.warning(
                    value,
                    "the energy was too wide for its field and is lost",
                    "the orbital is labelled without its energy",
                ),
                None => findings.expected(bytes, value, "a real number"),
            },
            _ => match real(text) {
                Some(number) => self.occupation = Some(number),
                None => findings.expected(bytes, value, "a real number"),
            },
        }
    }
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

/// Which functions of one orbital were met: room that is used again for the next.
#[derive(Debug, Clone, Default)]
pub struct Met {
    bits: Vec<u64>,
}

impl Met {
    fn clear(&mut self, n_functions: usize) {
        self.bits.clear();
        self.bits.resize(n_functions.div_ceil(64), 0);
    }

    /// Whether `index`, from 0, is new.
    fn is_new(&mut self, index: usize) -> bool {
        let (word, bit) = (&mut self.bits[index / 64], 1_u64 << (index % 64));
        let new = *word & bit == 0;
        *word |= bit;
        new
    }
}

/// Reads the numbers of one orbital into its row; functions not listed are left at zero.
///
/// The plain form `index value` goes past nom: these lines are nearly all of a file. What indices beyond
/// the row may mean is for the caller to tell, who sees all orbitals.
pub fn fill_row(
    bytes: &[u8],
    numbers: Span,
    row: &mut [f64],
    met: &mut Met,
    findings: &mut Findings,
) -> Option<Beyond> {
    let mut beyond: Option<Beyond> = None;
    met.clear(row.len());
    let (mut at, end) = (numbers.start, numbers.end.min(bytes.len()));
    while at < end {
        let start = at;
        let (index, value) = if let Some((index, value, length)) = plain_line(&bytes[at..end]) {
            at += length;
            (index, value)
        } else {
            let stop = memchr(b'\n', &bytes[at..end]).map_or(end, |step| at + step);
            at = stop + 1;
            let text = &bytes[start..stop];
            let Some(entry) = odd_line(text) else {
                if !text.iter().all(|&byte| is_blank(byte)) {
                    bad_line(bytes, start..stop, findings);
                }
                continue;
            };
            entry
        };
        let line = || trim(bytes, first_line(bytes, start..at.min(end)));
        if index > row.len() {
            let first = beyond.get_or_insert_with(|| Beyond { line: line(), largest: index });
            first.largest = first.largest.max(index);
            continue;
        }
        let Some(cell) = index.checked_sub(1).and_then(|index| row.get_mut(index)) else {
            findings.expected(bytes, line(), "an index from 1 up and a coefficient");
            continue;
        };
        if met.is_new(index - 1) {
            *cell = value;
        } else {
            findings.error(
                line(),
                format!("function {index} stands twice in one orbital"),
                "a key line may be missing between two orbitals",
            );
        }
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

/// Index, value, and the length of the line with its end; None when the line is blank or has another form.
fn plain_line(text: &[u8]) -> Option<(usize, f64, usize)> {
    let blanks = |from: usize| text[from..].iter().take_while(|&&byte| is_blank(byte)).count();
    let digits = blanks(0);
    let mut at = digits;
    let mut index = 0_usize;
    while let Some(digit) = text.get(at).map(|byte| byte.wrapping_sub(b'0')).filter(|&digit| digit < 10) {
        index = 10 * index + usize::from(digit);
        at += 1;
        if at - digits > 9 {
            return None;
        }
    }
    let gap = blanks(at);
    if at == digits || gap == 0 {
        return None;
    }
    at += gap;
    let (value, used) = fast_float2::parse_partial::<f64, _>(&text[at..]).ok()?;
    at += used;
    at += blanks(at);
    let ends = text.get(at).is_none_or(|&byte| byte == b'\n');
    (value.is_finite() && ends).then_some((index, value, at + 1))
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
            let plain = plain_line(text.as_bytes()).map(|(index, value, _)| (index, value));
            assert_eq!(plain.or_else(|| odd_line(text.as_bytes())), Some(entry), "{text}");
        }
        for text in ["1 ***", "1", "x 1.0", "1 nan", "1 1.0 2.0", "1 1e999"] {
            assert_eq!(plain_line(text.as_bytes()), None, "{text}");
            assert_eq!(odd_line(text.as_bytes()), None, "{text}");
        }
    }
}
