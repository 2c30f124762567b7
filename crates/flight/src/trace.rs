use crate::{Attitude, Flight, State};

/// One output time of a flight.
#[derive(Debug, Clone, PartialEq)]
pub struct TraceRow {
    /// After release, s.
    pub time_s: f64,
    /// Place, attitude of the head, velocity and momentum.
    pub state: State,
    /// How the body lies.
    pub attitude: Attitude,
    /// Joint angles, rad: yaw axes from the head, then pitch axes from the head.
    pub angles_rad: Vec<f64>,
}

/// A flight at equal steps of time and at its end.
///
/// - `every_s`: between rows; above 0
pub fn trace(flight: &mut Flight, every_s: f64) -> impl Iterator<Item = TraceRow> + '_ {
    flight.row_times_s(every_s).map(move |time_s| {
        let state = flight.trajectory.state(time_s);
        let at = flight.trajectory.instant(time_s);
        let attitude = flight.equations.attitude(at, &state);
        let angles_rad = flight.equations.joints(at, &state.loose).0.to_vec();
        TraceRow { time_s, state, attitude, angles_rad }
    })
}
