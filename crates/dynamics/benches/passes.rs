//! What one pass down a chain costs. `cargo bench -p undulift-dynamics`.

use divan::Bencher;
use nalgebra::Vector3;
use undulift_chain::{Chain, Joint, Segment};
use undulift_dynamics::{Articulated, Drive, Held, JointMotion, Mechanics, Outside, joint_loads};

const SIZES: [usize; 4] = [8, 16, 32, 64];

fn main() {
    divan::main();
}

/// A chain of equal segments with universal joints, and some joint motion.
fn chain(n: usize) -> (Chain, Vec<f64>) {
    let segment = Segment { length_m: 0.09, width_m: 0.12, thickness_m: 0.03, structure_kg: 0.06 };
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    let chain = Chain::new(vec![segment; n], vec![joint; n - 1], Vec::new()).expect("sound");
    let angles_rad = (0..2 * (n - 1)).map(|k| 0.6 * (k as f64 * 0.7).sin()).collect();
    (chain, angles_rad)
}

/// Frames and centroidal sums, four segments at a time: what a flight asks for.
#[divan::bench(args = SIZES, sample_size = 200)]
fn centroidal(bencher: Bencher, n: usize) {
    let (chain, angles_rad) = chain(n);
    let mechanics = Mechanics::new(&chain);
    let mut frames = mechanics.room();
    bencher.bench_local(|| {
        mechanics.frames(divan::black_box(&angles_rad), &angles_rad, &mut frames);
        mechanics.centroidal(&frames)
    });
}

/// Forces in the joints of a free chain.
#[divan::bench(args = SIZES, sample_size = 50)]
fn newton_euler(bencher: Bencher, n: usize) {
    let (chain, angles_rad) = chain(n);
    let motion = JointMotion {
        angles_rad: &angles_rad,
        rates_rad_s: &angles_rad,
        accelerations_rad_s2: &angles_rad,
    };
    let held = Held::Free { head_rad_s: Vector3::new(0.1, 0.2, 0.3) };
    let gravity = Vector3::new(0.0, 0.0, -9.8);
    let outside = vec![Outside::default(); n];
    bencher.bench_local(|| joint_loads(&chain, divan::black_box(motion), held, gravity, &outside));
}

/// Accelerations from torques, frames given.
#[divan::bench(args = SIZES, sample_size = 50)]
fn articulated(bencher: Bencher, n: usize) {
    let (chain, angles_rad) = chain(n);
    let mut articulated = Articulated::new(&chain);
    let mechanics = Mechanics::new(&chain);
    let mut frames = mechanics.room();
    mechanics.frames(&angles_rad, &angles_rad, &mut frames);
    let drives = vec![Drive::Torque { torque_nm: 0.1, rotor_kg_m2: 1e-4 }; angles_rad.len()];
    let outside = vec![Outside::default(); n];
    let (head, gravity) = (Vector3::new(0.1, 0.2, 0.3), Vector3::new(0.0, 0.0, -9.8));
    bencher.bench_local(|| {
        articulated.solve(&frames, divan::black_box(&angles_rad), &drives, head, gravity, &outside)
    });
}
