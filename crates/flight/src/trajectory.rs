use ode_solvers::continuous_output_model::ContinuousOutputModel;
use undulift_gait::Instant;

use crate::State;
use crate::path::Path;
use crate::state::{Scaled, Units};
use crate::turning::Turning;

/// The integrator's own interpolant over a whole flight.
#[derive(Debug, Clone)]
pub struct Trajectory {
    units: Units,
    pieces: Vec<Piece>,
}

/// A smooth piece of a flight.
#[derive(Debug, Clone)]
struct Piece {
    start_s: f64,
    inside_s: f64,
    course: Course,
}

/// What the interpolant holds.
#[derive(Debug, Clone)]
pub(crate) enum Course {
    /// All joints follow their commands.
    Following(ContinuousOutputModel<f64, Scaled>),
    /// Some don't.
    Loose(Path, Turning),
}

impl Trajectory {
    pub(crate) fn new(units: Units) -> Self {
        Self { units, pieces: Vec::new() }
    }

    /// - `inside_s`: a time inside the piece
    pub(crate) fn push(&mut self, start_s: f64, inside_s: f64, course: Course) {
        self.pieces.push(Piece { start_s, inside_s, course });
    }

    fn piece(&self, time_s: f64) -> &Piece {
        let after = self.pieces.partition_point(|piece| piece.start_s <= time_s);
        &self.pieces[after.max(1) - 1]
    }

    /// The instant of a time, with the piece it belongs to.
    pub fn instant(&self, time_s: f64) -> Instant {
        Instant { time_s, piece_s: self.piece(time_s).inside_s }
    }

    /// What turns axes that don't follow their commands at a time; absent where all do.
    pub(crate) fn turning(&self, time_s: f64) -> Option<&Turning> {
        match &self.piece(time_s).course {
            Course::Following(_) => None,
            Course::Loose(_, turning) => Some(turning),
        }
    }

    /// State at a time; times outside the flight give its ends.
    pub fn state(&self, time_s: f64) -> State {
        const INSIDE: &str = "inside the bounds";
        match &self.piece(time_s).course {
            Course::Following(model) => {
                let (first_s, last_s) = model.bounds();
                self.units.state(&model.evaluate(time_s.clamp(first_s, last_s)).expect(INSIDE))
            }
            Course::Loose(path, turning) => self.units.long_state(&path.at(time_s), &turning.axes),
        }
    }
}
