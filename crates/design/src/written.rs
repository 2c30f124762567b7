//! A design as text: all that it holds in one order, what was left out written down.
//!
//! Numbers, in the fewest digits that read back as the same, and names are those of the text that
//! was read, so that the text written makes the same design to the bit. Servos of a catalogue are
//! written down; section and gait tables stay files. Tables for other commands are carried over as
//! they are.

use toml_edit::{Array, ArrayOfTables, DocumentMut, InlineTable, Item, RawString, Table, Value};
use undulift_gait::Pattern;

use crate::Design;
use crate::key_path::{KeyPath, Step};
use crate::numbers::Number;
use crate::order::{default_word, inline_keys_of, keys_of};
use crate::overrides::number_text;

/// Tables that are carried over as they are.
const CARRIED: [&str; 3] = ["spread", "search", "wiring"];

impl Design {
    /// The whole design as text, with all that knobs set.
    ///
    /// Names of files in it count from the same folder as before.
    pub fn written(&self) -> String {
        let text: DocumentMut = self.text.parse().expect("a design was read from this text");
        let writer = Writer { design: self, text: &text };
        let mut document = DocumentMut::new();
        if !self.name.trim().is_empty() {
            document.insert("name", Item::Value(self.name.as_str().into()));
        }
        for (name, item) in writer.tables() {
            document.insert(name, item);
        }
        for name in CARRIED {
            if let Some(mut item) = text.get(name).cloned() {
                without_places(&mut item);
                document.insert(name, item);
            }
        }
        document.to_string()
    }
}

/// A design and the text it was read from.
struct Writer<'d> {
    design: &'d Design,
    text: &'d DocumentMut,
}

impl Writer<'_> {
    fn tables(&self) -> Vec<(&'static str, Item)> {
        let mut tables = Vec::new();
        let mut add = |name, item| tables.push((name, item));
        add("air", self.table("air"));
        add("body", self.table("body"));
        add("section", self.named("section", self.sections()));
        add("joints", self.table("joints"));
        add("servo", self.named("servo", self.design.servos.keys().cloned().collect()));
        if self.design.battery.is_some() {
            add("battery", self.table("battery"));
        }
        add("payload", self.payload());
        add("gait", self.table("gait"));
        add("launch", self.table("launch"));
        if self.design.update_hz.is_some() {
            add("firmware", self.table("firmware"));
        }
        add("limits", self.table("limits"));
        tables
    }

    /// Sections of the body, and others that the text or a knob says something of.
    fn sections(&self) -> Vec<String> {
        let given = self.text.get("section").and_then(Item::as_table_like);
        let given = given.into_iter().flat_map(|given| given.iter().map(|(name, _)| name));
        let used = self.design.glider.sections.iter().map(|section| section.name.as_str());
        let set = self.design.origin.set_keys().filter_map(|path| match path.0.as_slice() {
            [Step::Key(table), Step::Key(name), ..] if table == "section" => Some(name.as_str()),
            _ => None,
        });
        let mut names: Vec<String> = given.chain(used).chain(set).map(str::to_owned).collect();
        names.sort_unstable();
        names.dedup();
        names
    }

    fn table(&self, name: &str) -> Item {
        Item::Table(self.table_at(&KeyPath::of([name]), name, self.text.get(name)))
    }

    /// Tables under names of the user's own; none is written for an empty one.
    fn named(&self, kind: &str, names: Vec<String>) -> Item {
        let mut tables = Table::new();
        tables.set_implicit(true);
        let source = self.text.get(kind);
        for name in names {
            let path = KeyPath::of([kind, &name]);
            let table = self.table_at(&path, kind, source.and_then(|source| source.get(&name)));
            if !table.is_empty() {
                tables.insert(&name, Item::Table(table));
            }
        }
        Item::Table(tables)
    }

    fn payload(&self) -> Item {
        let mut tables = ArrayOfTables::new();
        for (idx, payload) in self.design.payload.iter().enumerate() {
            let name = Item::Value(payload.name.as_str().into());
            let source = Item::Table(Table::from_iter([("name", name)]));
            let path = KeyPath::of(["payload"]).item(idx);
            tables.push(self.table_at(&path, "payload", Some(&source)));
        }
        Item::ArrayOfTables(tables)
    }

    /// - `kind`: whose keys it has
    /// - `source`: what the text has there
    fn table_at(&self, path: &KeyPath, kind: &str, source: Option<&Item>) -> Table {
        let mut table = Table::new();
        for key in keys_of(kind) {
            let given = source.and_then(|source| source.get(key));
            if let Some(value) = self.value(&path.key(key), kind, key, given) {
                table.insert(key, Item::Value(value));
            }
        }
        table
    }

    /// What stands under a key: a number as it is now, or what the text says, or its default.
    fn value(&self, path: &KeyPath, kind: &str, key: &str, given: Option<&Item>) -> Option<Value> {
        if let Some(number) = self.design.origin.number(path) {
            return Some(number_value(number));
        }
        let numbers: Array = self.items(path).collect();
        if !numbers.is_empty() {
            return Some(Value::Array(numbers));
        }
        let text = given.and_then(Item::as_str).map(Value::from);
        let texts = given.and_then(Item::as_array);
        let texts = || Some(Value::Array(texts?.iter().filter_map(Value::as_str).collect()));
        // Only a table has an interpolation.
        let of_wave = || matches!(self.design.glider.gait.pattern, Pattern::Wave(_));
        let applies = |_: &&str| !(key == "interpolation" && of_wave());
        let default = || default_word(kind, key).filter(applies).map(Value::from);
        text.or_else(texts).or_else(|| self.inline(path, key, given)).or_else(default)
    }

    /// Numbers of a list.
    fn items(&self, path: &KeyPath) -> impl Iterator<Item = Value> {
        let items = (0..).map(|idx| self.design.origin.number(&path.item(idx)));
        items.map_while(|number| number.map(number_value))
    }

    /// A table in a line, where there is anything in it.
    fn inline(&self, path: &KeyPath, key: &str, given: Option<&Item>) -> Option<Value> {
        let keys = inline_keys_of(key)?;
        let is_held = |(own, _): (&KeyPath, &Number)| own.is_within(path);
        let numbers = self.design.origin.numbers();
        if given.is_none() && key != "start" && !numbers.range(path..).next().is_some_and(is_held) {
            return None;
        }
        let mut table = InlineTable::new();
        for inner in keys {
            let source = given.and_then(|given| given.get(inner));
            if let Some(value) = self.value(&path.key(inner), key, inner, source) {
                table.insert(*inner, value);
            }
        }
        Some(Value::InlineTable(table))
    }
}

fn number_value(number: Number) -> Value {
    let text = number_text(number.value, number.allowed.is_whole());
    text.parse().expect("a number is a value")
}

/// Tables then follow each other as they do in memory, each below an empty line.
fn without_places(item: &mut Item) {
    match item {
        Item::Table(table) => set_apart(table),
        Item::ArrayOfTables(tables) => tables.iter_mut().for_each(set_apart),
        _ => {}
    }
}

fn set_apart(table: &mut Table) {
    table.set_position(None);
    let decor = table.decor_mut();
    if let Some(above) = decor.prefix().and_then(RawString::as_str).map(str::to_owned)
        && !above.starts_with(['\n', '\r'])
    {
        decor.set_prefix(format!("\n{above}"));
    }
    table.iter_mut().for_each(|(_, inner)| without_places(inner));
}
