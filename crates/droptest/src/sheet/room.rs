//! Who stands where, what stops it, how much room there is, what films it.

use undulift_design::CatchKind;

use super::Sheet;
use super::contents::{Block, Page, Section, Table};
use super::drawing::{height, turned};
use super::words::Words;
use crate::{Area, catch_height_needed_m, fall_speed_m_s, mean_load_factor};

pub(super) fn places(sheet: &Sheet<'_>) -> Section {
    let release = &sheet.hall.release;
    let at = |[x_m, y_m]: [f64; 2]| [format!("{x_m:.1}"), format!("{y_m:.1}")].map(Words::from);
    let row = |what: Words, at_m: [f64; 2], size: String| {
        let [x, y] = at(at_m);
        vec![what, x, y, size.into()]
    };
    let from_m = [release.from_wall_m, release.across_m];
    let turned = turned(release.direction_rad);
    let mut rows = vec![row("release".into(), from_m, turned)];
    rows.push(row(
        "keep-out area".into(),
        sheet.around().in_hall(middle_m(&sheet.plan.keep_out)),
        format!("{}, from the release", sides(&sheet.plan.keep_out)),
    ));
    if let Some(catch) = sheet.around().catch_area() {
        let kind = match sheet.hall.catch.kind {
            CatchKind::Net => "net",
            _ => "mat",
        };
        let [long_m, wide_m] = catch.size_m();
        let size = format!(
            "{long_m:.1} m along the launch, {wide_m:.1} m across, upper side at {:.2} m; {}",
            sheet.hall.catch.height_m,
            sides(&catch)
        );
        rows.push(row(kind.into(), sheet.around().in_hall(middle_m(&catch)), size));
    }
    for rung in sheet.rungs {
        let Some(region) = &rung.region else { continue };
        let name = format!("95 % region from {} m", height(rung.height_m));
        let [a, b] = region.semi_axes_m;
        let turned = (region.angle_rad + release.direction_rad).to_degrees();
        let size = format!("{a:.1} and {b:.1} m each way, turned {turned:.0}°");
        rows.push(row(name.into(), sheet.around().in_hall(region.centre_m), size));
    }
    if let Some(furthest) = &sheet.plan.furthest {
        let at_m = sheet.around().in_hall(furthest.place_m);
        let name = format!("furthest fault: {}", furthest.kind.in_words());
        let size = format!("{:.1} m from below the release", furthest.distance_m);
        rows.push(row(name.into(), at_m, size));
    }
    for (n, person) in sheet.hall.people.iter().enumerate() {
        let name = Words::from(format!("person {}: ", n + 1)).and_name(&person.name);
        let size = format!("within {:.1} m", person.radius_m);
        rows.push(row(name, [person.x_m, person.y_m], size));
    }
    let columns = ["what", "x, m", "y, m", "size"].map(Words::from).to_vec();
    let how = "x from the wall behind the release along the hall, y from the right-hand wall; of areas and regions, \
               their middles.";
    Section {
        heading: "Places in the hall".into(),
        blocks: vec![Block::Text(how.into()), Block::Table(Table { columns, rows })],
        page: Page::Flows,
    }
}

fn middle_m(area: &Area) -> [f64; 2] {
    [area.along_m, area.across_m].map(|[from, to]| 0.5 * (from + to))
}

fn sides(area: &Area) -> String {
    let [back, ahead, right, left] = area.outward_m();
    let back =
        if back < 0.0 { format!("{:.1} m ahead", -back) } else { format!("{back:.1} m behind") };
    format!("{back} to {ahead:.1} m ahead, {right:.1} m right to {left:.1} m left")
}

pub(super) fn stopping(sheet: &Sheet<'_>) -> Section {
    let catch = &sheet.hall.catch;
    let sound = &sheet.plan.sound;
    let kind = match catch.kind {
        CatchKind::Net => "Net",
        CatchKind::Mat => "Mat",
        CatchKind::Floor => "Floor",
    };
    let sink_m_s = sound.bands.sink_m_s.p95.max(0.0);
    let free_m_s = fall_speed_m_s((sheet.highest_m() - catch.height_m).max(0.0));
    let stop = format!(
        "{:.2} m of way: {:.0} weights on average from {sink_m_s:.1} m/s of sink, {:.0} if it fell freely \
         ({free_m_s:.1} m/s); peaks may be twice that",
        catch.stopping_m,
        mean_load_factor(sink_m_s, catch.stopping_m),
        mean_load_factor(free_m_s, catch.stopping_m)
    );
    let mut facts = vec![(kind, stop.into())];
    if catch.kind == CatchKind::Net {
        let least_m = catch_height_needed_m(catch.stopping_m, sheet.thickness_m());
        let net = format!("must hang at {least_m:.2} m or more; hangs at {:.2} m", catch.height_m);
        facts.push(("Net's height", net.into()));
    }
    if catch.kind != CatchKind::Floor {
        let missed = format!("{} of {} sound drops", sound.missed_catch, sound.flown);
        facts.push(("Missed the catch", missed.into()));
    }
    facts.extend(clearances(sheet));
    Section {
        heading: "Stopping and room".into(),
        blocks: vec![Block::Facts(facts)],
        page: Page::Together,
    }
}

fn clearances(sheet: &Sheet<'_>) -> [(&'static str, Words); 2] {
    let least = &sheet.plan.least;
    let people = match least.people_m {
        people_m if people_m.is_finite() => format!("people {people_m:.1} m"),
        _ => "no people given".into(),
    };
    let clear = format!(
        "walls {:.1} m, {people}, ceiling {:.1} m, of all drops, half the body's length ({:.2} m) taken off",
        least.walls_m, least.ceiling_m, sheet.reach_m
    );
    let rig = match least.behind_m {
        behind_m if behind_m > 0.0 => {
            format!("drops come back up to {behind_m:.1} m behind the release")
        }
        _ => "no drop comes back behind the release".into(),
    };
    let room =
        format!("{rig}; keep free {} of it, as deep as the body is long", sides(&least.at_rig));
    [("Least clearances", clear.into()), ("Rig", room.into())]
}

pub(super) fn filming(sheet: &Sheet<'_>) -> Section {
    let measuring = sheet.measuring;
    let verdict = |enough: Option<bool>| match enough {
        Some(true) => ", as there is",
        Some(false) => ", more than there is",
        None => "",
    };
    let camera = format!(
        "{:.0} frames a second or more for a wave of {:.2} Hz{}; {} markers or more along the body{}; each \
         rung says what to film",
        measuring.frames_needed_per_s.ceil(),
        measuring.wave_hz,
        verdict(measuring.is_fast_enough()),
        measuring.markers_needed,
        verdict(measuring.has_markers())
    );
    let battery = match &sheet.design.battery {
        Some(battery) => format!(
            "{} cells; before each drop: charged, whole, fixed, plug within reach. After a hard landing set \
             it apart and watch it",
            battery.supply.cells
        ),
        None => "none given in the design; if it has one: charged, whole, fixed, plug within reach. After a \
                 hard landing set it apart and watch it"
            .into(),
    };
    let facts = vec![("Camera", camera.into()), ("Battery", battery.into())];
    Section {
        heading: "Camera and battery".into(),
        blocks: vec![Block::Facts(facts)],
        page: Page::Together,
    }
}
