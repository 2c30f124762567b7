//! Joint loads of a flight as a table.

use std::path::Path;

use anyhow::Context;
use undulift_chain::{AxisOf, joint_axes};
use undulift_design::Design;
use undulift_flight::{Histories, Settings, fly, histories};

use super::asking::Judged;
use crate::args::Budget as Args;
use crate::{trace_file, whole_file};

/// Writes joint torque, rotor inertia left out, and rate of every axis, and what the hinges carry.
pub fn write(path: &Path, design: &Design, judged: &mut Judged, args: &Args) -> anyhow::Result<()> {
    let glider = &design.glider;
    let every_s = args.every_ms * 1e-3;
    let found = match &mut judged.flight {
        Some(flight) => histories(glider, flight, every_s)?,
        None => {
            let settings = Settings { tolerance: args.tolerance, ..Settings::default() };
            histories(glider, &mut fly(glider, &settings)?, every_s)?
        }
    };
    whole_file::write(path, |file| {
        let mut table = csv::Writer::from_writer(file);
        table.write_record(names(design))?;
        for row in 0..found.times_s.len() {
            table.write_record(numbers(&found, row).map(trace_file::number))?;
        }
        table.flush().context("the table can't be finished")?;
        Ok(())
    })
}

fn names(design: &Design) -> impl Iterator<Item = String> {
    let joints = design.glider.chain.joints();
    let axes = joint_axes(joints);
    let of_axes = |unit: &str| -> Vec<String> {
        let name = |of: &AxisOf| format!("{}_{}_{unit}", of.axis.word(), of.joint_idx + 1);
        axes.iter().map(name).collect()
    };
    let n_joints = joints.len();
    let of_hinges =
        move |unit: &'static str| (1..=n_joints).map(move |joint| format!("hinge_{joint}_{unit}"));
    let of_axes = of_axes("nm").into_iter().chain(of_axes("deg_s"));
    let names = std::iter::once("time_s".to_owned()).chain(of_axes);
    names.chain(of_hinges("n")).chain(of_hinges("nm"))
}

fn numbers(found: &Histories, row: usize) -> impl Iterator<Item = f64> {
    let torques_nm = found.torques_nm[row].iter().copied();
    let rates_deg_s = found.rates_rad_s[row].iter().map(|rate| rate.to_degrees());
    let hinges = found.hinge_loads[row].iter();
    let values = std::iter::once(found.times_s[row]).chain(torques_nm).chain(rates_deg_s);
    values.chain(hinges.clone().map(|hinge| hinge.force_n)).chain(hinges.map(|h| h.moment_nm))
}
