#![allow(missing_docs)]
#[path = "../benches/robot.rs"]
mod robot;
use undulift_flight::*;
use undulift_gait::Instant;
fn main() {
    let g = robot::robot(16);
    let mut e = Equations::new(&g).unwrap();
    let mut s = release(&mut e, &g.launch, 0.0).unwrap();
    s.velocity_m_s.z = -3.0;
    let mut sum = 0.0;
    let mut best = f64::INFINITY;
    for _ in 0..40 {
        let t0 = std::time::Instant::now();
        for k in 0..10_000 {
            let t = 0.5 + 1e-5 * k as f64;
            sum += e.rates(Instant::at(t), &s)[8];
        }
        best = best.min(t0.elapsed().as_secs_f64() / 1e4);
    }
    println!("{sum} {:.3} us", best * 1e6);
}
