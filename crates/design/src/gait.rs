//! The gait: a wave's parameters, or a table of joint angles.

use undulift_chain::{Joint, joint_axes};
use undulift_gait::{Gait, Interpolation, Pattern, Start, Taper, Wave};

use crate::DesignError;
use crate::gait_table::build_gait_table;
use crate::named_files::NamedFiles;
use crate::range::Range;
use crate::table::Table;

/// Keys that only a wave has.
const WAVE_KEYS: [&str; 10] = [
    "frequency_hz",
    "lateral_amplitude_deg",
    "lateral_waves",
    "sharpness",
    "vertical_amplitude_deg",
    "vertical_ratio",
    "vertical_lag_deg",
    "turn_deg",
    "arch_deg",
    "taper",
];

/// Angles that may go round and round.
const PHASE_DEG: Range = Range::within(36_000.0);

/// - `joints`: where nothing is wrong with any
pub(crate) fn read_gait(
    table: Table<'_>,
    joints: Option<&[Joint]>,
    files: &mut NamedFiles,
) -> Option<Gait> {
    let phase_deg = table.number_or("phase_deg", PHASE_DEG, 0.0);
    let start = read_start(&table);
    let pattern = if table.holds("table") {
        read_table(&table, joints, files).map(Pattern::Table)
    } else {
        read_wave(&table).map(Pattern::Wave)
    };
    table.finish();
    Some(Gait { pattern: pattern?, phase_rad: phase_deg.to_radians(), start: start? })
}

fn read_table(
    table: &Table<'_>,
    joints: Option<&[Joint]>,
    files: &mut NamedFiles,
) -> Option<undulift_gait::GaitTable> {
    for key in WAVE_KEYS {
        table.leave(key);
        let why = "a table says all of the wave itself";
        let remedy = "beside a table only `interpolation`, `phase_deg` and `start` can stand; \
                      take the other keys out";
        table.refuse_beside(key, "table", why, remedy);
    }
    let kinds = [
        ("cubic", Interpolation::Cubic),
        ("linear", Interpolation::Linear),
        ("hold", Interpolation::Hold),
    ];
    let interpolation = table.word("interpolation", &kinds).unwrap_or_default();
    let source = files.read_csv(&table.get("table")?)?;
    let joints = joints?;
    if joint_axes(joints).is_empty() {
        let why = "no joint turns, so a table has no angles to give".into();
        let remedy = "give the joints axes in [joints], or take the table out";
        table.note("table", DesignError::Disagree { why, remedy });
        return None;
    }
    match build_gait_table(&source, joints, interpolation) {
        Ok(gait_table) => Some(gait_table),
        Err(mistakes) => {
            table.document().note_all(mistakes);
            None
        }
    }
}

fn read_wave(table: &Table<'_>) -> Option<Wave> {
    const AMPLITUDE_DEG: Range = Range::within(180.0);
    const BEND_DEG: Range = Range::within(1080.0);
    let angle_rad =
        |key, range, default_deg: f64| table.number_or(key, range, default_deg).to_radians();
    let frequency_hz = table.need_number("frequency_hz", Range::from_to(0.0, 50.0));
    let lateral_amplitude_deg = table.need_number("lateral_amplitude_deg", AMPLITUDE_DEG);
    let lateral_waves = table.need_number("lateral_waves", Range::from_to(0.0, 20.0));
    let sharpness = table.number_or("sharpness", Range::from_to(0.0, 1000.0), 0.0);
    let vertical_amplitude_rad = angle_rad("vertical_amplitude_deg", AMPLITUDE_DEG, 0.0);
    let vertical_ratio = table.whole_or("vertical_ratio", 1..=20, 2);
    let vertical_lag_rad = angle_rad("vertical_lag_deg", PHASE_DEG, 90.0);
    let turn_rad = angle_rad("turn_deg", BEND_DEG, 0.0);
    let arch_rad = angle_rad("arch_deg", BEND_DEG, 0.0);
    let taper = read_taper(table.table("taper"));
    table.leave("table");
    if table.get("interpolation").is_some() {
        let why = "`interpolation` says how a table runs between its rows".into();
        let remedy = "take it out, or name a `table`";
        table.note("interpolation", DesignError::Disagree { why, remedy });
    }
    Some(Wave {
        frequency_hz: frequency_hz?,
        lateral_amplitude_rad: lateral_amplitude_deg?.to_radians(),
        lateral_waves: lateral_waves?,
        sharpness,
        vertical_amplitude_rad,
        vertical_ratio,
        vertical_lag_rad,
        turn_rad,
        arch_rad,
        taper,
    })
}

fn read_taper(table: Table<'_>) -> Taper {
    const FACTOR: Range = Range::from_to(0.0, 10.0);
    const FRACTION: Range = Range::from_to(0.0, 1.0);
    let default = Taper::default();
    let taper = Taper {
        head: table.number_or("head", FACTOR, default.head),
        head_length: table.number_or("head_length", FRACTION, default.head_length),
        tail: table.number_or("tail", FACTOR, default.tail),
        tail_length: table.number_or("tail_length", FRACTION, default.tail_length),
    };
    table.finish();
    taper
}

fn read_start(gait: &Table<'_>) -> Option<Start> {
    const WAIT_S: Range = Range::from_to(0.0, 60.0);
    let table = gait.table("start");
    if !table.is_given() {
        return Some(Start::Running);
    }
    let node = table.need("mode", "\"running\" or \"held\"");
    let held = node.and_then(|node| node.word(&[("running", false), ("held", true)]));
    let wait_s = |key| {
        if held == Some(true) {
            table.number_or(key, WAIT_S, 0.0)
        } else {
            table.number(key, WAIT_S).unwrap_or(0.0)
        }
    };
    let (delay_s, spin_up_s) = (wait_s("delay_s"), wait_s("spin_up_s"));
    if held == Some(false) {
        for key in ["delay_s", "spin_up_s"] {
            let why = "a gait that runs at release neither waits nor spins up";
            table.refuse_beside(key, "mode", why, "take it out, or write mode = \"held\"");
        }
    }
    table.finish();
    Some(if held? { Start::Held { delay_s, spin_up_s } } else { Start::Running })
}
