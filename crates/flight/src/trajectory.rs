use ode_solvers::continuous_output_model::ContinuousOutputModel;
use undulift_gait::Instant;

use crate::State;
use crate::state::{Scaled, Units};

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
    model: ContinuousOutputModel<f64, Scaled>,
}

impl Trajectory {
    pub(crate) fn new(units: Units) -> Self {
        Self { units, pieces: Vec::new() }
    }

    /// - `inside_s`: a time inside the piece
    pub(crate) fn push(
        &mut self,
        start_s: f64,
        inside_s: f64,
        model: ContinuousOutputModel<f64, Scaled>,
    ) {
        self.pieces.push(Piece { start_s, inside_s, model });
    }

    fn piece(&self, time_s: f64) -> &Piece {
        let after = self.pieces.partition_point(|piece| piece.start_s <= time_s);
        &self.pieces[after.max(1) - 1]
    }

    /// The instant of a time, with the piece it belongs to.
    pub fn instant(&self, time_s: f64) -> Instant {
        Instant { time_s, piece_s: self.piece(time_s).inside_s }
    }

    /// State at a time; times outside the flight give its ends.
    pub fn state(&self, time_s: f64) -> State {
        let model = &self.piece(time_s).model;
        let (first_s, last_s) = model.bounds();
        let scaled = model.evaluate(time_s.clamp(first_s, last_s)).expect("inside the bounds");
        self.units.state(&scaled)
    }
}
