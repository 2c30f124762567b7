//! Tables for firmware as text: what is written reads back as the same.

use proptest::collection::vec;
use proptest::prelude::*;
use serde_json::Value;
use undulift_chain::{Axis, AxisOf};
use undulift_gait::firmware::{
    Block, Channel, FirmwareTable, Preamble, Scale, Unit, c_header, csv_text, is_table_text,
    json_text, read_table, trajectory_text,
};
use undulift_gait::{GaitError, Interpolation};
use undulift_servo::Pulse;
use yaml_rust2::{Yaml, YamlLoader};

fn channels(unit: Unit) -> impl Strategy<Value = Vec<Channel>> {
    let one = (any::<bool>(), any::<bool>(), -40_i32..40, 800.0..1100.0_f64, 1900.0..2400.0_f64);
    vec(one, 1..6).prop_map(move |rolls| {
        let channel =
            |(at, (yaw, reversed, offset_us, low, high)): (usize, (bool, bool, i32, f64, f64))| {
                let axis = if yaw { Axis::Yaw } else { Axis::Pitch };
                let own = Channel::plain(3 * at as u8, AxisOf { joint_idx: 2 * at + 1, axis });
                let pulse = Pulse { minus_90_us: low, centre_us: 1500.0, plus_90_us: high };
                match unit {
                    Unit::Us => Channel { reversed, offset_us: f64::from(offset_us), pulse, ..own },
                    _ => Channel { reversed, ..own },
                }
            };
        rolls.into_iter().enumerate().map(channel).collect()
    })
}

fn table_in(unit: Unit) -> impl Strategy<Value = FirmwareTable> {
    let coarser = prop_oneof![Just(1.0), Just(2.0), Just(25.0), 0.7..3.0_f64];
    let sizes = (1_usize..5, 2_usize..7, 1_usize..5);
    (channels(unit), coarser, sizes, 1e-3..0.2_f64, 0.0..2.0_f64).prop_flat_map(
        move |(channels, coarser, (n_start, n_loop, n_stop), step_s, delay_s)| {
            let counts = if unit == Unit::Us { 0..=65_535 } else { -32_768..=32_767 };
            let rows = |n: usize| vec(vec(counts.clone(), channels.len()), n);
            let head = vec(-179_999_999_i32..179_999_999, n_loop);
            let blocks = (rows(n_start), rows(n_loop), rows(n_stop), head.clone(), head);
            blocks.prop_map(move |(start, cycle, stop, heading, elevation)| {
                let degrees = |millionths: Vec<i32>| {
                    millionths.into_iter().map(|m| f64::from(m) / 1e6).collect::<Vec<f64>>()
                };
                let resolution = unit.fine_resolution() * coarser;
                let preamble = Preamble {
                    design: "made up".into(),
                    version: "1.2.3".into(),
                    input_sha256: "abc0".into(),
                    scale: Scale { unit, resolution },
                    step_s,
                    delay_s,
                    channels: channels.clone(),
                };
                let head_deg = Some([degrees(heading), degrees(elevation)]);
                FirmwareTable { preamble, start, cycle, stop, head_deg }
            })
        },
    )
}

fn table() -> impl Strategy<Value = FirmwareTable> {
    prop_oneof![table_in(Unit::Deg), table_in(Unit::Cdeg), table_in(Unit::Rad), table_in(Unit::Us)]
}

/// What a block's own file holds.
fn alone(table: &FirmwareTable, block: Block) -> FirmwareTable {
    let (cycle, head_deg) = match block {
        Block::Start => (&table.start, None),
        Block::Loop => (&table.cycle, table.head_deg.clone()),
        Block::Stop => (&table.stop, None),
    };
    let (start, stop) = (vec![], vec![]);
    FirmwareTable { preamble: table.preamble.clone(), start, cycle: cycle.clone(), stop, head_deg }
}

fn rows_of(rows: &Value, scale: Scale) -> Vec<Vec<i32>> {
    let count = |value: &Value| scale.count(value.as_f64().unwrap()).unwrap();
    let row = |row: &Value| row.as_array().unwrap().iter().map(count).collect();
    rows.as_array().unwrap().iter().map(row).collect()
}

proptest! {
    #[test]
    fn twin_csv_reads_back(table in table()) {
        for block in Block::ALL {
            let text = csv_text(&table, block);
            prop_assert!(is_table_text(&text));
            prop_assert_eq!(read_table(&text).unwrap(), alone(&table, block));
        }
    }

    #[test]
    fn twin_header_reads_back(table in table(), hold in any::<bool>()) {
        let between = if hold { Interpolation::Hold } else { Interpolation::Linear };
        let text = c_header(&table, between).unwrap();
        prop_assert!(is_table_text(&text));
        prop_assert_eq!(read_table(&text).unwrap(), table);
    }

    /// By serde_json, a general-purpose parser; numbers give the same counts, and read as short
    /// decimals where a count is one.
    #[test]
    fn twin_json_reads_back(table in table()) {
        let read: Value = serde_json::from_str(&json_text(&table)).unwrap();
        let Preamble { scale, step_s, delay_s, ref channels, .. } = table.preamble;
        prop_assert_eq!(read["unit"].as_str().unwrap(), scale.unit.word());
        prop_assert_eq!(read["resolution"].as_f64().unwrap(), scale.resolution);
        prop_assert_eq!(read["step_s"].as_f64().unwrap(), step_s);
        prop_assert_eq!(read["start"]["delay_s"].as_f64().unwrap(), delay_s);
        for (block, rows) in Block::ALL.into_iter().zip(table.blocks()) {
            prop_assert_eq!(&rows_of(&read[block.word()]["rows"], scale)[..], rows);
        }
        for (found, channel) in read["channels"].as_array().unwrap().iter().zip(channels) {
            prop_assert_eq!(found["channel"].as_u64().unwrap(), u64::from(channel.number));
            prop_assert_eq!(found["joint"].as_u64().unwrap(), channel.of.joint_idx as u64 + 1);
            prop_assert_eq!(found["axis"].as_str().unwrap(), channel.of.axis.word());
            prop_assert_eq!(found["reversed"].as_bool().unwrap(), channel.reversed);
            if scale.unit == Unit::Us {
                prop_assert_eq!(found["offset_us"].as_f64().unwrap(), channel.offset_us);
                let centre_us = found["pulse_us"]["centre"].as_f64().unwrap();
                prop_assert_eq!(centre_us, channel.pulse.centre_us);
            }
        }
        let heading = read["loop"]["head_heading_deg"].as_array().unwrap();
        let heading: Vec<f64> = heading.iter().map(|value| value.as_f64().unwrap()).collect();
        prop_assert_eq!(&heading, &table.head_deg.as_ref().unwrap()[0]);
    }

    /// By yaml-rust2, a general-purpose parser, against the message's own definition: fields as ROS 2
    /// names them (`common_interfaces`, trajectory_msgs/msg), durations as builtin_interfaces/msg
    /// has them, an int32 of seconds and a uint32 of nanoseconds below a second.
    #[test]
    fn published_messages_are_as_defined(table in table_in(Unit::Rad)) {
        let documents = YamlLoader::load_from_str(&trajectory_text(&table).unwrap()).unwrap();
        prop_assert_eq!(documents.len(), 3);
        let n = table.cycle.len();
        let rolled: Vec<Vec<i32>> = (1..=n).map(|row| table.cycle[row % n].clone()).collect();
        let whole = [&table.start[..], &table.cycle[..1]].concat();
        let expected = [(0, whole), (1, rolled), (1, table.stop[1..].to_vec())];
        for (k, (document, (first, rows))) in documents.iter().zip(expected).enumerate() {
            let delay_s = if k == 0 { table.preamble.delay_s } else { 0.0 };
            prop_assert_eq!(keys(document), ["header", "joint_names", "points"]);
            prop_assert_eq!(keys(&document["header"]), ["stamp", "frame_id"]);
            prop_assert_eq!(keys(&document["header"]["stamp"]), ["sec", "nanosec"]);
            let names = document["joint_names"].as_vec().unwrap();
            prop_assert_eq!(names.len(), table.preamble.channels.len());
            let points = document["points"].as_vec();
            // A message without points has none to list.
            let points = points.map(Vec::as_slice).unwrap_or_default();
            prop_assert_eq!(points.len(), rows.len());
            let mut before_s = -1.0;
            for (at, (point, row)) in points.iter().zip(&rows).enumerate() {
                let fields =
                    ["positions", "velocities", "accelerations", "effort", "time_from_start"];
                prop_assert_eq!(keys(point), fields);
                let counts: Vec<i32> = point["positions"]
                    .as_vec()
                    .unwrap()
                    .iter()
                    .map(|value| table.preamble.scale.count(value.as_f64().unwrap()).unwrap())
                    .collect();
                prop_assert_eq!(&counts, row);
                let time = &point["time_from_start"];
                prop_assert_eq!(keys(time), ["sec", "nanosec"]);
                let seconds = i32::try_from(time["sec"].as_i64().unwrap()).unwrap();
                let nanos = u32::try_from(time["nanosec"].as_i64().unwrap()).unwrap();
                prop_assert!(seconds >= 0 && nanos < 1_000_000_000);
                let time_s = f64::from(seconds) + 1e-9 * f64::from(nanos);
                let own_s = delay_s + table.preamble.step_s * (first + at) as f64;
                prop_assert!((time_s - own_s).abs() < 1e-9);
                prop_assert!(time_s > before_s);
                before_s = time_s;
            }
        }
    }

    /// Nothing that is put into a table's text makes the reader panic, nor is a change of a number
    /// passed over: its line, or the checksum, tells.
    #[test]
    fn twin_changed_headers_are_refused(table in table(), at in any::<prop::sample::Index>(), with in "[0-9a-z{},; \n/*-]{0,3}") {
        let text = c_header(&table, Interpolation::Linear).unwrap();
        let at = at.index(text.len());
        let mut changed = text.clone();
        changed.replace_range(at..=at, &with);
        if let Ok(read) = read_table(&changed) {
            prop_assert_eq!(read.blocks(), table.blocks());
        }
    }
}

fn keys(yaml: &Yaml) -> Vec<&str> {
    yaml.as_hash().unwrap().keys().map(|key| key.as_str().unwrap()).collect()
}

/// A small table in degrees, to be spoilt.
fn small() -> FirmwareTable {
    let of = AxisOf { joint_idx: 0, axis: Axis::Yaw };
    let preamble = Preamble {
        design: "small */ \n one".into(),
        version: "1".into(),
        input_sha256: "0".into(),
        scale: Scale { unit: Unit::Cdeg, resolution: 1.0 },
        step_s: 0.02,
        delay_s: 0.0,
        channels: vec![Channel::plain(0, of)],
    };
    let rows = |counts: &[i32]| counts.iter().map(|&count| vec![count]).collect();
    let (start, cycle, stop) = (rows(&[0]), rows(&[100, -100, 40]), rows(&[100, 0]));
    FirmwareTable { preamble, start, cycle, stop, head_deg: None }
}

/// Every spoilt text is refused with its line and what is wrong there.
#[test]
fn twin_spoilt_texts_are_told_by_line() {
    let header = c_header(&small(), Interpolation::Linear).unwrap();
    let csv = csv_text(&small(), Block::Loop);
    let line_of = |text: &str, part: &str| {
        1 + text.lines().position(|line| line.contains(part)).expect("the part is there")
    };
    for (text, from, to, told) in [
        (&header, "{-100}", "{-101}", "checksum"),
        (&header, "{-100}", "{x}", "\"x\" isn't a whole number"),
        (&header, "{-100}", "{-100, 3}", "2 numbers, not 1"),
        (&header, "_CRC32 0x", "_CRC32 ", "_CRC32` is missing"),
        (&header, "unit: cdeg", "unit: miles", "units are deg, cdeg, rad, us"),
        (&header, "step_s: 0.02", "step_s: soon", "`step_s` must be a number"),
        (&header, "resolution: 1", "resolution: -1", "must be above 0"),
        (&header, "channel: 0 yaw_1", "channel: 0 roll_1", "a channel is"),
        (&header, "_loop[", "_lost[", "_loop[…]` can't be found"),
        (&csv, "yaw_1_cdeg", "yaw_2_cdeg", "`yaw_1_cdeg` is missing"),
        (&csv, "-100", "-100.5", "isn't a whole number of counts"),
        (&csv, "-100", "", "\"\" isn't a number"),
        (&csv, "-100", "-100,7", "3 numbers, not 2"),
    ] {
        let Err(GaitError::Text { line, why }) = read_table(&text.replace(from, to)) else {
            panic!("{to} was read");
        };
        assert!(why.contains(told), "{to}: {why}");
        let spoilt = line_of(text, from);
        let is_named = line == spoilt || line == 0 || told == "checksum";
        assert!(is_named || from == "yaw_1_cdeg", "{to}: line {line}, not {spoilt}");
    }
}

/// The check value of CRC-32 (ISO 3309, as in ITU-T V.42): 0xCBF43926 over the nine bytes of
/// "123456789" (R. N. Williams, *A Painless Guide to CRC Error Detection Algorithms*, 1993, ch. 15
/// and 16). The bytes are spread over start, loop and return, and two of them make a wide number.
#[test]
fn published_check_value_of_the_checksum() {
    let rows = |text: &str| text.bytes().map(|byte| vec![i32::from(byte)]).collect();
    let bytes =
        FirmwareTable { start: rows("123"), cycle: rows("45"), stop: rows("6789"), ..small() };
    let c_type = bytes.c_type().unwrap();
    assert_eq!((c_type.name(), bytes.flash_bytes(c_type)), ("int8_t", 9));
    assert_eq!(bytes.crc32(c_type), 0xCBF4_3926);
    let pair = |text: &[u8]| vec![i32::from(text[0]) + 256 * i32::from(text[1])];
    let words = FirmwareTable {
        start: vec![pair(b"12")],
        cycle: vec![pair(b"34"), pair(b"56")],
        stop: vec![pair(b"78")],
        ..small()
    };
    let c_type = words.c_type().unwrap();
    assert_eq!((c_type.name(), words.flash_bytes(c_type)), ("int16_t", 8));
    assert_eq!(words.crc32(c_type), crc32fast::hash(b"12345678"));
}

/// By hand: the shortest type that holds the numbers, and what none of sixteen bits holds.
#[test]
fn analytic_types_of_numbers() {
    let with = |unit, counts: [i32; 2]| {
        let mut table = small();
        table.preamble.scale.unit = unit;
        table.start.clear();
        table.stop.clear();
        table.cycle = counts.map(|count| vec![count]).to_vec();
        table.c_type().map(|c_type| (c_type.name(), table.bits()))
    };
    assert_eq!(with(Unit::Deg, [-128, 127]), Ok(("int8_t", 8)));
    assert_eq!(with(Unit::Deg, [-129, 0]), Ok(("int16_t", 9)));
    assert_eq!(with(Unit::Deg, [0, 3]), Ok(("int8_t", 3)));
    assert_eq!(with(Unit::Us, [0, 255]), Ok(("uint8_t", 8)));
    assert_eq!(with(Unit::Us, [0, 65_535]), Ok(("uint16_t", 16)));
    for (unit, counts) in [(Unit::Cdeg, [0, 32_768]), (Unit::Us, [-1, 0]), (Unit::Us, [0, 65_536])]
    {
        let refused = with(unit, counts).unwrap_err();
        assert!(matches!(refused, GaitError::TooFine { bits: 16, .. }), "{refused}");
    }
}

#[test]
fn twin_messages_are_in_radians_only() {
    assert_eq!(trajectory_text(&small()), Err(GaitError::MessageUnit { unit: "cdeg" }));
}
