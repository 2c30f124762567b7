//! A rectangle on the floor, along the launch.

/// A rectangle along the launch, m.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Area {
    /// From behind to ahead of the point of release.
    pub along_m: [f64; 2],
    /// From its right to its left.
    pub across_m: [f64; 2],
}

impl Area {
    /// The point of release alone.
    pub const POINT: Self = Self { along_m: [0.0; 2], across_m: [0.0; 2] };

    /// The least that holds this one and a place, with a distance around that.
    #[must_use]
    pub fn with(self, [x, y]: [f64; 2], around_m: f64) -> Self {
        let widen =
            |[from, to]: [f64; 2], at: f64| [from.min(at - around_m), to.max(at + around_m)];
        Self { along_m: widen(self.along_m, x), across_m: widen(self.across_m, y) }
    }

    /// The least that holds this one and another, with a distance around that.
    #[must_use]
    pub fn with_all(self, other: &Self, around_m: f64) -> Self {
        self.with([other.along_m[0], other.across_m[0]], around_m)
            .with([other.along_m[1], other.across_m[1]], around_m)
    }

    /// Length along and width across the launch, m.
    pub fn size_m(&self) -> [f64; 2] {
        [self.along_m, self.across_m].map(|[from, to]| to - from)
    }

    /// Behind, ahead, right and left of the point of release, each rounded to 0.1 m so that the area is
    /// no smaller, m.
    pub fn outward_m(&self) -> [f64; 4] {
        let up = |at_m: f64| (10.0 * at_m - 1e-9).ceil() / 10.0 + 0.0;
        [up(-self.along_m[0]), up(self.along_m[1]), up(-self.across_m[0]), up(self.across_m[1])]
    }

    /// How far a place lies within its edges, m; below 0 outside.
    pub fn within_m(&self, [x, y]: [f64; 2]) -> f64 {
        let within = |[from, to]: [f64; 2], at: f64| (at - from).min(to - at);
        within(self.along_m, x).min(within(self.across_m, y))
    }

    /// From its edge to a place in the launch's frame, m; below 0 within.
    pub fn to_m(&self, [x, y]: [f64; 2]) -> f64 {
        let out = |[from, to]: [f64; 2], at: f64| (from - at).max(at - to);
        let (along, across) = (out(self.along_m, x), out(self.across_m, y));
        if along > 0.0 && across > 0.0 { along.hypot(across) } else { along.max(across) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// By hand: beside an edge, off a corner (3, 4, 5), and within.
    #[test]
    fn analytic_way_to_an_area() {
        let area = Area::POINT.with([0.0, 0.0], 1.0).with([9.0, 2.0], 1.0).with([4.0, -1.0], 1.0);
        assert_eq!(area, Area { along_m: [-1.0, 10.0], across_m: [-2.0, 3.0] });
        for (place_m, to_m) in
            [([12.0, 0.0], 2.0), ([13.0, 7.0], 5.0), ([4.0, 2.0], -1.0), ([-1.5, -2.0], 0.5)]
        {
            assert_relative_eq!(area.to_m(place_m), to_m, epsilon = 1e-12);
        }
        assert_eq!(area.size_m(), [11.0, 5.0]);
        assert_eq!([[5.0, 0.0], [12.0, 0.0]].map(|place_m| area.within_m(place_m)), [2.0, -2.0]);
        let uneven = Area { along_m: [-1.01, 7.31], across_m: [-0.3, -0.12] };
        assert_eq!(uneven.outward_m(), [1.1, 7.4, 0.3, -0.1]);
        assert_eq!(Area::POINT.with_all(&area, 0.5).along_m, [-1.5, 10.5]);
    }
}
