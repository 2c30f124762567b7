//! Sections by name: those built in, and tables of the user's own.

use std::collections::BTreeMap;

use undulift_aero::{DEFAULT_PRESSURE_CENTRE, Section};

use crate::DesignError;
use crate::body::per_segment;
use crate::key_path::KeyPath;
use crate::named_files::NamedFiles;
use crate::nearest::nearest;
use crate::node::{Node, shortened};
use crate::numbers::{Allowed, Number};
use crate::range::Range;
use crate::section_table::build_section_table;
use crate::table::Table;

const PRESSURE_CENTRE: Range = Range::from_to(0.0, 1.0);

/// The built-in section that has no pressure centre of its own.
const ROUND: &str = "round";
const BUILT_IN: [&str; 3] = ["plate", ROUND, "domed"];

/// Sections that a design may name; absent where there are mistakes in one.
pub(crate) type Sections = BTreeMap<String, Option<Section>>;

pub(crate) fn read_sections(top: &Table<'_>, files: &mut NamedFiles) -> Sections {
    let built_in = BUILT_IN.map(|name| (name.to_owned(), built_in(name, DEFAULT_PRESSURE_CENTRE)));
    let mut sections = Sections::from(built_in);
    let default =
        Number { value: DEFAULT_PRESSURE_CENTRE, allowed: Allowed::Real(PRESSURE_CENTRE) };
    for name in BUILT_IN.into_iter().filter(|&name| name != ROUND) {
        let path = KeyPath::of(["section", name, "pressure_centre"]);
        top.document().record(path, default);
    }
    for (name, table) in top.named_tables("section") {
        sections.insert(name.to_owned(), read_section(name, table, files));
    }
    sections
}

fn built_in(name: &str, pressure_centre: f64) -> Option<Section> {
    match name {
        "plate" => Some(Section::plate(pressure_centre)),
        "domed" => Some(Section::domed(pressure_centre)),
        ROUND => Some(Section::round()),
        _ => None,
    }
}

fn read_section(name: &str, table: Table<'_>, files: &mut NamedFiles) -> Option<Section> {
    let key = "pressure_centre";
    let pressure_centre = match name {
        ROUND => table.number(key, PRESSURE_CENTRE).unwrap_or(DEFAULT_PRESSURE_CENTRE),
        _ => table.number_or(key, PRESSURE_CENTRE, DEFAULT_PRESSURE_CENTRE),
    };
    let section = if BUILT_IN.contains(&name) {
        if table.get("table").is_some() {
            let why = "it is built in, and so has no table";
            let name = name.to_owned();
            table.note("table", DesignError::TakenName { what: "section", name, why });
        }
        if name == ROUND && table.holds(key) {
            let why = "the pressure centre of a round section is always 0.5".to_owned();
            table.note(key, DesignError::Disagree { why, remedy: "take it out" });
        }
        built_in(name, pressure_centre)
    } else {
        let node = table.need("table", "the name of a CSV file");
        let source = node.and_then(|node| files.read_csv(&node));
        match source.map(|source| build_section_table(name, &source)) {
            Some(Ok(rows)) => Some(Section::from_table(name, rows, pressure_centre)),
            Some(Err(mistakes)) => {
                table.document().note_all(mistakes);
                None
            }
            None => None,
        }
    };
    table.finish();
    section
}

/// Looks up the body's sections.
///
/// - returns the sections that occur on the body, and which of them each segment has
pub(crate) fn sections_of_body(
    node: &Node<'_>,
    segments: Option<u32>,
    sections: &Sections,
) -> Option<(Vec<Section>, Vec<usize>)> {
    let count = per_segment(segments);
    let names: Vec<Option<&str>> = if node.is_list() {
        let items = node.items("a list of sections", &count)?;
        items.iter().map(|item| look_up(item, sections)).collect()
    } else {
        vec![look_up(node, sections); count.items?]
    };
    let mut used: Vec<Section> = Vec::new();
    let mut section_of = Vec::new();
    for name in names {
        let section = sections.get(name?)?.as_ref()?;
        let known = used.iter().position(|used| used.name == section.name);
        section_of.push(known.unwrap_or(used.len()));
        if known.is_none() {
            used.push(section.clone());
        }
    }
    Some((used, section_of))
}

fn look_up<'d>(node: &Node<'d>, sections: &Sections) -> Option<&'d str> {
    let name = node.text_as("the name of a section, or a list of names")?;
    if !sections.contains_key(name) {
        node.note(DesignError::Undefined {
            what: "section",
            name: shortened(name),
            nearest: nearest(name, sections.keys().map(String::as_str)),
            remedy: format!(
                "plate, round and domed are built in; one of your own needs a [section.{}] table",
                shortened(name)
            ),
        });
        return None;
    }
    Some(name)
}
