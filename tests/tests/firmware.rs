//! Tables for firmware as firmware meets them: compiled C, held rows, flights that stay close.

use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use approx::assert_relative_eq;
use undulift_chain::{AxisOf, joint_axes};
use undulift_design::{Design, Override};
use undulift_flight::{Drives, FlightError, Settings, fly, fly_driven, summary};
use undulift_gait::firmware::{
    Blocks, Channel, Ends, FirmwareTable, Preamble, Scale, Unit, c_header, c_name, read_table,
};
use undulift_gait::{Commands, Gait, GaitTable, Interpolation, Pattern, Start};
use undulift_search::{Hunt, fly_gait, fly_table};

fn design(name: &str, sets: &[&str]) -> Design {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../designs").join(name);
    let sets: Vec<Override> = sets.iter().map(|set| Override::parse(set).unwrap()).collect();
    undulift_design::read(&path, &sets).unwrap()
}

fn axes(design: &Design) -> Vec<AxisOf> {
    joint_axes(design.glider.chain.joints())
}

fn plain(design: &Design) -> Vec<Channel> {
    (0..).zip(axes(design)).map(|(number, of)| Channel::plain(number, of)).collect()
}

fn table(design: &Design, rows: usize, scale: Scale, channels: Vec<Channel>) -> FirmwareTable {
    let commands = Commands::new(&design.glider.gait, &design.glider.chain).unwrap();
    let ends = Ends { speeds_rad_s: vec![Some(11.0); axes(design).len()], ..Ends::default() };
    let blocks = Blocks::of(&commands, rows, &ends).unwrap();
    let preamble = Preamble {
        design: design.name.clone(),
        version: "0".into(),
        input_sha256: design.input_sha256.clone(),
        scale,
        step_s: blocks.step_s,
        delay_s: blocks.delay_s,
        channels,
    };
    FirmwareTable::of(preamble, &axes(design), &blocks).unwrap()
}

fn hundredths() -> Scale {
    Scale { unit: Unit::Cdeg, resolution: 1.0 }
}

/// As strict as compilers go.
const FLAGS: [&str; 5] = ["-std=c99", "-Wall", "-Wextra", "-Werror", "-pedantic"];

/// Compiles or links, and says what the compiler says.
fn cc(folder: &Path, args: &[&str]) {
    let run = Command::new("cc").args(FLAGS).args(args).current_dir(folder).output();
    let run = run.expect("these tests need a C compiler called `cc`: install gcc or clang");
    assert!(run.status.success(), "cc {args:?}:\n{}", String::from_utf8_lossy(&run.stderr));
}

/// Names that an object file takes from elsewhere.
fn undefined(object: &Path) -> String {
    let run = Command::new("nm").arg("-u").arg(object).output();
    let run = run.expect("these tests need `nm`, which comes with C compilers: install binutils");
    assert!(run.status.success());
    String::from_utf8(run.stdout).unwrap().trim().to_owned()
}

/// What firmware would be: it includes the header and asks it.
const READER_C: &str = "\
#include \"table.h\"
int32_t told(int block, size_t column, uint32_t time_us);
int32_t told(int block, size_t column, uint32_t time_us)
{
    if (block == 0) {
        return NAME_start_at(column, time_us);
    }
    return block == 1 ? NAME_loop_at(column, time_us) : NAME_stop_at(column, time_us);
}
";

/// A program around it, for the test alone.
const MAIN_C: &str = "\
#include <inttypes.h>
#include <stdio.h>
int32_t told(int block, size_t column, uint32_t time_us);
int main(void)
{
    int block;
    unsigned column;
    uint32_t time_us;
    while (scanf(\"%d %u %\" SCNu32, &block, &column, &time_us) == 3) {
        printf(\"%\" PRId32 \"\\n\", told(block, column, time_us));
    }
    return 0;
}
";

/// Compiles a table's header with its reader, checks that it needs nothing, and returns the program.
fn compiled(folder: &Path, table: &FirmwareTable, between: Interpolation) -> PathBuf {
    let name = c_name(&table.preamble.design);
    let write = |file: &str, text: &str| std::fs::write(folder.join(file), text).unwrap();
    write("table.h", &c_header(table, between).unwrap());
    write("reader.c", &READER_C.replace("NAME", &name));
    write("main.c", MAIN_C);
    cc(folder, &["-O1", "-c", "reader.c", "-o", "reader.o"]);
    assert_eq!(undefined(&folder.join("reader.o")), "", "the reader takes nothing from elsewhere");
    cc(folder, &["main.c", "reader.o", "-o", "reader"]);
    folder.join("reader")
}

fn answers(program: &Path, asked: &[(usize, usize, u32)]) -> Vec<i32> {
    let mut run = Command::new(program)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .expect("what was compiled runs");
    let lines =
        asked.iter().map(|(block, column, time_us)| format!("{block} {column} {time_us}\n"));
    let (lines, mut stdin) = (lines.collect::<String>(), run.stdin.take().unwrap());
    let writer = std::thread::spawn(move || {
        std::io::Write::write_all(&mut stdin, lines.as_bytes()).unwrap();
    });
    let output = run.wait_with_output().unwrap();
    writer.join().unwrap();
    let text = String::from_utf8(output.stdout).unwrap();
    text.lines().map(|line| line.parse().unwrap()).collect()
}

/// Times of all sizes, spread by a multiplicative hash; blocks and columns in turn.
fn questions(table: &FirmwareTable, n: u32) -> Vec<(usize, usize, u32)> {
    let columns = table.preamble.channels.len();
    let question = |k: u32| {
        let spread = k.wrapping_mul(2_654_435_761);
        let time_us = if k.is_multiple_of(2) { spread % 3_000_000 } else { spread };
        (k as usize % 3, (k / 3) as usize % columns, time_us)
    };
    (0..n).map(question).collect()
}

/// Header and reader compile as C99 without a warning, take nothing from elsewhere, and tell at
/// 10 000 times what Rust tells: pulses of 16 bits with servos turned about and trimmed, hundredths
/// of a degree, and degrees of 8 bits, with a held start and a trigger delay.
#[test]
fn twin_compiled_reader_tells_what_rust_tells() {
    let held = "gait.start={mode=\"held\",delay_s=0.1,spin_up_s=0.33}";
    let wiring = "wiring={yaw={channel=[8,1,6,3,4],reversed=[true,false,true,false,false],\
                  offset_us=[12,0,-7.5,0,3]},pitch={channel=[5,2,7,0]}}";
    let turned = design("sedge-10.toml", &[wiring, held]);
    let reed = design("reed-16.toml", &["name=\"16 */ reeds\\\\\""]);
    let whole = Scale { unit: Unit::Deg, resolution: 1.0 };
    let pulses = Scale::fine(Unit::Us);
    for (table, numbers) in [
        (table(&turned, 61, pulses, turned.wiring().unwrap()), "uint16_t"),
        (table(&reed, 40, hundredths(), plain(&reed)), "int16_t"),
        (table(&reed, 23, whole, plain(&reed)), "int8_t"),
    ] {
        assert_eq!(table.c_type().unwrap().name(), numbers);
        let folder = tempfile::tempdir().unwrap();
        let program = compiled(folder.path(), &table, Interpolation::Linear);
        let asked = questions(&table, 10_000);
        let found = answers(&program, &asked);
        assert_eq!(found.len(), asked.len());
        for ((block, column, time_us), found) in asked.into_iter().zip(found) {
            let own = match block {
                0 => table.start_at(column, time_us),
                1 => table.loop_at(column, time_us),
                _ => table.stop_at(column, time_us),
            };
            assert_eq!(found, own, "{numbers}, block {block}, column {column}, {time_us} µs");
        }
    }
}

/// A reader of held rows tells rows and nothing between.
#[test]
fn twin_compiled_held_rows_are_rows() {
    let reed = design("reed-16.toml", &[]);
    let table = table(&reed, 32, hundredths(), plain(&reed));
    let folder = tempfile::tempdir().unwrap();
    let program = compiled(folder.path(), &table, Interpolation::Hold);
    let asked: Vec<(usize, usize, u32)> = questions(&table, 3_000)
        .into_iter()
        .map(|(_, column, time_us)| (1, column, time_us))
        .collect();
    let found = answers(&program, &asked);
    for ((_, column, time_us), found) in asked.into_iter().zip(found) {
        let row = (u64::from(time_us) * 32 / u64::from(table.period_us()) % 32) as usize;
        assert_eq!(found, table.cycle[row][column], "{time_us} µs");
    }
}

/// Two headers of different designs fit in one file, and one may be included twice.
#[test]
fn twin_headers_stand_side_by_side() {
    let folder = tempfile::tempdir().unwrap();
    let write = |file: &str, text: &str| std::fs::write(folder.path().join(file), text).unwrap();
    for name in ["reed-16", "sedge-10"] {
        let design = design(&format!("{name}.toml"), &[]);
        let table = table(&design, 20, hundredths(), plain(&design));
        write(&format!("{name}.h"), &c_header(&table, Interpolation::Linear).unwrap());
    }
    let include = "#include \"reed-16.h\"\n#include \"sedge-10.h\"\n#include \"reed-16.h\"\n";
    write(
        "both.c",
        &format!("{include}int size(void);\nint size(void) {{ return (int)REED_16_ROWS; }}\n"),
    );
    cc(folder.path(), &["-c", "both.c", "-o", "both.o"]);
}

/// A header reads back, through the wiring that turned and trimmed it, as the joints' angles: within
/// half a microsecond's turn of the gait's own.
#[test]
fn twin_wired_pulses_read_back_as_joint_angles() {
    let wiring = "wiring={yaw={channel=[8,1,6,3,4],reversed=[true,false,true,false,false],\
                  offset_us=[12,0,-7.5,0,3]},pitch={channel=[5,2,7,0]}}";
    let sedge = design("sedge-10.toml", &[wiring]);
    let wired = table(&sedge, 64, Scale::fine(Unit::Us), sedge.wiring().unwrap());
    let fine = Scale { unit: Unit::Rad, resolution: 1e-9 };
    let own = table(&sedge, 64, fine, plain(&sedge));
    let read = read_table(&c_header(&wired, Interpolation::Linear).unwrap()).unwrap();
    for (at, channel) in read.preamble.channels.iter().enumerate() {
        let column = own.preamble.channels.iter().position(|own| own.of == channel.of).unwrap();
        let half_rad = 0.5 * channel.rad_per(Unit::Us);
        for (row, exact) in read.cycle.iter().zip(&own.cycle) {
            let found_rad = channel.angle_rad(Unit::Us, f64::from(row[at]));
            let own_rad = fine.value(exact[column]);
            assert!((found_rad - own_rad).abs() <= half_rad + 2e-9, "{}", channel.name());
        }
    }
}

/// A table whose rates vanish at its first row, so that a flight begins alike however it is told.
fn symmetric(interpolation: Interpolation) -> GaitTable {
    let row = |k: u32| (std::f64::consts::TAU * f64::from(k) / 40.0).cos();
    let axis = |size: f64| (0..40).map(|k| size * row(k)).collect::<Vec<f64>>();
    let axes = (0..30).map(|axis_idx| axis(0.1 + 0.02 * f64::from(axis_idx % 7))).collect();
    let level = vec![0.0; 40];
    GaitTable::new(0.02, axes, Some(level.clone()), Some(level), interpolation).unwrap()
}

fn with_table(design: &Design, table: GaitTable) -> undulift_flight::Glider {
    let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.0, start: Start::Running };
    undulift_flight::Glider { gait, ..design.glider.clone() }
}

/// Rows that are held are what firmware at the rows' rate sends of any gait through them: two
/// routes through the flight, one that breaks at rows and one that holds commands over frames.
/// Seen over the first half second, before small differences grow.
#[test]
fn twin_held_rows_fly_as_frames() {
    let reed = design("reed-16.toml", &[]);
    let settings = Settings {
        tolerance: 1e-9,
        max_time_s: 0.5,
        through_inversion: true,
        ..Settings::default()
    };
    let told = reed.drives(true, vec![]);
    let rows = Drives { update_hz: None, ..told.clone() };
    let frames = Drives { update_hz: Some(50.0), ..told };
    let held = with_table(&reed, symmetric(Interpolation::Hold));
    let cubic = with_table(&reed, symmetric(Interpolation::Cubic));
    let held = fly_driven(&held, &rows, &settings).unwrap();
    let framed = fly_driven(&cubic, &frames, &settings).unwrap();
    let end = |flight: &undulift_flight::Flight| flight.trajectory.state(flight.time_s).place_m;
    assert_relative_eq!(held.time_s, framed.time_s, max_relative = 1e-12);
    assert_relative_eq!(end(&held), end(&framed), epsilon = 1e-6);
}

/// Joints that follow commands exactly can't jump: all of them, or a few beside servos.
#[test]
fn twin_held_rows_are_for_servos_only() {
    let reed = design("reed-16.toml", &[]);
    let held = with_table(&reed, symmetric(Interpolation::Hold));
    let settings = Settings::default();
    assert_eq!(fly(&held, &settings).unwrap_err(), FlightError::Held);
    let mut drives = reed.drives(true, vec![]);
    drives.modes[7] = undulift_flight::Mode::Commanded;
    assert_eq!(fly_driven(&held, &drives, &settings).unwrap_err(), FlightError::Held);
}

/// Fine rows joined by straight lines fly as the wave does: closer with twice as many.
#[test]
fn twin_finer_tables_fly_closer() {
    let reed = design("reed-16.toml", &[]);
    let settings = Settings { tolerance: 1e-9, ..Settings::default() };
    let mut flight = fly(&reed.glider, &settings).unwrap();
    let own = summary(&reed.glider, &mut flight);
    let fine = Scale { unit: Unit::Rad, resolution: 1e-9 };
    let off = [50, 100, 200].map(|rows| {
        let table = table(&reed, rows, fine, plain(&reed));
        let gait_table = table.gait_table(&axes(&reed), Interpolation::Linear).unwrap();
        let glider = with_table(&reed, gait_table);
        let mut flight = fly(&glider, &settings).unwrap();
        (summary(&glider, &mut flight).distance_m - own.distance_m).abs()
    });
    assert!(off[1] < 0.5 * off[0] && off[2] < 0.5 * off[1], "{off:?}");
    assert!(off[2] < 1e-3 * own.distance_m, "{off:?}");
}

/// The coarsest table is within the tolerance, one row less and the next coarser resolution are not,
/// by flights of their own; with straight lines, and with held rows and servos.
#[test]
fn twin_the_next_coarser_table_misses() {
    let reed = design("reed-16.toml", &[]);
    for (between, tolerance) in [(Interpolation::Linear, 0.01), (Interpolation::Hold, 0.03)] {
        let make = |rows: usize, scale: Scale| Some(table(&reed, rows, scale, plain(&reed)));
        let settings = Settings::default();
        let finest = Scale::fine(Unit::Deg);
        let most_rows = 40;
        let hunt =
            Hunt { design: &reed, between, tolerance, most_rows, finest, make: &make, settings };
        let found = hunt.coarsest().unwrap();
        let best = found.best.expect("forty fine rows keep within the tolerance");
        let reference = fly_gait(&reed, between, &settings).unwrap();
        let off = |rows: usize, resolution: f64| {
            let scale = Scale { resolution, ..finest };
            let table = table(&reed, rows, scale, plain(&reed));
            let gait_table = table.gait_table(&axes(&reed), between).unwrap();
            fly_table(&reed, gait_table, &settings).unwrap().off(&reference)
        };
        let (rows, resolution) = (best.rows, best.scale.resolution);
        let within = |off: Option<f64>| off.is_some_and(|off| off <= tolerance);
        assert!(within(off(rows, resolution)) && rows < most_rows, "{best:?}");
        assert!(!within(off(rows - 1, resolution)), "one row less than {best:?}");
        let steps = [2.0, 2.5];
        let next = found
            .trials
            .iter()
            .map(|trial| trial.scale.resolution / resolution)
            .find(|times| steps.iter().any(|step| (times - step).abs() < 1e-9));
        let next = next.expect("a coarser resolution was tried");
        assert!(!within(off(rows, next * resolution)), "{next} times as coarse as {best:?}");
    }
}
