#![allow(missing_docs)]
#[path = "../benches/robot.rs"]
mod robot;
use undulift_flight::*;
fn best(mut f: impl FnMut()) -> f64 {
    let mut b = f64::INFINITY;
    for _ in 0..200 {
        let t = std::time::Instant::now();
        f();
        b = b.min(t.elapsed().as_secs_f64());
    }
    b * 1e6
}
fn main() {
    let g = robot::robot(16);
    let s = Settings::default();
    println!(
        "equations {:.0} us",
        best(|| {
            std::hint::black_box(Equations::new(&g).unwrap());
        })
    );
    println!(
        "fly {:.0} us",
        best(|| {
            std::hint::black_box(fly(&g, &s).unwrap());
        })
    );
    let mut f = fly(&g, &s).unwrap();
    println!(
        "summary {:.0} us",
        best(|| {
            std::hint::black_box(summary(&g, &mut f));
        })
    );
    println!(
        "bands {:.0} us",
        best(|| {
            std::hint::black_box(bands(&g, &mut f));
        })
    );
    println!("steps {}", f.steps);
}
