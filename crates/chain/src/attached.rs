use nalgebra::Vector3;

/// What a point mass is, for the mass split.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Carried {
    /// Drives a joint.
    Servo,
    /// Stores the energy.
    Battery,
    /// Anything else on board.
    Payload,
}

/// A mass fixed in one segment.
#[derive(Debug, Clone, PartialEq)]
pub struct PointMass {
    /// Its part of the mass split.
    pub carried: Carried,
    /// Index of the segment it is fixed in, from 0 at the head.
    pub segment_idx: usize,
    /// Place in the segment's frame, m.
    pub at_m: Vector3<f64>,
    /// kg.
    pub mass_kg: f64,
}

/// Where the mass is, kg.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct MassSplit {
    /// The segments' boxes.
    pub structure_kg: f64,
    /// All servos.
    pub servos_kg: f64,
    /// The battery.
    pub battery_kg: f64,
    /// Everything else carried.
    pub payload_kg: f64,
}

impl MassSplit {
    /// All of it, kg.
    pub fn total_kg(&self) -> f64 {
        self.structure_kg + self.servos_kg + self.battery_kg + self.payload_kg
    }

    pub(crate) fn add(&mut self, carried: Carried, mass_kg: f64) {
        match carried {
            Carried::Servo => self.servos_kg += mass_kg,
            Carried::Battery => self.battery_kg += mass_kg,
            Carried::Payload => self.payload_kg += mass_kg,
        }
    }
}
