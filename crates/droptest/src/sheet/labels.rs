//! Labels on a drawing: each beside its place, none over another.

use super::words::{Piece, Words, cut};
use unicode_width::UnicodeWidthStr;

/// Of letters, mm.
pub(super) const LETTERS_MM: f64 = 2.6;
/// Of a letter in the middle of wide fonts, over its height.
const COLUMN: f64 = 0.62;
/// Room about a label, mm.
const PAD_MM: f64 = 0.4;
/// Distances from the place at which a label is tried, mm.
const RINGS_MM: [f64; 14] =
    [0.6, 1.5, 3.0, 5.0, 7.5, 10.0, 13.0, 17.0, 22.0, 28.0, 35.0, 45.0, 60.0, 80.0];
/// Directions in which it is tried.
const DIRECTIONS: usize = 24;
/// From here on a line leads to it, mm.
const LEADER_FROM_MM: f64 = 2.0;
/// Between points at which a leader is looked at, mm.
const LEADER_STEP_MM: f64 = 0.5;

/// A box on paper, mm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Taken {
    pub(super) middle_mm: [f64; 2],
    pub(super) half_mm: [f64; 2],
}

impl Taken {
    /// What letters take.
    pub(super) fn by(columns: usize, middle_mm: [f64; 2]) -> Self {
        let half = 0.5 * columns as f64 * COLUMN * LETTERS_MM + PAD_MM;
        Self { middle_mm, half_mm: [half, 0.5 * LETTERS_MM + PAD_MM] }
    }

    pub(super) fn meets(&self, other: &Self) -> bool {
        (0..2).all(|axis| {
            let apart = (self.middle_mm[axis] - other.middle_mm[axis]).abs();
            apart < self.half_mm[axis] + other.half_mm[axis]
        })
    }

    fn is_within(&self, [from, to]: [[f64; 2]; 2]) -> bool {
        (0..2).all(|axis| {
            let (middle, half) = (self.middle_mm[axis], self.half_mm[axis]);
            middle - half >= from[axis] && middle + half <= to[axis]
        })
    }

    /// Its point nearest to another.
    fn nearest_mm(&self, at_mm: [f64; 2]) -> [f64; 2] {
        std::array::from_fn(|axis| {
            let (middle, half) = (self.middle_mm[axis], self.half_mm[axis] - PAD_MM);
            at_mm[axis].clamp(middle - half, middle + half)
        })
    }
}

/// A label that is wanted.
#[derive(Debug, Clone)]
pub(super) struct Wanted {
    /// In words, and in fewer where there is no room.
    pub(super) words: [Words; 2],
    /// Its place, mm.
    pub(super) at_mm: [f64; 2],
    /// Kept free about the place, mm.
    pub(super) free_mm: f64,
    /// Where it would stand best: to the right and down.
    pub(super) toward: [f64; 2],
}

/// How letters stand in the room kept for them, which may be wider: near to their place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Letters {
    From(f64),
    About(f64),
    UpTo(f64),
}

impl Letters {
    fn of(taken: &Taken, at_mm: [f64; 2]) -> Self {
        let (middle, half) = (taken.middle_mm[0], taken.half_mm[0]);
        match middle - at_mm[0] {
            off if off > 0.6 * half => Self::From(middle - half + PAD_MM),
            off if off < -0.6 * half => Self::UpTo(middle + half - PAD_MM),
            _ => Self::About(middle),
        }
    }
}

/// A label in its place.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Label {
    pub(super) words: Words,
    pub(super) taken: Taken,
    /// Where its letters begin, end or have their middle, mm to the right.
    pub(super) letters: Letters,
    /// From the place to the label, where they are apart.
    pub(super) leader_mm: Option<[[f64; 2]; 2]>,
}

/// Places labels in turn; those that find no room are left out.
///
/// - `within_mm`: paper to use, from and to
/// - `taken`: what neither label nor leader may cover
/// - `lines`: what no label should cover, where there is room elsewhere; leaders may cross them
pub(super) fn place(
    wanted: &[Wanted],
    within_mm: [[f64; 2]; 2],
    taken: Vec<Taken>,
    lines: &[Taken],
) -> Vec<Label> {
    let mut paper = Standing { within_mm, taken, lines: lines.to_vec(), leaders: vec![] };
    let mut labels = Vec::new();
    for wanted in wanted {
        let found = wanted.words.iter().find_map(|words| {
            let tried = || candidates(wanted, words);
            let neat = |label: &Label| paper.holds(label, wanted) && paper.is_neat(label, wanted);
            tried().find(neat).or_else(|| tried().find(|label| paper.holds(label, wanted)))
        });
        // Among many, a leader may have to pass beneath other labels.
        let among = || candidates(wanted, &wanted.words[1]).find(|label| paper.has_room(label));
        let Some(label) = found.or_else(among) else { continue };
        paper.taken.push(label.taken);
        paper.leaders.extend(along(&label, wanted));
        labels.push(label);
    }
    labels
}

/// What stands on paper so far.
struct Standing {
    within_mm: [[f64; 2]; 2],
    taken: Vec<Taken>,
    lines: Vec<Taken>,
    leaders: Vec<Taken>,
}

impl Standing {
    /// Whether a label by itself meets nothing that it mustn't.
    fn has_room(&self, label: &Label) -> bool {
        label.taken.is_within(self.within_mm)
            && is_free(&label.taken, &self.taken)
            && is_free(&label.taken, &self.leaders)
    }

    /// Whether its leader doesn't either.
    fn holds(&self, label: &Label, wanted: &Wanted) -> bool {
        self.has_room(label) && along(label, wanted).iter().all(|point| is_free(point, &self.taken))
    }

    /// Whether it covers no line, and no leader crosses another.
    fn is_neat(&self, label: &Label, wanted: &Wanted) -> bool {
        is_free(&label.taken, &self.lines)
            && along(label, wanted).iter().all(|point| is_free(point, &self.leaders))
    }
}

fn is_free(part: &Taken, of: &[Taken]) -> bool {
    !of.iter().any(|other| other.meets(part))
}

/// Where a label could stand, best first.
fn candidates(wanted: &Wanted, words: &Words) -> impl Iterator<Item = Label> {
    let columns = columns(words);
    let best_rad = wanted.toward[1].atan2(wanted.toward[0]);
    let turns = (0..DIRECTIONS).map(move |n| {
        let turns = n.div_ceil(2) as f64 / DIRECTIONS as f64;
        best_rad + std::f64::consts::TAU * if n % 2 == 0 { turns } else { -turns }
    });
    let tried =
        RINGS_MM.into_iter().flat_map(move |ring_mm| turns.clone().map(move |rad| (ring_mm, rad)));
    tried.map(move |(ring_mm, rad)| {
        let mut taken = Taken::by(columns, wanted.at_mm);
        let (sin, cos) = rad.sin_cos();
        for (axis, part) in [cos, sin].into_iter().enumerate() {
            taken.middle_mm[axis] += part * (wanted.free_mm + ring_mm + taken.half_mm[axis]);
        }
        let start_mm = [0, 1].map(|axis| wanted.at_mm[axis] + [cos, sin][axis] * wanted.free_mm);
        let leads = ring_mm >= LEADER_FROM_MM;
        let leader_mm = leads.then(|| [start_mm, taken.nearest_mm(wanted.at_mm)]);
        let letters = Letters::of(&taken, wanted.at_mm);
        Label { words: words.clone(), taken, letters, leader_mm }
    })
}

/// Points along a leader, but for what is near its place and its label.
fn along(label: &Label, wanted: &Wanted) -> Vec<Taken> {
    let Some([from, to]) = label.leader_mm else { return vec![] };
    let off = [to[0] - from[0], to[1] - from[1]];
    let count = (off[0].hypot(off[1]) / LEADER_STEP_MM).ceil().max(1.0);
    let point = |n: usize| {
        let middle_mm = [0, 1].map(|axis| from[axis] + off[axis] * n as f64 / count);
        Taken { middle_mm, half_mm: [0.2; 2] }
    };
    // The corners of the room about the place itself are still within this.
    let near_mm = 1.5 * wanted.free_mm + LEADER_STEP_MM;
    let is_far = |point: &Taken| {
        let [x, y] = [0, 1].map(|axis| point.middle_mm[axis] - wanted.at_mm[axis]);
        x.hypot(y) > near_mm
    };
    (0..count as usize).map(point).filter(is_far).collect()
}

/// How wide words are.
pub(super) fn columns(words: &Words) -> usize {
    let of = |piece: &Piece| match piece {
        Piece::Plain(text) | Piece::Name(text) | Piece::Exact(text) => text.width(),
    };
    words.0.iter().map(of).sum()
}

/// With names cut to a width.
pub(super) fn with_short_names(words: Words, most_columns: usize) -> Words {
    let short = |piece| match piece {
        Piece::Name(name) => Piece::Name(cut(&name, most_columns)),
        other => other,
    };
    Words(words.0.into_iter().map(short).collect())
}

#[cfg(test)]
mod tests {
    use super::*;

    const PAGE_MM: [[f64; 2]; 2] = [[0.0; 2], [160.0, 90.0]];

    fn wanted(text: &str, at_mm: [f64; 2]) -> Wanted {
        Wanted { words: [text.into(), "1".into()], at_mm, free_mm: 1.0, toward: [1.0, 0.0] }
    }

    /// Thirty-five places, 21 mm apart: all find room. Fifty at the same point: some do. None stands
    /// over another.
    #[test]
    fn analytic_labels_dont_meet() {
        let grid = (0..35).map(|n| [10.0 + 21.0 * f64::from(n % 7), 9.0 + 18.0 * f64::from(n / 7)]);
        let grid: Vec<Wanted> = grid.map(|at_mm| wanted("somebody", at_mm)).collect();
        let crowd: Vec<Wanted> = (0..50).map(|_| wanted("somebody", [80.0, 45.0])).collect();
        for (all, least) in [(grid, 35), (crowd, 10)] {
            let labels = place(&all, PAGE_MM, vec![], &[]);
            assert!(labels.len() >= least, "{}", labels.len());
            for (n, label) in labels.iter().enumerate() {
                assert!(label.taken.is_within(PAGE_MM));
                assert!(labels[..n].iter().all(|other| !other.taken.meets(&label.taken)));
            }
        }
    }

    /// Eight letters of 0.62 · 2.6 mm and 0.4 mm on both sides: half of it is 6.848 mm, so the
    /// middle stands 1 + 0.6 + 6.848 mm to the right; in the page's right corner it goes elsewhere.
    #[test]
    fn analytic_a_label_stands_where_it_is_best() {
        let label = &place(&[wanted("somebody", [80.0, 45.0])], PAGE_MM, vec![], &[])[0];
        approx::assert_relative_eq!(label.taken.middle_mm[0], 88.448, epsilon = 1e-9);
        assert!(label.leader_mm.is_none());
        let label = &place(&[wanted("somebody", [159.0, 89.0])], PAGE_MM, vec![], &[])[0];
        assert!(label.taken.middle_mm[0] < 159.0);
        // A line to the right of it is left uncovered, if that can be.
        let line = Taken { middle_mm: [87.0, 45.0], half_mm: [0.3, 2.0] };
        let label = &place(&[wanted("somebody", [80.0, 45.0])], PAGE_MM, vec![], &[line])[0];
        assert!(!label.taken.meets(&line));
        let all = Taken { middle_mm: [80.0, 45.0], half_mm: [80.0, 45.0] };
        assert_eq!(place(&[wanted("somebody", [80.0, 45.0])], PAGE_MM, vec![], &[all]).len(), 1);
        // Where all is taken, there is none.
        assert!(place(&[wanted("somebody", [80.0, 45.0])], PAGE_MM, vec![all], &[]).is_empty());
    }
}
