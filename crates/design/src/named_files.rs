//! Files that a design names, and the hash over all of them.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

use sha2::{Digest, Sha256};

use crate::document::source_of;
use crate::files::{MOST_CSV_BYTES, MOST_TOML_BYTES, read_file};
use crate::mistake::Source;
use crate::node::Node;

/// Reads files by the names that a design gives them, and remembers them.
#[derive(Debug)]
pub(crate) struct NamedFiles {
    folder: PathBuf,
    /// Each with the place of its name in the design, bytes.
    read: Vec<(usize, Source)>,
    /// Files that were read before, by their paths.
    kept: BTreeMap<PathBuf, Source>,
}

impl NamedFiles {
    /// - `design`: the path of the design, from whose folder names count
    /// - `kept`: files that needn't be read again
    pub(crate) fn of(design: &Path, kept: BTreeMap<PathBuf, Source>) -> Self {
        let folder = design.parent().unwrap_or(Path::new("")).to_owned();
        Self { folder, read: vec![], kept }
    }

    /// The text of a TOML file, where it can be read.
    pub(crate) fn toml_text(&self, name: &str) -> Option<String> {
        let path = self.folder.join(name);
        match self.kept.get(&path) {
            Some(source) => Some(source.inner().clone()),
            None => read_file(&path, MOST_TOML_BYTES).ok(),
        }
    }

    /// All files that were read, to be kept.
    pub(crate) fn into_kept(self) -> BTreeMap<PathBuf, Source> {
        self.kept
    }

    /// Reads the TOML file that a value names; what goes wrong is noted there.
    pub(crate) fn read_toml(&mut self, node: &Node<'_>) -> Option<Source> {
        self.read(node, MOST_TOML_BYTES)
    }

    /// Reads the CSV file that a value names; what goes wrong is noted there.
    pub(crate) fn read_csv(&mut self, node: &Node<'_>) -> Option<Source> {
        self.read(node, MOST_CSV_BYTES)
    }

    fn read(&mut self, node: &Node<'_>, most_bytes: u64) -> Option<Source> {
        let path = self.folder.join(node.text_as("the name of a file")?);
        let source = match self.kept.get(&path) {
            Some(source) => Ok(source.clone()),
            None => read_file(&path, most_bytes).map(|text| source_of(&path, text)),
        };
        match source {
            Ok(source) => {
                self.read.push((node.start(), source.clone()));
                self.kept.insert(path, source.clone());
                Some(source)
            }
            Err(error) => {
                node.note(error);
                None
            }
        }
    }

    /// SHA-256 in hexadecimal: of the design's text, then, in the order in which it names them, of
    /// each file's length (eight bytes, the lowest first) and bytes.
    pub(crate) fn sha256(&mut self, text: &str) -> String {
        self.read.sort_by_key(|(start, _)| *start);
        sha256_of(text, self.read.iter().map(|(_, source)| source.inner().as_str()))
    }
}

/// SHA-256 in hexadecimal: of a text, then of each file's length (eight bytes, the lowest first)
/// and bytes.
pub(crate) fn sha256_of<'f>(text: &str, files: impl Iterator<Item = &'f str>) -> String {
    let mut hash = Sha256::new_with_prefix(text);
    for file in files {
        hash.update((file.len() as u64).to_le_bytes());
        hash.update(file);
    }
    hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect()
}
