//! Tuning, against what can be said without it.

use std::convert::Infallible;
use std::path::{Path, PathBuf};

use approx::{assert_abs_diff_eq, assert_relative_eq};
use undulift_design::{Design, Knob, Scatter, Tuning};
use undulift_flight::{Settings, fly, summary};
use undulift_search::tuning::{
    Bound, Ended, Fineness, Held, Judge, Limit, Origin, Run, Store, Tried, TuningError, closing,
};

fn designs(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs").join(name)
}

fn sedge() -> Design {
    undulift_design::read(&designs("sedge-10.toml"), &[]).unwrap()
}

/// A judge of the demo, by the text of a search.
fn judge_of(search: &str) -> Result<Judge, TuningError> {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("search.toml");
    std::fs::write(&path, search).unwrap();
    let design = sedge();
    let tuning = Tuning::read(&path, &design).unwrap();
    Judge::new(&design, &tuning, 3, Settings::default())
}

const GLIDE: &str = "want = { maximise = \"glide_ratio\" }\n[vary]\n\"gait.arch_deg\" = [0, 8]\n\
                     \"gait.frequency_hz\" = [0.5, 1.2]\n\"gait.vertical_ratio\" = [1, 4]\n";

/// Keeps rows in memory.
#[derive(Default)]
struct Rows(Vec<Tried>);

impl Store for Rows {
    type Error = Infallible;

    fn keep(&mut self, tried: &[Tried], _: &Run, _: bool) -> Result<(), Infallible> {
        self.0.extend_from_slice(tried);
        Ok(())
    }
}

/// Of all payloads in a box the lightest robot has the lightest, so the best is at that end; and an
/// end that is a tenth of the range lower makes the robot lighter by just that.
#[test]
fn analytic_the_lightest_payload_and_what_its_end_costs() {
    let search = "want = { minimise = \"mass_kg\" }\nlimits = \"ignored\"\n[vary]\n\
                  \"payload[0].mass_kg\" = [0.004, 0.024]\n";
    let judge = judge_of(search).unwrap();
    let mut run = Run::new(&judge, 100).unwrap();
    assert_eq!(run.go_on(&judge, &mut Rows::default(), &|| false), Ok(Ended::Done));
    let design = sedge();
    let own_kg = Knob::find(&design, "payload[0].mass_kg").unwrap().value(&design);
    let others_kg = design.glider.chain.mass_kg() - own_kg;
    let found = closing(&judge, &run, &|_| ()).unwrap();
    assert_relative_eq!(found.after.wish.unwrap(), others_kg + 0.004, max_relative = 1e-5);
    let [active] = found.active.as_slice() else { panic!("{:?}", found.active) };
    assert_eq!(active.held, Held::Low(0));
    assert_abs_diff_eq!(active.loosened.unwrap(), 0.002, epsilon = 1e-12);
    assert_abs_diff_eq!(active.gain.unwrap(), 0.002, epsilon = 2e-6);
    assert_abs_diff_eq!(found.settled_within.unwrap(), 0.0, epsilon = 2e-6);
    // A kilogram more of it is a kilogram more in all.
    assert_relative_eq!(found.slopes[0].wish_per_unit().unwrap(), 1.0, max_relative = 1e-6);
}

/// Minimising with a limit from below is met at the limit, and a limit eased by a tenth gives just
/// that tenth.
#[test]
fn analytic_a_limit_costs_what_it_keeps() {
    let limit_kg = 0.21;
    let search = format!(
        "want = {{ minimise = \"mass_kg\" }}\nlimits = \"ignored\"\n[vary]\n\
         \"payload[0].mass_kg\" = [0.001, 0.2]\n[require]\nmass_kg = {{ at_least = {limit_kg} }}\n"
    );
    let judge = judge_of(&search).unwrap();
    let mut run = Run::new(&judge, 150).unwrap();
    run.go_on(&judge, &mut Rows::default(), &|| false).unwrap();
    let found = closing(&judge, &run, &|_| ()).unwrap();
    assert_relative_eq!(found.after.wish.unwrap(), limit_kg, max_relative = 1e-4);
    assert!(found.after.wish.unwrap() >= limit_kg);
    let [active] = found.active.as_slice() else { panic!("{:?}", found.active) };
    assert_eq!(active.held, Held::Limit(1));
    let design = sedge();
    let own_kg = Knob::find(&design, "payload[0].mass_kg").unwrap().value(&design);
    let lightest_kg = design.glider.chain.mass_kg() - own_kg + 0.001;
    let expected_kg = limit_kg - lightest_kg.max(0.9 * limit_kg);
    assert_relative_eq!(active.gain.unwrap(), expected_kg, max_relative = 1e-2);
}

/// A run that is written after every generation and read again goes on to the same candidates.
#[test]
fn twin_a_run_goes_on_from_its_bytes() {
    let judge = judge_of(GLIDE).unwrap();
    let mut whole = Rows::default();
    Run::new(&judge, 40).unwrap().go_on(&judge, &mut whole, &|| false).unwrap();
    let mut parts = Rows::default();
    let mut run = Run::new(&judge, 40).unwrap();
    while run.go_on(&judge, &mut parts, &|| true) == Ok(Ended::Stopped) {
        run = Run::from_bytes(&run.to_bytes()).unwrap();
    }
    assert_eq!(parts.0, whole.0);
    assert_eq!(whole.0.len(), run.ledger().tried());
    assert!(Run::from_bytes(&run.to_bytes()[..20]).is_none());
}

/// What is judged is what a flight by hand comes to, and a coarse look at the loads is near a fine.
#[test]
fn twin_a_verdict_is_a_flight() {
    let judge = judge_of(GLIDE).unwrap();
    let values = judge.values(&judge.start());
    let [coarse, fine] =
        [Fineness::Coarse, Fineness::Fine].map(|fineness| judge.judge(values.clone(), fineness));
    let design = sedge();
    let mut flight = fly(&design.glider, &Settings::default()).unwrap();
    let flown = summary(&design.glider, &mut flight);
    assert_eq!(fine.wish, flown.glide_ratio);
    assert_eq!(fine, judge.before());
    assert_eq!((coarse.wish, coarse.violation), (fine.wish, 0.0));
    let at = |key: &str| judge.limits().iter().position(|limit| limit.key == key).unwrap();
    assert_eq!(fine.limits[at("peak_roll_deg")], Some(flown.peak_roll_rad.to_degrees()));
    for key in ["budget.least_margin", "joint_travel_share"] {
        let [coarse, fine] = [&coarse, &fine].map(|of| of.limits[at(key)].unwrap());
        assert_relative_eq!(coarse, fine, max_relative = 5e-3);
    }
}

/// The value of several launches is that of the launches flown one by one.
#[test]
fn twin_a_robust_verdict_is_of_launches_flown_by_hand() {
    let design = sedge();
    let scatter = Scatter::of(&design);
    let ratios: Vec<f64> = (0..5)
        .map(|launch| {
            let glider = scatter.launch(&design, 3, launch).0.glider;
            let mut flight = fly(&glider, &Settings::default()).unwrap();
            summary(&glider, &mut flight).glide_ratio.unwrap()
        })
        .collect();
    let worst = ratios.iter().copied().fold(f64::INFINITY, f64::min);
    let mean = ratios.iter().sum::<f64>() / 5.0;
    for (take, expected) in [("worst", worst), ("mean", mean)] {
        let robust = format!("robust = {{ launches = 5, take = \"{take}\" }}\n{GLIDE}");
        let judge = judge_of(&robust).unwrap();
        let verdict = judge.judge(judge.values(&judge.start()), Fineness::Coarse);
        assert_relative_eq!(verdict.wish.unwrap(), expected, max_relative = 1e-14);
    }
}

/// Numbers go into the box and back: whole ones by equal shares, others rounded once.
#[test]
fn twin_numbers_go_into_the_box_and_back() {
    let judge = judge_of(GLIDE).unwrap();
    assert_eq!(judge.values(&[0.0, 0.0, 0.0]), [0.0, 0.5, 1.0]);
    assert_eq!(judge.values(&[1.0, 1.0, 1.0]), [8.0, 1.2, 4.0]);
    for nth in 0..100 {
        let unit = [0.317, 0.713, 0.911].map(|step| (step * f64::from(nth)).fract());
        let values = judge.values(&unit);
        assert_abs_diff_eq!(values[0], 8.0 * unit[0], epsilon = 8e-6);
        assert_eq!(values[2], 1.0 + (4.0 * unit[2]).floor());
        assert_eq!(judge.values(&judge.unit(&values)), values);
    }
}

/// By hand, from the text: what the design asks, less what the search asks on the same side.
#[test]
fn analytic_limits_of_design_and_search() {
    let keys = |limits: &[Limit], origin| -> Vec<String> {
        let own = limits.iter().filter(|limit| limit.origin == origin);
        own.map(|limit| limit.key.clone()).collect()
    };
    let of_design = [
        "peak_roll_deg",
        "peak_pitch_deg",
        "joint_travel_share",
        "budget.least_margin",
        "budget.times_over",
    ];
    let own = judge_of(GLIDE).unwrap();
    assert_eq!(keys(own.limits(), Origin::Design), of_design);
    assert_eq!(keys(own.limits(), Origin::Always), ["height_left"]);
    let require = "[require]\npeak_roll_deg = { at_most = 70 }\n\
                   \"budget.least_margin\" = { at_least = 1.2, at_most = 9 }\n";
    let judge = judge_of(&format!("{GLIDE}{require}")).unwrap();
    let left = ["peak_pitch_deg", "joint_travel_share", "budget.times_over"];
    assert_eq!(keys(judge.limits(), Origin::Design), left);
    let bounds: Vec<Bound> = judge.limits()[4..].iter().map(|limit| limit.bound).collect();
    assert_eq!(bounds, [Bound::Least(1.2), Bound::Most(9.0), Bound::Most(70.0)]);
    let columns = Limit::columns(judge.limits());
    assert_eq!(columns[4..6], ["budget.least_margin.at_least", "budget.least_margin.at_most"]);
    let ignored = judge_of(&format!("limits = \"ignored\"\n{GLIDE}")).unwrap();
    assert_eq!(ignored.limits().len(), 1);
}

#[test]
fn a_wish_that_nothing_moves_is_refused() {
    let judge = judge_of(&GLIDE.replace("glide_ratio", "mass_kg")).unwrap();
    assert!(matches!(judge.check_wish(), Err(TuningError::ConstantWish { designs: 7, .. })));
    assert_eq!(judge_of(GLIDE).unwrap().check_wish(), Ok(()));
    let two = "want = [{ maximise = \"glide_ratio\" }, { minimise = \"mass_kg\" }]\n[vary]\n\
               \"gait.arch_deg\" = [0, 8]\n";
    let refused = judge_of(two).unwrap_err();
    assert_eq!(refused, TuningError::SeveralWishes { wishes: 2 });
}

/// Every demo search is of its design, and asks for a glide beside what it wants.
#[test]
fn demo_searches_are_of_their_designs() {
    for name in ["reed-16", "sedge-10", "withy-24", "pair-wave"] {
        let design = undulift_design::read(&designs(&format!("{name}.toml")), &[]).unwrap();
        let tuning = Tuning::read(&designs(&format!("search-{name}.toml")), &design).unwrap();
        let judge = Judge::new(&design, &tuning, 1, Settings::default()).unwrap();
        for key in ["last_cycle_glide_ratio", "forward_airspeed_m_s"] {
            let asked = |limit: &Limit| limit.key == key && limit.bound.value() > 0.0;
            assert!(judge.limits().iter().any(asked), "{name} {key}");
        }
        // All start inside of their ends.
        let own = judge.varied().iter().map(|one| one.knob.value(&design));
        for (own, start) in own.zip(judge.values(&judge.start())) {
            assert_relative_eq!(own, start, max_relative = 1e-9);
        }
    }
}
