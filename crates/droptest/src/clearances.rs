//! How close a flight comes to walls, ceiling, people and rig.

use undulift_design::{CatchKind, Hall};
use undulift_flight::{Flight, trace};

use crate::Area;

/// Between looks at a flight, s.
const EVERY_S: f64 = 0.02;

/// The least distances of a flight, body included, m; below 0 it would have touched.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Clearances {
    /// To the nearest wall.
    pub walls_m: f64,
    /// To the nearest person, as if they reached up to the ceiling; infinite with nobody there.
    pub people_m: f64,
    /// To the ceiling.
    pub ceiling_m: f64,
    /// The least area that holds the point of release and the way of the centre of mass.
    pub way: Area,
    /// The same of the first of the way, one body length down.
    pub at_rig: Area,
}

impl Clearances {
    /// How far the centre of mass came back behind the point of release.
    pub fn behind_release_m(&self) -> f64 {
        (-self.way.along_m[0]).max(0.0)
    }
}

/// A hall about its point of release.
#[derive(Debug, Clone, Copy)]
pub struct Around<'h> {
    /// The hall.
    pub hall: &'h Hall,
    /// No part of the body is further from its centre, m.
    pub reach_m: f64,
}

impl Around<'_> {
    /// A place in the hall, from one in a flight's frame.
    pub fn in_hall(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let release = &self.hall.release;
        let (sin, cos) = release.direction_rad.sin_cos();
        [release.from_wall_m + x * cos - y * sin, release.across_m + x * sin + y * cos]
    }

    /// A place in a flight's frame, from one in the hall.
    pub fn in_launch(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let release = &self.hall.release;
        let (sin, cos) = release.direction_rad.sin_cos();
        let (x, y) = (x - release.from_wall_m, y - release.across_m);
        [x * cos + y * sin, y * cos - x * sin]
    }

    /// What the catch covers, along the launch; absent for the floor.
    pub fn catch_area(&self) -> Option<Area> {
        let catch = &self.hall.catch;
        let (long_m, wide_m) = (catch.length_m?, catch.width_m?);
        let from_m = catch.from_release_m;
        self.has_catch().then(|| Area {
            along_m: [from_m, from_m + long_m],
            across_m: [-0.5 * wide_m, 0.5 * wide_m],
        })
    }

    /// To the nearest wall from a place in a flight's frame, the body's reach taken off, m.
    pub fn to_walls_m(&self, place_m: [f64; 2]) -> f64 {
        let [x, y] = self.in_hall(place_m);
        let hall = self.hall;
        x.min(hall.length_m - x).min(y).min(hall.width_m - y) - self.reach_m
    }

    /// To the nearest person, likewise.
    pub fn to_people_m(&self, place_m: [f64; 2]) -> f64 {
        let [x, y] = self.in_hall(place_m);
        let to = |person: &undulift_design::Person| {
            (person.x_m - x).hypot(person.y_m - y) - person.radius_m - self.reach_m
        };
        self.hall.people.iter().map(to).fold(f64::INFINITY, f64::min)
    }

    /// How far a place lies within the edges of the catch, m; below 0 outside.
    pub fn within_catch_m(&self, place_m: [f64; 2]) -> f64 {
        self.catch_area().map_or(f64::INFINITY, |area| area.within_m(place_m))
    }

    /// Whether something other than the floor is there to end a flight.
    pub fn has_catch(&self) -> bool {
        self.hall.catch.kind != CatchKind::Floor
    }

    /// Of a whole flight.
    pub(crate) fn of(&self, flight: &mut Flight) -> Clearances {
        let none = f64::INFINITY;
        let mut least = Clearances {
            walls_m: none,
            people_m: none,
            ceiling_m: none,
            way: Area::POINT,
            at_rig: Area::POINT,
        };
        let mut top_m = None;
        for row in trace(flight, EVERY_S) {
            let [x, y, z]: [f64; 3] = row.state.place_m.into();
            least.walls_m = least.walls_m.min(self.to_walls_m([x, y]));
            least.people_m = least.people_m.min(self.to_people_m([x, y]));
            least.ceiling_m = least.ceiling_m.min(self.hall.height_m - z - self.reach_m);
            least.way = least.way.with([x, y], 0.0);
            if z > *top_m.get_or_insert(z) - 2.0 * self.reach_m {
                least.at_rig = least.at_rig.with([x, y], 0.0);
            }
        }
        least
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use std::path::Path;

    /// By hand, in a hall of 60 × 40 m with the release at (6, 20): turned a quarter to the left, 2 m
    /// ahead and 1 m left lie at (5, 22). A wall is 5 m from there, and the operator's place at
    /// (1.5, 20) √(3.5² + 2²) − 0.8 = 3.2311 m; both less the body's reach of 0.5 m.
    #[test]
    fn analytic_places_in_a_turned_hall() {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/hall-gantry.toml");
        let mut hall = Hall::read(&path).unwrap();
        hall.release.direction_rad = std::f64::consts::FRAC_PI_2;
        let around = Around { hall: &hall, reach_m: 0.5 };
        let [x, y] = around.in_hall([2.0, 1.0]);
        assert_relative_eq!(around.in_launch([x, y])[0], 2.0, epsilon = 1e-12);
        assert_relative_eq!(around.in_launch([x, y])[1], 1.0, epsilon = 1e-12);
        assert_relative_eq!(x, 5.0, epsilon = 1e-12);
        assert_relative_eq!(y, 22.0, epsilon = 1e-12);
        assert_relative_eq!(around.to_walls_m([2.0, 1.0]), 4.5, epsilon = 1e-12);
        assert_relative_eq!(around.to_people_m([2.0, 1.0]), 2.7311, epsilon = 1e-4);
        // The mat begins 2 m behind the release, is 34 m long and 16 m wide, along the launch.
        assert_relative_eq!(around.within_catch_m([2.0, 1.0]), 4.0, epsilon = 1e-12);
        assert_relative_eq!(around.within_catch_m([33.0, 1.0]), -1.0, epsilon = 1e-12);
        assert_relative_eq!(around.within_catch_m([9.0, -8.5]), -0.5, epsilon = 1e-12);
    }
}
