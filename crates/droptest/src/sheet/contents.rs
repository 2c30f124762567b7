//! What stands on the sheet, in the order of its importance, for all formats.

use undulift_design::CatchKind;

use super::drawing::{Drawing, turned};
use super::words::Words;
use super::{Sheet, ladder, room};
use crate::{CAUTIONS, Misfit, held_by_outermost};

/// A part of the sheet under one heading.
#[derive(Debug, Clone)]
pub(super) struct Section {
    pub(super) heading: Words,
    pub(super) blocks: Vec<Block>,
    pub(super) page: Page,
}

/// Where a section stands when printed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Page {
    /// Where there is room for all of it.
    Together,
    /// On a page of its own.
    New,
    /// Anywhere, in parts.
    Flows,
}

/// A piece of a section.
#[derive(Debug, Clone)]
pub(super) enum Block {
    /// A paragraph.
    Text(Words),
    /// Whether it can be done as it stands, in large letters.
    Verdict { holds: bool, words: Words },
    /// Names and what they are.
    Facts(Vec<(&'static str, Words)>),
    /// Names with a line to write on.
    ToFill(Vec<&'static str>),
    /// One sentence each.
    List(Vec<Words>),
    /// The same, of short ones, side by side where there is room.
    Short(Vec<Words>),
    /// Rows under columns.
    Table(Table),
    /// What is drawn.
    Plan { title: String, told: String, drawing: Box<Drawing> },
    /// A table with room to write, and what goes before and behind.
    Rung { name: Words, about: Words, table: Table, limits: Words },
}

/// Rows under columns.
#[derive(Debug, Clone)]
pub(super) struct Table {
    pub(super) columns: Vec<Words>,
    pub(super) rows: Vec<Vec<Words>>,
}

/// The sheet's own heading, and all sections.
pub(super) fn contents(sheet: &Sheet<'_>) -> (Words, Vec<Section>) {
    let title = Words::from("Drop test of ").and_name(&sheet.design.name);
    let title = title.and(" in ").and_name(sheet.hall_name);
    let seen = sheet.seen.map(|seen| seen.section());
    let first = [Some(heading(sheet)), seen, Some(verdict(sheet))].into_iter().flatten();
    let rest = [
        plan(sheet),
        cautions(),
        ladder::ladder(sheet),
        ladder::limits(),
        room::places(sheet),
        room::stopping(sheet),
        room::filming(sheet),
    ];
    (title, first.chain(rest).collect())
}

fn together(heading: impl Into<Words>, blocks: Vec<Block>) -> Section {
    Section { heading: heading.into(), blocks, page: Page::Together }
}

fn heading(sheet: &Sheet<'_>) -> Section {
    let chain = &sheet.design.glider.chain;
    let hall = sheet.hall;
    let body = format!("{:.3} kg, {:.2} m long", chain.mass_kg(), chain.length_m());
    let size = format!(
        "{:.1} × {:.1} m, {:.1} m high; highest release {:.1} m",
        hall.length_m,
        hall.width_m,
        hall.height_m,
        sheet.highest_m()
    );
    let computed =
        format!("{} drops with undulift {}, seed {}", sheet.plan.drops, sheet.version, sheet.seed);
    let mut facts = vec![
        ("Robot", body.into()),
        ("Hall", size.into()),
        ("Computed", computed.into()),
        // With what was set, and the files that the design names.
        ("Design's SHA-256", Words::exact(&sheet.design.input_sha256)),
        ("Hall's SHA-256", Words::exact(&sheet.hall.sha256())),
    ];
    if !sheet.set.is_empty() {
        facts.insert(1, ("Set by hand", Words::exact(&sheet.set.join("; "))));
    }
    let fill = vec!["Date", "Operator", "Remote stop", "Observer", "Watches the door"];
    Section {
        heading: Words::default(),
        blocks: vec![Block::Facts(facts), Block::ToFill(fill)],
        page: Page::Together,
    }
}

fn verdict(sheet: &Sheet<'_>) -> Section {
    let holds = sheet.misfits.is_empty() && sheet.complete;
    let words = if !sheet.misfits.is_empty() {
        "NOT as it stands: the hall doesn't hold it"
    } else if !sheet.complete {
        "NOT as it stands: the computation was ended early"
    } else {
        "As computed it fits"
    };
    let mut blocks = vec![Block::Verdict { holds, words: words.into() }];
    let early = format!(
        "ended early: {} of {} drops from the highest release were flown, and lower rungs may lack some",
        sheet.plan.drops, sheet.asked
    );
    let early = (!sheet.complete).then(|| early.into());
    let reasons: Vec<Words> = sheet.misfits.iter().map(reason).chain(early).collect();
    if !reasons.is_empty() {
        blocks.push(Block::List(reasons));
    }
    blocks.push(Block::Text(rests_on(sheet).into()));
    together("Does the hall hold it?", blocks)
}

/// What doesn't fit, with names apart from our words.
fn reason(misfit: &Misfit) -> Words {
    let text = misfit.to_string();
    if let Misfit::Person { name, .. } = misfit
        && let Some(rest) = text.strip_prefix(&format!("`{name}`"))
    {
        return Words::name(name).and(rest);
    }
    text.into()
}

fn rests_on(sheet: &Sheet<'_>) -> String {
    let plan = sheet.plan;
    let drops = format!("From {} drops from {:.1} m", plan.drops, sheet.highest_m());
    match &plan.furthest {
        Some(furthest) => format!(
            "{drops}, {} of them with faults: the furthest, {}, ended {:.1} m away; {:.1} % of all end no \
             further, at 95 % confidence. The model leaves out bounces, slides and parts that come off.",
            furthest.of,
            furthest.kind.in_words(),
            furthest.distance_m,
            100.0 * held_by_outermost(furthest.of, 0.95)
        ),
        None => format!(
            "{drops}, none with a fault. The model leaves out bounces, slides and parts that come off."
        ),
    }
}

fn plan(sheet: &Sheet<'_>) -> Section {
    let drawing = Drawing::of(sheet);
    let [behind, ahead, right, left] = sheet.plan.keep_out.outward_m();
    let (long_m, wide_m) = (behind + ahead, right + left);
    let catch = match sheet.hall.catch.kind {
        CatchKind::Net => "a net",
        CatchKind::Mat => "a mat",
        CatchKind::Floor => "the floor alone",
    };
    let release = &sheet.hall.release;
    let told = format!(
        "Seen from above, to scale: release at x {:.1} m, y {:.1} m, {}; \
         keep-out area {long_m:.1} × {wide_m:.1} m; {catch} to land on; people: {}",
        release.from_wall_m,
        release.across_m,
        turned(release.direction_rad),
        sheet.hall.people.len()
    );
    let title = format!("Plan of the hall, 1:{}", drawing.paper.scale);
    let missing = (drawing.unlabelled > 0).then(|| {
        let unlabelled = drawing.unlabelled;
        format!("{unlabelled} labels found no room in the drawing; all places are listed below.")
    });
    let drawn = Block::Plan { title: title.clone(), told, drawing: Box::new(drawing) };
    let missing = missing.map(|missing| Block::Text(missing.into()));
    together(title, [drawn].into_iter().chain(missing).collect())
}

fn cautions() -> Section {
    let list = CAUTIONS.iter().map(|caution| (*caution).into()).collect();
    together("Cautions", vec![Block::Short(list)])
}
