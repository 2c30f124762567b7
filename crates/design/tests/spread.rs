//! What differs from launch to launch.

mod common;

use common::{SOUND, design, spoilt};
use insta::assert_snapshot;
use undulift_design::{Spread, Vary};

fn with(spread: &str) -> String {
    format!("{SOUND}\n[spread]\n{spread}\n")
}

#[test]
fn twin_a_spread_holds_what_the_file_says() {
    let text = with(
        "\"launch.speed_m_s\" = { sd = 0.2 }\n\"gait.phase_deg\" = { low = -10, high = 10.0 }\n\
         \"air.lift_scale\" = { factor_sd = 0.1 }\n\"launch.spin_deg_s[2]\" = { sd = 0 }\n\
         \"body.structure_kg\".factor_sd = 0.01",
    );
    let read = design(&text).read(&[]).unwrap();
    let Spread::Own(own) = &read.spread else { panic!("{:?}", read.spread) };
    let own: Vec<_> = own.iter().map(|(knob, vary)| (knob.key(), *vary)).collect();
    let expected = [
        ("air.lift_scale", Vary::FactorSd(0.1)),
        ("body.structure_kg", Vary::FactorSd(0.01)),
        ("gait.phase_deg", Vary::Range { low: -10.0, high: 10.0 }),
        ("launch.speed_m_s", Vary::Sd(0.2)),
        ("launch.spin_deg_s[2]", Vary::Sd(0.0)),
    ];
    assert_eq!(own, expected);
}

#[test]
fn twin_a_spread_may_be_left_out_or_none() {
    let spread = |text: &str| design(text).read(&[]).unwrap().spread;
    assert_eq!(spread(SOUND), Spread::Default);
    assert_eq!(spread(&format!("spread = \"none\"\n{SOUND}")), Spread::None);
    assert_eq!(spread(&with("")), Spread::Own(vec![]));
    let text = with("\"launch.speed_m_s\" = { sd = 0.2 }");
    assert_eq!(design(&text).read(&["spread=none"]).unwrap().spread, Spread::None);
}

#[test]
fn frozen_mistakes_in_a_spread() {
    let of = |spread: &str| design(&with(spread)).mistakes(&[]);
    let cases = [
        ("a slip", of("\"launch.speed_ms\" = { sd = 0.2 }")),
        ("no table", of("\"speed_m_s\" = { sd = 0.2 }")),
        ("nothing like it", of("\"colour\" = { sd = 0.2 }")),
        ("no key", of("\"a b\" = { sd = 0.2 }")),
        ("no number", of("\"body.section\" = { sd = 0.2 }")),
        ("a table", of("\"gait\" = { sd = 0.2 }")),
        ("a list", of("\"air.wind_m_s\" = { sd = 0.2 }")),
        ("left out", of("\"joints.yaw_travel_deg\" = { sd = 0.2 }")),
        ("whole", of("\"gait.vertical_ratio\" = { sd = 1 }")),
        ("without quotes", of("launch.speed_m_s = { sd = 0.2 }")),
        ("a table without quotes", of("[spread.launch]\nspeed_m_s = { sd = 0.2 }")),
        ("a number alone", of("\"launch.speed_m_s\" = 0.2")),
        ("empty", of("\"launch.speed_m_s\" = {}")),
        ("two ways", of("\"launch.speed_m_s\" = { sd = 0.2, low = 1, high = 2 }")),
        ("two deviations", of("\"launch.speed_m_s\" = { sd = 0.2, factor_sd = 0.1 }")),
        ("one end", of("\"launch.speed_m_s\" = { low = 0.2 }")),
        ("the wrong way round", of("\"launch.speed_m_s\" = { low = 0.2, high = -0.2 }")),
        ("negative", of("\"launch.speed_m_s\" = { sd = -0.2 }")),
        ("not finite", of("\"launch.speed_m_s\" = { low = -inf, high = nan }")),
        ("a word", of("\"launch.speed_m_s\" = { sd = \"5 %\" }")),
        ("a slip in the way", of("\"launch.speed_m_s\" = { std = 0.2 }")),
        ("no such word", design(&format!("spread = \"no\"\n{SOUND}")).mistakes(&[])),
        ("a number for all", design(&format!("spread = 0.1\n{SOUND}")).mistakes(&[])),
        (
            "a mistake in the number itself",
            design(&(spoilt(&["speed_m_s = -1"], "[spread]\n\"launch.speed_m_s\" = { sd = 1 }")))
                .mistakes(&[]),
        ),
        ("set from outside", design(SOUND).mistakes(&["spread.\"launch.speed\".sd=0.2"])),
    ];
    let lines = cases.map(|(name, lines)| format!("# {name}\n{lines}\n")).join("\n");
    assert_snapshot!(lines);
}
