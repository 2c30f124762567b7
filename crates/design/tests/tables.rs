//! Section and gait tables from CSV files.

mod common;

use approx::assert_relative_eq;
use common::{Folder, SOUND, spoilt};
use insta::assert_snapshot;
use undulift_chain::Chain;
use undulift_design::Design;
use undulift_gait::{Commands, Instant, Pattern};

const RIB: &str = "reynolds,alpha_deg,cl,cd,cm\n\
    10000,-90,0,2,0\n10000,0,0.1,0.05,0.01\n10000,90,0,2,0\n\
    20000,-90,0,2,0\n20000,0,0.3,0.05,0.02\n20000,45,1,1,0.1\n20000,90,0,2,0\n";

fn with_rib(rib: &str) -> Folder {
    let text = spoilt(&["section = \"rib\""], "[section.rib]\ntable = \"rib.csv\"\n");
    Folder::with(&[("d.toml", &text), ("rib.csv", rib)])
}

#[test]
fn twin_a_section_table_returns_its_rows() {
    // Columns in another order, spaces, comments, blank lines and a byte-order mark.
    let other = "\u{feff}# made by hand\n\ncd, cl, alpha_deg, reynolds\n2, 0, -90, 1e4\n\n\
                 0.05, 0.1, 0, 1e4\n2, 0, 90, 1e4\n";
    let section = with_rib(other).read(&[]).unwrap().glider.sections.remove(0);
    let at = section.at(0.0, 1e4);
    assert_relative_eq!(at.lift, 0.1, epsilon = 1e-12);
    assert_relative_eq!(at.drag, 0.05, epsilon = 1e-12);
    let section = with_rib(RIB).read(&[]).unwrap().glider.sections.remove(0);
    let at = section.at(45f64.to_radians(), 3e4);
    assert_relative_eq!(at.lift, 1.0, epsilon = 1e-12);
    assert_relative_eq!(at.moment, 0.1, epsilon = 1e-12);
    assert_eq!(section.reynolds_range(), Some([1e4, 2e4]));
    assert_eq!(section.name, "rib");
}

fn told<const N: usize>(cases: [(&str, String); N]) -> String {
    cases.map(|(name, lines)| format!("# {name}\n{lines}\n")).join("\n")
}

#[test]
fn frozen_mistakes_in_section_tables() {
    let spoil = |from: &str, to: &str| {
        assert!(RIB.contains(from), "{from}");
        with_rib(&RIB.replacen(from, to, 1)).mistakes(&[])
    };
    let lines = told([
        ("sound", with_rib(RIB).mistakes(&[])),
        ("a slip in a column", spoil("alpha_deg", "alpha")),
        ("a column too many", spoil("cm", "cp")),
        ("a column twice", spoil("cm", "cl")),
        ("semicolons", with_rib(&RIB.replace(',', ";")).mistakes(&[])),
        ("columns without end", with_rib(&",".repeat(1500)).mistakes(&[])),
        ("names alone", with_rib("reynolds,alpha_deg,cl,cd\n").mistakes(&[])),
        ("comments alone", with_rib("# reynolds,alpha_deg,cl,cd\n").mistakes(&[])),
        ("not finite", spoil("10000,0,0.1,0.05", "10000,0,inf,nan")),
        ("no number", spoil("10000,0,0.1,0.05", "10000,0,,5 %")),
        ("a short row", spoil("10000,0,0.1,0.05,0.01", "10000,0,0.1")),
        ("not sorted", spoil("20000,0,0.3", "20000,50,0.3")),
        ("repeated", spoil("20000,0,0.3", "20000,45,0.3")),
        ("stops short", spoil("10000,90,0,2,0", "10000,64,0,2,0")),
        ("starts late", spoil("10000,-90,0,2,0\n", "")),
        ("lifts broadside", spoil("10000,90,0,2,0", "10000,90,0.2,2,0.01")),
        ("negative drag", spoil("0.05", "-0.05")),
        ("Reynolds number 0", spoil("10000,0", "0,0")),
        ("quotes left open", spoil("10000,0,0.1", "10000,0,\"0.1")),
        (
            "no file",
            Folder::with(&[("d.toml", &spoilt(&[], "[section.rib]\ntable = \"x.csv\"\n"))])
                .mistakes(&[]),
        ),
    ]);
    assert_snapshot!(lines);
}

fn with_gait(axes: &str, keys: &str, rows: &str) -> Folder {
    let text = SOUND
        .replace("frequency_hz = 1.0\nlateral_amplitude_deg = 60.0\nlateral_waves = 1.0", keys)
        .replace("axes = \"universal\"", &format!("axes = \"{axes}\""));
    Folder::with(&[("d.toml", &text), ("gait.csv", rows)])
}

const TABLE: &str = "table = \"gait.csv\"";

fn angles_rad(design: &Design, time_s: f64) -> Vec<f64> {
    let chain: &Chain = &design.glider.chain;
    let commands = Commands::new(&design.glider.gait, chain).unwrap();
    let mut motion = commands.room();
    commands.rates(Instant::at(time_s), &mut motion);
    motion.angles_rad.clone()
}

#[test]
fn twin_a_gait_table_returns_its_rows() {
    let rows = "pitch_2_deg,time_s,yaw_1_deg,yaw_3_deg\n20,0,10,30\n21,0.25,11,31\n22,0.5,12,32\n";
    let keys = format!("{TABLE}\ninterpolation = \"linear\"");
    let design = with_gait("alternate", &keys, rows).read(&[]).unwrap();
    let Pattern::Table(table) = &design.glider.gait.pattern else { panic!("a table") };
    assert_relative_eq!(table.period_s(), 0.75, max_relative = 1e-12);
    let at_second = angles_rad(&design, 0.25);
    for (angle_rad, angle_deg) in at_second.iter().zip([11f64, 31.0, 21.0]) {
        assert_relative_eq!(*angle_rad, angle_deg.to_radians(), epsilon = 1e-12);
    }
}

#[test]
fn frozen_mistakes_in_gait_tables() {
    let plain = |rows: &str| with_gait("yaw", TABLE, rows).mistakes(&[]);
    let timed = |times: [f64; 5]| {
        let rows: String = times.iter().map(|time_s| format!("{time_s},1,2,3\n")).collect();
        plain(&format!("time_s,yaw_1_deg,yaw_2_deg,yaw_3_deg\n{rows}"))
    };
    let good = "time_s,yaw_1_deg,yaw_2_deg,yaw_3_deg\n0,1,2,3\n0.02,2,3,4\n";
    let lines = told([
        ("sound", plain(good)),
        ("other axes", with_gait("alternate", TABLE, good).mistakes(&[])),
        ("with the head", plain("time_s,yaw_1_deg,yaw_2_deg,yaw_3_deg,head_heading_deg,head_elevation_deg\n0,1,2,3,4,5\n0.1,1,2,3,4,5\n")),
        ("one row", plain("time_s,yaw_1_deg,yaw_2_deg,yaw_3_deg\n0,1,2,3\n")),
        ("rounded times", timed([0.0, 0.0333, 0.0667, 0.1, 0.1333])),
        ("not from 0", timed([0.1, 0.2, 0.3, 0.4, 0.5])),
        ("a row left out", timed([0.0, 0.1, 0.2, 0.4, 0.5])),
        ("a row twice", timed([0.0, 0.1, 0.2, 0.2, 0.3])),
        ("an early step", timed([0.0, 0.05, 0.2, 0.3, 0.4])),
        ("all at once", timed([0.0; 5])),
        ("too far", plain("time_s,yaw_1_deg,yaw_2_deg,yaw_3_deg\n0,1,2,361\n0.1,1,2,x\n")),
        ("a wave's keys", with_gait("yaw", &format!("{TABLE}\nsharpness = 1\ntaper.head = 0.5"), good).mistakes(&[])),
        ("what may stand beside", with_gait("yaw", &format!("{TABLE}\nphase_deg = 20\ninterpolation = \"cubic\"\nstart = {{ mode = \"held\", spin_up_s = 0.5 }}"), good).mistakes(&[])),
        ("no file", with_gait("yaw", "table = \"none.csv\"", good).mistakes(&[])),
    ]);
    assert_snapshot!(lines);
}

/// The hash covers named files: a change in one changes it, and the order is that of mention.
#[test]
fn twin_the_hash_covers_named_files() {
    use sha2::{Digest, Sha256};
    let folder = with_rib(RIB);
    let read = folder.read(&[]).unwrap();
    let mut hash = Sha256::new_with_prefix(&read.text);
    hash.update((RIB.len() as u64).to_le_bytes());
    hash.update(RIB);
    let own: String = hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect();
    assert_eq!(read.input_sha256, own);
}
