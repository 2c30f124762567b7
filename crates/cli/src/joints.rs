//! What a gait asks of the joints, against what they can do.

use undulift_chain::AxisOf;
use undulift_design::{Design, Servo};
use undulift_gait::Peak;
use undulift_search::BeyondTravel;

use crate::terminal;

/// A joint that is asked for more than it can do.
#[derive(Debug, Clone)]
pub enum Missed {
    /// Further than its travel.
    Travel(BeyondTravel),
    /// It turned further than that by itself.
    Turned(BeyondTravel),
    /// The same in a pose of a file, its row from 1.
    Pose { of: AxisOf, angle_rad: f64, travel_rad: f64, row: usize },
    /// Faster than its servo turns without load.
    Speed { peak: Peak, servo: String, no_load_rad_s: f64 },
}

/// Travel of the joint that a peak is of, rad.
pub fn travel_rad(design: &Design, peak: &Peak) -> Option<f64> {
    design.glider.chain.joints()[peak.of.joint_idx].travel_rad(peak.of.axis)
}

/// Name and data of the servo that drives the axis that a peak is of.
pub fn servo<'a>(design: &'a Design, peak: &Peak) -> Option<(&'a str, &'a Servo)> {
    let name = design.servo_names.of(peak.of.joint_idx, peak.of.axis)?;
    design.servos.get(name).map(|servo| (name, servo))
}

/// Joints that are asked to go further than their travel.
pub fn beyond_travel<'a>(
    design: &'a Design,
    peaks: &'a [Peak],
) -> impl Iterator<Item = Missed> + 'a {
    undulift_search::beyond_travel(&design.glider.chain, peaks).map(Missed::Travel)
}

/// Joints that are asked to turn faster than their servos do without load.
pub fn beyond_speed<'a>(
    design: &'a Design,
    peaks: &'a [Peak],
) -> impl Iterator<Item = Missed> + 'a {
    peaks.iter().filter_map(|&peak| {
        let (name, servo) = servo(design, &peak)?;
        let no_load_rad_s = servo.no_load_speed_rad_s;
        let too_fast = peak.rate_rad_s > no_load_rad_s;
        too_fast.then(|| Missed::Speed { peak, servo: name.to_owned(), no_load_rad_s })
    })
}

/// Tells what is missed, of joints that miss the same limit the worst with the number of others.
pub fn tell(name: &str, missed: &[Missed]) {
    let mut told: Vec<&Missed> = Vec::new();
    for one in missed {
        if told.iter().any(|other| other.is_like(one)) {
            continue;
        }
        let like: Vec<&Missed> = missed.iter().filter(|other| other.is_like(one)).collect();
        let worst = like
            .iter()
            .copied()
            .fold(one, |worst, other| if other.excess() > worst.excess() { other } else { worst });
        let others = match like.len() - 1 {
            0 => String::new(),
            1 => "; so is one more joint".into(),
            more => format!("; so are {more} more joints"),
        };
        terminal::tell_limit(&format!("{name}: {}{others}", worst.in_words()));
        told.push(one);
    }
}

impl Missed {
    /// Which axis.
    pub fn of(&self) -> AxisOf {
        match self {
            Self::Travel(BeyondTravel { peak, .. })
            | Self::Turned(BeyondTravel { peak, .. })
            | Self::Speed { peak, .. } => peak.of,
            Self::Pose { of, .. } => *of,
        }
    }

    /// The row of a file, from 1.
    pub fn row(&self) -> Option<usize> {
        match self {
            Self::Pose { row, .. } => Some(*row),
            Self::Travel(_) | Self::Turned(_) | Self::Speed { .. } => None,
        }
    }

    fn is_like(&self, other: &Self) -> bool {
        std::mem::discriminant(self) == std::mem::discriminant(other)
            && self.of().axis == other.of().axis
    }

    /// What is asked over what can be done.
    fn excess(&self) -> f64 {
        match self {
            Self::Travel(beyond) | Self::Turned(beyond) => beyond.times_over(),
            Self::Pose { angle_rad, travel_rad, .. } => angle_rad / travel_rad,
            Self::Speed { peak, no_load_rad_s, .. } => peak.rate_rad_s / no_load_rad_s,
        }
    }

    /// Joint, value, limit.
    pub fn in_words(&self) -> String {
        match self {
            Self::Travel(beyond) => beyond.to_string(),
            Self::Turned(BeyondTravel { peak, travel_rad }) => format!(
                "joint {} turns to {:.1}° of {} at t = {:.2} s, beyond its travel of {:.1}°, where \
                 an end stop, which is left out here, would stop it",
                peak.of.joint_idx + 1,
                peak.angle_rad.to_degrees(),
                peak.of.axis.word(),
                peak.angle_at_s,
                travel_rad.to_degrees()
            ),
            Self::Pose { of, angle_rad, travel_rad, row } => format!(
                "joint {} is held at {:.1}° of {} in row {row}, beyond its travel of {:.1}°",
                of.joint_idx + 1,
                angle_rad.to_degrees(),
                of.axis.word(),
                travel_rad.to_degrees()
            ),
            Self::Speed { peak, servo, no_load_rad_s } => format!(
                "joint {} is asked for {:.0} °/s of {} at t = {:.2} s, faster than its servo \
                 `{servo}` turns without load, {:.0} °/s",
                peak.of.joint_idx + 1,
                peak.rate_rad_s.to_degrees(),
                peak.of.axis.word(),
                peak.rate_at_s,
                no_load_rad_s.to_degrees()
            ),
        }
    }
}
