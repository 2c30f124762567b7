//! Sections made ready for the inner loop: looked up without arctangent.

use std::f64::consts::FRAC_PI_2;

use undulift_lanes::{f64x2, f64x4, whole_and_rest};

use crate::pchip::hermite_cubic;
use crate::section::{Row, cylinder_drag, plate};
use crate::{SectionKind, SectionTable};

/// Cells over the stand-in's range −1…1. Each reproduces values and slopes at its ends; inside the
/// few that hold a knot of the table, where its curvature jumps, `domed` is missed by 2e-5 at most.
const INCIDENCE_CELLS: usize = 4096;

/// Natural logarithms of the Reynolds numbers between which the cylinder's drag is tabulated; the
/// load outside is negligible below and unmeasured above.
const CYLINDER_LN_REYNOLDS: [f64; 2] = [-7.0, 18.5];
const CYLINDER_CELLS: usize = 1024;

/// A section's coefficients as cubic pieces over a cheap monotone stand-in for incidence,
///
/// t = −u_z/(|u_y| + |u_z|) = sin α/(cos α + |sin α|),
///
/// so that no arctangent is left in the inner loop. Slopes in α stay continuous, as
/// dα/dt = (cos α + |sin α|)² is, and t = 0 is an end of two cells.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedSection {
    table: Lookup,
}

#[derive(Debug, Clone, PartialEq)]
enum Lookup {
    Incidence {
        /// Where a Reynolds number stands among the rows.
        rows: RowScale,
        /// Lift and drag side by side, constant term first: rows × (cells + 1), so that the upper
        /// end has a cell of its own.
        cells: Vec<[f64x2; 4]>,
        /// Tabulated moment, shape as `cells`, or empty.
        moment: Vec<[f64; 4]>,
    },
    Reynolds {
        drag: Vec<[f64; 4]>,
    },
}

/// A place in a table of incidence: the cell and how far into it.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Place {
    cell: usize,
    into: f64,
}

/// Places of four values of the stand-in.
#[inline(always)]
pub(crate) fn places(stand_in: f64x4) -> [Place; 4] {
    let half = f64x4::splat((INCIDENCE_CELLS / 2) as f64);
    let places = (stand_in * half + half).fast_max(f64x4::splat(0.0)).to_array();
    places.map(|place| {
        let (cell, into) = whole_and_rest(place);
        Place { cell: cell.min(INCIDENCE_CELLS), into }
    })
}

/// The rows' places on the square of the Reynolds number, piecewise linear over cells of equal
/// leading bits, so that no logarithm is left in the inner loop.
#[derive(Debug, Clone, PartialEq)]
struct RowScale {
    first_cell: u64,
    /// Place, counted from the first row, is the first plus the second times the square.
    cells: Vec<[f64; 2]>,
    last_row: usize,
}

/// Bits of a double behind those that name a cell: 4096 cells to a doubling of the square. Inside
/// the cell that holds a row's Reynolds number its change of slope is missed, by 2e-5 at most on
/// `domed`.
const CELL_SHIFT: u32 = 40;

impl RowScale {
    /// - `reynolds`: of the rows, rising
    fn new(reynolds: &[f64]) -> Self {
        let (first, last) = (reynolds[0], reynolds[reynolds.len() - 1]);
        let logs: Vec<f64> = reynolds.iter().map(|reynolds| 2.0 * reynolds.ln()).collect();
        let place = |square: f64| -> f64 {
            let log = square.ln();
            let share = |pair: &[f64]| ((log - pair[0]) / (pair[1] - pair[0])).clamp(0.0, 1.0);
            logs.windows(2).map(share).sum()
        };
        // A cell more on each side, in which nothing changes, stands for all that lies beyond.
        let first_cell = (first * first).to_bits().wrapping_shr(CELL_SHIFT) - 1;
        let last_cell = (last * last).to_bits().wrapping_shr(CELL_SHIFT) + 1;
        let edges: Vec<(f64, f64)> = (first_cell..=last_cell + 1)
            .map(|cell| f64::from_bits(cell << CELL_SHIFT))
            .map(|square| (square, place(square)))
            .collect();
        let cells = edges
            .windows(2)
            .map(|ends| {
                let slope = (ends[1].1 - ends[0].1) / (ends[1].0 - ends[0].0);
                [ends[0].1 - slope * ends[0].0, slope]
            })
            .collect();
        Self { first_cell, cells, last_row: reynolds.len() - 1 }
    }

    /// The row below and the weight of the row after it.
    #[inline(always)]
    fn row(&self, reynolds_squared: f64) -> (usize, f64) {
        let cell = (reynolds_squared.to_bits() >> CELL_SHIFT).saturating_sub(self.first_cell);
        let [constant, slope] = self.cells[(cell as usize).min(self.cells.len() - 1)];
        let place = constant + slope * reynolds_squared;
        let (row, weight) = whole_and_rest(place);
        (row.min(self.last_row), weight)
    }
}

impl PreparedSection {
    /// C_l, C_d and the tabulated C_m (0 where none is) at an incidence in −π/2…π/2.
    pub fn at(&self, alpha_rad: f64, reynolds: f64) -> [f64; 3] {
        let stand_in = alpha_rad.sin() / (alpha_rad.cos() + alpha_rad.sin().abs());
        let [place, ..] = places(f64x4::splat(stand_in));
        let [lift, drag] = self.lift_drag(place, reynolds * reynolds).to_array();
        [lift, drag, self.moment(place, reynolds * reynolds)]
    }

    /// Tabulates a section.
    pub(crate) fn new(kind: &SectionKind) -> Self {
        let table = match kind {
            SectionKind::Plate => Lookup::Incidence {
                rows: RowScale::new(&[1.0]),
                cells: incidence_cells(&nodes(), plate).collect(),
                moment: Vec::new(),
            },
            SectionKind::Round => Lookup::Reynolds { drag: cylinder_cells() },
            SectionKind::Table(table) => table_lookup(table),
        };
        Self { table }
    }

    /// Whether the moment is tabulated rather than made from the pressure centre.
    pub fn has_moment(&self) -> bool {
        matches!(&self.table, Lookup::Incidence { moment, .. } if !moment.is_empty())
    }

    /// C_l and C_d side by side.
    ///
    /// - `place`: among the cells of incidence
    /// - `reynolds_squared`: of the Reynolds number on the chord
    #[inline(always)]
    pub(crate) fn lift_drag(&self, place: Place, reynolds_squared: f64) -> f64x2 {
        match &self.table {
            Lookup::Incidence { rows, cells, .. } => {
                let (first, second, weight) = cells_of(rows, place, reynolds_squared);
                let here = pair_at(&cells[first], place.into);
                let next = pair_at(&cells[second], place.into);
                here + f64x2::splat(weight) * (next - here)
            }
            Lookup::Reynolds { drag } => f64x2::new([0.0, drag_at(drag, reynolds_squared)]),
        }
    }

    /// Tabulated C_m; 0 where none is.
    #[inline]
    pub(crate) fn moment(&self, place: Place, reynolds_squared: f64) -> f64 {
        match &self.table {
            Lookup::Incidence { rows, moment, .. } if !moment.is_empty() => {
                let (first, second, weight) = cells_of(rows, place, reynolds_squared);
                let here = cubic_at(&moment[first], place.into);
                let next = cubic_at(&moment[second], place.into);
                here + weight * (next - here)
            }
            _ => 0.0,
        }
    }
}

/// Indices among all rows' cells of one cell in two neighbouring rows, and the second's weight.
#[inline(always)]
fn cells_of(rows: &RowScale, place: Place, reynolds_squared: f64) -> (usize, usize, f64) {
    let (row, weight) = rows.row(reynolds_squared);
    let next = (row + 1).min(rows.last_row);
    let in_row = |row: usize| row * (INCIDENCE_CELLS + 1) + place.cell;
    (in_row(row), in_row(next), weight)
}

fn drag_at(drag: &[[f64; 4]], reynolds_squared: f64) -> f64 {
    let [low, high] = CYLINDER_LN_REYNOLDS;
    let ln_reynolds = (0.5 * reynolds_squared.ln()).clamp(low, high);
    let place = (ln_reynolds - low) * (CYLINDER_CELLS as f64 / (high - low));
    let cell = (place as usize).min(CYLINDER_CELLS - 1);
    cubic_at(&drag[cell], place - cell as f64)
}

#[inline(always)]
fn pair_at(cell: &[f64x2; 4], f: f64) -> f64x2 {
    let f = f64x2::splat(f);
    cell[0] + f * (cell[1] + f * (cell[2] + f * cell[3]))
}

#[inline(always)]
fn cubic_at(cell: &[f64; 4], f: f64) -> f64 {
    cell[0] + f * (cell[1] + f * (cell[2] + f * cell[3]))
}

fn table_lookup(table: &SectionTable) -> Lookup {
    let (rows, nodes) = (table.rows(), nodes());
    let reynolds: Vec<f64> = rows.iter().map(|row| row.reynolds).collect();
    let pair = |row: &Row| {
        let (lift, drag) = (row.lift.clone(), row.drag.clone());
        incidence_cells(&nodes, move |alpha| [lift.at(alpha), drag.at(alpha)])
    };
    let moment = |row: &Row| {
        let curve = row.moment.clone()?;
        let both = incidence_cells(&nodes, move |alpha| [curve.at(alpha), (0.0, 0.0)]);
        Some(both.map(|cell| cell.map(|coefficients| coefficients.to_array()[0])))
    };
    Lookup::Incidence {
        rows: RowScale::new(&reynolds),
        cells: rows.iter().flat_map(pair).collect(),
        moment: rows.iter().filter_map(moment).flatten().collect(),
    }
}

/// An end of a cell: incidence, and how much of it a cell takes there.
#[derive(Debug, Clone, Copy)]
struct Node {
    alpha_rad: f64,
    alpha_per_cell: f64,
}

/// The ends of all cells of incidence.
fn nodes() -> Vec<Node> {
    let width = 2.0 / INCIDENCE_CELLS as f64;
    let node = |k: usize| {
        let stand_in = k as f64 * width - 1.0;
        let alpha_rad = match k {
            0 => -FRAC_PI_2,
            INCIDENCE_CELLS => FRAC_PI_2,
            _ => stand_in.signum() * stand_in.abs().atan2(1.0 - stand_in.abs()),
        };
        Node { alpha_rad, alpha_per_cell: (1.0 + (2.0 * alpha_rad).sin().abs()) * width }
    };
    (0..=INCIDENCE_CELLS).map(node).collect()
}

/// Cubic pieces over the stand-in of two curves, each given with its slope per radian.
fn incidence_cells(
    nodes: &[Node],
    curves: impl Fn(f64) -> [(f64, f64); 2],
) -> impl Iterator<Item = [f64x2; 4]> {
    let end = move |node: &Node| {
        curves(node.alpha_rad).map(|(value, slope)| (value, slope * node.alpha_per_cell))
    };
    let ends: Vec<[(f64, f64); 2]> = nodes.iter().map(end).collect();
    let [first, second] = ends[INCIDENCE_CELLS];
    // A place on the upper end may count as the start of a cell after the last.
    let last = [f64x2::new([first.0, second.0]), f64x2::ZERO, f64x2::ZERO, f64x2::ZERO];
    (0..INCIDENCE_CELLS)
        .map(move |k| {
            let [first, second] =
                [0, 1].map(|curve| hermite_cubic(ends[k][curve], ends[k + 1][curve]));
            [0, 1, 2, 3].map(|power| f64x2::new([first[power], second[power]]))
        })
        .chain([last])
}

fn cylinder_cells() -> Vec<[f64; 4]> {
    let [low, high] = CYLINDER_LN_REYNOLDS;
    let width = (high - low) / CYLINDER_CELLS as f64;
    let drag = |ln_reynolds: f64| cylinder_drag(ln_reynolds.exp());
    let node = |k: usize| {
        let ln_reynolds = low + k as f64 * width;
        // A central difference: its error, of order (1e-3)², is far below a cell's own.
        let slope = (drag(ln_reynolds + 1e-4) - drag(ln_reynolds - 1e-4)) / 2e-4;
        (drag(ln_reynolds), slope * width)
    };
    let nodes: Vec<_> = (0..=CYLINDER_CELLS).map(node).collect();
    nodes.windows(2).map(|ends| hermite_cubic(ends[0], ends[1])).collect()
}
