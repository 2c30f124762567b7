//! Flights whose joints servos turn, or that fail: what is asked for, and what is told.

use std::str::FromStr;

use serde_json::{Value, json};
use undulift_chain::{Axis, AxisOf, joint_axes};
use undulift_design::Design;
use undulift_flight::{
    Drives, Failure, Fault, Flight, Mode, Saturation, Settings, Summary, Tracking, fly, summary,
    tracking,
};
use undulift_gait::Peak;

use crate::args::{Fly, Joints};
use crate::joints::{self, Missed};
use crate::people;

/// An axis that fails, as the command line says it: `JOINT:AXIS=limp|locked[@SECONDS]`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FaultAsked {
    /// From 1.
    joint: usize,
    axis: Axis,
    failure: Failure,
    at_s: f64,
}

impl FromStr for FaultAsked {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        let form =
            || "write it as JOINT:AXIS=WHAT or JOINT:AXIS=WHAT@SECONDS, such as 5:yaw=limp@0.8";
        let (place, what) = text.split_once('=').ok_or_else(form)?;
        let (joint, axis) = place.split_once(':').ok_or_else(form)?;
        let (what, at_s) = what.split_once('@').unwrap_or((what, "0"));
        let joint = joint.parse().ok().filter(|&joint| joint >= 1);
        let at_s = at_s.parse().ok().filter(|at_s: &f64| at_s.is_finite() && *at_s >= 0.0);
        Ok(Self {
            joint: joint.ok_or("JOINT is a whole number from 1, counted from the head")?,
            axis: Axis::BOTH
                .into_iter()
                .find(|known| known.word() == axis)
                .ok_or("AXIS is yaw or pitch")?,
            failure: match what {
                "limp" => Failure::Limp,
                "locked" => Failure::Locked,
                _ => return Err("WHAT is limp or locked".into()),
            },
            at_s: at_s.ok_or("SECONDS are counted from release, 0 or more")?,
        })
    }
}

impl FaultAsked {
    fn of(self, axes: &[AxisOf], n_joints: usize) -> anyhow::Result<Fault> {
        let Self { joint, axis, failure, at_s } = self;
        let here = |of: &AxisOf| of.joint_idx + 1 == joint && of.axis == axis;
        let word = axis.word();
        match axes.iter().position(here) {
            Some(axis_idx) => Ok(Fault { axis_idx, at_s, failure }),
            None if joint > n_joints => {
                anyhow::bail!("--fault: there is no joint {joint}; the design has 1 to {n_joints}")
            }
            None => anyhow::bail!("--fault: joint {joint} of the design doesn't turn in {word}"),
        }
    }

    fn in_words(self) -> String {
        let what = match self.failure {
            Failure::Limp => "hangs limp",
            Failure::Locked => "is locked",
        };
        let when = if self.at_s > 0.0 { format!("{} s", self.at_s) } else { "release".into() };
        format!("joint {} {} {what} from {when} on", self.joint, self.axis.word())
    }
}

/// What turns the joints of a design's flight.
///
/// # Errors
///
/// Where a fault is of an axis that the design doesn't have.
pub fn drives(args: &Fly, design: &Design) -> anyhow::Result<Drives> {
    let joints = design.glider.chain.joints();
    let axes = joint_axes(joints);
    let faults = args.faults.iter().map(|fault| fault.of(&axes, joints.len()));
    let faults = faults.collect::<anyhow::Result<_>>()?;
    Ok(design.drives(args.joints == Joints::Driven, faults))
}

/// What is told beyond any flight's answer.
pub struct Driven {
    tracking: Tracking,
    commanded: Option<Summary>,
    axes: Vec<AxisOf>,
    faults: Vec<FaultAsked>,
    servos: usize,
}

impl Driven {
    /// Absent for a flight whose joints all follow their commands, as was asked.
    pub fn of(
        args: &Fly,
        design: &Design,
        drives: &Drives,
        flight: &mut Flight,
        settings: &Settings,
    ) -> Option<Self> {
        if args.joints == Joints::Commanded && args.faults.is_empty() {
            return None;
        }
        let commanded = fly(&design.glider, settings).ok();
        let driven = |mode: &&Mode| matches!(mode, Mode::Driven { .. });
        Some(Self {
            tracking: tracking(flight),
            commanded: commanded.map(|mut flight| summary(&design.glider, &mut flight)),
            axes: joint_axes(design.glider.chain.joints()),
            faults: args.faults.clone(),
            servos: drives.modes.iter().filter(driven).count(),
        })
    }

    fn place(&self, axis_idx: usize) -> String {
        let AxisOf { joint_idx, axis } = self.axes[axis_idx];
        format!("joint {} {}", joint_idx + 1, axis.word())
    }

    /// Lines for people.
    pub fn answer(&self, text: &mut String) {
        for fault in &self.faults {
            people::line(text, "Fails", &fault.in_words());
        }
        people::line(text, "Servos", &self.following());
        if self.servos > 0 {
            people::line(text, "Saturated", &self.saturated());
        }
        let glide_ratio = self.commanded.and_then(|summary| summary.glide_ratio);
        let commanded =
            glide_ratio.map_or("no glide ratio".into(), |ratio| format!("glide ratio {ratio:.2}"));
        let told = format!("{commanded}, were every joint where it is told to be");
        people::line(text, "Commanded", &told);
    }

    fn following(&self) -> String {
        let count = match self.servos {
            0 => return "none drives a joint, so the rest follows its commands exactly".into(),
            1 => "1 drives".to_owned(),
            servos => format!("{servos} drive"),
        };
        match &self.tracking.largest {
            Some(largest) => format!(
                "{count}; at most {:.1}° from its command, {} at {:.2} s",
                largest.error_rad.abs().to_degrees(),
                self.place(largest.axis_idx),
                largest.at_s
            ),
            None => count,
        }
    }

    /// The axis that does so for longest, and how many others do.
    fn saturated(&self) -> String {
        let mut seconds = vec![0.0; self.axes.len()];
        for Saturation { axis_idx, from_s, to_s } in &self.tracking.saturations {
            seconds[*axis_idx] += to_s - from_s;
        }
        let worst = (0..seconds.len()).max_by(|&a, &b| seconds[a].total_cmp(&seconds[b]));
        let Some(worst) = worst.filter(|&worst| seconds[worst] > 0.0) else {
            return "never".into();
        };
        let mut spells = self.tracking.saturations.iter().filter(|spell| spell.axis_idx == worst);
        let first_s = spells.next().map_or(0.0, |spell| spell.from_s);
        let others = match seconds.iter().filter(|&&seconds| seconds > 0.0).count() - 1 {
            0 => String::new(),
            1 => "; one more axis does, too".into(),
            others => format!("; {others} more axes do, too"),
        };
        format!(
            "{} for {:.2} s in all, first at {first_s:.2} s{others}",
            self.place(worst),
            seconds[worst]
        )
    }

    /// What JSON gains.
    pub fn object(&self) -> Value {
        let of = |axis_idx: usize| self.axes[axis_idx];
        let saturations = self.tracking.saturations.iter().map(|spell| {
            let AxisOf { joint_idx, axis } = of(spell.axis_idx);
            json!({
                "joint": joint_idx + 1,
                "axis": axis.word(),
                "from_s": spell.from_s,
                "to_s": spell.to_s,
            })
        });
        let largest = self.tracking.largest.as_ref();
        json!({
            "saturations": saturations.collect::<Value>(),
            "tracking_error_deg": largest.map(|most| most.error_rad.abs().to_degrees()),
            "tracking_error_joint": largest.map(|most| of(most.axis_idx).joint_idx + 1),
            "tracking_error_axis": largest.map(|most| of(most.axis_idx).axis.word()),
            "tracking_error_at_s": largest.map(|most| most.at_s),
            "commanded_glide_ratio": self.commanded.and_then(|summary| summary.glide_ratio),
            "faults": self.faults.iter().map(|fault| fault.in_words()).collect::<Value>(),
        })
    }

    /// Joints beyond their travel: by what they were told where they follow that, else by what they
    /// did.
    ///
    /// - `told`: by their commands
    pub fn beyond_travel(&self, design: &Design, told: &[Peak]) -> Vec<Missed> {
        let own = &self.tracking.peaks;
        let follows = |peak: &&Peak| own.iter().all(|own| own.of != peak.of);
        let told: Vec<Peak> = told.iter().filter(follows).copied().collect();
        let of_told = joints::beyond_travel(design, &told);
        let of_own = undulift_search::beyond_travel(&design.glider.chain, own);
        of_told.chain(of_own.map(Missed::Turned)).collect()
    }
}
