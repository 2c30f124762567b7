//! A hall for drop tests: a file of its own.
//!
//! In the hall x runs along its length from the wall behind the release, y across its width from
//! the right-hand wall, both on the floor; `direction_deg` turns a launch from x to the left.

use std::path::Path;

use crate::design::unusable;
use crate::document::{Document, source_of};
use crate::files::{MOST_TOML_BYTES, read_file};
use crate::named_files::sha256_of;
use crate::node::Count;
use crate::range::Range;
use crate::table::Table;
use crate::{DesignError, DesignErrors};

const LENGTH_M: Range = Range::above_0_to(1000.0);
/// Most heights of a release ladder.
const MOST_HEIGHTS: usize = 20;

/// A hall, with what is set up in it.
#[derive(Debug, Clone, PartialEq)]
pub struct Hall {
    /// Along x, m.
    pub length_m: f64,
    /// Along y, m.
    pub width_m: f64,
    /// Floor to ceiling, or to what hangs lowest from it, m.
    pub height_m: f64,
    /// Where robots are let go.
    pub release: Release,
    /// Who stands where.
    pub people: Vec<Person>,
    /// What ends a flight.
    pub catch: Catch,
    /// Of its air, °C; absent: the design's.
    pub temperature_c: Option<f64>,
    /// Most that its air moves, in any direction, m/s.
    pub draught_m_s: f64,
    /// What films the drops.
    pub camera: Option<Camera>,
    /// How often what fails.
    pub faults: FaultShares,
    /// The file as it stands.
    pub text: String,
}

/// Where robots are let go.
#[derive(Debug, Clone, PartialEq)]
pub struct Release {
    /// x, m.
    pub from_wall_m: f64,
    /// y, m.
    pub across_m: f64,
    /// Of the centre of mass above the floor, from low to high, m.
    pub heights_m: Vec<f64>,
    /// Of the launch, from x to the left, rad.
    pub direction_rad: f64,
}

/// A person, or a place where people are.
#[derive(Debug, Clone, PartialEq)]
pub struct Person {
    /// Who.
    pub name: String,
    /// m.
    pub x_m: f64,
    /// m.
    pub y_m: f64,
    /// Within which they stay, m.
    pub radius_m: f64,
}

/// What a flight is meant to end in.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Catch {
    /// What it is.
    pub kind: CatchKind,
    /// Of its upper side, m; 0 for the floor.
    pub height_m: f64,
    /// Along the launch, m; absent: all of the hall.
    pub length_m: Option<f64>,
    /// Across the launch, m; absent: all of the hall.
    pub width_m: Option<f64>,
    /// Its near edge, along the launch from the point of release, m; below 0 behind it.
    pub from_release_m: f64,
    /// How far it gives, m.
    pub stopping_m: f64,
}

/// Kinds of catches.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CatchKind {
    /// It hangs.
    Net,
    /// It lies on the floor.
    Mat,
    /// Nothing but the floor.
    Floor,
}

/// What films the drops.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Camera {
    /// Frames a second.
    pub frames_per_s: f64,
    /// Along the body.
    pub markers: u32,
}

/// What fails how often.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FaultShares {
    /// Of all drops, 0 to 1.
    pub share: f64,
    /// Weights of the kinds, in the order of [`Self::KINDS`], none below 0.
    pub weights: [f64; 6],
}

impl FaultShares {
    /// Keys of the kinds.
    pub const KINDS: [&str; 6] =
        ["one_limp", "one_locked", "power_lost", "wrong_phase", "released_late", "wave_frozen"];
}

impl Hall {
    /// Reads a hall file.
    ///
    /// # Errors
    ///
    /// All mistakes in it, each with its place.
    pub fn read(path: &Path) -> Result<Self, DesignErrors> {
        let text = read_file(path, MOST_TOML_BYTES).map_err(|error| unusable(path, error))?;
        let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
        let source = source_of(path, text);
        let document = Document::parse(&source).map_err(fail)?;
        let hall = read_hall(Table::top(&document));
        let mistakes = document.into_mistakes();
        let hall = hall.filter(|_| mistakes.is_empty()).ok_or_else(|| fail(mistakes))?;
        Ok(Self { text: source.inner().clone(), ..hall })
    }

    /// SHA-256, in hexadecimal, of the file as it stands.
    pub fn sha256(&self) -> String {
        sha256_of(&self.text, std::iter::empty())
    }
}

fn read_hall(top: Table<'_>) -> Option<Hall> {
    if top.holds("body") {
        let why = "this is a design, but a hall is needed".to_owned();
        top.disagree("body", &[], why, "name the hall after the design: a file with a [hall]");
        return None;
    }
    let size = top.need_table("hall");
    let [length_m, width_m, height_m] =
        ["length_m", "width_m", "height_m"].map(|key| size.need_number(key, LENGTH_M));
    size.finish();
    let release = read_release(top.need_table("release"), [length_m, width_m]);
    let people = top.tables("people").into_iter();
    let people: Vec<_> = people.map(|table| read_person(table, [length_m, width_m])).collect();
    let catch = read_catch(top.need_table("catch"));
    let air = top.table("air");
    let temperature_c = air.number("temperature_c", Range::within(80.0));
    let draught_m_s = air.number("draught_m_s", Range::from_to(0.0, 20.0)).unwrap_or(0.0);
    air.finish();
    let camera = Some(top.table("camera")).filter(Table::is_given).map(read_camera);
    let faults = read_faults(top.table("faults"));
    top.finish();
    // What is absent from here on was noted as a mistake.
    let camera = if let Some(read) = camera { Some(read?) } else { None };
    Some(Hall {
        length_m: length_m?,
        width_m: width_m?,
        height_m: height_m?,
        release: release?,
        people: people.into_iter().collect::<Option<_>>()?,
        catch: catch?,
        temperature_c,
        draught_m_s,
        camera,
        faults,
        text: String::new(),
    })
}

/// A place within the hall, where its size is known.
fn up_to(most_m: Option<f64>) -> Range {
    Range::from_to(0.0, most_m.unwrap_or(1000.0))
}

fn read_release(table: Table<'_>, [length_m, width_m]: [Option<f64>; 2]) -> Option<Release> {
    let from_wall_m = table.need_number("from_wall_m", up_to(length_m));
    let across_m = table.need_number("across_m", up_to(width_m));
    let direction_deg = table.number("direction_deg", Range::within(180.0)).unwrap_or(0.0);
    let heights_m = read_heights(&table);
    table.finish();
    Some(Release {
        from_wall_m: from_wall_m?,
        across_m: across_m?,
        heights_m: heights_m?,
        direction_rad: direction_deg.to_radians(),
    })
}

fn read_heights(table: &Table<'_>) -> Option<Vec<f64>> {
    let wanted = format!("a list of heights in metres, each {LENGTH_M}, from low to high");
    let node = table.need("heights_m", &wanted)?;
    let found = node.list(&wanted)?.len();
    if found == 0 || found > MOST_HEIGHTS {
        let why = format!("1 to {MOST_HEIGHTS} heights make a release ladder");
        table.note("heights_m", DesignError::ListLength { found, wanted: None, why });
        return None;
    }
    let count = Count { items: Some(found), why: String::new(), decided_by: None };
    let heights_m = node.numbers(LENGTH_M, &count)?;
    if let Some(pair) = heights_m.windows(2).find(|pair| pair[1] <= pair[0]) {
        let why = format!("{} m comes after {} m, but heights must rise", pair[1], pair[0]);
        table.disagree("heights_m", &[], why, "order them from low to high, each once");
        return None;
    }
    Some(heights_m)
}

fn read_person(table: Table<'_>, [length_m, width_m]: [Option<f64>; 2]) -> Option<Person> {
    let name = table.need("name", "a text in quotes").and_then(|node| node.text());
    let x_m = table.need_number("x_m", up_to(length_m));
    let y_m = table.need_number("y_m", up_to(width_m));
    let radius_m = table.need_number("radius_m", Range::from_to(0.0, 100.0));
    table.finish();
    Some(Person { name: name?.to_owned(), x_m: x_m?, y_m: y_m?, radius_m: radius_m? })
}

fn read_catch(table: Table<'_>) -> Option<Catch> {
    let kinds = [("net", CatchKind::Net), ("mat", CatchKind::Mat), ("floor", CatchKind::Floor)];
    let kind = table.need("kind", "\"net\", \"mat\" or \"floor\"").and_then(|n| n.word(&kinds));
    let stopping_m = table.need_number("stopping_m", Range::above_0_to(20.0));
    let from_release_m = table.number("from_release_m", Range::within(1000.0)).unwrap_or(0.0);
    // Only the floor is everywhere, and at no height.
    let need = |key, range: Range| match kind {
        Some(CatchKind::Floor) | None => table.number(key, range),
        _ => table.need_number(key, range),
    };
    let height_m = need("height_m", Range::from_to(0.0, 100.0));
    let [length_m, width_m] = ["length_m", "width_m"].map(|key| need(key, LENGTH_M));
    if kind == Some(CatchKind::Floor) && height_m.is_some_and(|height_m| height_m > 0.0) {
        let why = "the floor is at a height of 0".to_owned();
        table.disagree("height_m", &["kind"], why, "leave it out, or say \"net\" or \"mat\"");
    }
    table.finish();
    let height_m = height_m.unwrap_or(0.0);
    let (kind, stopping_m) = (kind?, stopping_m?);
    Some(Catch { kind, height_m, length_m, width_m, from_release_m, stopping_m })
}

fn read_camera(table: Table<'_>) -> Option<Camera> {
    let frames_per_s = table.need_number("frames_per_s", Range::above_0_to(1e5));
    let markers = table.need_whole("markers", 1..=1000);
    table.finish();
    Some(Camera { frames_per_s: frames_per_s?, markers: markers? })
}

fn read_faults(table: Table<'_>) -> FaultShares {
    let share = table.number("share", Range::from_to(0.0, 1.0)).unwrap_or(0.05);
    let weight = |key: &str| table.number(key, Range::from_to(0.0, 1000.0));
    let given = FaultShares::KINDS.map(weight);
    // Kinds that are left out beside others don't happen.
    let any = given.iter().any(Option::is_some);
    let weights = given.map(|weight| weight.unwrap_or(if any { 0.0 } else { 1.0 }));
    if any && share > 0.0 && weights.iter().sum::<f64>() == 0.0 {
        let why = "no kind of fault is left".to_owned();
        table.disagree("share", &[], why, "give one kind a share above 0, or set share = 0");
    }
    table.finish();
    FaultShares { share, weights }
}
