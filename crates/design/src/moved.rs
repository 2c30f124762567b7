//! The text of a design for another folder: names of files in it are rewritten.

use std::path::{Component, Path, PathBuf};

use toml_edit::{DocumentMut, Item};

use crate::design::unusable;
use crate::document::{Document, source_of};
use crate::files::{MOST_TOML_BYTES, read_file};
use crate::overrides::{apply, put};
use crate::{Design, DesignError, DesignErrors};

/// The text of a design file for a copy in another folder: comments are kept, and relative names
/// of section tables, gait table and catalogue lead to the same files as before.
///
/// - `folder`: needn't be there yet; empty is the current one
///
/// # Errors
///
/// Where the file can't be read or isn't TOML, or where a path isn't text.
pub fn copy_for(design: &Path, folder: &Path) -> Result<String, DesignErrors> {
    let text = read_file(design, MOST_TOML_BYTES).map_err(|error| unusable(design, error))?;
    moved(design, text, folder)
}

impl Design {
    /// Its text with all that was set since, comments kept.
    pub fn current_text(&self) -> String {
        let overrides = self.origin.overrides();
        if overrides.is_empty() {
            return self.text.clone();
        }
        // Only numbers of the glider are set without text; none of them is in a catalogue.
        apply(&self.text, &overrides, |_| None).text
    }

    /// [`Self::current_text`] for another folder, as [`copy_for`] does it.
    ///
    /// # Errors
    ///
    /// Where a path isn't text.
    pub fn text_for(&self, folder: &Path) -> Result<String, DesignErrors> {
        moved(self.origin.path(), self.current_text(), folder)
    }
}

/// - `design`: where the text stands
pub(crate) fn moved(design: &Path, text: String, folder: &Path) -> Result<String, DesignErrors> {
    let mut document: DocumentMut = match text.parse() {
        Ok(document) => document,
        Err(error) => return Err(unreadable(design, text, &error)),
    };
    let (from, to) = (full(design.parent().unwrap_or(Path::new(""))), full(folder));
    if from == to {
        return Ok(text);
    }
    for name in names_of_files(&mut document) {
        let Some(old) = name.as_str().map(Path::new).filter(|old| old.is_relative()) else {
            continue;
        };
        let new = way_between(&to, &joined(&from, old));
        let new = in_text(&new).ok_or_else(|| {
            unusable(design, DesignError::NotInText { file: new.display().to_string() })
        })?;
        put(name, &new.into());
    }
    Ok(document.to_string())
}

/// What keeps a text from being TOML, in the reader's own words where it has some.
fn unreadable(design: &Path, text: String, error: &toml_edit::TomlError) -> DesignErrors {
    let source = source_of(design, text);
    match Document::parse(&source) {
        Err(mistakes) => DesignErrors::new(design.display().to_string(), mistakes),
        Ok(_) => unusable(design, DesignError::Syntax { why: error.message().to_owned() }),
    }
}

/// The values that name files.
fn names_of_files(document: &mut DocumentMut) -> Vec<&mut Item> {
    let mut names = Vec::new();
    for (key, item) in document.iter_mut() {
        match key.get() {
            "servos" => names.push(item),
            "gait" => names.extend(item.as_table_like_mut().and_then(|gait| gait.get_mut("table"))),
            "section" => {
                let sections = item.as_table_like_mut().into_iter().flat_map(|of| of.iter_mut());
                names.extend(sections.filter_map(|(_, section)| {
                    section.as_table_like_mut().and_then(|section| section.get_mut("table"))
                }));
            }
            _ => {}
        }
    }
    names
}

/// The relative path from a folder to a file, absolute where there is none.
fn way_between(folder: &Path, file: &Path) -> PathBuf {
    let (from, to): (Vec<_>, Vec<_>) = (folder.components().collect(), file.components().collect());
    let common = from.iter().zip(&to).take_while(|(a, b)| a == b).count();
    if common == 0 {
        return file.to_owned();
    }
    let up = std::iter::repeat_n(Component::ParentDir, from.len() - common);
    up.chain(to[common..].iter().copied()).collect()
}

/// A folder's path from the root without links, as far as it is there.
fn full(folder: &Path) -> PathBuf {
    let folder = if folder.as_os_str().is_empty() { Path::new(".") } else { folder };
    if let Ok(full) = folder.canonicalize() {
        return full;
    }
    match (folder.parent(), folder.file_name()) {
        (Some(parent), Some(name)) => full(parent).join(name),
        _ => std::path::absolute(folder).unwrap_or_else(|_| folder.to_owned()),
    }
}

/// A path without `.`, and without steps into a folder and out again.
///
/// - `folder`: without links, so that leaving one of its folders leads back
fn joined(folder: &Path, name: &Path) -> PathBuf {
    let mut path = folder.to_owned();
    let mut own = name.components().filter(|step| *step != Component::CurDir).peekable();
    while own.peek() == Some(&Component::ParentDir)
        && matches!(path.components().next_back(), Some(Component::Normal(_)))
    {
        path.pop();
        own.next();
    }
    path.extend(own);
    path
}

/// A path as a design names it: with `/` on all systems.
fn in_text(path: &Path) -> Option<String> {
    let text = path.to_str()?;
    Some(if cfg!(windows) { text.replace('\\', "/") } else { text.to_owned() })
}
