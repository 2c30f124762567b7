//! The release ladder, to be filled in, and the limits at which to stop.

use undulift_design::CatchKind;
use undulift_flight::Spread;

use super::Sheet;
use super::contents::{Block, Page, Section, Table};
use super::drawing::height;
use super::words::Words;
use crate::{Bands, Rung, drops_outside_to_stop};

/// Rows to write on, a rung.
const ROWS: usize = 5;
/// Drops at a height for which limits are printed.
const MOST_DROPS: usize = 20;
/// What is written down; named as in the file of what was measured.
pub(super) const COLUMNS: [&str; 7] =
    ["drop", "height_m", "distance_m", "side_m", "time_s", "peak_tilt_deg", "ended"];

pub(super) fn ladder(sheet: &Sheet<'_>) -> Section {
    let how = "Five drops or more a rung; go higher only when they lie within the bands (5 % to 95 %: nine in ten \
               should; outside is by more than 5 cm, 0.02 s or 2°, as measuring goes) and none surprised you. \
               Distance is measured on the floor, from below the release straight to the middle of the body; \
               side is how far of it is left of the launch. Ended: landed, inverted (turned over), missed_catch, touched \
               (anything on the way) or failed (robot or release).";
    let mut blocks = vec![Block::Text(how.into())];
    // Nobody climbs on after a stop.
    let stopped = sheet.seen.is_some_and(|seen| !seen.reading.stops.is_empty());
    let rungs = (0..sheet.rungs.len()).filter(|&rung_idx| {
        !stopped || sheet.seen.is_some_and(|seen| seen.reading.rungs[rung_idx].seen > 0)
    });
    blocks.extend(rungs.map(|rung_idx| rung(sheet, rung_idx, if stopped { 0 } else { ROWS })));
    let heading = Words::from("Release ladder of ").and_name(&sheet.design.name);
    Section { heading, blocks, page: Page::New }
}

/// - `least_rows`: to fill in or filled in, at least
fn rung(sheet: &Sheet<'_>, rung_idx: usize, least_rows: usize) -> Block {
    let rung = &sheet.rungs[rung_idx];
    let name = format!("{} m", height(rung.height_m));
    let columns = COLUMNS.map(Words::exact).to_vec();
    let mut rows = Vec::new();
    // What goes with no robot of the plan narrows nothing.
    let seen = sheet.seen.filter(|seen| seen.reading.stops.is_empty());
    let narrowed = seen.and_then(|seen| seen.reading.rungs[rung_idx].now);
    if let Some(bands) = narrowed.or(rung.bands) {
        rows.push(bands_row(&bands, rung.height_m, sheet.hall.catch.kind));
    }
    let filled = sheet.seen.map_or_else(Vec::new, |seen| seen.rows(rung_idx, rung.height_m));
    let first_empty = filled.len() + 1;
    rows.extend(filled);
    rows.extend((first_empty..=least_rows).map(|drop| {
        let cells = [drop.to_string(), height(rung.height_m)];
        let empty = vec![Words::default(); COLUMNS.len() - cells.len()];
        cells.into_iter().map(Words::from).chain(empty).collect()
    }));
    let stop = match rung.stop_weights {
        Some(weights) => format!("mean stop {weights:.0} weights"),
        None => format!("none of {} drops could be flown: don't drop from here", rung.drops),
    };
    let [long_m, wide_m, high_m] = rung.film_m();
    let about = format!(
        "{stop}; film {} m along, {} m across, {} m high; of {} computed drops",
        long_m, wide_m, high_m, rung.drops
    );
    Block::Rung {
        name: name.into(),
        about: about.into(),
        table: Table { columns, rows },
        limits: limits_of(rung).into(),
    }
}

fn bands_row(bands: &Bands, height_m: f64, catch: CatchKind) -> Vec<Words> {
    let pair = |Spread { p05, p95, .. }: Spread, digits: usize| {
        // No zero has a sign.
        let [low, high] = [p05, p95].map(|end| format!("{end:.digits$}"));
        let plain = |text: String| {
            if text.trim_matches(['-', '0', '.']).is_empty() { text.replace('-', "") } else { text }
        };
        Words::from(format!("{} to {}", plain(low), plain(high)))
    };
    let [low_deg, high_deg] =
        [bands.peak_tilt_rad.p05, bands.peak_tilt_rad.p95].map(f64::to_degrees);
    vec![
        "band".into(),
        height(height_m).into(),
        pair(bands.distance_m, 2),
        pair(bands.side_m, 2),
        pair(bands.time_s, 2),
        format!("{low_deg:.0} to {high_deg:.0}").into(),
        match catch {
            CatchKind::Net => "in the net".into(),
            CatchKind::Mat => "on the mat".into(),
            CatchKind::Floor => "on the floor".into(),
        },
    ]
}

fn limits_of(rung: &Rung) -> String {
    let outside = drops_outside_to_stop(ROWS).map_or_else(String::new, |least| {
        format!("Stop if {least} of {ROWS} lie outside of one band, and read them by --seen")
    });
    match (rung.turned_over, rung.largest_tilt_rad) {
        (0, Some(tilt_rad)) => {
            let tilt_deg = tilt_rad.to_degrees().ceil();
            format!("{outside}; at once if one tilts beyond {tilt_deg:.0}° or turns over.")
        }
        (0, None) => format!("{outside}; at once if one turns over."),
        (turned, _) => format!("{outside}. {turned} of {} computed turned over.", rung.drops),
    }
}

pub(super) fn limits() -> Section {
    let at_once = [
        "Something lands, slides or rolls out of the keep-out area.",
        "It touches a wall, a person or the rig.",
        "It turns over, or tilts beyond its rung's limit, where the ladder has one.",
        "A joint, a cell, the release or the remote stop doesn't do as it should.",
        "Someone comes in, or says stop, whoever it is.",
    ];
    let table = Table {
        columns: vec!["drops at a height".into(), "outside of one band: stop at".into()],
        rows: outside_rows(),
    };
    let why = "So many or more would be seen less than once in a hundred times if one drop in ten lies outside. \
               Then robot or model isn't what was thought: find out why before the next drop.";
    Section {
        heading: "When to stop".into(),
        blocks: vec![
            Block::Text(
                "At once, power off, and nobody goes near before it lies still, when:".into(),
            ),
            Block::List(at_once.map(Words::from).to_vec()),
            Block::Text("After a few drops, counted for each band by itself:".into()),
            Block::Table(table),
            Block::Text(why.into()),
        ],
        page: Page::Together,
    }
}

/// Numbers of drops with the same limit share a row.
fn outside_rows() -> Vec<Vec<Words>> {
    let mut runs: Vec<(usize, usize, usize)> = Vec::new();
    for drops in 1..=MOST_DROPS {
        let Some(least) = drops_outside_to_stop(drops) else { continue };
        match runs.last_mut() {
            Some((_, to, of)) if *of == least => *to = drops,
            _ => runs.push((drops, drops, least)),
        }
    }
    let row = |(from, to, least): (usize, usize, usize)| {
        let drops = if from == to { from.to_string() } else { format!("{from} to {to}") };
        vec![drops.into(), least.to_string().into()]
    };
    runs.into_iter().map(row).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand with the binomial distribution: 3 of 3 to 5, 4 of 6 to 9, 5 from 10 on.
    #[test]
    fn analytic_rows_of_limits() {
        let rows = outside_rows();
        for (row, (drops, least)) in rows.iter().zip([("3 to 5", "3"), ("6 to 9", "4")]) {
            assert_eq!(row, &vec![Words::from(drops), Words::from(least)]);
        }
        assert_eq!(rows[2][1], Words::from("5"));
    }
}
