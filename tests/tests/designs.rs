//! The demo designs do what their files say.

use undulift_design::{Design, Override, read};
use undulift_flight::{End, Settings, Summary, fly, summary};
use undulift_gait::Commands;

/// Those that glide.
const GLIDERS: [&str; 4] = ["reed-16", "sedge-10", "withy-24", "pair-wave"];

fn design(name: &str, sets: &[&str]) -> Design {
    let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("../designs");
    let sets: Vec<Override> = sets.iter().map(|set| Override::parse(set).unwrap()).collect();
    read(&path.join(name).with_extension("toml"), &sets).unwrap()
}

fn flown(design: &Design, tolerance: f64) -> Summary {
    let settings = Settings { tolerance, ..Settings::default() };
    let mut flight = fly(&design.glider, &settings).unwrap();
    summary(&design.glider, &mut flight)
}

/// Upright to the floor from 8 to 10 m, head first to the end, one to one or near it in the last
/// cycle, within the joints' travel.
#[test]
fn twin_demo_designs_glide() {
    for name in GLIDERS {
        let design = design(name, &[]);
        let found = flown(&design, 1e-6);
        assert_eq!(found.end, End::Landed, "{name}");
        assert!((8.0..=10.0).contains(&design.glider.launch.height_m), "{name}");
        assert!(found.forward_airspeed_m_s > 3.0, "{name}: {found:?}");
        assert!(found.last_cycle_glide_ratio.unwrap() > 0.85, "{name}: {found:?}");
        let limit_rad = design.limits.tilt_rad;
        assert!(found.peak_roll_rad.max(found.peak_pitch_rad) < limit_rad, "{name}: {found:?}");
        let commands = Commands::new(&design.glider.gait, &design.glider.chain).unwrap();
        for peak in commands.peaks(0.0, found.time_s) {
            let joint = design.glider.chain.joints()[peak.of.joint_idx];
            assert!(peak.angle_rad < joint.travel_rad(peak.of.axis).unwrap(), "{name}: {peak:?}");
        }
    }
}

/// For each design the glide ratio at the default tolerance is within 1e-3 of that at 1e-10, the
/// error falls with the tolerance, and a second run gives the same bits.
#[test]
fn twin_demo_designs_converge() {
    for name in GLIDERS {
        let design = design(name, &[]);
        let ratio = |tolerance: f64| flown(&design, tolerance).glide_ratio.unwrap();
        let exact = ratio(1e-10);
        assert!((ratio(1e-6) / exact - 1.0).abs() < 1e-3, "{name}");
        // Above 1e-6 the longest step, a twentieth of a cycle, bounds the error instead.
        let exact = ratio(1e-12);
        let errors = [1e-6, 1e-8, 1e-10].map(|tolerance| (ratio(tolerance) / exact - 1.0).abs());
        assert!(errors[2] < errors[0] && errors[2] < 1e-6, "{name}: {errors:?}");
        assert_eq!(ratio(1e-6).to_bits(), ratio(1e-6).to_bits(), "{name}");
    }
}

/// The invented servos of the catalogue are plausible: implied efficiency 0.3 to 0.8 and at most 150 W
/// a kilogram at half stall and half speed (common practice of the trade, no source). They load from a
/// design that names the catalogue.
#[test]
fn published_limits_hold_for_the_catalogue() {
    let sets = ["servos=servos.toml", "joints.yaw_servo=brisk-44", "joints.pitch_servo=mini-17"];
    let design = design("reed-16", &sets);
    let of_catalogue: Vec<_> = design
        .servos
        .values()
        .filter(|servo| !["mid-34", "mini-12"].contains(&&*servo.name))
        .collect();
    assert!(of_catalogue.len() >= 8);
    for servo in of_catalogue {
        let efficiency = servo.implied_efficiency();
        assert!((0.3..=0.8).contains(&efficiency), "{}: {efficiency}", servo.name);
        let watts_per_kg = servo.peak_power_w() / servo.mass_kg;
        assert!(watts_per_kg <= 150.0, "{}: {watts_per_kg}", servo.name);
        assert!(servo.check().is_ok());
        assert!((0.009..=0.061).contains(&servo.mass_kg), "{}", servo.name);
    }
    assert!(design.glider.chain.mass_split().servos_kg > 15.0 * 0.044);
}

/// The pair is alike but for the wave; with it the body stays upright and glides, without it it
/// loses roll or pitch, also where the pressure centre or the launch is a little different. That the
/// wave does this is common practice; the pair was looked for.
#[test]
fn twin_the_wave_keeps_the_pair_upright() {
    let text = |name: &str| -> Vec<String> {
        let text = design(name, &[]).text;
        let code = text.lines().map(|line| line.split('#').next().unwrap_or("").trim().to_owned());
        code.filter(|line| !line.is_empty()).collect()
    };
    let (wave, still) = (text("pair-wave"), text("pair-still"));
    assert_eq!(wave.len(), still.len());
    let differing: Vec<_> = wave.iter().zip(&still).filter(|(a, b)| a != b).collect();
    assert!(
        differing.iter().all(|(a, _)| a.starts_with("name") || a.starts_with("frequency_hz")),
        "{differing:?}"
    );
    let section = design("pair-wave", &[]).glider.sections[0].name.clone();
    let speed = design("pair-wave", &[]).glider.launch.speed_m_s;
    let changes = [
        String::new(),
        format!("section.{section}.pressure_centre=0.27"),
        format!("section.{section}.pressure_centre=0.23"),
        format!("launch.speed_m_s={}", 1.03 * speed),
        format!("launch.speed_m_s={}", 0.97 * speed),
    ];
    for change in &changes {
        let sets: Vec<&str> = [change.as_str()].into_iter().filter(|set| !set.is_empty()).collect();
        let [with, without] =
            ["pair-wave", "pair-still"].map(|name| flown(&design(name, &sets), 1e-9));
        let limit_rad = 60_f64.to_radians();
        let tilt = |summary: &Summary| summary.peak_roll_rad.max(summary.peak_pitch_rad);
        assert_eq!(with.end, End::Landed, "{change}");
        assert!(tilt(&with) < limit_rad, "{change}");
        assert!(without.end == End::Inverted || tilt(&without) > limit_rad, "{change}");
    }
}
