#![allow(missing_docs)]
#[path = "../benches/robot.rs"]
mod robot;
use undulift_flight::*;
fn main() {
    let g = robot::robot(16);
    let mut f = fly(&g, &Settings::default()).unwrap();
    for _ in 0..200 {
        std::hint::black_box(bands(&g, &mut f));
    }
}
