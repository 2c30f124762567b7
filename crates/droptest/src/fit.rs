//! Whether a hall holds what was computed: what doesn't fit, by how much, and what to do.

use undulift_design::{CatchKind, Hall};

use crate::{Area, Around, Plan, Rung, catch_height_needed_m};

/// Something that doesn't fit.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum Misfit {
    /// The region reaches through a wall.
    #[error(
        "hall too small: the 95 % region from {height_m:.1} m, with the body, reaches {by_m:.1} m beyond a wall; \
         let it go lower, move or turn the release, or find a larger hall"
    )]
    Region {
        /// From where, m.
        height_m: f64,
        /// How far, m.
        by_m: f64,
    },
    /// Drops touch a wall.
    #[error(
        "hall too small: {drops} of {of} drops touch a wall, by up to {by_m:.1} m; let it go lower, \
         move or turn the release, hang nets before the walls, or find a larger hall"
    )]
    Walls {
        /// How many.
        drops: usize,
        /// Of all flown.
        of: usize,
        /// How far, m.
        by_m: f64,
    },
    /// A rung of the ladder is too close to the ceiling.
    #[error(
        "ladder above the ceiling: {height_m:.1} m and half the body's length make {top_m:.1} m, but \
         the hall is {hall_m:.1} m high; let it go from {most_m:.1} m at most"
    )]
    Ceiling {
        /// Release height, m.
        height_m: f64,
        /// With the body, m.
        top_m: f64,
        /// Of the hall, m.
        hall_m: f64,
        /// Highest that fits, m.
        most_m: f64,
    },
    /// A drop rises to the ceiling.
    #[error(
        "a drop rises to the ceiling, {by_m:.1} m too far; let it go lower, or with less climb"
    )]
    Rise {
        /// How far, m.
        by_m: f64,
    },
    /// A rung isn't above the catch.
    #[error(
        "ladder too low: {height_m:.1} m isn't above the catch at {catch_m:.1} m and the body's reach \
         of {reach_m:.1} m; begin at {least_m:.1} m or more, or lower the catch"
    )]
    Low {
        /// Release height, m.
        height_m: f64,
        /// Of the catch, m.
        catch_m: f64,
        /// Of the body, m.
        reach_m: f64,
        /// Lowest that would do, m.
        least_m: f64,
    },
    /// The net would let it through to the floor.
    #[error(
        "net too low: it hangs at {catch_m:.2} m and gives {stopping_m:.2} m; hang it at {least_m:.2} m \
         or more"
    )]
    Net {
        /// Of the net, m.
        catch_m: f64,
        /// How far it gives, m.
        stopping_m: f64,
        /// Lowest that would do, m.
        least_m: f64,
    },
    /// A region reaches over the catch's edges.
    #[error(
        "catch too small: the 95 % region from {height_m:.1} m reaches {by_m:.1} m over its edge; for all heights \
         it must lie from {:.1} to {:.1} m along the launch and {width_m:.1} m wide, or move it from height to \
         height, or let it go lower",
        along_m[0], along_m[1]
    )]
    Catch {
        /// From where the worst is let go, m.
        height_m: f64,
        /// How far, m.
        by_m: f64,
        /// From where to where it is needed for all heights, m.
        along_m: [f64; 2],
        /// How wide, m.
        width_m: f64,
    },
    /// Someone stands in the keep-out area, or a drop comes by.
    #[error(
        "`{name}` stands {by_m:.1} m inside the keep-out area, from {:.1} to {:.1} m along the launch and \
         {:.1} m to its right to {:.1} m to its left; move them out, and behind something that stops it",
        along_m[0], along_m[1], -across_m[0], across_m[1]
    )]
    Person {
        /// Who.
        name: String,
        /// How far, m.
        by_m: f64,
        /// The area, m.
        along_m: [f64; 2],
        /// The area, m.
        across_m: [f64; 2],
    },
    /// The catch doesn't fit into the hall.
    #[error("catch too large: it reaches {by_m:.1} m through a wall; move, turn or shorten it")]
    CatchThroughWall {
        /// How far, m.
        by_m: f64,
    },
    /// Someone stands in or under the catch.
    #[error(
        "`{name}` stands {by_m:.1} m inside of the catch's edge; nobody may be in or under it: move them, and \
         behind something that stops it"
    )]
    PersonInCatch {
        /// Who.
        name: String,
        /// How far, m.
        by_m: f64,
    },
    /// What isn't flown isn't known.
    #[error(
        "{refused} of {of} drops couldn't be flown, so where they end isn't known ({why}); look at the \
         release, the spread and the gait's table"
    )]
    Unknown {
        /// How many.
        refused: usize,
        /// Of how many.
        of: usize,
        /// Why the first couldn't.
        why: String,
    },
}

/// All that doesn't fit; empty where the hall holds it.
///
/// - `rungs`: of the whole ladder
/// - `why_refused`: of the first drop that couldn't be flown
/// - `thickness_m`: of the body
pub fn misfits(
    plan: &Plan,
    rungs: &[Rung],
    around: &Around<'_>,
    thickness_m: f64,
    why_refused: Option<String>,
) -> Vec<Misfit> {
    let hall = around.hall;
    let mut misfits = Vec::new();
    misfits.extend(ladder(hall, around.reach_m));
    misfits.extend(walls(plan, rungs, around));
    misfits.extend(catch(rungs, around, thickness_m));
    misfits.extend(people(plan, around));
    if let Some(why) = why_refused {
        let refused = plan.sound.refused + plan.faults.iter().map(|row| row.refused).sum::<usize>();
        misfits.push(Misfit::Unknown { refused, of: plan.drops, why });
    }
    misfits
}

/// What of a ladder doesn't fit between catch and ceiling, before anything is flown.
///
/// - `reach_m`: of the body from its centre
pub fn ladder(hall: &Hall, reach_m: f64) -> Vec<Misfit> {
    let heights_m = &hall.release.heights_m;
    let (lowest_m, highest_m) = (heights_m[0], heights_m[heights_m.len() - 1]);
    let (catch_m, hall_m) = (hall.catch.height_m, hall.height_m);
    let top_m = highest_m + reach_m;
    let low = Misfit::Low { height_m: lowest_m, catch_m, reach_m, least_m: catch_m + reach_m };
    let high = Misfit::Ceiling { height_m: highest_m, top_m, hall_m, most_m: hall_m - reach_m };
    let low = (lowest_m <= catch_m + reach_m).then_some(low);
    low.into_iter().chain((top_m > hall_m).then_some(high)).collect()
}

fn walls(plan: &Plan, rungs: &[Rung], around: &Around<'_>) -> Vec<Misfit> {
    let least = &plan.least;
    let mut misfits = Vec::new();
    if let Some((height_m, by_m)) = furthest_over(rungs, |place_m| around.to_walls_m(place_m)) {
        misfits.push(Misfit::Region { height_m, by_m });
    }
    if least.walls_m < 0.0 {
        let faults = plan.faults.iter().map(|row| row.flown).sum::<usize>();
        let of = plan.sound.flown + faults;
        misfits.push(Misfit::Walls { drops: least.touching, of, by_m: -least.walls_m });
    }
    let above_m = around
        .hall
        .release
        .heights_m
        .last()
        .map_or(0.0, |height_m| around.hall.height_m - height_m - around.reach_m);
    // What begins at the ceiling is told of the ladder.
    if least.ceiling_m < 0.0 && above_m >= 0.0 {
        misfits.push(Misfit::Rise { by_m: -least.ceiling_m });
    }
    misfits
}

/// The rung whose region reaches furthest over an edge, and how far.
///
/// - `within_m`: how far a place is from the edge, below 0 beyond
fn furthest_over(rungs: &[Rung], within_m: impl Fn([f64; 2]) -> f64) -> Option<(f64, f64)> {
    let over_m = |rung: &Rung| {
        let edge_m = rung.region.as_ref()?.edge_m(180).map(|place_m| -within_m(place_m));
        Some((rung.height_m, edge_m.fold(f64::NEG_INFINITY, f64::max)))
    };
    let furthest = rungs.iter().filter_map(over_m).max_by(|(_, a), (_, b)| a.total_cmp(b));
    furthest.filter(|&(_, by_m)| by_m > 0.0)
}

fn catch(rungs: &[Rung], around: &Around<'_>, thickness_m: f64) -> Vec<Misfit> {
    let catch = &around.hall.catch;
    let mut misfits = Vec::new();
    let least_m = catch_height_needed_m(catch.stopping_m, thickness_m);
    if catch.kind == CatchKind::Net && catch.height_m < least_m {
        let (catch_m, stopping_m) = (catch.height_m, catch.stopping_m);
        misfits.push(Misfit::Net { catch_m, stopping_m, least_m });
    }
    if !around.has_catch() {
        return misfits;
    }
    let reach_m = around.reach_m;
    let within = |place_m| around.within_catch_m(place_m) - reach_m;
    if let Some((height_m, by_m)) = furthest_over(rungs, within) {
        let edges_m = rungs.iter().filter_map(|rung| rung.region.as_ref());
        let mut edges_m = edges_m.flat_map(|region| region.edge_m(180));
        let first_m = edges_m.next().unwrap_or_default();
        let first = Area { along_m: [first_m[0]; 2], across_m: [first_m[1]; 2] };
        let all = edges_m.fold(first.with(first_m, reach_m), |all, at_m| all.with(at_m, reach_m));
        let width_m = 2.0 * all.across_m[0].abs().max(all.across_m[1].abs());
        misfits.push(Misfit::Catch { height_m, by_m, along_m: all.along_m, width_m });
    }
    misfits.extend(catch_in_hall(around));
    misfits
}

/// Walls through the catch, and people in it.
fn catch_in_hall(around: &Around<'_>) -> Vec<Misfit> {
    let hall = around.hall;
    let Some(outline) = around.catch_area() else { return Vec::new() };
    let [[from_x, to_x], [from_y, to_y]] = [outline.along_m, outline.across_m];
    let corners_m = [[from_x, from_y], [from_x, to_y], [to_x, from_y], [to_x, to_y]];
    // The body's reach is no matter here.
    let to_walls_m = corners_m.map(|corner_m| around.to_walls_m(corner_m) + around.reach_m);
    let by_m = -to_walls_m.into_iter().fold(f64::INFINITY, f64::min);
    let through = (by_m > 0.0).then_some(Misfit::CatchThroughWall { by_m });
    let inside = hall.people.iter().filter_map(|person| {
        let by_m = person.radius_m - outline.to_m(around.in_launch([person.x_m, person.y_m]));
        (by_m > 0.0).then(|| Misfit::PersonInCatch { name: person.name.clone(), by_m })
    });
    through.into_iter().chain(inside).collect()
}

fn people(plan: &Plan, around: &Around<'_>) -> Vec<Misfit> {
    let keep_out = plan.keep_out;
    let one = |person: &undulift_design::Person| {
        let to_m = keep_out.to_m(around.in_launch([person.x_m, person.y_m])) - person.radius_m;
        (to_m < 0.0).then(|| Misfit::Person {
            name: person.name.clone(),
            by_m: -to_m,
            along_m: keep_out.along_m,
            across_m: keep_out.across_m,
        })
    };
    around.hall.people.iter().filter_map(one).collect()
}
