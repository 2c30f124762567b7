//! Where words go: answers to standard output, all else to standard error.

use std::borrow::Cow;
use std::io::{self, Write};

use anstyle::{AnsiColor, Style};
use textwrap::Options;

/// Lines on standard error are broken here at most, where it isn't narrower itself.
const WIDEST: usize = 100;

/// Prints an answer.
///
/// # Errors
///
/// When standard output can't take it; a pipe that was closed is told by [`is_closed_pipe`].
pub fn answer(text: &str) -> anyhow::Result<()> {
    let mut out = anstream::stdout().lock();
    out.write_all(harmless(text).as_bytes())?;
    out.flush()?;
    Ok(())
}

/// Words with what names of files may hold besides letters made visible: what would steer a terminal, or
/// turn the order of others around.
fn harmless(text: &str) -> Cow<'_, str> {
    let steers = |letter: char| {
        letter.is_control() && !matches!(letter, '\n' | '\t')
            || matches!(letter, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}')
    };
    if !text.contains(steers) {
        return text.into();
    }
    let shown = |letter| match steers(letter) {
        true => format!("⟨U+{:04X}⟩", u32::from(letter)),
        false => String::from(letter),
    };
    text.chars().map(shown).collect::<String>().into()
}

/// Whether an error only says that nobody reads the answer any more.
pub fn is_closed_pipe(error: &anyhow::Error) -> bool {
    error.downcast_ref::<io::Error>().is_some_and(|error| error.kind() == io::ErrorKind::BrokenPipe)
}

/// Says why something could not be done.
pub fn tell_error(text: &str) {
    tell("error", AnsiColor::Red.on_default().bold(), text);
}

/// Says which limit is missed.
pub fn tell_limit(text: &str) {
    tell("limit", AnsiColor::Red.on_default().bold(), text);
}

/// Says what to doubt.
pub fn tell_warning(text: &str) {
    tell("warning", AnsiColor::Yellow.on_default().bold(), text);
}

/// Says what to do about it.
pub fn tell_hint(text: &str) {
    tell("hint", Style::new().bold(), text);
}

fn tell(kind: &str, style: Style, text: &str) {
    let text = &harmless(text);
    let text = match error_width() {
        Some(width) => {
            let indent = " ".repeat(kind.len() + 2);
            let options = Options::new(width - indent.len()).break_words(false);
            textwrap::wrap(text, options).join(&format!("\n{indent}"))
        }
        // A file or a pipe gets whole lines, to search in.
        None => text.clone().into_owned(),
    };
    // Nothing is left to be done where standard error itself is gone.
    let _ = writeln!(anstream::stderr().lock(), "{style}{kind}{style:#}: {text}");
}

/// Columns to use where standard error is a terminal.
fn error_width() -> Option<usize> {
    let (width, _) = terminal_size::terminal_size_of(io::stderr())?;
    Some(usize::from(width.0).clamp(40, WIDEST))
}

/// Draws what is wrong in a file.
pub fn tell_diagnostic(diagnostic: &dyn miette::Diagnostic) {
    let mut drawn = String::new();
    let width = error_width().unwrap_or(WIDEST).max(60);
    let theme = if anstream::AutoStream::choice(&io::stderr()) == anstream::ColorChoice::Never {
        miette::GraphicalTheme::unicode_nocolor()
    } else {
        miette::GraphicalTheme::unicode()
    };
    let handler =
        miette::GraphicalReportHandler::new_themed(theme).with_width(width).with_context_lines(1);
    if handler.render_report(&mut drawn, diagnostic).is_err() {
        drawn = diagnostic.to_string();
    }
    let _ = writeln!(anstream::stderr().lock(), "{}", drawn.trim_end());
}

#[cfg(test)]
mod tests {
    use super::harmless;

    #[test]
    fn analytic_steering_letters_are_shown() {
        assert_eq!(harmless("Ada\n\tλ"), "Ada\n\tλ");
        assert_eq!(harmless("A\u{1b}[31mda\u{202e}"), "A⟨U+001B⟩[31mda⟨U+202E⟩");
    }
}
