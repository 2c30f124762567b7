//! A budget in words for people.

use std::fmt::Write;

use undulift_chain::AxisOf;
use undulift_design::Design;
use undulift_flight::HingeLoad;
use undulift_servo::{AxisBudget, BatteryBudget, Heat, Miss};

use super::Remedies;
use super::asking::{Judged, Moments};
use super::launches::Launches;
use crate::args::{Budget as Args, Case};
use crate::{joints, people, terminal};

/// Misses that are told one by one.
const MOST: usize = 5;

/// The whole answer.
pub fn answer(
    design: &Design,
    judged: &Judged,
    launches: Option<&Launches>,
    args: &Args,
) -> String {
    let mut text = format!("{}  {}\n", design.name, what_is_asked(judged, args));
    let mut line = |label: &str, value: String| people::line(&mut text, label, &value);
    line(if judged.passes() { "Passes" } else { "Fails" }, margin(design, judged));
    if let Some(row) = judged.worst_row() {
        line("Worst", format!("row {row} of {}", judged.asked.histories.times_s.len()));
    }
    if let Some(battery) = &judged.asked.budget.battery {
        line("Battery", battery_in_words(battery));
        if let Some(drops) = battery.drops_per_charge {
            line("Drops a charge", format!("{drops:.0}, counting the flights alone"));
        }
    }
    let hinges = judged.asked.hinges.iter().copied().reduce(HingeLoad::most).unwrap_or_default();
    line(
        "Hinges carry",
        format!("{:.1} N and {:.3} N·m at most", hinges.force_n, hinges.moment_nm),
    );
    if let Some(launches) = launches {
        text.push_str(&launches.answer());
    }
    text.push_str(&table(design, judged));
    if args.hinges {
        text.push_str(&hinge_table(&judged.asked.hinges));
    }
    if let Some(launches) = launches {
        text.push_str(&launches.joints(judged));
    }
    text
}

fn margin(design: &Design, judged: &Judged) -> String {
    let factor = design.limits.torque_factor;
    match judged.asked.budget.least_margin {
        Some(margin) => format!("least torque margin {margin:.2}, asked for {factor:.2}"),
        None => "without servos there is no margin".into(),
    }
}

fn battery_in_words(battery: &BatteryBudget) -> String {
    let or_none = |value: Option<f64>, unit: &str| match value {
        Some(value) => format!("{value:.1} {unit}"),
        None => format!("no {unit}, it collapses"),
    };
    format!(
        "{} at most, {} at least, {} a drop",
        or_none(battery.peak_current_a, "A"),
        or_none(battery.least_voltage_v, "V"),
        or_none(battery.energy_j_per_drop, "J")
    )
}

fn what_is_asked(judged: &Judged, args: &Args) -> String {
    let g = args.load_factor;
    match &args.case {
        Case::Flight => {
            let end_s = judged.asked.histories.times_s.last().copied().unwrap_or(0.0);
            format!("over a flight of {end_s:.2} s")
        }
        Case::HeldOut => format!("held out level and straight, {g} g"),
        Case::Release => match args.at_s {
            Some(at_s) => format!("held in the shape of its gait at {at_s} s, {g} g"),
            None => format!("held in the shape of its release, {g} g"),
        },
        Case::File(path) => {
            let rows = judged.asked.histories.times_s.len();
            let poses = if rows == 1 { "in 1 pose".into() } else { format!("in {rows} poses") };
            format!("held {poses} of {}, {g} g", path.display())
        }
    }
}

fn table(design: &Design, judged: &Judged) -> String {
    let moment = if judged.moments == Moments::Rows { "  row" } else { " at s" };
    let mut text = format!(
        "    joint         servo           peak N·m   rms N·m     °/s    margin {moment}   W     heat\n"
    );
    for (of, axis) in judged.axes.iter().zip(&judged.asked.budget.axes) {
        text.push_str(&row(design, judged.moments, of, axis));
    }
    text
}

fn row(design: &Design, moments: Moments, of: &AxisOf, axis: &AxisBudget) -> String {
    let servo = design.servo_names.of(of.joint_idx, of.axis).unwrap_or("-");
    let margin = axis.least_margin.map_or("-".into(), |margin| format!("{margin:.2}"));
    let moment = match (moments, axis.least_margin_at_s, axis.least_margin_idx) {
        (Moments::Times, Some(at_s), _) => format!("{at_s:.2}"),
        (Moments::Rows, _, Some(row_idx)) => (row_idx + 1).to_string(),
        _ => "-".into(),
    };
    let power = axis.peak_power_w.map_or("-".into(), |power_w| format!("{power_w:.1}"));
    format!(
        "    {:>3} {:<7}   {servo:<14}{:>9.3}{:>10.3}{:>9.0}{margin:>9}{moment:>7}{power:>6}   {}\n",
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

fn hinge_table(hinges: &[HingeLoad]) -> String {
    let mut text = "    joint   hinge N   hinge N·m\n".to_owned();
    for (joint_idx, HingeLoad { force_n, moment_nm }) in hinges.iter().enumerate() {
        // Writing to a string can't fail.
        let _ = writeln!(text, "    {:>5}{force_n:>10.2}{moment_nm:>12.3}", joint_idx + 1);
    }
    text
}

/// Tells which limits are missed, and what would help.
pub fn tell_misses(design: &Design, judged: &Judged, remedies: &Remedies) {
    let misses = &judged.asked.budget.misses;
    joints::tell(&design.name, &judged.travel_missed);
    for miss in misses.iter().take(MOST) {
        terminal::tell_limit(&format!("{}: {}", design.name, judged.in_words(miss)));
    }
    if misses.len() > MOST {
        let more = misses.len() - MOST;
        let told = if more == 1 { "limit is missed" } else { "limits are missed" };
        terminal::tell_limit(&format!("{}: {more} more {told}", design.name));
    }
    if let Some(hint) = judged.asked.budget.worst().and_then(stronger_or_faster) {
        terminal::tell_hint(&hint);
    }
    for hint in in_words(remedies) {
        terminal::tell_hint(&hint);
    }
}

/// Which servo would pass in the place of the one that misses most.
fn stronger_or_faster(miss: &Miss) -> Option<String> {
    // Rounded up, so that what is printed passes.
    let up = |factor: f64| (100.0 * factor).ceil() / 100.0;
    let factors = [
        miss.remedies.stronger.map(|factor| format!("{:.2} times the stall torque", up(factor))),
        miss.remedies.faster.map(|factor| format!("{:.2} times the no-load speed", up(factor))),
    ];
    let factors: Vec<String> = factors.into_iter().flatten().collect();
    let told = factors.join(" or ");
    (!factors.is_empty()).then(|| format!("there, a servo of {told} would pass, all else the same"))
}

fn in_words(remedies: &Remedies) -> Vec<String> {
    let slower = remedies.slower_hz.map(|frequency_hz| {
        format!(
            "a slower gait passes: --set gait.frequency_hz={frequency_hz}, or less; fly it to see \
             whether it still glides"
        )
    });
    let lighter = remedies.lighter.as_ref().map(|lighter| {
        format!(
            "a structure {:.1} % lighter passes: {}; fly it to see whether it still glides",
            100.0 * (1.0 - lighter.factor),
            lighter.set
        )
    });
    slower.into_iter().chain(lighter).collect()
}
