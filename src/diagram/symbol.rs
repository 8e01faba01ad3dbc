//! Labels and group names as journals set them: upright numbers, italic letters, upright subscripts.
//!
//! Here: runs of text with their style, their approximate width. Not here: names themselves (`group`), marks of SVG (`diagram::ink`).

/// How a run is set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Style {
    /// On the line.
    Upright,
    /// On the line, slanted.
    Italic,
    /// Below the line, small.
    Sub,
    /// Above the line, small.
    Super,
}

/// Text in one style.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Run {
    /// The text.
    pub text: String,
    /// Its style.
    pub style: Style,
}

impl Run {
    /// A run.
    pub fn new(text: impl Into<String>, style: Style) -> Self {
        Self { text: text.into(), style }
    }
}

/// Plain words.
#[must_use]
pub fn words(text: &str) -> Vec<Run> {
    vec![Run::new(text, Style::Upright)]
}

/// Size of sub- and superscripts relative to the line (common practice: about 70 %).
pub const SMALL: f64 = 0.72;

const GREEK: [(&str, &str); 13] = [
    ("sigma", "σ"),
    ("pi", "π"),
    ("delta", "δ"),
    ("phi", "φ"),
    ("gamma", "γ"),
    ("theta", "θ"),
    ("eta", "η"),
    ("iota", "ι"),
    ("kappa", "κ"),
    ("lambda", "λ"),
    ("omicron", "ο"),
    ("mu", "μ"),
    ("nu", "ν"),
];

/// A label or irrep in ASCII: `3e2g` → 3, italic e, subscript 2g; `1a2''` → 1, italic a, subscript 2, ″; `3sigma_u-` → 3, σ,
/// subscript u, superscript −. Greek letters stand upright (common practice for σ and π).
#[must_use]
pub fn label_runs(label: &str) -> Vec<Run> {
    let digits = label.len() - label.trim_start_matches(|c: char| c.is_ascii_digit()).len();
    let (number, symbol) = label.split_at(digits);
    let mut runs = Vec::new();
    if !number.is_empty() {
        runs.push(Run::new(number, Style::Upright));
    }
    let lower = symbol.to_ascii_lowercase();
    let greek = GREEK.iter().find(|(ascii, _)| lower.starts_with(ascii));
    let rest = match (greek, symbol.chars().next()) {
        (Some((ascii, letter)), _) => {
            let capital = symbol.starts_with(|c: char| c.is_ascii_uppercase());
            runs.push(Run::new(if capital { letter.to_uppercase() } else { (*letter).to_owned() }, Style::Upright));
            symbol.get(ascii.len()..).unwrap_or_default()
        }
        (None, Some(letter)) => {
            runs.push(Run::new(letter, Style::Italic));
            &symbol[letter.len_utf8()..]
        }
        (None, None) => "",
    };
    let sub: String = rest.chars().filter(|c| c.is_alphanumeric()).collect();
    let primes: String = rest.chars().filter(|c| *c == '\'').collect();
    let sign: String =
        rest.chars().filter_map(|c| if c == '-' { Some('−') } else { (c == '+').then_some('+') }).collect();
    for (text, style) in
        [(sub, Style::Sub), (primes.replace("''", "″").replace('\'', "′"), Style::Upright), (sign, Style::Super)]
    {
        if !text.is_empty() {
            runs.push(Run::new(text, style));
        }
    }
    runs
}

/// A Schoenflies name: `D5d` → italic D, subscript 5d.
#[must_use]
pub fn group_runs(name: &str) -> Vec<Run> {
    let mut letters = name.chars();
    let Some(letter) = letters.next() else { return Vec::new() };
    let rest = letters.as_str().replace("inf", "∞");
    let mut runs = vec![Run::new(letter, Style::Italic)];
    if !rest.is_empty() {
        runs.push(Run::new(rest, Style::Sub));
    }
    runs
}

/// Width of runs at a font size, in its unit: no less than a common sans-serif face needs.
///
/// Advance widths of such faces in three groups, rounded upwards; from memory, looked at in pictures.
#[must_use]
pub fn width(runs: &[Run], size: f64) -> f64 {
    let advance = |c: char| match c {
        'i' | 'j' | 'l' | 't' | 'f' | 'r' | ' ' | '\u{a0}' | '.' | ',' | ':' | ';' | '\'' | '′' | '(' | ')' | '|'
        | '!' | 'I' => 0.36,
        'm' | 'w' | 'M' | 'W' | '%' | '@' | '→' | '∞' | '…' => 1.0,
        c if c.is_ascii_uppercase() => 0.76,
        c if c.is_ascii() => 0.58,
        c if ('\u{370}'..'\u{400}').contains(&c) || "−–·″Å⁻α".contains(c) => 0.62,
        _ => 1.05,
    };
    let run = |run: &Run| {
        let scale = if matches!(run.style, Style::Sub | Style::Super) { SMALL } else { 1.0 };
        run.text.chars().map(advance).sum::<f64>() * scale
    };
    runs.iter().map(run).sum::<f64>() * size
}

/// Runs as one string without styles, for people who listen.
#[must_use]
pub fn plain(runs: &[Run]) -> String {
    runs.iter().map(|run| run.text.as_str()).collect()
}

#[cfg(test)]
mod tests {
    use super::{Style, group_runs, label_runs};

    fn marked(runs: &[super::Run]) -> String {
        let mark = |run: &super::Run| match run.style {
            Style::Upright => run.text.clone(),
            Style::Italic => format!("/{}/", run.text),
            Style::Sub => format!("_{}_", run.text),
            Style::Super => format!("^{}^", run.text),
        };
        runs.iter().map(mark).collect()
    }

    #[test]
    fn labels_are_set_as_journals_want_them() {
        for (ascii, set) in [
            ("1a1g", "1/a/_1g_"),
            ("12e1''", "12/e/_1_″"),
            ("3a'", "3/a/′"),
            ("2t2g", "2/t/_2g_"),
            ("3sigma_g", "3σ_g_"),
            ("1sigma_u-", "1σ_u_^−^"),
            ("1pi", "1π"),
            ("1phi_u", "1φ_u_"),
            ("Sigma_g+", "Σ_g_^+^"),
            ("4s", "4/s/"),
            ("1dg", "1/d/_g_"),
            ("1e10u", "1/e/_10u_"),
        ] {
            assert_eq!(marked(&label_runs(ascii)), set, "{ascii}");
        }
    }

    #[test]
    fn groups_too() {
        for (ascii, set) in [("Oh", "/O/_h_"), ("D5d", "/D/_5d_"), ("Dinfh", "/D/_∞h_"), ("I", "/I/")] {
            assert_eq!(marked(&group_runs(ascii)), set);
        }
    }
}
