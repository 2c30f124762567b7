//! `undulift budget`.

use std::fmt::Write;

use anyhow::Context;
use serde_json::{Value, json};
use undulift_chain::{AxisOf, joint_axes};
use undulift_design::{Design, Knob};
use undulift_flight::{HingePeak, Pose, Settings, bench_loads, fly, histories as joint_histories};
use undulift_gait::Commands;
use undulift_servo::{
    AxisBudget, AxisHistory, Budget, Conditions, Heat, Histories, Miss, Place, Servo, budget,
};

use crate::args::{Budget as Args, Case};
use crate::{Outcome, Refused, joints, json, people, terminal, trace_file, whole_file};

/// Between the instants that a budget is made from, s.
const INSTANT_S: f64 = 1e-3;

/// Halvings by which a slower gait that passes is closed in on.
const HALVINGS: usize = 12;

/// Slowest gait that is tried, of the design's own frequency.
const SLOWEST: f64 = 0.1;

/// A design with what its servos are asked for.
struct Asked {
    axes: Vec<AxisOf>,
    servos: Vec<Servo>,
    histories: Histories,
    hinges: Vec<HingePeak>,
    budget: Budget,
    travel_missed: Vec<joints::Missed>,
}

impl Asked {
    fn passes(&self) -> bool {
        self.budget.passes && self.travel_missed.is_empty()
    }
}

pub fn run(args: &Args) -> anyhow::Result<Outcome> {
    let design = match undulift_design::read(&args.design, &args.sets) {
        Ok(design) => design,
        Err(errors) => {
            Refused::from(errors).tell();
            return Ok(Outcome::CouldNotRun);
        }
    };
    let asked = ask(&design, args)?;
    let slower = match (asked.passes(), args.case) {
        (false, Case::Flight) => slower(&design, args),
        _ => None,
    };
    if let Some(path) = &args.histories {
        write_histories(path, &design, args)?;
    }
    if args.json {
        json::print(vec![object(&design, &asked, slower)], 1)?;
    } else {
        terminal::answer(&answer(&design, &asked, args))?;
        for assumption in &asked.budget.assumptions {
            terminal::tell_warning(&assumption.to_string());
        }
        tell_misses(&design, &asked, slower);
    }
    Ok(if asked.passes() { Outcome::WithinLimits } else { Outcome::LimitMissed })
}

/// What a design's servos are asked for.
fn ask(design: &Design, args: &Args) -> anyhow::Result<Asked> {
    let glider = &design.glider;
    let axes = joint_axes(glider.chain.joints());
    let servos: Vec<Servo> = design.servos.values().cloned().collect();
    let names: Vec<&String> = design.servos.keys().collect();
    let (times_s, rows, hinges) = loads(design, args)?;
    let column = |axis: usize, what: usize| rows.iter().map(|row| row[what][axis]).collect();
    let of_axis = |(axis, of): (usize, &AxisOf)| AxisHistory {
        place: Place { joint: of.joint_idx + 1, axis: of.axis.word() },
        servo_idx: design
            .servo_names
            .of(of.joint_idx, of.axis)
            .and_then(|name| names.iter().position(|known| *known == name)),
        joint_torque_nm: column(axis, 0),
        rate_rad_s: column(axis, 1),
        acceleration_rad_s2: column(axis, 2),
    };
    let histories = Histories { times_s, axes: axes.iter().enumerate().map(of_axis).collect() };
    let conditions = Conditions {
        battery: design.battery.as_ref().map(|battery| battery.supply.clone()),
        air_temperature_k: glider.air.temperature_k,
        torque_factor: design.limits.torque_factor,
        drops: args.drops,
        rest_s: args.rest_s,
    };
    let budget = budget(&servos, &histories, &conditions)?;
    let travel_missed = match args.case {
        Case::Flight => {
            let commands = Commands::new(&glider.gait, &glider.chain)?;
            let end_s = histories.times_s.last().copied().unwrap_or(0.0);
            joints::beyond_travel(design, &commands.peaks(0.0, end_s)).collect()
        }
        Case::HeldOut | Case::Release => Vec::new(),
    };
    Ok(Asked { axes, servos, histories, hinges, budget, travel_missed })
}

/// Torque, rate and acceleration of every axis at one instant.
type Row = [Vec<f64>; 3];

/// Times, what every axis does at them, and what the hinges carry at most.
fn loads(design: &Design, args: &Args) -> anyhow::Result<(Vec<f64>, Vec<Row>, Vec<HingePeak>)> {
    let glider = &design.glider;
    let pose = match args.case {
        Case::Flight => {
            let settings = Settings { tolerance: args.tolerance, ..Settings::default() };
            let mut flight = fly(glider, &settings)?;
            let found = joint_histories(glider, &mut flight, INSTANT_S)?;
            let rows = found
                .torques_nm
                .into_iter()
                .zip(found.rates_rad_s)
                .zip(found.accelerations_rad_s2)
                .map(|((torques, rates), accelerations)| [torques, rates, accelerations]);
            return Ok((found.times_s, rows.collect(), found.hinges));
        }
        Case::HeldOut => Pose::HeldOut,
        Case::Release => Pose::Release,
    };
    let clamp_idx = match (args.clamp, pose, glider.launch.grip_segment_idx) {
        (Some(segment), ..) => segment as usize - 1,
        (None, Pose::Release, Some(grip_idx)) => grip_idx,
        _ => {
            anyhow::bail!("say which segment is held: --clamp SEGMENT, counted from 1 at the head")
        }
    };
    let found = bench_loads(glider, pose, clamp_idx, args.load_factor)?;
    let still = vec![0.0; found.torques_nm.len()];
    let hinges = found.hinges.iter().map(|hinge| HingePeak {
        force_n: hinge.force_n.norm(),
        moment_nm: hinge.moment_nm.norm(),
    });
    let hinges = hinges.collect();
    Ok((vec![0.0], vec![[found.torques_nm, still.clone(), still]], hinges))
}

/// The fastest gait, slower than the design's own, with which everything passes, Hz.
fn slower(design: &Design, args: &Args) -> Option<f64> {
    let knob = Knob::find(design, "gait.frequency_hz").ok()?;
    let own_hz = knob.value(design);
    let passes = |frequency_hz: f64| {
        let mut changed = design.clone();
        knob.set(&mut changed, frequency_hz).is_ok()
            && ask(&changed, args).is_ok_and(|asked| asked.passes())
    };
    let (mut slow_hz, mut fast_hz) = (SLOWEST * own_hz, own_hz);
    if !passes(slow_hz) {
        return None;
    }
    for _ in 0..HALVINGS {
        let middle_hz = 0.5 * (slow_hz + fast_hz);
        if passes(middle_hz) { slow_hz = middle_hz } else { fast_hz = middle_hz }
    }
    Some(slow_hz)
}

fn tell_misses(design: &Design, asked: &Asked, slower: Option<f64>) {
    const MOST: usize = 5;
    joints::tell(&design.name, &asked.travel_missed);
    for miss in asked.budget.misses.iter().take(MOST) {
        terminal::tell_limit(&format!("{}: {miss}", design.name));
    }
    if asked.budget.misses.len() > MOST {
        let more = asked.budget.misses.len() - MOST;
        let told = if more == 1 { "limit is missed" } else { "limits are missed" };
        terminal::tell_limit(&format!("{}: {more} more {told}", design.name));
    }
    if let Some(hint) = asked.budget.worst().and_then(stronger_or_faster) {
        terminal::tell_hint(&hint);
    }
    if let Some(frequency_hz) = slower {
        terminal::tell_hint(&format!(
            "a slower gait passes: --set gait.frequency_hz={frequency_hz:.4}, or less; fly it to see \
             whether it still glides"
        ));
    }
}

/// Which servo would pass in the place of the one that misses most.
fn stronger_or_faster(miss: &Miss) -> Option<String> {
    let factors = [
        miss.remedies.stronger.map(|factor| format!("{factor:.2} times the stall torque")),
        miss.remedies.faster.map(|factor| format!("{factor:.2} times the no-load speed")),
    ];
    let factors: Vec<String> = factors.into_iter().flatten().collect();
    let told = factors.join(" or ");
    (!factors.is_empty()).then(|| format!("there, a servo of {told} would pass, all else the same"))
}

fn answer(design: &Design, asked: &Asked, args: &Args) -> String {
    let factor = design.limits.torque_factor;
    let mut text = format!("{}  {}\n", design.name, what_is_asked(asked, args));
    let mut line = |label: &str, value: String| people::line(&mut text, label, &value);
    line(
        if asked.passes() { "Passes" } else { "Fails" },
        match asked.budget.least_margin {
            Some(margin) => format!("least torque margin {margin:.2}, asked for {factor:.2}"),
            None => "without servos there is no margin".into(),
        },
    );
    if let Some(battery) = &asked.budget.battery {
        let or_none = |value: Option<f64>, unit: &str| match value {
            Some(value) => format!("{value:.1} {unit}"),
            None => format!("no {unit}, it collapses"),
        };
        line(
            "Battery",
            format!(
                "{} at most, {} at least, {} a drop",
                or_none(battery.peak_current_a, "A"),
                or_none(battery.least_voltage_v, "V"),
                or_none(battery.energy_j_per_drop, "J")
            ),
        );
        if let Some(drops) = battery.drops_per_charge {
            line("Drops a charge", format!("{drops:.0}, counting the flights alone"));
        }
    }
    let hinge = |part: fn(&HingePeak) -> f64| asked.hinges.iter().map(part).fold(0.0, f64::max);
    line(
        "Hinges carry",
        format!("{:.1} N and {:.3} N·m at most", hinge(|h| h.force_n), hinge(|h| h.moment_nm)),
    );
    let _ = writeln!(
        text,
        "    joint         servo           peak N·m   rms N·m     °/s    margin  at s   W     heat"
    );
    for (of, axis) in asked.axes.iter().zip(&asked.budget.axes) {
        text.push_str(&row(of, axis, &asked.servos));
    }
    text
}

fn what_is_asked(asked: &Asked, args: &Args) -> String {
    match args.case {
        Case::Flight => {
            let end_s = asked.histories.times_s.last().copied().unwrap_or(0.0);
            format!("over a flight of {end_s:.2} s")
        }
        Case::HeldOut => format!("held out level and straight, {} g", args.load_factor),
        Case::Release => format!("held in the shape of its release, {} g", args.load_factor),
    }
}

fn row(of: &AxisOf, axis: &AxisBudget, servos: &[Servo]) -> String {
    let servo = axis.servo_idx.map_or("-", |idx| servos[idx].name.as_str());
    let margin = axis.least_margin.map_or("-".into(), |margin| format!("{margin:.2}"));
    let at_s = axis.least_margin_at_s.map_or("-".into(), |at_s| format!("{at_s:.2}"));
    let power = axis.peak_power_w.map_or("-".into(), |power_w| format!("{power_w:.1}"));
    format!(
        "    {:>3} {:<7}   {servo:<14}{:>9.3}{:>10.3}{:>9.0}{margin:>9}{at_s:>7}{power:>6}   {}\n",
        of.joint_idx + 1,
        of.axis.word(),
        axis.peak_torque_nm,
        axis.rms_torque_nm,
        axis.peak_speed_rad_s.to_degrees(),
        heat(&axis.heat)
    )
}

fn heat(heat: &Heat) -> String {
    match heat {
        Heat::Winding { peak_k, limit_k } => {
            format!("{:.0} of {:.0} °C", peak_k - 273.15, limit_k - 273.15)
        }
        Heat::RmsShare { rms_nm, limit_nm } => format!("{rms_nm:.3} of {limit_nm:.3} N·m"),
        Heat::Unknown => "unknown".into(),
        Heat::NoServo => "-".into(),
    }
}

fn object(design: &Design, asked: &Asked, slower: Option<f64>) -> Value {
    let budget = &asked.budget;
    let mut object = json::heading(design);
    let joints = asked.axes.iter().zip(&budget.axes).map(|(of, axis)| {
        json!({
            "joint": of.joint_idx + 1,
            "axis": of.axis.word(),
            "servo": axis.servo_idx.map(|idx| asked.servos[idx].name.as_str()),
            "peak_torque_nm": axis.peak_torque_nm,
            "rms_torque_nm": axis.rms_torque_nm,
            "peak_speed_deg_s": axis.peak_speed_rad_s.to_degrees(),
            "least_margin": axis.least_margin,
            "least_margin_at_s": axis.least_margin_at_s,
            "peak_power_w": axis.peak_power_w,
            "energy_j_per_drop": axis.energy_j_per_drop,
            "hinge_force_n": asked.hinges[of.joint_idx].force_n,
            "hinge_moment_nm": asked.hinges[of.joint_idx].moment_nm,
        })
    });
    object.insert("joints".into(), joints.collect());
    let battery = budget.battery.as_ref().map(|battery| {
        json!({
            "peak_current_a": battery.peak_current_a,
            "least_voltage_v": battery.least_voltage_v,
            "energy_j_per_drop": battery.energy_j_per_drop,
            "drops_per_charge": battery.drops_per_charge,
            "regulator_peak_current_a": battery.regulator_peak_current_a,
        })
    });
    object.insert("battery".into(), json!(battery));
    object.insert("least_margin".into(), json!(budget.least_margin));
    object.insert("passes".into(), json!(asked.passes()));
    let worst = budget.worst().map(|miss| {
        json!({
            "joint": miss.place.map(|place| place.joint),
            "axis": miss.place.map(|place| place.axis),
            "reason": miss.to_string(),
        })
    });
    let travel = asked.travel_missed.first().map(|missed| {
        let of = missed.of();
        json!({ "joint": of.joint_idx + 1, "axis": of.axis.word(), "reason": missed.in_words() })
    });
    object.insert("worst".into(), json!(worst.or(travel)));
    object.insert("slower_gait_hz".into(), json!(slower));
    let assumptions = budget.assumptions.iter().map(ToString::to_string);
    let misses = budget.misses.iter().map(ToString::to_string);
    let travel = asked.travel_missed.iter().map(joints::Missed::in_words);
    object.insert("warnings".into(), travel.chain(misses).chain(assumptions).collect());
    Value::Object(object)
}

/// Joint torque, rotor inertia left out, and rate of every axis.
fn write_histories(path: &std::path::Path, design: &Design, args: &Args) -> anyhow::Result<()> {
    let glider = &design.glider;
    let settings = Settings { tolerance: args.tolerance, ..Settings::default() };
    let mut flight = fly(glider, &settings)?;
    let found = joint_histories(glider, &mut flight, args.every_ms * 1e-3)?;
    whole_file::write(path, |file| {
        let mut table = csv::Writer::from_writer(file);
        let axes = joint_axes(glider.chain.joints());
        let columns = |unit: &str| -> Vec<String> {
            let name = |of: &AxisOf| format!("{}_{}_{unit}", of.axis.word(), of.joint_idx + 1);
            axes.iter().map(name).collect()
        };
        let names = ["time_s".to_owned()].into_iter().chain(columns("nm")).chain(columns("deg_s"));
        table.write_record(names)?;
        for (row, time_s) in found.times_s.iter().enumerate() {
            let rates = found.rates_rad_s[row].iter().map(|rate| rate.to_degrees());
            let values = [*time_s].into_iter().chain(found.torques_nm[row].iter().copied());
            table.write_record(values.chain(rates).map(trace_file::number))?;
        }
        table.flush().context("the table can't be finished")?;
        Ok(())
    })
}
