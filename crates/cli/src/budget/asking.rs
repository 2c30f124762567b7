//! What is asked of a design's servos, by case.

use std::path::Path;

use anyhow::bail;
use undulift_chain::{AxisOf, joint_axes};
use undulift_design::{Design, DesignErrors, PoseRow, read_poses};
use undulift_flight::{End, Flight, Pose, Settings, fly};
use undulift_search::{Asked, Drops, asked_at_rest, asked_in_flight};
use undulift_servo::Miss;

use crate::args::{Budget as Args, Case};
use crate::joints;

/// Between the instants that a budget is made from, s.
pub const INSTANT_S: f64 = 1e-3;

/// A design with what its servos are asked for.
pub struct Judged {
    pub axes: Vec<AxisOf>,
    pub asked: Asked,
    pub travel_missed: Vec<joints::Missed>,
    pub moments: Moments,
    /// Where it was flown.
    pub flight: Option<Flight>,
}

/// What the instants of a budget are.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Moments {
    /// Times of a flight.
    Times,
    /// The one pose that was asked for.
    OnePose,
    /// Rows of a file.
    Rows,
}

impl Judged {
    /// Whether nothing is missed.
    pub fn passes(&self) -> bool {
        self.asked.budget.passes && self.travel_missed.is_empty()
    }

    /// How the flight ended.
    pub fn end(&self) -> Option<End> {
        self.flight.as_ref().map(|flight| flight.end)
    }

    /// A limit that is missed, with when or in which row.
    pub fn in_words(&self, miss: &Miss) -> String {
        match (self.moments, self.row_of(miss)) {
            (Moments::Times, _) => miss.to_string(),
            (Moments::Rows, Some(row)) => format!("{}, row {row}", miss.limit_and_place()),
            _ => miss.limit_and_place(),
        }
    }

    /// The row, from 1, that is worst: of what is missed most, else of the least margin, else of
    /// the largest torque. Absent where there are no rows.
    pub fn worst_row(&self) -> Option<usize> {
        if self.moments != Moments::Rows {
            return None;
        }
        let budget = &self.asked.budget;
        let travel = self.travel_missed.iter().find_map(joints::Missed::row);
        let least = budget.axes.iter().filter(|axis| axis.least_margin == budget.least_margin);
        let of_least = || least.filter_map(|axis| axis.least_margin_idx).min().map(|idx| idx + 1);
        let missed = budget.worst().and_then(|miss| self.row_of(miss));
        missed.or(travel).or_else(of_least).or_else(|| Some(self.row_of_most_torque(|_| true)))
    }

    /// The row of a miss; that of the axis's largest torque where the miss is of no instant.
    fn row_of(&self, miss: &Miss) -> Option<usize> {
        let of_instant = miss.when.map(|when| when.instant_idx + 1);
        of_instant.or_else(|| {
            let place = miss.place?;
            Some(self.row_of_most_torque(|axis| self.asked.histories.axes[axis].place == place))
        })
    }

    fn row_of_most_torque(&self, among: impl Fn(usize) -> bool) -> usize {
        let histories = &self.asked.histories;
        let axes = histories.axes.iter().enumerate().filter(|(axis, _)| among(*axis));
        let sizes = axes.flat_map(|(_, axis)| axis.joint_torque_nm.iter().map(|t| t.abs()));
        let rows = histories.times_s.len();
        let (mut row, mut most_nm) = (0, -1.0);
        for (place, size_nm) in sizes.enumerate() {
            if size_nm > most_nm {
                (row, most_nm) = (place % rows, size_nm);
            }
        }
        row + 1
    }
}

/// Judges a design in the case that was asked for.
pub fn judge(design: &Design, args: &Args) -> anyhow::Result<Result<Judged, DesignErrors>> {
    let one = |pose| at_rest(design, &[pose], Moments::OnePose, args);
    match &args.case {
        Case::Flight => in_flight(design, args).map(Ok),
        Case::HeldOut => one(Pose::HeldOut).map(Ok),
        Case::Release => one(Pose::Gait { at_s: args.at_s.unwrap_or(0.0) }).map(Ok),
        Case::File(path) => in_rows(design, path, args),
    }
}

/// Flies a design and judges that.
pub fn in_flight(design: &Design, args: &Args) -> anyhow::Result<Judged> {
    let settings = Settings { tolerance: args.tolerance, ..Settings::default() };
    let mut flight = fly(&design.glider, &settings)?;
    let drops = Drops { number: args.drops, rest_s: args.rest_s };
    let asked = asked_in_flight(design, &mut flight, INSTANT_S, drops)?;
    let travel_missed = asked.travel_missed.iter().copied().map(joints::Missed::Travel).collect();
    let axes = joint_axes(design.glider.chain.joints());
    Ok(Judged { axes, asked, travel_missed, moments: Moments::Times, flight: Some(flight) })
}

fn in_rows(
    design: &Design,
    path: &Path,
    args: &Args,
) -> anyhow::Result<Result<Judged, DesignErrors>> {
    let rows = match read_poses(path, design) {
        Ok(rows) => rows,
        Err(errors) if path.exists() => return Ok(Err(errors)),
        Err(_) => bail!(
            "there is no file {}; --case takes flight, held-out, release or a CSV file of poses",
            path.display()
        ),
    };
    let pose = |row: &PoseRow| Pose::Angles {
        angles_rad: row.angles_rad.clone(),
        roll_rad: row.roll_rad,
        pitch_rad: row.pitch_rad,
    };
    let poses: Vec<Pose> = rows.iter().map(pose).collect();
    let mut judged = at_rest(design, &poses, Moments::Rows, args)?;
    judged.travel_missed = beyond_travel(design, &judged.axes, &rows);
    Ok(Ok(judged))
}

/// The furthest that each axis is asked to go beyond its travel.
fn beyond_travel(design: &Design, axes: &[AxisOf], rows: &[PoseRow]) -> Vec<joints::Missed> {
    let missed = |(axis, &of): (usize, &AxisOf)| {
        let travel_rad = design.glider.chain.joints()[of.joint_idx].travel_rad(of.axis)?;
        let size_rad = |row: usize| rows[row].angles_rad[axis].abs();
        let row = (0..rows.len()).max_by(|&a, &b| size_rad(a).total_cmp(&size_rad(b)))?;
        let angle_rad = size_rad(row);
        let missed = joints::Missed::Pose { of, angle_rad, travel_rad, row: row + 1 };
        // A trace's degrees are rounded.
        (angle_rad > travel_rad * (1.0 + 1e-9)).then_some(missed)
    };
    axes.iter().enumerate().filter_map(missed).collect()
}

fn at_rest(
    design: &Design,
    poses: &[Pose],
    moments: Moments,
    args: &Args,
) -> anyhow::Result<Judged> {
    let clamp_idx = match (args.clamp, &args.case, design.glider.launch.grip_segment_idx) {
        (Some(segment), ..) => segment as usize - 1,
        (None, Case::Release, Some(grip_idx)) => grip_idx,
        _ => bail!("say which segment is held: --clamp SEGMENT, counted from 1 at the head"),
    };
    let asked = asked_at_rest(design, poses, clamp_idx, args.load_factor)?;
    let axes = joint_axes(design.glider.chain.joints());
    Ok(Judged { axes, asked, travel_missed: Vec::new(), moments, flight: None })
}
