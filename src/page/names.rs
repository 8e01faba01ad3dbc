//! Names set in type as journals want them: italic letter, upright subscripts, primes and signs raised.
//!
//! Symbols of irreps, point groups and operations: italic letter with upright subscripts, after "Quantities, Units and Symbols in
//! Physical Chemistry", IUPAC, 3rd edition (2007), section 2.6 on symmetry; from memory. Not here: the names themselves (`group`).

use crate::report::unicode::pretty;
use maud::{Markup, html};

/// A name in parts.
#[derive(Debug, Default, PartialEq, Eq)]
struct Parts {
    number: String,
    letter: String,
    primes: String,
    subscript: String,
    superscript: String,
    rest: String,
}

/// Takes `2a2''`, `Sigma_u-`, `D5d`, `S6^5`, `3sigma_v`, `C2'(1)` apart.
fn parts(name: &str) -> Parts {
    let mut parts = Parts::default();
    let (name, rest) = name.find('(').map_or((name, ""), |at| name.split_at(at));
    rest.clone_into(&mut parts.rest);
    let (name, power) = name.split_once('^').unwrap_or((name, ""));
    power.clone_into(&mut parts.superscript);
    let start = name.find(|sign: char| !sign.is_ascii_digit()).unwrap_or(name.len());
    let (number, name) = name.split_at(start);
    number.clone_into(&mut parts.number);
    // Greek words are longer than a letter, and `pretty` makes them one.
    let name = pretty(name).replace('\'', "′");
    let mut signs = name.chars();
    parts.letter.extend(signs.next());
    for sign in signs {
        match sign {
            '′' | '″' => parts.primes.push(sign),
            '+' => parts.superscript.push('+'),
            '-' => parts.superscript.push('−'),
            _ => parts.subscript.push(sign),
        }
    }
    parts
}

/// One name.
pub fn name(text: &str) -> Markup {
    let Parts { number, letter, primes, subscript, superscript, rest } = parts(text);
    html! {
        span.name {
            (number) i { (letter) }
            @if !subscript.is_empty() { sub { (subscript) } }
            (primes)
            @if !superscript.is_empty() { sup { (superscript) } }
            (rest)
        }
    }
}

/// `A1g + 2E`: each term a name.
pub fn sum(text: &str) -> Markup {
    html! {
        @for (at, term) in text.split(" + ").enumerate() {
            @if at > 0 { " + " }
            (name(term))
        }
    }
}

/// A function of the coordinates, such as `x2-y2` or `Rz`: letters italic, powers raised.
pub fn function(text: &str) -> Markup {
    let signs: Vec<char> = text.chars().collect();
    html! {
        span.name {
            @for (at, sign) in signs.iter().enumerate() {
                @let after_letter = at > 0 && (signs[at - 1].is_ascii_alphabetic() || signs[at - 1] == ')');
                @if sign.is_ascii_digit() && after_letter { sup { (sign) } }
                @else if *sign == '-' { "−" }
                @else if at > 0 && signs[at - 1] == 'R' { sub { i { (sign) } } }
                @else if sign.is_ascii_alphabetic() { i { (sign) } }
                @else { (sign) }
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{function, name, sum};

    #[test]
    fn names_are_set_as_journals_want_them() {
        for (ascii, set) in [
            ("2t2g", "2<i>t</i><sub>2g</sub>"),
            ("1a2''", "1<i>a</i><sub>2</sub>″"),
            ("3sigma_g", "3<i>σ</i><sub>g</sub>"),
            ("Sigma_u-", "<i>Σ</i><sub>u</sub><sup>−</sup>"),
            ("D5d", "<i>D</i><sub>5d</sub>"),
            ("Dinfh", "<i>D</i><sub>∞h</sub>"),
            ("S6^5", "<i>S</i><sub>6</sub><sup>5</sup>"),
            ("3sigma_v", "3<i>σ</i><sub>v</sub>"),
            ("C2'(1)", "<i>C</i><sub>2</sub>′(1)"),
            ("E'", "<i>E</i>′"),
        ] {
            assert_eq!(name(ascii).into_string(), format!("<span class=\"name\">{set}</span>"), "{ascii}");
        }
        assert_eq!(sum("A1g + 2Eg").into_string().matches(" + ").count(), 1);
        let set = function("x2-y2").into_string();
        assert_eq!(set, "<span class=\"name\"><i>x</i><sup>2</sup>−<i>y</i><sup>2</sup></span>");
        assert!(function("(Rx, Ry)").into_string().contains("<i>R</i><sub><i>y</i></sub>"));
        assert_eq!(function("Rz").into_string(), "<span class=\"name\"><i>R</i><sub><i>z</i></sub></span>");
    }

    #[test]
    fn what_looks_like_markup_stays_text() {
        assert!(!name("<script>").into_string().contains("<script"));
        assert!(!function("<b>").into_string().contains("<b>"));
    }
}
