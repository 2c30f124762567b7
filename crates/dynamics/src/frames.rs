use undulift_chain::{Axis, Chain, joint_axes};
use undulift_lanes::{LANES, Triple, f64x4, sin_cos_all};

use crate::inertials::Inertials;

/// A chain's mechanics as flat arrays, made once per design.
#[derive(Debug, Clone, PartialEq)]
pub struct Mechanics {
    joints: Vec<JointSlots>,
    n_axes: usize,
    pub(crate) inertials: Vec<Inertials<f64x4>>,
    pub(crate) mass_kg: f64,
}

/// A joint's places in the list of axes, and the length of the segment ahead of it.
#[derive(Debug, Clone, Copy, PartialEq)]
struct JointSlots {
    yaw: Option<usize>,
    pitch: Option<usize>,
    length_ahead_m: f64,
}

/// Frames of four neighbouring segments, side by side; lanes past the tail are all 0.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct FourFrames {
    /// Segment x axis, toward the head.
    pub x: Triple<f64x4>,
    /// Segment y axis, left.
    pub y: Triple<f64x4>,
    /// Segment z axis, out of the back.
    pub z: Triple<f64x4>,
    /// Middle of the front end, m.
    pub front_m: Triple<f64x4>,
    /// Its velocity with the head segment held still, m/s.
    pub front_velocity_m_s: Triple<f64x4>,
    /// Angular velocity with the head segment held still, rad/s.
    pub angular_velocity_rad_s: Triple<f64x4>,
}

/// Frames of all segments at one instant, with the room that computing them takes.
#[derive(Debug, Clone, PartialEq)]
pub struct Frames {
    /// Four segments each, from the head.
    pub fours: Vec<FourFrames>,
    sines: Vec<f64>,
    cosines: Vec<f64>,
}

/// One segment's frame while going down the chain.
#[derive(Clone, Copy)]
struct Frame {
    x: Triple<f64>,
    y: Triple<f64>,
    z: Triple<f64>,
    front_m: Triple<f64>,
    front_velocity_m_s: Triple<f64>,
    angular_velocity_rad_s: Triple<f64>,
}

impl Mechanics {
    /// Lays out a chain.
    pub fn new(chain: &Chain) -> Self {
        let axes = joint_axes(chain.joints());
        let slot = |joint_idx: usize, axis: Axis| {
            axes.iter().position(|of| of.joint_idx == joint_idx && of.axis == axis)
        };
        let joints = chain.segments()[..chain.n_segments() - 1]
            .iter()
            .enumerate()
            .map(|(joint_idx, segment)| JointSlots {
                yaw: slot(joint_idx, Axis::Yaw),
                pitch: slot(joint_idx, Axis::Pitch),
                length_ahead_m: segment.length_m,
            })
            .collect();
        let all: Vec<_> = chain.inertials().iter().map(Some).collect();
        let fours = all.chunks(LANES);
        Self {
            joints,
            n_axes: axes.len(),
            inertials: fours.map(Inertials::new).collect(),
            mass_kg: chain.mass_kg(),
        }
    }

    /// Segments of the chain.
    pub fn n_segments(&self) -> usize {
        self.joints.len() + 1
    }

    /// Room for the frames of one instant.
    pub fn room(&self) -> Frames {
        Frames {
            fours: vec![FourFrames::default(); self.inertials.len()],
            sines: vec![0.0; self.n_axes],
            cosines: vec![0.0; self.n_axes],
        }
    }

    /// Goes down the chain from a head held still at the origin.
    ///
    /// - `angles_rad`, `rates_rad_s`: yaw axes from the head, then pitch axes from the head
    #[inline]
    pub fn frames(&self, angles_rad: &[f64], rates_rad_s: &[f64], frames: &mut Frames) {
        let Frames { fours, sines, cosines } = frames;
        sin_cos_all(&angles_rad[..self.n_axes], sines, cosines);
        let mut frame = Frame::head();
        frame.store(fours, 0);
        for (joint_idx, joint) in self.joints.iter().enumerate() {
            frame.go_to_rear(joint.length_ahead_m);
            if let Some(slot) = joint.yaw {
                frame.turn_yaw(sines[slot], cosines[slot], rates_rad_s[slot]);
            }
            if let Some(slot) = joint.pitch {
                frame.turn_pitch(sines[slot], cosines[slot], rates_rad_s[slot]);
            }
            frame.store(fours, joint_idx + 1);
        }
    }
}

impl FourFrames {
    /// The segments' x, y and z axes.
    #[inline(always)]
    pub(crate) fn axes(&self) -> [Triple<f64x4>; 3] {
        [self.x, self.y, self.z]
    }
}

impl Frames {
    /// A segment's x, y and z axes.
    pub(crate) fn axes(&self, segment_idx: usize) -> [Triple<f64>; 3] {
        [self.x(segment_idx), self.y(segment_idx), self.z(segment_idx)]
    }

    /// A segment's x axis.
    #[inline(always)]
    pub(crate) fn x(&self, segment_idx: usize) -> Triple<f64> {
        self.fours[segment_idx / LANES].x.lane(segment_idx % LANES)
    }

    /// A segment's y axis.
    #[inline(always)]
    pub(crate) fn y(&self, segment_idx: usize) -> Triple<f64> {
        self.fours[segment_idx / LANES].y.lane(segment_idx % LANES)
    }

    /// A segment's z axis.
    #[inline(always)]
    pub(crate) fn z(&self, segment_idx: usize) -> Triple<f64> {
        self.fours[segment_idx / LANES].z.lane(segment_idx % LANES)
    }

    /// Middle of a segment's front end, m.
    #[inline(always)]
    pub(crate) fn front_m(&self, segment_idx: usize) -> Triple<f64> {
        self.fours[segment_idx / LANES].front_m.lane(segment_idx % LANES)
    }

    /// A segment's angular velocity with the head held still, rad/s.
    pub(crate) fn angular_velocity_rad_s(&self, segment_idx: usize) -> Triple<f64> {
        self.fours[segment_idx / LANES].angular_velocity_rad_s.lane(segment_idx % LANES)
    }
}

impl Frame {
    fn head() -> Self {
        Self {
            x: Triple::new(1.0, 0.0, 0.0),
            y: Triple::new(0.0, 1.0, 0.0),
            z: Triple::new(0.0, 0.0, 1.0),
            front_m: Triple::zero(),
            front_velocity_m_s: Triple::zero(),
            angular_velocity_rad_s: Triple::zero(),
        }
    }

    #[inline(always)]
    fn go_to_rear(&mut self, length_m: f64) {
        let to_rear_m = self.x.times(-length_m);
        self.front_m = self.front_m + to_rear_m;
        self.front_velocity_m_s =
            self.front_velocity_m_s + self.angular_velocity_rad_s.cross(to_rear_m);
    }

    /// Rz(angle): positive points the nose of what follows to the left.
    #[inline(always)]
    fn turn_yaw(&mut self, sine: f64, cosine: f64, rate_rad_s: f64) {
        self.angular_velocity_rad_s = self.angular_velocity_rad_s + self.z.times(rate_rad_s);
        (self.x, self.y) =
            (self.x.times(cosine) + self.y.times(sine), self.y.times(cosine) - self.x.times(sine));
    }

    /// Ry(−angle): positive points the nose of what follows up.
    #[inline(always)]
    fn turn_pitch(&mut self, sine: f64, cosine: f64, rate_rad_s: f64) {
        self.angular_velocity_rad_s = self.angular_velocity_rad_s - self.y.times(rate_rad_s);
        (self.x, self.z) =
            (self.x.times(cosine) + self.z.times(sine), self.z.times(cosine) - self.x.times(sine));
    }

    #[inline(always)]
    fn store(&self, fours: &mut [FourFrames], segment_idx: usize) {
        let (four, lane) = (&mut fours[segment_idx / LANES], segment_idx % LANES);
        four.x.set_lane(lane, self.x);
        four.y.set_lane(lane, self.y);
        four.z.set_lane(lane, self.z);
        four.front_m.set_lane(lane, self.front_m);
        four.front_velocity_m_s.set_lane(lane, self.front_velocity_m_s);
        four.angular_velocity_rad_s.set_lane(lane, self.angular_velocity_rad_s);
    }
}
