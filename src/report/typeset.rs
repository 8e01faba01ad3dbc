//! Tables for papers in LaTeX and Markdown: symbols set as the recommendations want them, escaping, layout.
//!
//! Here: cells, symbols and both printed forms. Not here: which columns a verb has (`report::sheets`).
//! Symbols: letters italic, numbers and g/u of subscripts upright ("Quantities, Units and Symbols in Physical Chemistry", the
//! 1993 and 2007 editions, section on symmetry operators; from memory).

use std::fmt::Write as _;

/// A part of a cell or of a line of text.
#[derive(Debug, Clone, PartialEq)]
pub enum Piece {
    /// Words, escaped.
    Words(String),
    /// An irrep or a label with its running number, in ASCII: `2t2g`, `A1''`, `3sigma_g`.
    Label(String),
    /// A shell with its electrons: `t2g`, 3.
    Shell(String, u32),
    /// A term with its multiplicity in front: `3T1g`.
    Term(String),
    /// A point group: `D5d`.
    Group(String),
    /// A class or an operation: `2C5^2`, `3sigma_v`, `5C2'`.
    Class(String),
    /// A number, or a character such as `-2cos36°`.
    Number(String),
    /// A coordinate, a rotation or a polynomial: `x`, `Rz`, `x2-y2`.
    Function(String),
    /// An arrow.
    To,
}

/// A cell.
pub type Cell = Vec<Piece>;

/// Words alone.
#[must_use]
pub fn words(text: impl Into<String>) -> Cell {
    vec![Piece::Words(text.into())]
}

/// A number alone.
#[must_use]
pub fn number(text: impl Into<String>) -> Cell {
    vec![Piece::Number(text.into())]
}

/// Cells with a word between them.
#[must_use]
pub fn joined(cells: impl IntoIterator<Item = Cell>, between: &str) -> Cell {
    let mut all = Cell::new();
    for cell in cells {
        if !all.is_empty() {
            all.push(Piece::Words(between.to_owned()));
        }
        all.extend(cell);
    }
    all
}

/// One table.
#[derive(Debug, Clone, PartialEq)]
pub struct Sheet {
    /// What it shows, with the tolerance.
    pub caption: Cell,
    /// Heads; true for columns of numbers.
    pub columns: Vec<(Cell, bool)>,
    /// As many cells each as there are columns.
    pub rows: Vec<Vec<Cell>>,
    /// What belongs to the numbers.
    pub notes: Vec<String>,
}

/// The two forms.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Form {
    Latex,
    Markdown,
}

/// An ASCII symbol in parts.
struct Symbol<'a> {
    /// Running number or multiplicity.
    front: &'a str,
    /// A letter or a Greek word.
    stem: &'a str,
    /// Numbers and g, u or Schoenflies letters.
    below: String,
    /// Primes.
    primes: usize,
    /// A sign or a power.
    above: String,
}

/// Greek words with their LaTeX and Unicode signs; upright capitals where LaTeX has no command.
const GREEK: [(&str, &str, &str); 28] = [
    ("Sigma", r"\Sigma", "Σ"),
    ("sigma", r"\sigma", "σ"),
    ("Pi", r"\Pi", "Π"),
    ("pi", r"\pi", "π"),
    ("Delta", r"\Delta", "Δ"),
    ("delta", r"\delta", "δ"),
    ("Phi", r"\Phi", "Φ"),
    ("phi", r"\varphi", "φ"),
    ("Gamma", r"\Gamma", "Γ"),
    ("gamma", r"\gamma", "γ"),
    ("Theta", r"\Theta", "Θ"),
    ("theta", r"\theta", "θ"),
    ("Eta", r"\mathrm{H}", "Η"),
    ("eta", r"\eta", "η"),
    ("Iota", r"\mathrm{I}", "Ι"),
    ("iota", r"\iota", "ι"),
    ("Kappa", r"\mathrm{K}", "Κ"),
    ("kappa", r"\kappa", "κ"),
    ("Lambda", r"\Lambda", "Λ"),
    ("lambda", r"\lambda", "λ"),
    ("Omicron", r"\mathrm{O}", "Ο"),
    ("omicron", "o", "ο"),
    ("Mu", r"\mathrm{M}", "Μ"),
    ("mu", r"\mu", "μ"),
    ("Nu", r"\mathrm{N}", "Ν"),
    ("nu", r"\nu", "ν"),
    ("inf", r"\infty", "∞"),
    ("i", r"i", "i"),
];

fn leading(text: &str, wanted: impl Fn(char) -> bool) -> (&str, &str) {
    text.split_at(text.find(|c: char| !wanted(c)).unwrap_or(text.len()))
}

/// Takes an ASCII symbol apart.
fn symbol(text: &str) -> Symbol<'_> {
    let (front, rest) = match text.strip_prefix("inf") {
        Some(rest) => (&text[..3], rest),
        None => leading(text, |c| c.is_ascii_digit()),
    };
    let stem_length = GREEK[..26]
        .iter()
        .find(|(word, _, _)| rest.starts_with(word))
        .map_or_else(|| rest.chars().next().map_or(0, char::len_utf8), |(word, _, _)| word.len());
    let (stem, tail) = rest.split_at(stem_length);
    let (power, mut primes, mut below, mut above) = (tail.split_once('^'), 0, String::new(), String::new());
    let body = power.map_or(tail, |(body, power)| {
        above.push_str(power);
        body
    });
    for c in body.chars() {
        match c {
            '\'' => primes += 1,
            '+' | '-' => above.push(c),
            '_' => {}
            c => below.push(c),
        }
    }
    Symbol { front, stem, below, primes, above }
}

impl Form {
    fn stem(self, stem: &str) -> String {
        let greek = GREEK.iter().find(|(word, _, _)| *word == stem);
        match (self, greek) {
            (Self::Latex, Some((_, command, _))) => (*command).to_owned(),
            (Self::Markdown, Some((_, _, sign))) => (*sign).to_owned(),
            (Self::Latex, None) => stem.to_owned(),
            (Self::Markdown, None) => format!("*{stem}*"),
        }
    }

    /// Letters upright, digits as they are, `inf` as its sign.
    fn subscript(self, below: &str) -> String {
        let text = below.replace("(phi)", "");
        match self {
            Self::Markdown => format!("<sub>{}</sub>", text.replace("inf", "∞")),
            Self::Latex => {
                let mut out = String::new();
                let mut rest = text.as_str();
                while !rest.is_empty() {
                    if let Some(after) = rest.strip_prefix("inf") {
                        out.push_str(r"\infty ");
                        rest = after;
                        continue;
                    }
                    let (letters, after) = leading(rest, |c| c.is_ascii_alphabetic());
                    if letters.is_empty() {
                        let (others, after) = leading(rest, |c| !c.is_ascii_alphabetic());
                        out.push_str(others);
                        rest = after;
                    } else {
                        let _ = write!(out, r"\mathrm{{{letters}}}");
                        rest = after;
                    }
                }
                format!("_{{{out}}}")
            }
        }
    }

    fn symbol(self, text: &str, multiplicity: bool) -> String {
        let Symbol { front, stem, below, primes, above } = symbol(text);
        let front = match (self, multiplicity && !front.is_empty()) {
            (Self::Latex, true) => format!("{{}}^{{{front}}}"),
            (Self::Markdown, true) => format!("<sup>{front}</sup>"),
            (Self::Latex, false) => front.replace("inf", r"\infty "),
            (Self::Markdown, false) => front.replace("inf", "∞"),
        };
        let angle = match (self, below.contains("(phi)")) {
            (_, false) => "",
            (Self::Latex, true) => r"(\varphi)",
            (Self::Markdown, true) => "(φ)",
        };
        let bare = below.replace("(phi)", "");
        let below = if bare.is_empty() { String::new() } else { self.subscript(&below) };
        let raised = match self {
            Self::Latex => {
                let primes = r"\prime".repeat(primes);
                let above = format!("{primes}{above}");
                if above.is_empty() { String::new() } else { format!("^{{{above}}}") }
            }
            Self::Markdown => {
                let primes = ["", "′", "″"].get(primes).copied().unwrap_or("‴");
                let above = above.replace('-', "−");
                if above.is_empty() { primes.to_owned() } else { format!("{primes}<sup>{above}</sup>") }
            }
        };
        let set = format!("{front}{}{below}{raised}{angle}", self.stem(stem));
        if self == Self::Latex { format!("${set}$") } else { set }
    }

    /// `D5d`: the letter italic, the rest upright below.
    fn group(self, name: &str) -> String {
        let (letter, rest) = name.split_at(name.chars().next().map_or(0, char::len_utf8));
        let below = if rest.is_empty() { String::new() } else { self.subscript(rest) };
        let set = format!("{}{below}", if self == Self::Latex { letter.to_owned() } else { format!("*{letter}*") });
        if self == Self::Latex { format!("${set}$") } else { set }
    }

    fn number(self, text: &str) -> String {
        match self {
            Self::Markdown => text.replace('-', "−"),
            Self::Latex => {
                let set =
                    text.replace('−', "-").replace("cos", r"\cos ").replace('°', r"^{\circ}").replace('φ', r"\varphi ");
                format!("${}$", set.replace('√', r"\surd ").trim_end())
            }
        }
    }

    /// A polynomial: letters italic, digits after a letter raised, `Rx` with its axis below.
    fn function(self, text: &str) -> String {
        let mut out = String::new();
        let mut after_letter = false;
        let mut rotation = false;
        for c in text.chars() {
            let digit = c.is_ascii_digit() && after_letter;
            let set = match self {
                Self::Latex if digit => format!("^{{{c}}}"),
                Self::Latex if rotation => format!("_{{{c}}}"),
                Self::Markdown if digit => format!("<sup>{c}</sup>"),
                Self::Markdown if rotation => format!("<sub>{c}</sub>"),
                Self::Markdown if c.is_ascii_alphabetic() => format!("*{c}*"),
                Self::Markdown if c == '-' => '−'.to_string(),
                Self::Latex | Self::Markdown => c.to_string(),
            };
            out.push_str(&set);
            rotation = c == 'R';
            after_letter = c.is_ascii_alphabetic() || c == ')' || digit;
        }
        let out = out.replace("**", "");
        if self == Self::Latex { format!("${out}$") } else { out }
    }

    fn words(self, text: &str) -> String {
        match self {
            Self::Latex => latex_words(text),
            Self::Markdown => markdown_words(text),
        }
    }

    fn cell(self, cell: &[Piece]) -> String {
        let piece = |piece: &Piece| match piece {
            Piece::Words(text) => self.words(text),
            Piece::Label(text) | Piece::Class(text) => self.symbol(text, false),
            Piece::Shell(text, electrons) => match self {
                Self::Latex => format!("$({})^{{{electrons}}}$", self.symbol(text, false).trim_matches('$')),
                Self::Markdown => format!("({})<sup>{electrons}</sup>", self.symbol(text, false)),
            },
            Piece::Term(text) => self.symbol(text, true),
            Piece::Group(text) => self.group(text),
            Piece::Number(text) => self.number(text),
            Piece::Function(text) => self.function(text),
            Piece::To => (if self == Self::Latex { r" $\to$ " } else { " → " }).to_owned(),
        };
        cell.iter().map(piece).collect()
    }
}

/// Text with everything that LaTeX would take for a command escaped; signs beyond ASCII spelled by commands of its kernel.
fn latex_words(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        match c {
            '&' | '%' | '$' | '#' | '_' | '{' | '}' => {
                out.push('\\');
                out.push(c);
            }
            '\\' => out.push_str(r"\textbackslash{}"),
            '~' => out.push_str(r"\textasciitilde{}"),
            '^' => out.push_str(r"\textasciicircum{}"),
            '<' => out.push_str("$<$"),
            '>' => out.push_str("$>$"),
            '|' => out.push_str("$|$"),
            'Å' => out.push_str(r"\AA{}"),
            '–' => out.push_str("--"),
            '—' => out.push_str("---"),
            '−' => out.push_str("$-$"),
            '→' => out.push_str(r"$\to$"),
            '↔' => out.push_str(r"$\leftrightarrow$"),
            '·' => out.push_str(r"$\cdot$"),
            '×' => out.push_str(r"$\times$"),
            '°' => out.push_str(r"$^{\circ}$"),
            '∇' => out.push_str(r"$\nabla$"),
            'Σ' => out.push_str(r"$\Sigma$"),
            'σ' => out.push_str(r"$\sigma$"),
            '√' => out.push_str(r"$\surd$"),
            '∞' => out.push_str(r"$\infty$"),
            'φ' => out.push_str(r"$\varphi$"),
            '≈' => out.push_str(r"$\approx$"),
            '′' => out.push_str("$'$"),
            '″' => out.push_str("$''$"),
            '“' => out.push_str("``"),
            '”' => out.push_str("''"),
            'ö' => out.push_str(r#"\"o"#),
            'ä' => out.push_str(r#"\"a"#),
            'ü' => out.push_str(r#"\"u"#),
            'α' => out.push_str(r"$\alpha$"),
            'β' => out.push_str(r"$\beta$"),
            '⁺' => out.push_str("$^{+}$"),
            '²' => out.push_str("$^{2}$"),
            '³' => out.push_str("$^{3}$"),
            '¹' => out.push_str("$^{1}$"),
            '⁻' => out.push_str("$^{-}$"),
            c if c.is_control() => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// Text with everything that Markdown would take for markup escaped.
fn markdown_words(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        match c {
            '\\' | '`' | '*' | '_' | '[' | ']' | '#' | '|' | '~' | '$' => {
                out.push('\\');
                out.push(c);
            }
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '&' => out.push_str("&amp;"),
            c if c.is_control() => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// LaTeX tables that need no package.
#[must_use]
pub fn latex(sheets: &[Sheet]) -> String {
    let form = Form::Latex;
    let mut out = String::new();
    for sheet in sheets {
        let kinds: String = sheet.columns.iter().map(|(_, numbers)| if *numbers { 'r' } else { 'l' }).collect();
        let line = |cells: &[String]| format!("{} \\\\\n", cells.join(" & "));
        let heads: Vec<String> = sheet.columns.iter().map(|(head, _)| form.cell(head)).collect();
        let _ = write!(
            out,
            "\\begin{{table}}\n\\caption{{{}}}\n\\begin{{tabular}}{{{kinds}}}\n\\hline\n{}\\hline\n",
            form.cell(&sheet.caption),
            line(&heads)
        );
        for row in &sheet.rows {
            let cells: Vec<String> = row.iter().map(|cell| form.cell(cell)).collect();
            out.push_str(&line(&cells));
        }
        out.push_str("\\hline\n\\end{tabular}\n");
        for note in &sheet.notes {
            let _ = writeln!(out, "\n\\footnotesize {}.", form.words(note.trim_end_matches('.')));
        }
        out.push_str("\\end{table}\n");
    }
    out
}

/// Markdown tables with raised and lowered signs in HTML, as common dialects read them.
#[must_use]
pub fn markdown(sheets: &[Sheet]) -> String {
    let form = Form::Markdown;
    let mut out = String::new();
    for (at, sheet) in sheets.iter().enumerate() {
        if at > 0 {
            out.push('\n');
        }
        let line = |cells: &[String]| format!("| {} |\n", cells.join(" | "));
        let heads: Vec<String> = sheet.columns.iter().map(|(head, _)| form.cell(head)).collect();
        let rule: Vec<String> =
            sheet.columns.iter().map(|(_, numbers)| (if *numbers { "---:" } else { ":---" }).to_owned()).collect();
        let _ = write!(out, "**{}**\n\n{}{}", form.cell(&sheet.caption), line(&heads), line(&rule));
        for row in &sheet.rows {
            let cells: Vec<String> = row.iter().map(|cell| form.cell(cell)).collect();
            out.push_str(&line(&cells));
        }
        out.push('\n');
        for note in &sheet.notes {
            let _ = writeln!(out, "- {}.", form.words(note.trim_end_matches('.')));
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::{Form, Piece};

    #[test]
    fn symbols_are_set_as_journals_want_them() {
        let cases: &[(Piece, &str, &str)] = &[
            (Piece::Label("a1g".into()), r"$a_{1\mathrm{g}}$", "*a*<sub>1g</sub>"),
            (Piece::Label("12t2g".into()), r"$12t_{2\mathrm{g}}$", "12*t*<sub>2g</sub>"),
            (Piece::Label("2a2''".into()), r"$2a_{2}^{\prime\prime}$", "2*a*<sub>2</sub>″"),
            (Piece::Label("3sigma_g".into()), r"$3\sigma_{\mathrm{g}}$", "3σ<sub>g</sub>"),
            (Piece::Label("Sigma_u-".into()), r"$\Sigma_{\mathrm{u}}^{-}$", "Σ<sub>u</sub><sup>−</sup>"),
            (Piece::Label("E'".into()), r"$E^{\prime}$", "*E*′"),
            (Piece::Label("E1/2g".into()), r"$E_{1/2\mathrm{g}}$", "*E*<sub>1/2g</sub>"),
            (Piece::Term("3T1g".into()), r"${}^{3}T_{1\mathrm{g}}$", "<sup>3</sup>*T*<sub>1g</sub>"),
            (
                Piece::Term("3Sigma_g-".into()),
                r"${}^{3}\Sigma_{\mathrm{g}}^{-}$",
                "<sup>3</sup>Σ<sub>g</sub><sup>−</sup>",
            ),
            (Piece::Shell("t2g".into(), 3), r"$(t_{2\mathrm{g}})^{3}$", "(*t*<sub>2g</sub>)<sup>3</sup>"),
            (Piece::Group("D5d".into()), r"$D_{5\mathrm{d}}$", "*D*<sub>5d</sub>"),
            (Piece::Group("Dinfh".into()), r"$D_{\infty \mathrm{h}}$", "*D*<sub>∞h</sub>"),
            (Piece::Group("T".into()), r"$T$", "*T*"),
            (Piece::Class("2S10^3".into()), r"$2S_{10}^{3}$", "2*S*<sub>10</sub><sup>3</sup>"),
            (Piece::Class("3sigma_v".into()), r"$3\sigma_{\mathrm{v}}$", "3σ<sub>v</sub>"),
            (Piece::Class("infC2'".into()), r"$\infty C_{2}^{\prime}$", "∞*C*<sub>2</sub>′"),
            (Piece::Class("2C(phi)".into()), r"$2C(\varphi)$", "2*C*(φ)"),
            (Piece::Class("i".into()), r"$i$", "i"),
            (Piece::Number("-2cos36°".into()), r"$-2\cos 36^{\circ}$", "−2cos36°"),
            (Piece::Function("x2-y2".into()), r"$x^{2}-y^{2}$", "*x*<sup>2</sup>−*y*<sup>2</sup>"),
            (Piece::Function("(Rx, Ry)".into()), r"$(R_{x}, R_{y})$", "(*R*<sub>x</sub>, *R*<sub>y</sub>)"),
            (Piece::Words("5% of C_6 {a}".into()), r"5\% of C\_6 \{a\}", r"5% of C\_6 {a}"),
            (Piece::Words("a|b <c>".into()), r"a$|$b $<$c$>$", r"a\|b &lt;c&gt;"),
        ];
        for (piece, latex, markdown) in cases {
            assert_eq!(Form::Latex.cell(std::slice::from_ref(piece)), *latex, "{piece:?}");
            assert_eq!(Form::Markdown.cell(std::slice::from_ref(piece)), *markdown, "{piece:?}");
        }
    }
}
