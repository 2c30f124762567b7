use nalgebra::Vector3;
use undulift_aero::{Air, Scales, Section, SkinFriction};
use undulift_chain::Chain;
use undulift_gait::Gait;

/// A robot with its gait, in its air, about to be let go.
#[derive(Debug, Clone, PartialEq)]
pub struct Glider {
    /// The body.
    pub chain: Chain,
    /// The sections that occur on it.
    pub sections: Vec<Section>,
    /// Which of them each segment has: shape (n).
    pub section_of: Vec<usize>,
    /// Points along a segment at which air loads are taken, 1 to 8.
    pub strips_per_segment: usize,
    /// What the joints do.
    pub gait: Gait,
    /// What it flies in.
    pub air: Air,
    /// Constant wind, world axes, m/s.
    pub wind_world_m_s: Vector3<f64>,
    /// Factors on lift and drag.
    pub scales: Scales,
    /// Drag along the axis.
    pub skin_friction: SkinFriction,
    /// How it is let go.
    pub launch: Launch,
}

/// How the body is let go.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Launch {
    /// Centre of mass above the floor, m.
    pub height_m: f64,
    /// Of the centre of mass over the ground, m/s.
    pub speed_m_s: f64,
    /// Of that velocity above the horizontal, rad.
    pub climb_rad: f64,
    /// Right side down, rad.
    pub roll_rad: f64,
    /// Nose up, rad.
    pub pitch_rad: f64,
    /// Nose left, rad.
    pub yaw_rad: f64,
    /// Added to what the release gives, world axes, rad/s.
    pub spin_world_rad_s: Vector3<f64>,
    /// The segment it is held by, from 0 at the head; absent: let go with no angular momentum.
    pub grip_segment_idx: Option<usize>,
}
