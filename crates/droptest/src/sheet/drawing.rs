//! The plan of the hall: what is drawn where, in millimetres of paper.

use super::Sheet;
use super::labels::{LETTERS_MM, Label, Taken, Wanted, place, with_short_names};
use super::scale::{Paper, corners_m, step_m};
use super::words::Words;
use crate::Ellipse;

/// Of a name in the drawing, columns.
const NAME_COLUMNS: usize = 22;
/// Between ticks of an axis, mm.
const TICKS_MM: f64 = 9.0;
/// The arrow along the launch, mm.
const ARROW_MM: f64 = 13.0;
/// Half of what the point of release and a cross cover, mm.
const POINT_MM: f64 = 1.6;
/// Points on a region's edge that labels keep clear of.
const EDGE_POINTS: u32 = 72;
/// Points on a side of what is drawn, at most.
const MOST_POINTS: f64 = 2000.0;
/// Half of what labels keep free about a person's middle, at most, mm.
const PERSON_MM: f64 = 6.0;

/// All that is drawn.
#[derive(Debug, Clone)]
pub(super) struct Drawing {
    pub(super) paper: Paper,
    /// Two opposite corners: x and y 0, and the others.
    pub(super) hall_mm: [[f64; 2]; 2],
    pub(super) catch_mm: Option<[[f64; 2]; 4]>,
    pub(super) keep_out_mm: [[f64; 2]; 4],
    /// From the lowest rung to the highest.
    pub(super) regions: Vec<Region>,
    pub(super) people: Vec<Circle>,
    pub(super) fault_mm: Option<[f64; 2]>,
    pub(super) release_mm: [f64; 2],
    pub(super) arrow_to_mm: [f64; 2],
    pub(super) ticks: Vec<Tick>,
    pub(super) labels: Vec<Label>,
    /// People for whom no label found room.
    pub(super) unlabelled: usize,
}

/// Where 95 % of a rung's drops end.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Region {
    /// Of the release, m.
    pub(super) height_m: f64,
    pub(super) centre_mm: [f64; 2],
    pub(super) semi_axes_mm: [f64; 2],
    /// From x toward y.
    pub(super) turned_deg: f64,
    pub(super) is_highest: bool,
}

/// Points on a line, a millimetre apart, those far off left out.
fn between(from: [f64; 2], to: [f64; 2]) -> impl Iterator<Item = [f64; 2]> {
    let along = [to[0] - from[0], to[1] - from[1]];
    let count = along[0].hypot(along[1]).ceil().clamp(1.0, MOST_POINTS);
    (0..=count as usize)
        .map(move |n| [0, 1].map(|axis| from[axis] + along[axis] * n as f64 / count))
}

/// Where someone stands.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Circle {
    pub(super) centre_mm: [f64; 2],
    pub(super) radius_mm: f64,
}

/// A tick of an axis, with its number.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Tick {
    pub(super) at_mm: [f64; 2],
    pub(super) text: String,
    pub(super) taken: Taken,
}

impl Drawing {
    pub(super) fn of(sheet: &Sheet<'_>) -> Self {
        let around = sheet.around();
        let paper = Paper::of(&around, &sheet.plan.keep_out);
        let at_mm = |place_m| paper.at_mm(around.in_hall(place_m));
        let hall = sheet.hall;
        let hall_mm = [[0.0; 2], [hall.length_m, hall.width_m]].map(|at_m| paper.at_mm(at_m));
        let people: Vec<Circle> = hall.people.iter().map(|p| circle(&paper, p)).collect();
        let ahead_m = ARROW_MM / paper.length_mm(1.0);
        let mut drawing = Self {
            hall_mm,
            catch_mm: around
                .catch_area()
                .map(|area| corners_m(&around, &area).map(|at_m| paper.at_mm(at_m))),
            keep_out_mm: corners_m(&around, &sheet.plan.keep_out).map(|at_m| paper.at_mm(at_m)),
            regions: regions(sheet, &paper),
            fault_mm: sheet.plan.furthest.map(|furthest| at_mm(furthest.place_m)),
            release_mm: at_mm([0.0; 2]),
            arrow_to_mm: at_mm([ahead_m, 0.0]),
            ticks: ticks(&paper, [hall.length_m, hall.width_m]),
            people,
            labels: vec![],
            unlabelled: 0,
            paper,
        };
        let wanted = drawing.wanted(sheet);
        drawing.labels = place(&wanted, paper.plot_mm, drawing.taken(), &drawing.lines());
        drawing.unlabelled = wanted.len() - drawing.labels.len();
        drawing
    }

    /// Names of the axes, and where.
    pub(super) fn axis_names(&self) -> [(&'static str, [f64; 2]); 2] {
        let [[left, bottom], [right, top]] = self.hall_mm;
        let below_mm = bottom + 1.4 + 1.6 * LETTERS_MM;
        [("x, m", [0.5 * (left + right), below_mm]), ("y, m", [left - 8.6, 0.5 * (top + bottom)])]
    }

    /// What no label may cover.
    fn taken(&self) -> Vec<Taken> {
        let point = |middle_mm| Taken { middle_mm, half_mm: [POINT_MM; 2] };
        let person = |circle: &Circle| Taken {
            middle_mm: circle.centre_mm,
            half_mm: [circle.radius_mm.clamp(0.8, PERSON_MM); 2],
        };
        let arrow = (1..=6).map(|n| {
            let part = f64::from(n) / 6.0;
            let along = |axis: usize| self.arrow_to_mm[axis] - self.release_mm[axis];
            let middle_mm = [0, 1].map(|axis| self.release_mm[axis] + part * along(axis));
            Taken { middle_mm, half_mm: [0.9; 2] }
        });
        let ticks = self.ticks.iter().map(|tick| tick.taken);
        let people = self.people.iter().map(person);
        let points = self.fault_mm.into_iter().chain([self.release_mm]).map(point);
        let axes = self.axis_names().map(|(_, middle_mm)| Taken { middle_mm, half_mm: [3.0; 2] });
        points.chain(people).chain(ticks).chain(arrow).chain(axes).collect()
    }

    /// Points along what is drawn as a line.
    fn lines(&self) -> Vec<Taken> {
        let [[left, bottom], [right, top]] = self.hall_mm;
        let hall = [[left, bottom], [right, bottom], [right, top], [left, top]];
        let boxes = [Some(hall), Some(self.keep_out_mm), self.catch_mm];
        let sides = boxes.into_iter().flatten().flat_map(|corners| {
            (0..4).flat_map(move |n| between(corners[n], corners[(n + 1) % 4]))
        });
        let edges = self.regions.iter().flat_map(|region| {
            (0..EDGE_POINTS).map(|n| {
                let turn = std::f64::consts::TAU * f64::from(n) / f64::from(EDGE_POINTS);
                region.edge_mm([turn.cos(), turn.sin()])
            })
        });
        let point = |middle_mm| Taken { middle_mm, half_mm: [0.3; 2] };
        sides.chain(edges).map(point).collect()
    }

    /// Labels, those that matter most first.
    fn wanted(&self, sheet: &Sheet<'_>) -> Vec<Wanted> {
        let (sin, cos) = sheet.hall.release.direction_rad.sin_cos();
        let (ahead, left) = ([cos, -sin], [-sin, -cos]);
        let back = ahead.map(|part| -part);
        let wanted = |words: Words, short: Words, at_mm, free_mm, toward| Wanted {
            words: [words, short],
            at_mm,
            free_mm,
            toward,
        };
        let mut all =
            vec![wanted("release".into(), "release".into(), self.release_mm, POINT_MM, back)];
        for region in self.regions.iter().rev() {
            let text = format!("from {} m", height(region.height_m));
            let edge_mm = region.edge_mm(left);
            all.push(wanted(text.clone().into(), text.into(), edge_mm, 0.3, left));
        }
        if let (Some(at_mm), Some(furthest)) = (self.fault_mm, &sheet.plan.furthest) {
            let text = format!("furthest fault: {}", furthest.kind.in_words());
            all.push(wanted(text.into(), "fault".into(), at_mm, POINT_MM, ahead));
        }
        for (n, (circle, person)) in self.people.iter().zip(&sheet.hall.people).enumerate() {
            let number = format!("{}", n + 1);
            let words = Words::from(format!("{number} ")).and_name(&person.name);
            let words = with_short_names(words, NAME_COLUMNS);
            let free_mm = circle.radius_mm.clamp(0.8, PERSON_MM);
            all.push(wanted(
                words,
                format!("({number})").into(),
                circle.centre_mm,
                free_mm,
                [1.0, 0.0],
            ));
        }
        all
    }
}

impl Region {
    fn of(
        ellipse: &Ellipse,
        height_m: f64,
        is_highest: bool,
        sheet: &Sheet<'_>,
        paper: &Paper,
    ) -> Self {
        let direction_rad = sheet.hall.release.direction_rad;
        Self {
            height_m,
            centre_mm: paper.at_mm(sheet.around().in_hall(ellipse.centre_m)),
            semi_axes_mm: ellipse.semi_axes_m.map(|axis_m| paper.length_mm(axis_m)),
            turned_deg: (ellipse.angle_rad + direction_rad).to_degrees(),
            is_highest,
        }
    }

    /// Where its edge is furthest in a direction, to the right and down.
    fn edge_mm(&self, toward: [f64; 2]) -> [f64; 2] {
        let (sin, cos) = (-self.turned_deg).to_radians().sin_cos();
        let [a, b] = self.semi_axes_mm;
        let along = a * a * (toward[0] * cos + toward[1] * sin);
        let across = b * b * (toward[1] * cos - toward[0] * sin);
        let reach = (along / a.max(1e-12)).hypot(across / b.max(1e-12)).max(1e-12);
        [
            self.centre_mm[0] + (along * cos - across * sin) / reach,
            self.centre_mm[1] + (along * sin + across * cos) / reach,
        ]
    }
}

fn regions(sheet: &Sheet<'_>, paper: &Paper) -> Vec<Region> {
    let last = sheet.rungs.len().saturating_sub(1);
    let of = |(n, rung): (usize, &crate::Rung)| {
        let region = |ellipse| Region::of(ellipse, rung.height_m, n == last, sheet, paper);
        rung.region.as_ref().map(region)
    };
    sheet.rungs.iter().enumerate().filter_map(of).collect()
}

fn circle(paper: &Paper, person: &undulift_design::Person) -> Circle {
    Circle {
        centre_mm: paper.at_mm([person.x_m, person.y_m]),
        radius_mm: paper.length_mm(person.radius_m),
    }
}

/// Along the hall's lower edge and its left one, with both ends where there is room for them.
fn ticks(paper: &Paper, [length_m, width_m]: [f64; 2]) -> Vec<Tick> {
    let step_m = step_m(paper.scale, TICKS_MM);
    let stops = |end_m: f64, room_mm: f64| {
        let count = (end_m / step_m + 1e-9) as usize;
        let mut stops: Vec<f64> = (0..=count).map(|n| n as f64 * step_m).collect();
        if paper.length_mm(end_m - count as f64 * step_m) > room_mm {
            stops.push(end_m);
        }
        stops
    };
    let tick = |at_m, off_mm: [f64; 2], value_m: f64| {
        let (at_mm, text) = (paper.at_mm(at_m), height(value_m));
        let mut taken = Taken::by(text.len(), at_mm);
        let beside = off_mm[0] * (1.4 + taken.half_mm[0]);
        taken.middle_mm = [at_mm[0] + beside, at_mm[1] + off_mm[1] * (1.4 + 0.5 * LETTERS_MM)];
        Tick { at_mm, text, taken }
    };
    let below = stops(length_m, 6.5).into_iter().map(|x_m| tick([x_m, 0.0], [0.0, 1.0], x_m));
    let beside = stops(width_m, 3.2).into_iter().map(|y_m| tick([0.0, y_m], [-1.0, 0.0], y_m));
    below.chain(beside).collect()
}

/// Metres with the digits that they need.
pub(super) fn height(value_m: f64) -> String {
    let text = format!("{value_m:.2}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Which way a launch goes.
pub(super) fn turned(direction_rad: f64) -> String {
    match direction_rad.to_degrees().round() {
        0.0 => "launch along x".into(),
        deg if deg < 0.0 => format!("launch {:.0}° to the right of x", -deg),
        deg => format!("launch {deg:.0}° to the left of x"),
    }
}

/// Degrees that an arrow to the right must be turned by, clockwise on paper.
pub(super) fn clockwise_deg(from_mm: [f64; 2], to_mm: [f64; 2]) -> f64 {
    (to_mm[1] - from_mm[1]).atan2(to_mm[0] - from_mm[0]).to_degrees()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// An ellipse of 4 × 2 mm turned by a quarter: its top is a long axis up, its right side a short
    /// one to the right; a circle's edge lies a radius away.
    #[test]
    fn analytic_edges_of_regions() {
        let turned_deg = 90.0;
        let region = |semi_axes_mm, turned_deg| Region {
            height_m: 3.0,
            centre_mm: [10.0, 20.0],
            semi_axes_mm,
            turned_deg,
            is_highest: true,
        };
        let upright = region([4.0, 2.0], turned_deg);
        for (toward, at_mm) in [([0.0, -1.0], [10.0, 16.0]), ([1.0, 0.0], [12.0, 20.0])] {
            let found_mm = upright.edge_mm(toward);
            assert_relative_eq!(found_mm[0], at_mm[0], epsilon = 1e-9);
            assert_relative_eq!(found_mm[1], at_mm[1], epsilon = 1e-9);
        }
        let [x, y] = region([5.0, 5.0], 17.0).edge_mm([0.6, 0.8]);
        assert_relative_eq!(x, 13.0, epsilon = 1e-9);
        assert_relative_eq!(y, 24.0, epsilon = 1e-9);
        // The point furthest to the upper right of 4 × 2: (16, 4)/√20.
        let [x, y] = region([4.0, 2.0], 0.0).edge_mm([0.5_f64.sqrt(), -0.5_f64.sqrt()]);
        assert_relative_eq!(x, 10.0 + 16.0 / 20_f64.sqrt(), epsilon = 1e-9);
        assert_relative_eq!(y, 20.0 - 4.0 / 20_f64.sqrt(), epsilon = 1e-9);
    }

    #[test]
    fn analytic_metres_without_empty_digits() {
        for (value_m, text) in [(0.0, "0"), (10.0, "10"), (2.5, "2.5"), (0.25, "0.25")] {
            assert_eq!(height(value_m), text);
        }
    }
}
