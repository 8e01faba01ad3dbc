//! Roles of the words in a finished text report, and the style of each role: headings, verdicts, warnings, marks.
//!
//! Here: where a role is seen from the layout that all reports share. Not here: the words themselves; whether a terminal
//! wants styles (`cli::terminal`). Taking the styles out again gives the same bytes.

use anstyle::{AnsiColor, Style};
use std::fmt::Write as _;

/// Column at which the text of a head line begins, after its name.
const TEXT_COLUMN: usize = 14;

const PLAIN: Style = Style::new();
const TITLE: Style = Style::new().bold();
const NAME: Style = AnsiColor::Cyan.on_default();
const HEADING: Style = Style::new().bold().underline();
const COLUMNS: Style = Style::new().dimmed();
const FAINT: Style = Style::new().dimmed();
const LABEL: Style = Style::new().bold();
const GOOD: Style = AnsiColor::Green.on_default().bold();
const DOUBTFUL: Style = AnsiColor::Yellow.on_default().bold();
const BAD: Style = AnsiColor::Red.on_default().bold();
const MARK: Style = AnsiColor::Magenta.on_default().bold();

/// Words that deserve the eye wherever they stand in a table, with their style.
const WORDS: [(&str, Style); 14] = [
    ("HOMO", MARK),
    ("LUMO", MARK),
    ("SOMO", MARK),
    ("strongest", GOOD),
    ("forbidden", FAINT),
    ("—", FAINT),
    ("impure", DOUBTFUL),
    ("accidental degeneracy", DOUBTFUL),
    ("no irrep reaches the purity limit", BAD),
    ("partners at one energy", DOUBTFUL),
    ("partners missing at this wavenumber", DOUBTFUL),
    ("imaginary", DOUBTFUL),
    ("turned among themselves", DOUBTFUL),
    ("mixed freely", DOUBTFUL),
];

fn styled(out: &mut String, style: Style, text: &str) {
    if style == PLAIN || text.is_empty() {
        out.push_str(text);
    } else {
        let _ = write!(out, "{style}{text}{style:#}");
    }
}

/// A text report with styles.
#[must_use]
pub fn report(text: &str) -> String {
    let mut out = String::with_capacity(text.len() * 5 / 4);
    let mut before = Before::Start;
    for (number, line) in text.split('\n').enumerate() {
        if number > 0 {
            out.push('\n');
        }
        before = paint_line(&mut out, line, before);
    }
    out
}

/// What stands above a line, as far as it decides the line's role.
#[derive(Clone, Copy, PartialEq)]
enum Before {
    Start,
    Blank,
    Heading,
    Rows,
    Head,
}

fn paint_line(out: &mut String, line: &str, before: Before) -> Before {
    if line.trim().is_empty() {
        out.push_str(line);
        return if before == Before::Start { Before::Start } else { Before::Blank };
    }
    if before == Before::Start {
        let name_ends = line.find(" · ").or_else(|| line.find("   ")).unwrap_or(line.len());
        styled(out, TITLE, &line[..name_ends]);
        out.push_str(&line[name_ends..]);
        return Before::Head;
    }
    if let Some((name, text)) = head_line(line) {
        paint_head(out, name, text);
        return Before::Head;
    }
    if !line.starts_with(' ') {
        let style = if before == Before::Blank { HEADING } else { PLAIN };
        styled(out, style, line);
        return if before == Before::Blank { Before::Heading } else { Before::Head };
    }
    match before {
        Before::Heading | Before::Blank if is_header(line) => {
            styled(out, COLUMNS, line);
            Before::Rows
        }
        Before::Head => {
            out.push_str(line);
            Before::Head
        }
        _ => {
            paint_row(out, line);
            Before::Rows
        }
    }
}

/// The name and the rest of a line such as `Gap           7.731 eV`.
fn head_line(line: &str) -> Option<(&str, &str)> {
    let (text_at, first) = line.char_indices().nth(TEXT_COLUMN)?;
    let name = &line[..text_at];
    let is_name = !line.starts_with(' ') && first != ' ' && name.ends_with("  ") && !name.trim_end().contains("  ");
    is_name.then(|| line.split_at(text_at))
}

fn paint_head(out: &mut String, name: &str, text: &str) {
    let word = name.trim_end();
    let style = match word {
        "Caution" | "Warning" => DOUBTFUL,
        _ => NAME,
    };
    styled(out, style, word);
    out.push_str(&name[word.len()..]);
    let verdict = text.split([':', ' ']).next().unwrap_or_default();
    let style = match (word, verdict) {
        ("Verdict", "intact" | "rotated") | (_, "allowed") => GOOD,
        ("Verdict", "mixed") => DOUBTFUL,
        ("Verdict", "broken") | (_, "forbidden") => BAD,
        ("HOMO" | "LUMO" | "SOMO" | "Point group" | "Ground term", _) => LABEL,
        _ => PLAIN,
    };
    styled(out, style, verdict);
    out.push_str(&text[verdict.len()..]);
}

/// Names of columns: a line of several cells without any decimal number.
fn is_header(line: &str) -> bool {
    let decimal = |word: &str| word.contains('.') && word.parse::<f64>().is_ok();
    line.trim().contains("  ") && !line.split_whitespace().any(decimal)
}

fn paint_row(out: &mut String, line: &str) {
    let start = line.len() - line.trim_start().len();
    let cell = line[start..].find("  ").map_or(line.len(), |gap| start + gap);
    out.push_str(&line[..start]);
    let label = &line[start..cell];
    // A lone cell is a sentence, not a label.
    styled(out, if cell < line.len() && label != "—" { LABEL } else { PLAIN }, label);
    let mut rest = &line[cell..];
    while let Some((at, word, style)) =
        WORDS.iter().filter_map(|&(word, style)| Some((rest.find(word)?, word, style))).min_by_key(|found| found.0)
    {
        out.push_str(&rest[..at]);
        styled(out, style, word);
        rest = &rest[at + word.len()..];
    }
    out.push_str(rest);
}

/// A line of standard error: who speaks, how bad it is, where it points.
#[must_use]
pub fn message(line: &str) -> String {
    let mut out = String::new();
    let rest = line.strip_prefix("orbsieve: ").unwrap_or(line);
    styled(&mut out, BAD, &line[..line.len() - rest.len()]);
    let marks = [(": error: ", BAD), (": warning: ", DOUBTFUL), (" = help: ", NAME)];
    let found = marks.iter().filter_map(|&(mark, style)| Some((rest.find(mark)?, mark, style))).min_by_key(|m| m.0);
    if let Some((at, mark, style)) = found {
        out.push_str(&rest[..at]);
        styled(&mut out, style, mark.trim_end());
        out.push_str(&rest[at + mark.trim_end().len()..]);
    } else if let Some((margin, carets)) = rest.rsplit_once('|').filter(|(_, carets)| carets.trim().starts_with('^')) {
        out.push_str(margin);
        out.push('|');
        styled(&mut out, BAD, carets);
    } else {
        out.push_str(rest);
    }
    out
}

#[cfg(test)]
mod tests {
    use super::{GOOD, MARK, message, report};

    #[test]
    fn roles_are_seen() {
        let text = "x.molden · H4\n\nVerdict       intact: all\nCaution       careful\n\nSets\n label        eV\n 2t2g  HOMO  3.7\n";
        let painted = report(text);
        assert!(painted.contains(&format!("{GOOD}intact{GOOD:#}: all")), "{painted}");
        assert!(painted.contains(&format!("{MARK}HOMO{MARK:#}")), "{painted}");
        assert_eq!(anstream::adapter::strip_str(&painted).to_string(), text);
    }

    #[test]
    fn messages_keep_their_words() {
        for line in ["orbsieve: x:1:2: error: no", "3 |  x", "  |  ^^^", "  = help: do", "plain", ""] {
            assert_eq!(anstream::adapter::strip_str(&message(line)).to_string(), line);
        }
        assert_ne!(message("  |  ^^^"), "  |  ^^^");
    }
}
