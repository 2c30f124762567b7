//! What was seen so far: whether to go on.

use undulift_design::SeenDrop;

use super::contents::{Block, Page, Section};
use super::drawing::height;
use super::ladder::COLUMNS;
use super::words::Words;
use crate::Reading;

/// What was seen, and what it comes to.
#[derive(Debug, Clone, Copy)]
pub struct Seen<'a> {
    /// What it comes to.
    pub reading: &'a Reading,
    /// Each drop.
    pub drops: &'a [SeenDrop],
}

impl Seen<'_> {
    pub(super) fn section(&self) -> Section {
        let reading = self.reading;
        let holds = reading.stops.is_empty();
        let words = match (holds, reading.next) {
            (false, _) => "STOP".into(),
            (true, Some(next)) => next.to_string().replacen('g', "G", 1),
            (true, None) => "Go on from the highest release".into(),
        };
        let mut blocks = vec![Block::Verdict { holds, words: words.into() }];
        if !holds {
            blocks.push(Block::List(reading.stops.iter().map(|s| s.to_string().into()).collect()));
        }
        let ladder = match holds {
            true => "The ladder's bands are those of drops to come, by what was seen.",
            false => "The ladder holds what was seen; there are no rows for more.",
        };
        let told = format!(
            "{} drops were seen. If a robot of the plan made such ladders, {:.1} in 100 would go as badly \
             with it or worse; below 1 means stop. {ladder}",
            reading.seen,
            100.0 * reading.surprise
        );
        blocks.push(Block::Text(told.into()));
        Section { heading: "By what was seen".into(), blocks, page: Page::Together }
    }

    /// Rows of the ladder that are filled in already.
    pub(super) fn rows(&self, rung_idx: usize, height_m: f64) -> Vec<Vec<Words>> {
        let of_rung = self.drops.iter().filter(|drop| drop.rung_idx == rung_idx);
        of_rung.enumerate().map(|(n, drop)| row(n + 1, height_m, drop)).collect()
    }
}

fn row(n: usize, height_m: f64, drop: &SeenDrop) -> Vec<Words> {
    let number = |value: Option<f64>, digits: usize| {
        value.map_or_else(String::new, |value| format!("{value:.digits$}"))
    };
    let cells: [String; COLUMNS.len()] = [
        n.to_string(),
        height(height_m),
        number(drop.distance_m, 2),
        number(drop.side_m, 2),
        number(drop.time_s, 2),
        number(drop.peak_tilt_rad.map(f64::to_degrees), 0),
        drop.ended.word().replace('_', " "),
    ];
    cells.map(Words::from).to_vec()
}
