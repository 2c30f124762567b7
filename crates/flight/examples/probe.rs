#![allow(missing_docs)]
#[path = "../benches/robot.rs"]
mod robot;
use undulift_flight::*;
fn main() {
    let g = robot::robot(16);
    let mut f = fly(&g, &Settings::default()).unwrap();
    let s = summary(&g, &mut f);
    println!("{s:#?} steps {}", f.steps);
    println!("{:?}", bands(&g, &mut f));
}
