//! Launches that differ.

mod common;

use approx::assert_relative_eq;
use common::{SOUND, bits, demos, design};
use undulift_design::Scatter;

fn with(spread: &str) -> undulift_design::Design {
    design(&format!("{SOUND}\n[spread]\n{spread}\n")).read(&[]).unwrap()
}

/// A launch's design holds what was drawn: its number by reading the file with that value in it.
#[test]
fn twin_a_launch_is_the_design_with_what_was_drawn() {
    let spread = "\"launch.speed_m_s\" = { sd = 0.5 }\n\"body.structure_kg\" = { factor_sd = 0.1 }\n\
                  \"gait.phase_deg\" = { low = 5, high = 9 }";
    let own = with(spread);
    let scatter = Scatter::of(&own);
    let columns = scatter.columns();
    assert_eq!(columns, ["body.structure_kg", "gait.phase_deg", "launch.speed_m_s"]);
    for launch in 0..20 {
        let (changed, drawn) = scatter.launch(&own, 3, launch);
        assert!((5.0..=9.0).contains(&drawn[1]), "{drawn:?}");
        let sets: Vec<String> =
            columns.iter().zip(&drawn).map(|(key, value)| format!("{key}={value:?}")).collect();
        let sets: Vec<&str> = sets.iter().map(String::as_str).collect();
        let read = design(&format!("{SOUND}\n[spread]\n{spread}\n")).read(&sets).unwrap();
        assert_eq!(bits(&changed.glider), bits(&read.glider), "launch {launch}");
    }
}

/// All masses of the default spread are those of the design times the factor drawn.
#[test]
fn analytic_masses_share_a_factor() {
    for (path, design) in demos() {
        let scatter = Scatter::of(&design);
        if !scatter.columns().iter().any(|name| name == "mass_factor") {
            continue;
        }
        let (changed, drawn) = scatter.launch(&design, 1, 4);
        let factor = drawn.last().unwrap();
        assert_ne!(*factor, 1.0);
        let expected_kg = design.glider.chain.mass_kg() * factor;
        assert_relative_eq!(changed.glider.chain.mass_kg(), expected_kg, max_relative = 1e-12);
        assert_eq!(drawn.len(), scatter.columns().len(), "{}", path.display());
    }
}

/// What is a robot's own is the same in all of its launches, the rest isn't; robots differ in both.
#[test]
fn twin_a_robot_keeps_what_is_its_own() {
    for (path, design) in demos() {
        let scatter = Scatter::of(&design);
        let columns = scatter.columns();
        let drawn = |robot, launch| scatter.launch_of(&design, 1, robot, launch).1;
        let (first, again, other) = (drawn(7, 3), drawn(7, 4), drawn(8, 3));
        assert_eq!(scatter.launch(&design, 1, 7).1, drawn(7, 7));
        for (n, name) in columns.iter().enumerate() {
            let own = ["mass_factor", "air.lift_scale", "air.drag_scale"].contains(&name.as_str())
                || name.starts_with("section.");
            assert_eq!(first[n] == again[n], own, "{name} of {}", path.display());
            assert_eq!(first[n] == other[n], !own, "{name} of {}", path.display());
        }
    }
}

#[test]
fn spread_none_draws_nothing() {
    let still = design(&format!("spread = \"none\"\n{SOUND}")).read(&[]).unwrap();
    let scatter = Scatter::of(&still);
    assert!(scatter.columns().is_empty());
    let (changed, drawn) = scatter.launch(&still, 1, 0);
    assert_eq!((changed, drawn), (still, vec![]));
}
