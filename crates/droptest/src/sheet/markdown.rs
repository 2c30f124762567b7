//! The sheet as Markdown.

use super::Sheet;
use super::contents::{Block, Section, Table, contents};
use super::words::{Piece, Words};

/// The whole sheet.
pub(super) fn text(sheet: &Sheet<'_>) -> String {
    let (title, sections) = contents(sheet);
    let mut text = format!("# {}\n", words(&title));
    for section in &sections {
        put_section(section, &mut text);
    }
    text
}

fn put_section(section: &Section, text: &mut String) {
    if !section.heading.0.is_empty() {
        *text += &format!("\n## {}\n", words(&section.heading));
    }
    for block in &section.blocks {
        *text += "\n";
        put_block(block, text);
    }
}

fn put_block(block: &Block, text: &mut String) {
    match block {
        Block::Text(told) => *text += &format!("{}\n", words(told)),
        Block::Verdict { words: told, .. } => *text += &format!("**{}**\n", words(told)),
        Block::Facts(facts) => {
            for (name, told) in facts {
                *text += &format!("- {name}: {}\n", words(told));
            }
        }
        Block::ToFill(names) => {
            for name in names {
                *text += &format!("- {name}: ____________________\n");
            }
        }
        Block::List(list) | Block::Short(list) => {
            for told in list {
                *text += &format!("- {}\n", words(told));
            }
        }
        Block::Table(table) => put_table(table, text),
        Block::Plan { told, .. } => *text += &format!("{told}. Drawn in the sheet as HTML.\n"),
        Block::Rung { name, about, table, limits } => {
            *text += &format!("### {}\n\n{}\n\n", words(name), words(about));
            put_table(table, text);
            *text += &format!("\n{}\n\n- [ ] go on; initials: __________\n", words(limits));
        }
    }
}

fn put_table(table: &Table, text: &mut String) {
    let row = |cells: &[Words]| {
        let cells: Vec<String> = cells.iter().map(words).collect();
        format!("| {} |\n", cells.join(" | "))
    };
    *text += &row(&table.columns);
    *text += &format!("|{}\n", "---|".repeat(table.columns.len()));
    for cells in &table.rows {
        *text += &row(cells);
    }
}

fn words(words: &Words) -> String {
    let of = |piece: &Piece| match piece {
        Piece::Plain(text) => text.clone(),
        Piece::Name(name) => isolated(&escaped(name), name),
        Piece::Exact(text) => format!("`{text}`"),
    };
    words.0.iter().map(of).collect()
}

/// A name that means nothing to Markdown or HTML.
fn escaped(name: &str) -> String {
    let letters: Vec<char> = name.chars().collect();
    let is_within = |at: usize| {
        let is_word = |letter: Option<&char>| letter.is_some_and(|letter| letter.is_alphanumeric());
        is_word(at.checked_sub(1).and_then(|at| letters.get(at))) && is_word(letters.get(at + 1))
    };
    let mut escaped = String::with_capacity(name.len());
    for (at, letter) in letters.iter().enumerate() {
        // Within a word neither begins or ends anything.
        let is_harmless = matches!(letter, '-' | '.' | '+') && is_within(at) || *letter == ',';
        if letter.is_ascii_punctuation() && !is_harmless {
            escaped.push('\\');
        }
        escaped.push(*letter);
    }
    escaped
}

/// A name from right to left is set apart, so that what follows keeps its place.
fn isolated(shown: &str, name: &str) -> String {
    if name.chars().any(is_right_to_left) {
        format!("\u{2068}{shown}\u{2069}")
    } else {
        shown.to_owned()
    }
}

fn is_right_to_left(letter: char) -> bool {
    matches!(letter,
        '\u{590}'..='\u{8ff}' | '\u{fb1d}'..='\u{fdff}' | '\u{fe70}'..='\u{feff}'
        | '\u{10800}'..='\u{10fff}' | '\u{1e800}'..='\u{1efff}')
}

#[cfg(test)]
mod tests {
    use super::*;

    /// CommonMark: a backslash before punctuation makes it text.
    #[test]
    fn published_names_are_text() {
        for (name, shown) in [
            ("hall-gantry.toml", "hall-gantry.toml"),
            ("1. one", "1\\. one"),
            ("a|b `c` *d*", "a\\|b \\`c\\` \\*d\\*"),
            ("<script>&amp;", "\\<script\\>\\&amp\\;"),
            ("a\nb", "a⟨U+000A⟩b"),
            ("\u{202e}x", "⟨U+202E⟩x"),
            ("שלום", "\u{2068}שלום\u{2069}"),
        ] {
            assert_eq!(words(&Words::name(name)), shown);
        }
    }
}
