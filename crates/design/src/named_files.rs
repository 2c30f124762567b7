//! Files that a design names, and the hash over all of them.

use std::path::{Path, PathBuf};

use sha2::{Digest, Sha256};

use crate::document::source_of;
use crate::files::{MOST_CSV_BYTES, MOST_TOML_BYTES, read_text};
use crate::mistake::Source;
use crate::node::Node;

/// Reads files by the names that a design gives them, and remembers them.
#[derive(Debug)]
pub(crate) struct NamedFiles {
    folder: PathBuf,
    /// Each with the place of its name in the design, bytes.
    read: Vec<(usize, Source)>,
}

impl NamedFiles {
    /// - `design`: the path of the design, from whose folder names count
    pub(crate) fn of(design: &Path) -> Self {
        Self { folder: design.parent().unwrap_or(Path::new("")).to_owned(), read: vec![] }
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
        match read_text(&path, most_bytes) {
            Ok(text) => {
                let source = source_of(&path, text);
                self.read.push((node.start(), source.clone()));
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
    pub(crate) fn sha256(mut self, text: &str) -> String {
        self.read.sort_by_key(|(start, _)| *start);
        let mut hash = Sha256::new_with_prefix(text);
        for (_, source) in &self.read {
            hash.update((source.inner().len() as u64).to_le_bytes());
            hash.update(source.inner());
        }
        hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect()
    }
}
