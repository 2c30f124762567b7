//! What fails in a drop: kinds, when, and what becomes of the flight.

use std::f64::consts::TAU;

use rand::Rng;
use undulift_design::{Design, FaultShares};
use undulift_flight::{Failure, Fault};
use undulift_gait::Pattern;

/// Longest that a release holds on, s.
const LONGEST_LATE_S: f64 = 0.3;
/// By then the nose has gone down by this, rad.
const LATE_PITCH_RAD: f64 = 30.0 * TAU / 360.0;

/// What fails.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum FaultKind {
    /// One axis hangs limp from a moment on.
    OneLimp,
    /// One axis holds its angle from a moment on.
    OneLocked,
    /// All axes hang limp from a moment on.
    PowerLost,
    /// The wave is anywhere in its cycle at release.
    WrongPhase,
    /// The release holds on for up to 0.3 s: the wave runs on, the launch speed falls evenly, to
    /// nothing at 0.3 s, and the nose goes down evenly, to 30° more.
    ReleasedLate,
    /// All axes hold their angles from a moment on.
    WaveFrozen,
}

impl FaultKind {
    /// In the order of [`FaultShares::KINDS`].
    pub const ALL: [Self; 6] = [
        Self::OneLimp,
        Self::OneLocked,
        Self::PowerLost,
        Self::WrongPhase,
        Self::ReleasedLate,
        Self::WaveFrozen,
    ];

    /// As in files.
    pub fn key(self) -> &'static str {
        FaultShares::KINDS[self as usize]
    }

    /// For people.
    pub fn in_words(self) -> &'static str {
        match self {
            Self::OneLimp => "one axis limp",
            Self::OneLocked => "one axis locked",
            Self::PowerLost => "all power lost",
            Self::WrongPhase => "wrong phase",
            Self::ReleasedLate => "released late",
            Self::WaveFrozen => "wave frozen",
        }
    }

    /// Whether a drop fails, and how; what is drawn here doesn't depend on the design.
    pub(crate) fn draw(shares: &FaultShares, random: &mut impl Rng) -> Option<Self> {
        let (which, kind): (f64, f64) = (random.random(), random.random());
        if which >= shares.share {
            return None;
        }
        let mut left = kind * shares.weights.iter().sum::<f64>();
        let mut last = None;
        for (kind, weight) in Self::ALL.into_iter().zip(shares.weights) {
            if weight > 0.0 && left >= 0.0 {
                last = Some(kind);
            }
            left -= weight;
        }
        last
    }

    /// Changes a design that is about to fly, and says which axes fail when.
    ///
    /// - `longest_s`: time that a sound flight takes
    pub(crate) fn strike(
        self,
        design: &mut Design,
        n_axes: usize,
        longest_s: f64,
        random: &mut impl Rng,
    ) -> Vec<Fault> {
        let (moment, which): (f64, f64) = (random.random(), random.random());
        let at_s = moment * longest_s;
        let fails = |axis_idx, failure| Fault { axis_idx, at_s, failure };
        let all = |failure| (0..n_axes).map(|axis_idx| fails(axis_idx, failure)).collect();
        let one = ((which * n_axes as f64) as usize).min(n_axes.saturating_sub(1));
        let (gait, launch) = (&mut design.glider.gait, &mut design.glider.launch);
        match self {
            Self::OneLimp if n_axes > 0 => vec![fails(one, Failure::Limp)],
            Self::OneLocked if n_axes > 0 => vec![fails(one, Failure::Locked)],
            Self::PowerLost => all(Failure::Limp),
            Self::WaveFrozen => all(Failure::Locked),
            Self::WrongPhase => {
                gait.phase_rad += TAU * moment;
                vec![]
            }
            Self::ReleasedLate => {
                // The phase runs against Φ.
                gait.phase_rad -= TAU * gait.frequency_hz() * moment * LONGEST_LATE_S;
                launch.speed_m_s *= 1.0 - moment;
                launch.pitch_rad =
                    (launch.pitch_rad - LATE_PITCH_RAD * moment).max(-0.45 * TAU / 2.0);
                vec![]
            }
            Self::OneLimp | Self::OneLocked => vec![],
        }
    }
}

/// Makes the wave smaller, as servos do that are too weak to follow; tables stay as they are.
pub(crate) fn weaken(design: &mut Design, factor: f64) {
    if let Pattern::Wave(wave) = &mut design.glider.gait.pattern {
        wave.lateral_amplitude_rad *= factor;
        wave.vertical_amplitude_rad *= factor;
    }
}
