//! Servos by name: the design's own, and those of the catalogue that it names.

use std::collections::BTreeMap;
use std::path::Path;

use undulift_servo::Servo;

use crate::design::unusable;
use crate::document::{Document, Mark, source_of};
use crate::files::{MOST_TOML_BYTES, read_file};
use crate::key_path::KeyPath;
use crate::named_files::NamedFiles;
use crate::node::Node;
use crate::servo::read_servos;
use crate::table::Table;
use crate::{DesignError, DesignErrors};

/// Servos that a design may name.
#[derive(Debug, Default)]
pub(crate) struct Servos {
    /// Absent where there are mistakes in one.
    by_name: BTreeMap<String, Option<Servo>>,
    /// Whether the catalogue, which may hold more, couldn't be read.
    lacks_catalogue: bool,
}

impl Servos {
    /// All names that are defined, where they are known.
    pub(crate) fn names(&self) -> Option<Vec<String>> {
        (!self.lacks_catalogue).then(|| self.by_name.keys().cloned().collect())
    }

    /// All of them, where nothing is wrong with any.
    pub(crate) fn all_sound(self) -> Option<BTreeMap<String, Servo>> {
        let sound = self.by_name.into_iter().map(|(name, servo)| Some((name, servo?)));
        sound.collect::<Option<_>>().filter(|_| !self.lacks_catalogue)
    }
}

/// Reads the servos of design and catalogue; where both have a name, the design's own holds.
pub(crate) fn read_all_servos(top: &Table<'_>, files: &mut NamedFiles) -> Servos {
    let mut servos = Servos::default();
    let own = read_servos(top);
    if let Some(node) = top.get("servos") {
        match read_named(&node, files, top.document(), &own) {
            Some(by_name) => servos.by_name = by_name,
            None => servos.lacks_catalogue = true,
        }
    }
    servos.by_name.extend(own);
    servos
}

/// A file of servos, read on its own.
#[derive(Debug, Clone, PartialEq)]
pub struct Catalogue {
    /// As it stands.
    pub text: String,
    /// In the order of their names; none may be in it.
    pub servos: Vec<Servo>,
}

/// Reads a file of `[servo.NAME]` tables.
///
/// # Errors
///
/// All mistakes in it, each with its place.
pub fn read_catalogue(path: &Path) -> Result<Catalogue, DesignErrors> {
    let text = read_file(path, MOST_TOML_BYTES).map_err(|error| unusable(path, error))?;
    let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
    let source = source_of(path, text);
    let document = Document::parse(&source).map_err(fail)?;
    document.check_changeable();
    let servos = servos_in(&document).unwrap_or_default();
    let mistakes = document.into_mistakes();
    if !mistakes.is_empty() {
        return Err(fail(mistakes));
    }
    let text = source.inner().clone();
    Ok(Catalogue { text, servos: servos.into_values().flatten().collect() })
}

/// - `own`: servos of the design itself
fn read_named(
    node: &Node<'_>,
    files: &mut NamedFiles,
    design: &Document<'_>,
    own: &BTreeMap<String, Option<Servo>>,
) -> Option<BTreeMap<String, Option<Servo>>> {
    let source = files.read_toml(node)?;
    let document = match Document::parse(&source) {
        Ok(document) => document,
        Err(mistakes) => {
            design.note_all(mistakes);
            return None;
        }
    };
    let Some(servos) = servos_in(&document) else {
        design.note_all(document.into_mistakes());
        return None;
    };
    for (path, number) in document.take_numbers() {
        if !own.keys().any(|name| path.is_within(&KeyPath::of(["servo", name]))) {
            design.record(path, number);
        }
    }
    design.note_all(document.into_mistakes());
    Some(servos)
}

/// Servos of a file that holds nothing else; absent where it is another kind of file.
fn servos_in(document: &Document<'_>) -> Option<BTreeMap<String, Option<Servo>>> {
    let top = Table::top(document);
    if top.get("servos").is_some() {
        let path = KeyPath::of(["servos"]);
        document.note(&path, Mark::Key, &[], DesignError::NestedCatalogue);
    } else if top.holds("body") {
        let why = "this is a design, but a file of servos is needed".to_owned();
        let what = DesignError::Disagree { why, remedy: "name a file of [servo.NAME] tables" };
        document.note(&KeyPath::of(["body"]), Mark::Key, &[], what);
    }
    if !document.is_sound() {
        return None;
    }
    let servos = read_servos(&top);
    top.finish();
    Some(servos)
}
