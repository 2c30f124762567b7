//! Rigid-chain mechanics against a general-purpose rigid-body library.

use undulift_chain::Shape;
use undulift_dynamics::{FourFrames, Mechanics};
use undulift_lanes::{LANES, Triple};
use undulift_tests::chains::cases;
use undulift_tests::relative_difference;

/// One quantity of every segment, flattened.
fn of_segments(
    fours: &[FourFrames],
    n: usize,
    value: impl Fn(&FourFrames, usize) -> Vec<f64>,
) -> Vec<f64> {
    (0..n).flat_map(|idx| value(&fours[idx / LANES], idx % LANES)).collect()
}

fn list(t: Triple<f64>) -> Vec<f64> {
    vec![t.x, t.y, t.z]
}

/// Random chains, 2 to 40 segments, all kinds of joints, masses off axis: rotations, velocities,
/// centroidal inertia and shape momentum by the general-purpose library `pin` 4.1.0
/// (`data/make_chains.py`).
#[test]
fn twin_random_chains_agree_with_a_rigid_body_library() {
    for (which, case) in cases().iter().enumerate() {
        let chain = case.chain();
        let n = chain.n_segments();
        let mechanics = Mechanics::new(&chain);
        let mut frames = mechanics.room();
        let angles_rad = case.by_axis(&chain, &case.yaw_rad, &case.pitch_rad);
        let rates_rad_s = case.by_axis(&chain, &case.yaw_rate_rad_s, &case.pitch_rate_rad_s);
        mechanics.frames(&angles_rad, &rates_rad_s, &mut frames);
        let found = mechanics.centroidal(&frames);
        let rotations = of_segments(&frames.fours, n, |four, lane| {
            let (x, y, z) = (four.x.lane(lane), four.y.lane(lane), four.z.lane(lane));
            vec![x.x, y.x, z.x, x.y, y.y, z.y, x.z, y.z, z.z]
        });
        let spins = of_segments(&frames.fours, n, |four, lane| {
            list(four.angular_velocity_rad_s.lane(lane))
        });
        let arms_m = |idx: usize, four: &FourFrames, lane: usize| {
            let centre_m = chain.inertials()[idx].centre_m;
            four.x.lane(lane).times(centre_m.x)
                + four.y.lane(lane).times(centre_m.y)
                + four.z.lane(lane).times(centre_m.z)
        };
        let each = |value: &dyn Fn(usize, &FourFrames, usize) -> Triple<f64>| -> Vec<f64> {
            (0..n)
                .flat_map(|idx| list(value(idx, &frames.fours[idx / LANES], idx % LANES)))
                .collect()
        };
        let centres_m = each(&|idx, four, lane| four.front_m.lane(lane) + arms_m(idx, four, lane));
        let velocities_m_s = each(&|idx, four, lane| {
            let arm_m = arms_m(idx, four, lane);
            four.front_velocity_m_s.lane(lane) + four.angular_velocity_rad_s.lane(lane).cross(arm_m)
        });
        let pairs = [
            ("rotations", rotations, case.rotations.concat()),
            ("angular velocities", spins, case.angular_velocities_rad_s.concat()),
            ("centres", centres_m, case.centres_m.concat()),
            ("centre velocities", velocities_m_s, case.centre_velocities_m_s.concat()),
            ("centre of mass", list(found.centre_m), case.centre_of_mass_m.clone()),
            ("its velocity", list(found.velocity_m_s), case.centre_of_mass_velocity_m_s.clone()),
            (
                "inertia",
                found.inertia_kg_m2.matrix().as_slice().to_vec(),
                case.centroidal_inertia_kg_m2.clone(),
            ),
            ("momentum", list(found.momentum_kg_m2_s), case.shape_momentum_kg_m2_s.clone()),
            ("mass", vec![mechanics.mass_kg()], vec![case.mass_kg]),
        ];
        for (what, found, expected) in pairs {
            let apart = relative_difference(&found, &expected);
            assert!(apart < 1e-10, "chain {which}, {what}: {apart:e} apart");
        }
    }
}

/// The inner loop's frames against the plain product of rotation matrices.
#[test]
fn twin_fast_frames_are_the_plain_shape() {
    for case in cases() {
        let chain = case.chain();
        let shape = Shape::of(&chain, &case.yaw_rad, &case.pitch_rad);
        let rotations: Vec<f64> =
            shape.rotations.iter().flat_map(|r| r.transpose().as_slice().to_vec()).collect();
        let apart = relative_difference(&rotations, &case.rotations.concat());
        assert!(apart < 1e-12, "{apart:e} apart");
        let centre_m = shape.centre_of_mass_m(&chain);
        let apart = relative_difference(centre_m.as_slice(), &case.centre_of_mass_m);
        assert!(apart < 1e-12, "{apart:e} apart");
    }
}
