//! Joint commands in time: a wave down the body, or a table of angles.
//!
//! A [`Gait`] is what a design says; [`Commands`] is that gait laid on one chain, ready to be
//! asked at any time. Rates and accelerations are exact derivatives. Of servos only [`firmware`]
//! knows, and of them only their pulses; nothing knows of air.
//!
//! Angles are in radians. Heading is positive with the nose to the left, elevation with the nose
//! up; waves travel from nose to tail.

mod commands;
mod error;
pub mod firmware;
mod peaks;
mod spline;
mod start;
mod table;
mod wave;

pub use commands::{Commands, Instant, Motion};
pub use error::GaitError;
pub use peaks::Peak;
pub use spline::periodic_second_derivatives;
pub use start::{Clock, Phase, Start};
pub use table::{GaitTable, Interpolation};
pub use wave::{Taper, Wave};

/// What the joints are told to do.
#[derive(Debug, Clone, PartialEq)]
pub struct Gait {
    /// A wave or a table.
    pub pattern: Pattern,
    /// Where in its cycle it begins, rad: φ.
    pub phase_rad: f64,
    /// Whether it runs at release.
    pub start: Start,
}

/// The repeating part of a gait.
#[derive(Debug, Clone, PartialEq)]
pub enum Pattern {
    /// From a formula.
    Wave(Wave),
    /// From rows.
    Table(GaitTable),
}

impl Gait {
    /// Cycles a second; 0 holds the shape still.
    pub fn frequency_hz(&self) -> f64 {
        match &self.pattern {
            Pattern::Wave(wave) => wave.frequency_hz,
            Pattern::Table(table) => 1.0 / table.period_s(),
        }
    }
}
