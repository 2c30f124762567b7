//! Words on a sheet: our own, and names that others gave, which may hold anything.
//!
//! Names are kept apart from our own words up to the page, so that each format can set them apart
//! in its own way. What can't be seen, or would reorder what stands beside it, is shown by its
//! number, as in ⟨U+202E⟩.

use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

/// Combining marks on one letter, at most: piles of them reach over other lines.
const MOST_MARKS: usize = 4;

/// A run of words.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Piece {
    /// Our own.
    Plain(String),
    /// Someone else's, made visible.
    Name(String),
    /// A hash or the like, in letters of one width.
    Exact(String),
}

/// A line of words.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Words(pub(super) Vec<Piece>);

impl Words {
    /// A name alone.
    pub(super) fn name(name: &str) -> Self {
        Self(vec![Piece::Name(visible(name))])
    }

    /// Figures in letters of one width.
    pub(super) fn exact(text: &str) -> Self {
        Self(vec![Piece::Exact(visible(text))])
    }

    /// With more of our own behind.
    pub(super) fn and(mut self, text: impl Into<String>) -> Self {
        self.0.push(Piece::Plain(text.into()));
        self
    }

    /// With a name behind.
    pub(super) fn and_name(mut self, name: &str) -> Self {
        self.0.push(Piece::Name(visible(name)));
        self
    }
}

impl<T: Into<String>> From<T> for Words {
    fn from(text: T) -> Self {
        Self(vec![Piece::Plain(text.into())])
    }
}

/// A name with all of it to be seen.
pub(super) fn visible(name: &str) -> String {
    let mut shown = String::with_capacity(name.len());
    let mut marks = MOST_MARKS;
    for letter in name.chars() {
        let mark = is_mark(letter);
        if is_hidden(letter) || mark && marks == MOST_MARKS && !shown.is_empty() {
            shown.push_str(&format!("⟨U+{:04X}⟩", u32::from(letter)));
            marks = MOST_MARKS;
            continue;
        }
        if mark && shown.is_empty() {
            // A mark needs something of its own to stand on.
            shown.push('\u{25cc}');
            marks = 0;
        }
        marks = if mark { marks + 1 } else { 0 };
        shown.push(letter);
    }
    if shown.trim().is_empty() { "⟨no name⟩".into() } else { shown }
}

/// Whether it stands on the letter before it.
fn is_mark(letter: char) -> bool {
    // Variation selectors choose between text and picture, and pile up nowhere.
    letter.width() == Some(0) && !is_hidden(letter) && !('\u{fe00}'..='\u{fe0f}').contains(&letter)
}

/// Whether it can't be seen, or changes the order of others.
fn is_hidden(letter: char) -> bool {
    letter.is_control()
        || matches!(letter,
            '\u{ad}' | '\u{61c}' | '\u{115f}' | '\u{1160}' | '\u{180e}' | '\u{3164}' | '\u{ffa0}'
            | '\u{200b}'..='\u{200f}' | '\u{2028}'..='\u{202e}' | '\u{2060}'..='\u{206f}'
            | '\u{feff}' | '\u{fff9}'..='\u{fffb}' | '\u{fffe}' | '\u{ffff}'
            | '\u{e0000}'..='\u{e0fff}')
}

/// A visible name cut to a width, with "…" where something is left out.
///
/// - `columns`: of letters, wide ones counted twice
pub(super) fn cut(name: &str, columns: usize) -> String {
    if name.width() <= columns {
        return name.to_owned();
    }
    let mut kept = String::new();
    for letter in name.chars() {
        if kept.width() + letter.width().unwrap_or(0) + 1 > columns {
            break;
        }
        kept.push(letter);
    }
    kept.truncate(kept.trim_end().len());
    kept + "…"
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Numbers of the letters from the Unicode tables: U+202E turns the order, U+200B has no width.
    #[test]
    fn analytic_what_is_hidden_is_shown() {
        assert_eq!(visible("a\u{202e}b"), "a⟨U+202E⟩b");
        assert_eq!(visible("a\u{200b}\n\u{7}"), "a⟨U+200B⟩⟨U+000A⟩⟨U+0007⟩");
        assert_eq!(visible("Zoë & <b> | 🦎"), "Zoë & <b> | 🦎");
        assert_eq!(visible("e\u{301}"), "e\u{301}");
        assert_eq!(visible("\u{301}a"), "\u{25cc}\u{301}a");
        assert_eq!(visible(""), "⟨no name⟩");
        let pile = format!("e{}", "\u{301}".repeat(6));
        assert_eq!(visible(&pile), format!("e{}⟨U+0301⟩⟨U+0301⟩", "\u{301}".repeat(4)));
    }

    #[test]
    fn analytic_long_names_are_cut() {
        assert_eq!(cut("operator", 8), "operator");
        assert_eq!(cut("abcdefghi", 8), "abcdefg…");
        assert_eq!(cut("one two", 5), "one…");
        // Each takes two columns.
        assert_eq!(cut("蛇蛇蛇蛇", 6), "蛇蛇…");
        // A mark stays with its letter.
        assert_eq!(cut("abe\u{301}fgh", 4), "abe\u{301}…");
    }
}
