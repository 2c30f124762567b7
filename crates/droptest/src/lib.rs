//! Drop tests indoors: where flights and faults end, and whether a hall holds them.
//!
//! Values in, values out: a design and a hall give flights, regions, clearances, a release ladder,
//! what to measure, and the sheet that is taken to the hall; what was seen there gives go on or stop.
//! Beside it stand the statistics that such a plan rests on. Nothing here opens a file or prints. What
//! a robot does after it met the floor or the catch (bounces, slides, breaks) is left out, and so are
//! walls: a flight goes through them, and the clearance says so.
//!
//! Places are in the world frame of a flight: x along the launch, y left, z up, origin on the floor
//! under the point of release. SI units and radians.

mod area;
mod cautions;
mod clearances;
mod drops;
mod error;
mod falling;
mod fault;
mod fit;
mod measuring;
mod plan;
mod reading;
mod region;
mod rung;
mod sample_size;
mod sheet;
mod tolerance;

pub use area::Area;
pub use cautions::{CAUTIONS, cautions_in_a_line};
pub use clearances::{Around, Clearances};
pub use drops::{DRAG_DOUBT, Drop, Dropping, LIFT_DOUBT, Outcome, Truth, WEAKEST_WAVE};
pub use error::DropError;
pub use falling::{
    REACTION_TIME_S, catch_height_needed_m, fall_speed_m_s, fall_time_s, mean_load_factor,
};
pub use fault::FaultKind;
pub use fit::{Misfit, ladder, misfits};
pub use measuring::Measuring;
pub use plan::{Bands, FaultRow, Furthest, Least, Plan, Sound};
pub use reading::{Flown, Ladder, Narrowed, Next, Reading, Stop};
pub use region::{Ellipse, Scaled, normal_region_scale, region};
pub use rung::Rung;
pub use sample_size::{
    drops_for_mean, drops_outside_to_stop, drops_to_tell_apart, most_failing_share,
};
pub use sheet::{Seen, Sheet};
pub use tolerance::{
    confidence_of_outermost, drops_for_outermost, held_by_outermost, one_sided_factor,
    rank_that_holds, two_sided_factor,
};
