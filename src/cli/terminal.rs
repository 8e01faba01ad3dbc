//! What the terminal can show, and the text on its way there: styles, ASCII where nothing else is shown, its width.
//!
//! Only text for people is touched, and only on a terminal or where styles are forced; files and pipes get it plain.

use super::arguments::{Arguments, Color};
use crate::report::{ascii::ascii, fit::fit, paint};
use std::io::{self, IsTerminal, Write};

/// What standard output and standard error are connected to.
#[derive(Debug, Clone, Copy, Default)]
pub struct Terminal {
    /// Standard output shows styles, by its kind and by `NO_COLOR`, `CLICOLOR`, `CLICOLOR_FORCE` and `TERM`.
    pub styles: bool,
    /// The same of standard error.
    pub error_styles: bool,
    /// Columns, where standard output is a terminal.
    pub columns: Option<usize>,
    /// Standard output is a terminal whose locale shows ASCII only.
    pub ascii: bool,
}

impl Terminal {
    /// That of this process.
    #[must_use]
    pub fn of_process() -> Self {
        let chosen = |choice: anstream::ColorChoice| choice != anstream::ColorChoice::Never;
        let on_terminal = io::stdout().is_terminal();
        let columns = || {
            let told = std::env::var("COLUMNS").ok().and_then(|text| text.parse().ok());
            told.or_else(|| comfy_table::Table::new().width().map(usize::from))
        };
        Self {
            styles: chosen(anstream::AutoStream::choice(&io::stdout())),
            error_styles: chosen(anstream::AutoStream::choice(&io::stderr())),
            columns: on_terminal.then(columns).flatten(),
            ascii: on_terminal && !shows_unicode(|name| std::env::var(name).ok()),
        }
    }
}

/// Whether the locale is a UTF-8 one: the first of `LC_ALL`, `LC_CTYPE`, `LANG` that is set decides, none means yes
/// (today's terminals without a locale show UTF-8 more often than not).
fn shows_unicode(variable: impl Fn(&str) -> Option<String>) -> bool {
    let locale = ["LC_ALL", "LC_CTYPE", "LANG"].into_iter().filter_map(variable).find(|value| !value.is_empty());
    locale.is_none_or(|locale| {
        let locale = locale.to_lowercase();
        locale.contains("utf-8") || locale.contains("utf8")
    })
}

/// Standard output on which text for people is dressed for the terminal once a result is whole.
pub struct Page<'a> {
    out: &'a mut dyn Write,
    styles: bool,
    columns: Option<usize>,
    ascii: bool,
    pending: Vec<u8>,
}

impl<'a> Page<'a> {
    /// What `arguments` print on `terminal`.
    pub fn new(arguments: &Arguments, terminal: &Terminal, out: &'a mut dyn Write) -> Self {
        let for_people = arguments.verb.prints_text();
        Self {
            out,
            styles: for_people && chosen(arguments.color, terminal.styles),
            columns: terminal.columns.filter(|_| for_people),
            ascii: terminal.ascii && for_people,
            pending: Vec::new(),
        }
    }

    fn is_plain(&self) -> bool {
        !self.styles && !self.ascii && self.columns.is_none()
    }
}

fn chosen(color: Color, automatic: bool) -> bool {
    match color {
        Color::Auto => automatic,
        Color::Always => true,
        Color::Never => false,
    }
}

impl Write for Page<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        if self.is_plain() {
            return self.out.write(bytes);
        }
        self.pending.extend_from_slice(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        if !self.pending.is_empty() {
            let mut text = String::from_utf8_lossy(&std::mem::take(&mut self.pending)).into_owned();
            // What a file's title smuggles in must not steer the terminal.
            text = text.replace(|sign: char| sign.is_control() && sign != '\n', "?");
            if self.ascii {
                text = ascii(&text);
            }
            if let Some(columns) = self.columns {
                text = fit(&text, columns);
            }
            if self.styles {
                text = paint::report(&text);
            }
            self.out.write_all(text.as_bytes())?;
        }
        self.out.flush()
    }
}

/// Standard error with styles, line by line.
pub struct Messages<'a> {
    errors: &'a mut dyn Write,
    styles: bool,
    line: Vec<u8>,
}

impl<'a> Messages<'a> {
    /// What is said on `terminal`.
    pub fn new(color: Color, terminal: &Terminal, errors: &'a mut dyn Write) -> Self {
        Self { errors, styles: chosen(color, terminal.error_styles), line: Vec::new() }
    }
}

impl Write for Messages<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        if !self.styles {
            return self.errors.write(bytes);
        }
        self.line.extend_from_slice(bytes);
        while let Some(end) = memchr::memchr(b'\n', &self.line) {
            let rest = self.line.split_off(end + 1);
            let line = std::mem::replace(&mut self.line, rest);
            let text = String::from_utf8_lossy(&line[..end]);
            writeln!(self.errors, "{}", paint::message(&text))?;
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        let rest = std::mem::take(&mut self.line);
        self.errors.write_all(&rest)?;
        self.errors.flush()
    }
}

#[cfg(test)]
mod tests {
    use super::shows_unicode;

    #[test]
    fn the_first_locale_variable_that_is_set_decides() {
        let of = |set: &'static [(&str, &str)]| {
            shows_unicode(move |name| set.iter().find(|(key, _)| *key == name).map(|(_, value)| (*value).to_owned()))
        };
        assert!(of(&[]));
        assert!(of(&[("LANG", "en_GB.UTF-8")]));
        assert!(of(&[("LC_ALL", ""), ("LANG", "de_DE.utf8")]));
        assert!(!of(&[("LANG", "C")]));
        assert!(!of(&[("LC_ALL", "POSIX"), ("LANG", "en_GB.UTF-8")]));
        assert!(of(&[("LC_CTYPE", "C.UTF-8"), ("LANG", "C")]));
    }
}
