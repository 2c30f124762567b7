//! Random chains with what a general-purpose rigid-body library says of them.

use nalgebra::Vector3;
use serde::Deserialize;
use undulift_chain::{Axis, AxisOf, Carried, Chain, Joint, PointMass, Segment, joint_axes};

use crate::read_json;

#[derive(Deserialize)]
struct File {
    chains: Vec<Case>,
}

/// A chain in a pose, with what is expected of it; `data/make_chains.py` says what each entry is.
#[derive(Deserialize)]
#[allow(missing_docs, reason = "the data file has the keys")]
pub struct Case {
    segments: Vec<Sizes>,
    joints: Vec<String>,
    attached: Vec<Mass>,
    pub yaw_rad: Vec<f64>,
    pub pitch_rad: Vec<f64>,
    pub yaw_rate_rad_s: Vec<f64>,
    pub pitch_rate_rad_s: Vec<f64>,
    pub rotations: Vec<Vec<f64>>,
    pub centres_m: Vec<Vec<f64>>,
    pub angular_velocities_rad_s: Vec<Vec<f64>>,
    pub centre_velocities_m_s: Vec<Vec<f64>>,
    pub centre_of_mass_m: Vec<f64>,
    pub centre_of_mass_velocity_m_s: Vec<f64>,
    pub centroidal_inertia_kg_m2: Vec<f64>,
    pub shape_momentum_kg_m2_s: Vec<f64>,
    pub mass_kg: f64,
}

#[derive(Deserialize)]
struct Sizes {
    length_m: f64,
    width_m: f64,
    thickness_m: f64,
    structure_kg: f64,
}

#[derive(Deserialize)]
struct Mass {
    segment_idx: usize,
    at_m: [f64; 3],
    mass_kg: f64,
}

impl Case {
    /// The chain itself.
    pub fn chain(&self) -> Chain {
        let segments = self.segments.iter().map(|s| Segment {
            length_m: s.length_m,
            width_m: s.width_m,
            thickness_m: s.thickness_m,
            structure_kg: s.structure_kg,
        });
        let joints = self.joints.iter().map(|axes| Joint {
            yaw: axes == "yaw" || axes == "universal",
            pitch: axes == "pitch" || axes == "universal",
            ..Joint::default()
        });
        let attached = self.attached.iter().map(|m| PointMass {
            carried: Carried::Payload,
            segment_idx: m.segment_idx,
            at_m: Vector3::from(m.at_m),
            mass_kg: m.mass_kg,
        });
        Chain::new(segments.collect(), joints.collect(), attached.collect()).unwrap()
    }

    /// Values by joint, listed by axis: yaw axes from the head, then pitch axes.
    pub fn by_axis(&self, chain: &Chain, yaw: &[f64], pitch: &[f64]) -> Vec<f64> {
        let of = |axis: AxisOf| match axis.axis {
            Axis::Yaw => yaw[axis.joint_idx],
            Axis::Pitch => pitch[axis.joint_idx],
        };
        joint_axes(chain.joints()).into_iter().map(of).collect()
    }
}

/// All of them.
pub fn cases() -> Vec<Case> {
    let cases = read_json::<File>("chains.json").chains;
    assert!(cases.len() >= 20);
    cases
}
