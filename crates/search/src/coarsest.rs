//! The coarsest gait table that still flies as computed.

use rayon::prelude::*;
use undulift_chain::joint_axes;
use undulift_design::Design;
use undulift_flight::{FlightError, Settings};
use undulift_gait::Interpolation;
use undulift_gait::firmware::{FirmwareTable, Scale};

use crate::table_flights::{TableFlight, fly_gait, fly_table};

/// Rows a loop that are tried, and twice, four times… as many.
const FIRST_ROWS: [usize; 2] = [4, 6];

/// Most rows that are tried where nothing else says.
pub const MOST_ROWS_TRIED: usize = 256;

/// Resolutions that are tried, in the finest.
const COARSER: [f64; 11] = [1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0, 500.0, 1000.0, 2000.0];

/// A table that was tried.
#[derive(Debug, Clone, PartialEq)]
pub struct Trial {
    /// Of the loop.
    pub rows: usize,
    /// Of its numbers.
    pub scale: Scale,
    /// That its numbers need.
    pub bits: u32,
    /// How it flew; absent where joints or board can't do it.
    pub flight: Option<TableFlight>,
    /// Its glide ratio's distance from the gait's own, as a share.
    pub off: Option<f64>,
}

impl Trial {
    /// Whether its glide is as near as that.
    pub fn is_within(&self, tolerance: f64) -> bool {
        self.off.is_some_and(|off| off <= tolerance)
    }

    /// Bits of one channel's loop.
    pub fn cost(&self) -> usize {
        self.rows * self.bits as usize
    }

    fn is_finer_than(&self, other: &Self) -> bool {
        self.rows >= other.rows && self.scale.resolution <= other.scale.resolution
    }
}

/// What was tried, and what is best of it.
#[derive(Debug, Clone, PartialEq)]
pub struct Coarsest {
    /// The gait itself.
    pub reference: TableFlight,
    /// All tables, by rows, then by resolution.
    pub trials: Vec<Trial>,
    /// The one that is within the tolerance and takes the fewest bits.
    pub best: Option<Trial>,
}

/// How a table is looked for.
pub struct Hunt<'a> {
    /// Whose gait it is.
    pub design: &'a Design,
    /// How the firmware runs between rows; held rows are flown with the design's servos.
    pub between: Interpolation,
    /// Share by which the glide ratio may be off.
    pub tolerance: f64,
    /// Most rows of a loop.
    pub most_rows: usize,
    /// The finest numbers to try.
    pub finest: Scale,
    /// Makes a table; none where joints or board can't do it.
    pub make: &'a (dyn Fn(usize, Scale) -> Option<FirmwareTable> + Sync),
    /// How flights are computed.
    pub settings: Settings,
}

impl Hunt<'_> {
    /// Flies tables of 4, 6, 8, 12, 16… rows in resolutions of 1, 2, 5, 10… of the finest, and takes
    /// the one with the fewest bits that is within the tolerance together with every finer one
    /// tried, so that no lucky hit is taken; then one row less or the next coarser resolution for as
    /// long as either is within it, too.
    ///
    /// # Errors
    ///
    /// [`FlightError`] where the gait itself can't be flown, or held rows find a joint without a
    /// servo.
    pub fn coarsest(&self) -> Result<Coarsest, FlightError> {
        let reference = fly_gait(self.design, self.between, &self.settings)?;
        let grid: Vec<(usize, Scale)> = self.grid();
        let flown = grid.into_par_iter().map(|(rows, scale)| self.fly(&reference, rows, scale));
        let mut trials = flown.collect::<Result<Vec<Trial>, FlightError>>()?;
        let mut best = self.first(&trials).cloned();
        while let Some(from) = &best {
            let Some(next) = self.coarser(&reference, from, &mut trials)? else { break };
            best = Some(next);
        }
        trials.sort_by(|a, b| {
            let finest_first = a.scale.resolution.total_cmp(&b.scale.resolution);
            a.rows.cmp(&b.rows).then(finest_first)
        });
        Ok(Coarsest { reference, trials, best })
    }

    fn grid(&self) -> Vec<(usize, Scale)> {
        let doubled = (0..).flat_map(|times| FIRST_ROWS.map(|rows| rows << times));
        let mut rows: Vec<usize> = doubled.take_while(|&rows| rows < self.most_rows).collect();
        rows.push(self.most_rows);
        let scale = |times| Scale { resolution: self.finest.resolution * times, ..self.finest };
        rows.iter().flat_map(|&rows| COARSER.map(|times| (rows, scale(times)))).collect()
    }

    fn fly(
        &self,
        reference: &TableFlight,
        rows: usize,
        scale: Scale,
    ) -> Result<Trial, FlightError> {
        let Some(table) = (self.make)(rows, scale) else {
            return Ok(Trial { rows, scale, bits: 0, flight: None, off: None });
        };
        let axes = joint_axes(self.design.glider.chain.joints());
        let flight =
            fly_table(self.design, table.gait_table(&axes, self.between)?, &self.settings)?;
        let off = flight.off(reference);
        Ok(Trial { rows, scale, bits: table.bits(), flight: Some(flight), off })
    }

    fn first<'t>(&self, trials: &'t [Trial]) -> Option<&'t Trial> {
        let sure = |trial: &&Trial| {
            let mut finer = trials.iter().filter(|other| other.is_finer_than(trial));
            // What joints or board can't do says nothing of how it would fly.
            finer.all(|other| other.flight.is_none() || other.is_within(self.tolerance))
        };
        let within = trials.iter().filter(|trial| trial.is_within(self.tolerance));
        within.filter(sure).min_by_key(|trial| (trial.cost(), trial.rows))
    }

    /// One row less, or the next coarser resolution, if that is within the tolerance.
    fn coarser(
        &self,
        reference: &TableFlight,
        from: &Trial,
        trials: &mut Vec<Trial>,
    ) -> Result<Option<Trial>, FlightError> {
        let finest = self.finest.resolution;
        let next = COARSER.iter().map(|times| finest * times).find(|&r| r > from.scale.resolution);
        let next = next.map(|resolution| (from.rows, Scale { resolution, ..from.scale }));
        let fewer = (from.rows > 2).then_some((from.rows - 1, from.scale));
        for (rows, scale) in [fewer, next].into_iter().flatten() {
            let known = |trial: &&Trial| trial.rows == rows && trial.scale == scale;
            let trial = match trials.iter().find(known) {
                Some(known) => known.clone(),
                None => {
                    let trial = self.fly(reference, rows, scale)?;
                    trials.push(trial.clone());
                    trial
                }
            };
            if trial.is_within(self.tolerance) {
                return Ok(Some(trial));
            }
        }
        Ok(None)
    }
}
