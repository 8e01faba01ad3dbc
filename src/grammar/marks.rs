//! Where brackets and equals signs stand: what sections and orbitals hang on, found in one pass on all cores.
//!
//! Not here: what a mark means (`grammar::sections`, `grammar::orbitals`).

use super::numbers::is_blank;
use crate::diagnostic::Span;
use memchr::{memchr, memchr2_iter};
use rayon::prelude::*;

/// Bytes between two calls of the reader's `passed`.
pub(super) const WINDOW: usize = 16 << 20;
/// Bytes one thread looks through at a time.
const CHUNK: usize = 1 << 20;

/// Places of marks, ascending.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Marks {
    /// Brackets that open a line.
    pub brackets: Vec<usize>,
    /// The first equals sign of every line that has one, and at most one more a line.
    pub equals: Vec<usize>,
}

/// Finds the marks; `passed` is told each stretch of the input that was looked through.
#[must_use]
pub fn marks(bytes: &[u8], passed: &dyn Fn(Span)) -> Marks {
    let mut marks = Marks::default();
    for window in (0..bytes.len()).step_by(WINDOW) {
        let end = bytes.len().min(window + WINDOW);
        let starts: Vec<usize> = (window..end).step_by(CHUNK).collect();
        let found: Vec<Marks> = starts.par_iter().map(|&start| within(bytes, start..end.min(start + CHUNK))).collect();
        for part in found {
            marks.brackets.extend(part.brackets);
            marks.equals.extend(part.equals);
        }
        passed(window..end);
    }
    marks
}

fn within(bytes: &[u8], chunk: Span) -> Marks {
    let mut marks = Marks::default();
    // A line of nothing but marks must cost no square: nothing before the last equals sign is looked at again.
    let mut last = None;
    for at in memchr2_iter(b'[', b'=', &bytes[chunk.clone()]).map(|step| chunk.start + step) {
        if bytes[at] == b'[' {
            let before = bytes[..at].iter().rev().find(|&&byte| !is_blank(byte));
            if before.is_none_or(|&byte| byte == b'\n') {
                marks.brackets.push(at);
            }
        } else {
            if last.is_none_or(|last: usize| memchr(b'\n', &bytes[last..at]).is_some()) {
                marks.equals.push(at);
            }
            last = Some(at);
        }
    }
    marks
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn marks_are_those_that_open_a_line_or_come_first_on_it() {
        let found = marks(b"[a] = [b] = c\n \t[d]\nx [e]\n k = = 1\n=", &|_| ());
        assert_eq!(found.brackets, [0, 16]);
        assert_eq!(found.equals, [4, 29, 35]);
    }

    #[test]
    fn chunks_change_nothing() {
        let line = b"  12   -0.123456789\n Ene= -1.0 = 2\n [x]\n";
        let bytes: Vec<u8> = line.iter().copied().cycle().take(3 * CHUNK + 17).collect();
        let whole = within(&bytes, 0..bytes.len());
        let parts = marks(&bytes, &|_| ());
        assert_eq!(parts.brackets, whole.brackets);
        // A line may be cut between its two signs; the second is then found too.
        assert!(whole.equals.iter().all(|at| parts.equals.binary_search(at).is_ok()));
        assert!(parts.equals.len() <= whole.equals.len() + 3);
    }
}
