use crate::profile::midpoint_fractions;
use crate::{ChainError, Inertial, Joint, MOST_SEGMENTS, MassSplit, PointMass, Segment};

/// Segments joined by joints, with the masses fixed in them.
#[derive(Debug, Clone, PartialEq)]
pub struct Chain {
    segments: Vec<Segment>,
    joints: Vec<Joint>,
    attached: Vec<PointMass>,
    inertials: Vec<Inertial>,
}

impl Chain {
    /// A chain of at least two segments, from the head.
    ///
    /// # Errors
    ///
    /// [`ChainError`] where counts don't fit or a measure is one that no body can have.
    pub fn new(
        segments: Vec<Segment>,
        joints: Vec<Joint>,
        attached: Vec<PointMass>,
    ) -> Result<Self, ChainError> {
        check_counts(&segments, &joints)?;
        for (segment_idx, segment) in segments.iter().enumerate() {
            check_segment(segment_idx, segment)?;
        }
        for mass in &attached {
            check_point_mass(mass, segments.len())?;
        }
        let inertials = segments
            .iter()
            .enumerate()
            .map(|(segment_idx, segment)| {
                segment.inertial(attached.iter().filter(|mass| mass.segment_idx == segment_idx))
            })
            .collect();
        Ok(Self { segments, joints, attached, inertials })
    }

    /// The same chain with all its masses multiplied.
    ///
    /// - `factor`: above 0
    pub fn heavier(&self, factor: f64) -> Self {
        let mut chain = self.clone();
        for segment in &mut chain.segments {
            segment.structure_kg *= factor;
        }
        for mass in &mut chain.attached {
            mass.mass_kg *= factor;
        }
        for inertial in &mut chain.inertials {
            inertial.mass_kg *= factor;
            inertial.inertia_kg_m2 *= factor;
        }
        chain
    }

    /// Number of segments.
    pub fn n_segments(&self) -> usize {
        self.segments.len()
    }

    /// From the head: shape (n).
    pub fn segments(&self) -> &[Segment] {
        &self.segments
    }

    /// From the head: shape (n − 1).
    pub fn joints(&self) -> &[Joint] {
        &self.joints
    }

    /// Servos, battery and payload.
    pub fn attached(&self) -> &[PointMass] {
        &self.attached
    }

    /// Whole segments, attached masses included: shape (n).
    pub fn inertials(&self) -> &[Inertial] {
        &self.inertials
    }

    /// All of the chain, kg.
    pub fn mass_kg(&self) -> f64 {
        self.inertials.iter().map(|inertial| inertial.mass_kg).sum()
    }

    /// Where the mass is.
    pub fn mass_split(&self) -> MassSplit {
        let structure_kg = self.segments.iter().map(|segment| segment.structure_kg).sum();
        let mut split = MassSplit { structure_kg, ..MassSplit::default() };
        for mass in &self.attached {
            split.add(mass.carried, mass.mass_kg);
        }
        split
    }

    /// Nose to tail when straight, m.
    pub fn length_m(&self) -> f64 {
        self.segments.iter().map(|segment| segment.length_m).sum()
    }

    /// Segment lengths from the head, m: shape (n).
    pub fn lengths_m(&self) -> Vec<f64> {
        self.segments.iter().map(|segment| segment.length_m).collect()
    }

    /// Segment midpoints as fractions of the body from the nose: shape (n).
    pub fn midpoint_fractions(&self) -> Vec<f64> {
        midpoint_fractions(&self.lengths_m()).collect()
    }

    /// Sum of length times width, m².
    pub fn planform_m2(&self) -> f64 {
        self.segments.iter().map(|segment| segment.length_m * segment.width_m).sum()
    }

    /// Planform over length, m.
    pub fn mean_chord_m(&self) -> f64 {
        self.planform_m2() / self.length_m()
    }
}

fn check_counts(segments: &[Segment], joints: &[Joint]) -> Result<(), ChainError> {
    let found = segments.len();
    if !(2..=MOST_SEGMENTS).contains(&found) {
        return Err(ChainError::SegmentCount { found });
    }
    if joints.len() + 1 != found {
        return Err(ChainError::JointCount { segments: found, found: joints.len() });
    }
    Ok(())
}

fn check_segment(segment_idx: usize, segment: &Segment) -> Result<(), ChainError> {
    let measures = [
        ("length_m", segment.length_m),
        ("width_m", segment.width_m),
        ("thickness_m", segment.thickness_m),
        ("structure_kg", segment.structure_kg),
    ];
    for (quantity, value) in measures {
        if !(value.is_finite() && value > 0.0) {
            return Err(ChainError::SegmentSize { segment: segment_idx + 1, quantity, value });
        }
    }
    Ok(())
}

fn check_point_mass(mass: &PointMass, segments: usize) -> Result<(), ChainError> {
    let segment = mass.segment_idx + 1;
    if segment > segments {
        return Err(ChainError::NoSuchSegment { segment, segments });
    }
    let sound = mass.mass_kg.is_finite()
        && mass.mass_kg >= 0.0
        && mass.at_m.iter().all(|place| place.is_finite());
    if !sound {
        return Err(ChainError::PointMass { segment, mass_kg: mass.mass_kg });
    }
    Ok(())
}
