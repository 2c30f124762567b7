/// A direction in which a joint may turn.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Axis {
    /// About the dorsal axis: positive turns the segment behind to point its nose left.
    Yaw,
    /// About the lateral axis: positive turns the segment behind to point its nose up.
    Pitch,
}

impl Axis {
    /// Both, in the order in which a universal joint takes them.
    pub const BOTH: [Axis; 2] = [Axis::Yaw, Axis::Pitch];

    /// The word that files and reports use.
    pub fn word(self) -> &'static str {
        match self {
            Axis::Yaw => "yaw",
            Axis::Pitch => "pitch",
        }
    }
}

/// A joint between two segments: which way it turns, and how far.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Joint {
    /// Turns in yaw.
    pub yaw: bool,
    /// Turns in pitch; with both, yaw first, then pitch about the carried lateral axis.
    pub pitch: bool,
    /// Largest yaw each way from straight, rad; no limit where absent.
    pub yaw_travel_rad: Option<f64>,
    /// Largest pitch each way from straight, rad; no limit where absent.
    pub pitch_travel_rad: Option<f64>,
}

impl Joint {
    /// Whether it turns about this axis.
    pub fn has(&self, axis: Axis) -> bool {
        match axis {
            Axis::Yaw => self.yaw,
            Axis::Pitch => self.pitch,
        }
    }

    /// Largest angle each way about this axis, rad.
    pub fn travel_rad(&self, axis: Axis) -> Option<f64> {
        match axis {
            Axis::Yaw => self.yaw_travel_rad,
            Axis::Pitch => self.pitch_travel_rad,
        }
    }
}

/// A run of segments that no joint bends about one axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Span {
    /// First segment, from 0 at the head.
    pub first: usize,
    /// One past the last segment.
    pub end: usize,
    /// Length-weighted mean of its segments' midpoints, as a fraction of the body from the nose.
    pub at_fraction: f64,
}

/// The rigid spans of a chain about one axis, from the head.
///
/// - `lengths_m`: shape (n)
/// - `joints`: shape (n − 1)
pub fn spans(lengths_m: &[f64], joints: &[Joint], axis: Axis) -> Vec<Span> {
    let body_m: f64 = lengths_m.iter().sum();
    let mut spans = Vec::new();
    let (mut first, mut front_m) = (0, 0.0);
    let (mut weighted_m2, mut length_m) = (0.0, 0.0);
    for (segment_idx, &segment_m) in lengths_m.iter().enumerate() {
        weighted_m2 += segment_m * (front_m + segment_m / 2.0);
        length_m += segment_m;
        front_m += segment_m;
        let ends_here = joints.get(segment_idx).is_none_or(|joint| joint.has(axis));
        if ends_here {
            let at_fraction = weighted_m2 / (length_m * body_m);
            spans.push(Span { first, end: segment_idx + 1, at_fraction });
            (first, weighted_m2, length_m) = (segment_idx + 1, 0.0, 0.0);
        }
    }
    spans
}

/// One joint's axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct AxisOf {
    /// Joint, from 0 at the head.
    pub joint_idx: usize,
    /// About which it turns.
    pub axis: Axis,
}

/// All axes of a chain's joints in the order that every list of them keeps: yaw axes from the
/// head, then pitch axes from the head.
pub fn joint_axes(joints: &[Joint]) -> Vec<AxisOf> {
    let of_axis = |axis| {
        let turning = joints.iter().enumerate().filter(move |(_, joint)| joint.has(axis));
        turning.map(move |(joint_idx, _)| AxisOf { joint_idx, axis })
    };
    Axis::BOTH.into_iter().flat_map(of_axis).collect()
}
