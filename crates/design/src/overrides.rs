//! Values set from outside, `gait.frequency_hz=1.2`, written into the design's text.

use toml_edit::{DocumentMut, InlineTable, Item, Table, TableLike, Value};

use crate::DesignError;
use crate::key_path::{KeyPath, Step};
use crate::nearest::nearest;
use crate::node::shortened;

/// Lists that are three zeros where they are left out, by table and key.
const ZERO_TRIPLES: [(&str, &str); 2] = [("air", "wind_m_s"), ("launch", "spin_deg_s")];

/// A value to be used in place of the one in the file: `--set KEY=VALUE`.
#[derive(Debug, Clone)]
pub struct Override {
    text: String,
    by_flag: bool,
    path: KeyPath,
    value: Value,
}

impl Override {
    /// Reads `KEY=VALUE`.
    ///
    /// KEY is dotted, list items in brackets from 0: `body.length_m[3]`. VALUE is written as in the
    /// file; a bare word is taken as text.
    ///
    /// # Errors
    ///
    /// [`DesignError::Setting`] where it is neither.
    pub fn parse(text: &str) -> Result<Self, DesignError> {
        let wrong = |why: String| DesignError::Setting { text: shortened(text), why };
        let (key, value) = text.split_once('=').ok_or_else(|| wrong("it has no `=`".into()))?;
        let path = KeyPath::parse(key)
            .ok_or_else(|| wrong(format!("`{}` isn't a key", shortened(key.trim()))))?;
        let value = parse_value(value.trim()).map_err(wrong)?;
        Ok(Self { text: text.to_owned(), by_flag: true, path, value })
    }

    /// A number in place of another.
    ///
    /// # Errors
    ///
    /// [`DesignError::Setting`] where the key is none.
    pub fn number(key: &str, value: f64) -> Result<Self, DesignError> {
        let text = format!("{key} = {value:?}");
        let why = format!("`{}` isn't a key", shortened(key.trim()));
        let path = KeyPath::parse(key).ok_or(DesignError::Setting { text, why })?;
        // Keys that take any number take whole ones as well.
        Ok(Self::number_at(&path, value, true))
    }

    /// - `whole`: whether it is written without a point, where it can be
    pub(crate) fn number_at(path: &KeyPath, value: f64, whole: bool) -> Self {
        let shown = number_text(value, whole);
        let value = shown.parse().expect("a number is a value");
        Self { text: format!("{path} = {shown}"), by_flag: false, path: path.clone(), value }
    }

    /// As given.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// As a mistake in it is told.
    pub(crate) fn told(&self) -> String {
        if self.by_flag { format!("--set {}", self.text) } else { self.text.clone() }
    }

    pub(crate) fn path(&self) -> &KeyPath {
        &self.path
    }

    /// The servo that it changes, if it does.
    fn servo(&self) -> Option<&str> {
        match self.path.0.as_slice() {
            [Step::Key(servo), Step::Key(name), _, ..] if servo == "servo" => Some(name),
            _ => None,
        }
    }
}

/// −0, which whole numbers don't have.
const SIGNED_ZERO: u64 = 1 << 63;

/// A number as TOML has it, in the fewest digits that read back as the same.
///
/// - `whole`: whether it is written without a point, where it can be
pub(crate) fn number_text(value: f64, whole: bool) -> String {
    if value.is_nan() {
        // Rust writes it with capitals, and with the sign that it may have.
        "nan".to_owned()
    } else if whole && value.fract() == 0.0 && value.abs() < 1e15 && value.to_bits() != SIGNED_ZERO
    {
        (value as i64).to_string()
    } else {
        format!("{value:?}")
    }
}

fn parse_value(text: &str) -> Result<Value, String> {
    if text.is_empty() {
        return Err("nothing stands behind the `=`".into());
    }
    text.parse().or_else(|error: toml_edit::TomlError| {
        let quoted = text.starts_with(['[', '{', '"', '\'']);
        if quoted || text.contains(['\n', '\r']) {
            return Err(format!("its value can't be read: {}", error.message()));
        }
        Ok(Value::from(text))
    })
}

/// A text changed by overrides.
pub(crate) struct Changed {
    pub(crate) text: String,
    /// Overrides that had nothing to hold on to.
    pub(crate) refused: Vec<(Override, String)>,
    /// Catalogue servos that became the design's own.
    pub(crate) copied: Vec<String>,
}

/// Writes overrides into a text, comments kept.
///
/// - `text`: TOML, already found sound
/// - `catalogue`: gives the text of a servo catalogue by the name in the design
pub(crate) fn apply(
    text: &str,
    overrides: &[Override],
    catalogue: impl Fn(&str) -> Option<String>,
) -> Changed {
    let mut changed = Changed { text: text.to_owned(), refused: vec![], copied: vec![] };
    let mut document: DocumentMut = match text.parse() {
        Ok(document) => document,
        Err(error) => {
            let why = format!("the file can't be changed: {}", error.message());
            changed.refused = overrides.iter().map(|set| (set.clone(), why.clone())).collect();
            return changed;
        }
    };
    // The catalogue may itself be set, so servos come last.
    let (of_servos, others): (Vec<_>, Vec<_>) =
        overrides.iter().partition(|set| set.servo().is_some());
    for set in others.into_iter().chain(of_servos) {
        let done = prepare(&mut document, set, &catalogue, &mut changed.copied)
            .and_then(|()| set_at(document.as_item_mut(), &set.path.0, &set.value));
        if let Err(why) = done {
            changed.refused.push((set.clone(), why));
        }
    }
    changed.text = document.to_string();
    changed
}

/// Writes down what an override changes a part of, where the design leaves it to a default or to
/// its catalogue.
fn prepare(
    document: &mut DocumentMut,
    set: &Override,
    catalogue: &impl Fn(&str) -> Option<String>,
    copied: &mut Vec<String>,
) -> Result<(), String> {
    if let [Step::Key(table), Step::Key(key), Step::Item(_)] = set.path.0.as_slice()
        && ZERO_TRIPLES.contains(&(table.as_str(), key.as_str()))
    {
        let table = document.entry(table).or_insert_with(toml_edit::table);
        if let Some(table) = table.as_table_like_mut() {
            table.entry(key).or_insert_with(|| Value::from_iter([0.0; 3]).into());
        }
    }
    match set.servo() {
        Some(name) => copy_from_catalogue(document, name, catalogue, copied),
        None => Ok(()),
    }
}

/// Copies a servo that only the catalogue has.
fn copy_from_catalogue(
    document: &mut DocumentMut,
    name: &str,
    catalogue: &impl Fn(&str) -> Option<String>,
    copied: &mut Vec<String>,
) -> Result<(), String> {
    let own = servo_names(document);
    if own.iter().any(|own| own == name) {
        return Ok(());
    }
    let file = document.get("servos").and_then(Item::as_str);
    let shelf: Option<DocumentMut> = file.and_then(catalogue).and_then(|text| text.parse().ok());
    let Some(servo) = shelf.as_ref().and_then(|shelf| servo_in(shelf, name)) else {
        let on_shelf = shelf.as_ref().map(servo_names).unwrap_or_default();
        let near = nearest(name, own.iter().chain(&on_shelf).map(String::as_str));
        let meant = near.map(|near| format!("; did you mean `{near}`?")).unwrap_or_default();
        return Err(format!("no servo is called \"{name}\"{meant}"));
    };
    let servos = document.entry("servo").or_insert_with(implicit_table);
    if let Some(servos) = servos.as_table_like_mut() {
        servos.insert(name, servo);
        copied.push(name.to_owned());
    }
    Ok(())
}

fn servo_names(document: &DocumentMut) -> Vec<String> {
    let servos = document.get("servo").and_then(Item::as_table_like);
    servos
        .map(|servos| servos.iter().map(|(name, _)| name.to_owned()).collect())
        .unwrap_or_default()
}

fn servo_in(catalogue: &DocumentMut, name: &str) -> Option<Item> {
    let mut servo = catalogue.get("servo")?.get(name)?.clone();
    if let Some(table) = servo.as_table_mut() {
        // Its place among the catalogue's tables means nothing here.
        table.set_position(None);
    }
    Some(servo)
}

fn implicit_table() -> Item {
    let mut table = Table::new();
    table.set_implicit(true);
    Item::Table(table)
}

fn set_at(holder: &mut Item, steps: &[Step], value: &Value) -> Result<(), String> {
    let Some((step, rest)) = steps.split_first() else {
        put(holder, value);
        return Ok(());
    };
    match step {
        Step::Key(key) => {
            let in_value = holder.is_value();
            let kind = holder.type_name();
            let table = holder.as_table_like_mut().ok_or_else(|| {
                format!("`{key}` would stand in {}, not in a table", a_kind(kind))
            })?;
            set_at(entry(table, key, in_value, rest), rest, value)
        }
        Step::Item(idx) => set_item(holder, *idx, rest, value),
    }
}

/// What a table holds under a key, made where it is left out.
fn entry<'t>(
    table: &'t mut dyn TableLike,
    key: &str,
    in_value: bool,
    rest: &[Step],
) -> &'t mut Item {
    let makes_table = matches!(rest.first(), Some(Step::Key(_)));
    table.entry(key).or_insert_with(|| match (makes_table, in_value) {
        (false, _) => Item::None,
        (true, true) => Item::Value(InlineTable::new().into()),
        (true, false) => Item::Table(Table::new()),
    })
}

fn set_item(holder: &mut Item, idx: usize, rest: &[Step], value: &Value) -> Result<(), String> {
    let kind = holder.type_name();
    let too_few = |len: usize| format!("the list has {len} items, counted from 0");
    if let Some(tables) = holder.as_array_of_tables_mut() {
        let len = tables.len();
        let table = tables.get_mut(idx).ok_or_else(|| too_few(len))?;
        let mut item = Item::Table(std::mem::take(table));
        let set = set_at(&mut item, rest, value);
        return match (set, item) {
            (set, Item::Table(changed)) => {
                *table = changed;
                set
            }
            _ => Err("an item of this list is a table".into()),
        };
    }
    let list = holder
        .as_array_mut()
        .ok_or_else(|| format!("[{idx}] counts in a list, but there is {}", a_kind(kind)))?;
    let len = list.len();
    let old = list.get_mut(idx).ok_or_else(|| too_few(len))?;
    let mut item = Item::Value(old.clone());
    set_at(&mut item, rest, value)?;
    if let Item::Value(changed) = item {
        *old = changed;
    }
    Ok(())
}

/// Puts a value in place of another, the comments around it kept.
pub(crate) fn put(place: &mut Item, value: &Value) {
    let mut value = value.clone();
    match place.as_value() {
        Some(old) => *value.decor_mut() = old.decor().clone(),
        None => value.decor_mut().clear(),
    }
    *place = Item::Value(value);
}

fn a_kind(kind: &str) -> String {
    match kind {
        "none" => "nothing".into(),
        "array" | "array of tables" => "a list".into(),
        "inline table" | "table" => "a table".into(),
        "string" => "a text".into(),
        "integer" | "float" => "a number".into(),
        other => format!("a {other}"),
    }
}
