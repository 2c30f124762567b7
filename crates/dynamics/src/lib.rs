//! Rigid-chain mechanics without a mass matrix.
//!
//! Joint angles and rates in, with the head segment held still at the origin; out come the
//! segments' frames and motions and the chain's centroidal inertia and momentum. Nothing here
//! knows of air, of servos or of what commands the joints.
//!
//! All vectors are in the root frame (segment 0's) unless a name says otherwise. SI units, radians.

mod articulated;
mod centroidal;
mod frames;
mod inertials;
mod newton_euler;
mod reduced;
mod rungs;

pub use articulated::{Articulated, Drive, HeadAcceleration};
pub use centroidal::{Centroidal, Symmetric};
pub use frames::{FourFrames, Frames, Mechanics};
pub use newton_euler::{Held, JointLoads, JointMotion, Outside, Wrench, joint_loads};
