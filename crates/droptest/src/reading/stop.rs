//! Reasons to stop.

/// Why nobody should go on as planned.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum Stop {
    /// No robot that the plan allows for would do that.
    #[error(
        "what was seen doesn't go with the plan: of drops by robots that it allows for, {per_mille:.0} in 1000 \
         go as badly with it or worse; most of all {what} from {height_m:.1} m, {mean:.2} {unit} in the mean of \
         {drops}, where a mean of {low:.2} to {high:.2} was to be seen; find out why (release, robot, \
         measuring, units, model) before the next drop"
    )]
    Surprise {
        /// In a thousand.
        per_mille: f64,
        /// The measure that is furthest off.
        what: &'static str,
        /// Its unit.
        unit: &'static str,
        /// From where, m.
        height_m: f64,
        /// Drops that it was measured of.
        drops: usize,
        /// Their mean.
        mean: f64,
        /// Least mean that goes with a robot of the plan, nine times in ten.
        low: f64,
        /// Largest such mean.
        high: f64,
    },
    /// Each measure by itself would do, but not all of them in one robot.
    #[error(
        "what was seen doesn't go with the plan: of drops by robots that it allows for, {per_mille:.0} in 1000 \
         go as badly with it or worse; each measure by itself would do, but not all together or not so \
         far apart from drop to drop; find out why (release, robot, measuring, model) before the next drop"
    )]
    Together {
        /// In a thousand.
        per_mille: f64,
    },
    /// A drop tilted further than any that was flown.
    #[error(
        "a drop from {height_m:.1} m tilted by {tilt_deg:.0}°, further than any that was computed, measuring \
         included ({most_deg:.0}°); find out why before the next drop"
    )]
    Tilted {
        /// From where, m.
        height_m: f64,
        /// °.
        tilt_deg: f64,
        /// °.
        most_deg: f64,
    },
    /// A drop touched something.
    #[error(
        "{drops} of {of} drops from {height_m:.1} m touched something on the way; find out why, go on only when it \
         can't happen again, and then with a new file of the drops after"
    )]
    Touched {
        /// How many.
        drops: usize,
        /// Of how many.
        of: usize,
        /// From where, m.
        height_m: f64,
    },
    /// Something of robot or release didn't do as it should.
    #[error(
        "{drops} of {of} drops from {height_m:.1} m failed; mend it, and begin again at the lowest height, with a \
         new file"
    )]
    Failed {
        /// How many.
        drops: usize,
        /// Of how many.
        of: usize,
        /// From where, m.
        height_m: f64,
    },
    /// It turned over more often than the plan says.
    #[error(
        "{drops} of {of} drops from {height_m:.1} m turned over, where {expected:.1} % were to; find out why \
         before the next drop"
    )]
    TurnedOver {
        /// How many.
        drops: usize,
        /// Of how many.
        of: usize,
        /// From where, m.
        height_m: f64,
        /// By the plan, %.
        expected: f64,
    },
    /// It missed the catch more often than the plan says.
    #[error(
        "{drops} of {of} drops from {height_m:.1} m missed the catch, where {expected:.1} % were to; find out \
         why before the next drop"
    )]
    MissedCatch {
        /// How many.
        drops: usize,
        /// Of how many.
        of: usize,
        /// From where, m.
        height_m: f64,
        /// By the plan, %.
        expected: f64,
    },
    /// By what was seen, the next height's drops come to walls or people.
    #[error(
        "from {height_m:.1} m, {share:.1} % of drops by robots like this one would touch a wall or come to where \
         people are, but at most {most:.0} % may; don't go as high in this hall"
    )]
    NextTouches {
        /// m.
        height_m: f64,
        /// %.
        share: f64,
        /// %.
        most: f64,
    },
    /// Nothing is known of the next height.
    #[error(
        "no drop from {height_m:.1} m could be flown, so what it would do there isn't known; don't go as high"
    )]
    NextUnknown {
        /// m.
        height_m: f64,
    },
    /// By what was seen, too many of the next height's drops turn over.
    #[error(
        "from {height_m:.1} m, {share:.1} % of drops by robots like this one would turn over, but at most \
         {most:.0} % may; tune the gait, or don't go as high"
    )]
    NextTurnsOver {
        /// m.
        height_m: f64,
        /// %.
        share: f64,
        /// %.
        most: f64,
    },
    /// By what was seen, too many of the next height's drops miss the catch.
    #[error(
        "from {height_m:.1} m, {share:.1} % of drops by robots like this one would miss the catch, but at most \
         {most:.0} % may; move it, or don't go as high"
    )]
    NextMisses {
        /// m.
        height_m: f64,
        /// %.
        share: f64,
        /// %.
        most: f64,
    },
}
