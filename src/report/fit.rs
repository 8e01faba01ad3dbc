//! Lines that are longer than the terminal: they go on below, where their last column begins.
//!
//! Not here: how wide the terminal is (`cli::terminal`).

/// Narrower than this nothing is readable, and lines are left to the terminal.
const NARROWEST: usize = 40;
/// A column this narrow at the end of a line is no room for text.
const ROOM: usize = 20;
/// Continuation where the last column has no room.
const INDENT: usize = 4;

/// The text with no line longer than `width` signs, except words that are longer themselves.
#[must_use]
pub fn fit(text: &str, width: usize) -> String {
    if width < NARROWEST {
        return text.to_owned();
    }
    let lines: Vec<String> = text.split('\n').map(|line| broken(line, width, None)).collect();
    lines.join("\n")
}

/// `indent` is that of the lines that go on below, once it is settled.
fn broken(line: &str, width: usize, indent: Option<usize>) -> String {
    let signs: Vec<char> = line.chars().collect();
    if signs.len() <= width {
        return line.to_owned();
    }
    let first_word = signs.iter().position(|sign| *sign != ' ').unwrap_or(0);
    let Some(at) = (first_word + 1..=width).rev().find(|&at| signs[at] == ' ') else { return line.to_owned() };
    // The column that is being broken begins after the last gap of two blanks.
    let begins = |start: &usize| {
        signs[*start] != ' ' && signs[*start - 1] == ' ' && signs[*start - 2] == ' ' && width - *start >= ROOM
    };
    let column = || (first_word + 2..=at).rev().find(begins).unwrap_or(first_word + INDENT);
    let indent = indent.unwrap_or_else(column);
    let head: String = signs[..at].iter().collect();
    let rest: String = signs[at..].iter().collect();
    let rest = format!("{}{}", " ".repeat(indent), rest.trim_start());
    // Each step takes at least one word away.
    format!("{}\n{}", head.trim_end(), broken(&rest, width, Some(indent)))
}

#[cfg(test)]
mod tests {
    use super::fit;

    #[test]
    fn long_lines_go_on_below_their_last_column() {
        let text = "Axes          z: C6 axis; x: C2' through 4 atoms, the other half turns C2'' through 2 bonds";
        let fitted = fit(text, 50);
        let lines: Vec<&str> = fitted.lines().collect();
        assert!(lines.iter().all(|line| line.chars().count() <= 50), "{fitted}");
        assert!(
            lines[1..].iter().all(|line| line.starts_with("              ") && !line.starts_with("               "))
        );
        assert_eq!(fitted.split_whitespace().collect::<Vec<_>>(), text.split_whitespace().collect::<Vec<_>>());
    }

    #[test]
    fn words_longer_than_the_terminal_end() {
        let word = "x".repeat(300);
        assert_eq!(fit(&word, 60), word);
        assert_eq!(fit(&format!("  a {word}"), 60).split_whitespace().count(), 2);
    }
}
