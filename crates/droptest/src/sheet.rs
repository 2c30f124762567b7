//! The test sheet: what the planner of a drop test prints and takes to the hall.
//!
//! One model of contents for all formats, so that none tells what another doesn't. Values in, text
//! out; names may hold anything and are shown as text.

mod contents;
mod drawing;
mod html;
mod labels;
mod ladder;
mod markdown;
mod room;
mod scale;
mod seen;
mod svg;
mod words;

use undulift_design::{Design, Hall};

use crate::{Around, Measuring, Misfit, Plan, Rung};
pub use seen::Seen;

/// All that a sheet tells.
#[derive(Debug, Clone, Copy)]
pub struct Sheet<'a> {
    /// What is dropped.
    pub design: &'a Design,
    /// Where.
    pub hall: &'a Hall,
    /// The name of the hall's file.
    pub hall_name: &'a str,
    /// Values that were set beside the design's file.
    pub set: &'a [String],
    /// Of the program.
    pub version: &'a str,
    /// Of the drops.
    pub seed: u64,
    /// Drops that were asked for.
    pub asked: usize,
    /// Whether all of them were flown, from the lower rungs, too.
    pub complete: bool,
    /// What drops from the highest release come to.
    pub plan: &'a Plan,
    /// The release ladder, from low to high; its bands are printed where nothing was seen.
    pub rungs: &'a [Rung],
    /// What doesn't fit.
    pub misfits: &'a [Misfit],
    /// What was seen so far, where anything was.
    pub seen: Option<Seen<'a>>,
    /// What films.
    pub measuring: &'a Measuring,
    /// No part of the body is further from its centre, m.
    pub reach_m: f64,
}

impl Sheet<'_> {
    /// One page of HTML, to be printed on A4 or Letter: no script, nothing from outside.
    pub fn html(&self) -> String {
        html::page(self)
    }

    /// The same as Markdown; the plan of the hall as a list of places.
    pub fn markdown(&self) -> String {
        markdown::text(self)
    }

    fn around(&self) -> Around<'_> {
        Around { hall: self.hall, reach_m: self.reach_m }
    }

    fn highest_m(&self) -> f64 {
        self.hall.release.heights_m.last().copied().unwrap_or_default()
    }

    fn thickness_m(&self) -> f64 {
        let thick = self.design.glider.chain.segments().iter().map(|segment| segment.thickness_m);
        thick.fold(0.0, f64::max)
    }
}
