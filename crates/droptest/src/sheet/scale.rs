//! From the hall's floor to paper, at one of the scales that rulers have.

use undulift_design::Hall;

use crate::{Area, Around};

/// Paper for what is drawn, without axes and legend, mm.
pub(super) const PLOT_MM: [f64; 2] = [166.0, 92.0];
/// Least height of it: labels about a narrow hall need room, too.
const LEAST_PLOT_MM: f64 = 44.0;
/// Left of it and above it, mm.
pub(super) const MARGIN_MM: [f64; 2] = [11.0, 2.0];

/// Where places of the hall are on paper.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Paper {
    /// The n of 1:n.
    pub(super) scale: u64,
    /// Where x and y of the hall are 0, mm to the right and down.
    pub(super) origin_mm: [f64; 2],
    /// What may be drawn on: from and to, mm.
    pub(super) plot_mm: [[f64; 2]; 2],
}

/// The largest of the usual scales at which lengths fit on paper.
///
/// - `size_m`: to the right and up
pub(super) fn scale_for(size_m: [f64; 2], most_mm: [f64; 2]) -> u64 {
    let fits = |scale: &u64| {
        let fit = |(size_m, most_mm): (f64, f64)| size_m * 1000.0 <= most_mm * *scale as f64;
        size_m.into_iter().zip(most_mm).all(fit)
    };
    let tens = (0..12).map(|power| 10_u64.pow(power));
    let usual = tens.flat_map(|ten| [20 * ten, 25 * ten, 50 * ten, 100 * ten]);
    usual.into_iter().find(fits).unwrap_or(u64::MAX)
}

impl Paper {
    /// For a hall and what may reach out of it.
    pub(super) fn of(around: &Around<'_>, keep_out: &Area) -> Self {
        let [from_m, to_m] = extent_m(around, keep_out);
        let size_m = [to_m[0] - from_m[0], to_m[1] - from_m[1]];
        let scale = scale_for(size_m, PLOT_MM);
        let mm_per_m = 1000.0 / scale as f64;
        let height_mm = (size_m[1] * mm_per_m + 8.0).clamp(LEAST_PLOT_MM, PLOT_MM[1]);
        let beside = 0.5 * (PLOT_MM[0] - size_m[0] * mm_per_m);
        let below = 0.5 * (height_mm - size_m[1] * mm_per_m);
        let [left, top] = MARGIN_MM;
        Self {
            scale,
            origin_mm: [
                left + beside - from_m[0] * mm_per_m,
                top + height_mm - below + from_m[1] * mm_per_m,
            ],
            plot_mm: [[left, top], [left + PLOT_MM[0], top + height_mm]],
        }
    }

    /// Paper for a length in the hall, mm.
    pub(super) fn length_mm(&self, length_m: f64) -> f64 {
        1000.0 * length_m / self.scale as f64
    }

    /// Of a place in the hall.
    pub(super) fn at_mm(&self, [x_m, y_m]: [f64; 2]) -> [f64; 2] {
        [self.origin_mm[0] + self.length_mm(x_m), self.origin_mm[1] - self.length_mm(y_m)]
    }
}

/// The corners of an area, in the hall, in turn.
pub(super) fn corners_m(around: &Around<'_>, area: &Area) -> [[f64; 2]; 4] {
    let ([back, ahead], [right, left]) = (area.along_m, area.across_m);
    [[back, right], [ahead, right], [ahead, left], [back, left]].map(|at_m| around.in_hall(at_m))
}

/// The hall and the area, both ends of x and y.
fn extent_m(around: &Around<'_>, area: &Area) -> [[f64; 2]; 2] {
    let Hall { length_m, width_m, .. } = around.hall;
    let wider = |[from, to]: [[f64; 2]; 2], at: [f64; 2]| {
        [[from[0].min(at[0]), from[1].min(at[1])], [to[0].max(at[0]), to[1].max(at[1])]]
    };
    corners_m(around, area).into_iter().fold([[0.0; 2], [*length_m, *width_m]], wider)
}

/// Between ticks or along a scale bar, m: 1, 2 or 5 times a power of ten.
///
/// - `least_mm`: on paper
pub(super) fn step_m(scale: u64, least_mm: f64) -> f64 {
    let least_m = least_mm * scale as f64 / 1000.0;
    let tens = (-3..9).map(|power| 10_f64.powi(power));
    let steps = tens.flat_map(|ten| [ten, 2.0 * ten, 5.0 * ten]);
    // Rounding must not turn a step that is just enough away.
    steps.into_iter().find(|step_m| *step_m >= least_m * (1.0 - 1e-9)).unwrap_or(least_m)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use std::path::Path;

    /// By hand on 180 × 105 mm: 60 × 40 m want 1:333 and 1:381; 36 m want 1:200 just so; 3 × 2 m
    /// want 1:19; 1000 m want 1:5556.
    #[test]
    fn analytic_scales() {
        for (size_m, scale) in [
            ([60.0, 40.0], 500),
            ([36.0, 21.0], 200),
            ([36.0, 21.1], 250),
            ([3.0, 2.0], 20),
            ([3.7, 2.0], 25),
            ([1000.0, 5.0], 10_000),
            ([0.01, 0.01], 20),
            ([100.0, 4.0], 1000),
        ] {
            assert_eq!(scale_for(size_m, [180.0, 105.0]), scale, "{size_m:?}");
        }
    }

    /// At 1:500, 11 mm are 5.5 m, so a tick every 10 m; at 1:20, 0.22 m, so 0.5 m.
    #[test]
    fn analytic_steps() {
        assert_relative_eq!(step_m(500, 11.0), 10.0);
        assert_relative_eq!(step_m(500, 10.0), 5.0);
        assert_relative_eq!(step_m(20, 11.0), 0.5);
    }

    /// The demo hall of 60 × 40 m turned by 30°, release at (6, 20), area from 2 m behind to 10 m
    /// ahead, 3 m to both sides, all within. 1:500: 120 × 80 mm on 166 × 88, so (166 − 120)/2 = 23 mm
    /// and 4 mm about it: origin at (11 + 23, 2 + 88 − 4) = (34, 86). The corner (10, 3) lies at
    /// 6 + 10·cos 30° − 3·sin 30° = 13.160 m and 20 + 10·sin 30° + 3·cos 30° = 27.598 m; times 2 mm/m:
    /// (34 + 26.321, 86 − 55.196).
    #[test]
    fn analytic_a_turned_launch_on_paper() {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/hall-gantry.toml");
        let mut hall = Hall::read(&path).unwrap();
        hall.release.direction_rad = 30_f64.to_radians();
        let around = Around { hall: &hall, reach_m: 0.5 };
        let area = Area { along_m: [-2.0, 10.0], across_m: [-3.0, 3.0] };
        let paper = Paper::of(&around, &area);
        assert_eq!(paper.scale, 500);
        let at = |at_m, [x, y]: [f64; 2]| {
            let [found_x, found_y] = paper.at_mm(at_m);
            assert_relative_eq!(found_x, x, epsilon = 1e-3);
            assert_relative_eq!(found_y, y, epsilon = 1e-3);
        };
        at([0.0, 0.0], [34.0, 86.0]);
        at([60.0, 40.0], [154.0, 6.0]);
        at(corners_m(&around, &area)[2], [60.321, 30.804]);
    }
}
