//! Sections made ready for the inner loop: looked up without arctangent.

use std::f64::consts::FRAC_PI_2;

use crate::pchip::hermite_cubic;
use crate::section::{Row, cylinder_drag, plate};
use crate::{Section, SectionKind, SectionTable};

/// Cells over the stand-in's range −1…1. Each reproduces values and slopes at its ends; in between
/// the `domed` table is met within 2e-5.
const INCIDENCE_CELLS: usize = 1024;

/// Natural logarithms of the Reynolds numbers between which the cylinder's drag is tabulated; the
/// load outside is negligible below and unmeasured above.
const CYLINDER_LN_REYNOLDS: [f64; 2] = [-7.0, 18.5];
const CYLINDER_CELLS: usize = 1024;

/// A section's coefficients as cubic pieces over a cheap monotone stand-in for incidence,
///
/// t = −u_z/(|u_y| + |u_z|) = sin α/(cos α + |sin α|),
///
/// so that no trigonometry is left in the inner loop. Slopes in α stay continuous, as
/// dα/dt = (cos α + |sin α|)² is, and t = 0 is an end of two cells.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedSection {
    table: Lookup,
    lever: f64,
}

#[derive(Debug, Clone, PartialEq)]
enum Lookup {
    Incidence {
        /// Logarithms of the rows' Reynolds numbers with the inverse of the step to the next.
        rows: Vec<(f64, f64)>,
        /// Lift and drag side by side, constant term first: rows × cells.
        cells: Vec<[[f64; 2]; 4]>,
        /// Tabulated moment: rows × cells, or empty.
        moment: Vec<[f64; 4]>,
    },
    Reynolds {
        drag: Vec<[f64; 4]>,
    },
}

impl PreparedSection {
    /// Tabulates a section.
    pub fn new(section: &Section) -> Self {
        let table = match &section.kind {
            SectionKind::Plate => Lookup::Incidence {
                rows: vec![(0.0, 0.0)],
                cells: incidence_cells(plate),
                moment: Vec::new(),
            },
            SectionKind::Round => Lookup::Reynolds { drag: cylinder_cells() },
            SectionKind::Table(table) => table_lookup(table),
        };
        Self { table, lever: section.lever() }
    }

    /// ½ − pressure centre, or 0 where the moment is tabulated or none.
    pub fn lever(&self) -> f64 {
        self.lever
    }

    /// Whether coefficients depend on the Reynolds number.
    pub fn needs_reynolds(&self) -> bool {
        match &self.table {
            Lookup::Incidence { rows, .. } => rows.len() > 1,
            Lookup::Reynolds { .. } => true,
        }
    }

    /// C_l, C_d and the tabulated C_m (0 where none is).
    ///
    /// - `stand_in`: t, from −1 to 1
    /// - `ln_reynolds`: natural logarithm of the Reynolds number on the chord
    #[inline]
    pub fn at(&self, stand_in: f64, ln_reynolds: f64) -> [f64; 3] {
        match &self.table {
            Lookup::Incidence { rows, cells, moment } => {
                let place = (stand_in + 1.0) * (INCIDENCE_CELLS / 2) as f64;
                let cell = (place as i32).clamp(0, INCIDENCE_CELLS as i32 - 1) as usize;
                let f = place - cell as f64;
                let (row, weight) = row_of(rows, ln_reynolds);
                let first = row * INCIDENCE_CELLS + cell;
                let [mut lift, mut drag] = pair_at(&cells[first], f);
                if rows.len() > 1 {
                    let [next_lift, next_drag] = pair_at(&cells[first + INCIDENCE_CELLS], f);
                    lift += weight * (next_lift - lift);
                    drag += weight * (next_drag - drag);
                }
                let mut about_middle = 0.0;
                if !moment.is_empty() {
                    about_middle = cubic_at(&moment[first], f);
                    if rows.len() > 1 {
                        let next = cubic_at(&moment[first + INCIDENCE_CELLS], f);
                        about_middle += weight * (next - about_middle);
                    }
                }
                [lift, drag, about_middle]
            }
            Lookup::Reynolds { drag } => {
                let [low, high] = CYLINDER_LN_REYNOLDS;
                let place =
                    (ln_reynolds.clamp(low, high) - low) * (CYLINDER_CELLS as f64 / (high - low));
                let cell = (place as i32).clamp(0, CYLINDER_CELLS as i32 - 1) as usize;
                [0.0, cubic_at(&drag[cell], place - cell as f64), 0.0]
            }
        }
    }
}

/// Row below a Reynolds number, at most the last but one, and the weight of the row after it.
#[inline]
fn row_of(rows: &[(f64, f64)], ln_reynolds: f64) -> (usize, f64) {
    if rows.len() == 1 {
        return (0, 0.0);
    }
    let place: f64 = rows[..rows.len() - 1]
        .iter()
        .map(|&(start, per_step)| ((ln_reynolds - start) * per_step).clamp(0.0, 1.0))
        .sum();
    let row = (place as i32).clamp(0, rows.len() as i32 - 2) as usize;
    (row, place - row as f64)
}

#[inline]
fn pair_at(cell: &[[f64; 2]; 4], f: f64) -> [f64; 2] {
    [0, 1].map(|k| cell[0][k] + f * (cell[1][k] + f * (cell[2][k] + f * cell[3][k])))
}

#[inline]
fn cubic_at(cell: &[f64; 4], f: f64) -> f64 {
    cell[0] + f * (cell[1] + f * (cell[2] + f * cell[3]))
}

fn table_lookup(table: &SectionTable) -> Lookup {
    let rows = table.rows();
    let starts: Vec<f64> = rows.iter().map(|row| row.reynolds.ln()).collect();
    let per_step = |k: usize| starts.get(k + 1).map_or(0.0, |next| 1.0 / (next - starts[k]));
    let pair = |row: &Row| incidence_cells(|alpha| [row.lift.at(alpha), row.drag.at(alpha)]);
    let moment = |row: &Row| {
        let curve = row.moment.as_ref()?;
        let both = incidence_cells(|alpha| [curve.at(alpha), (0.0, 0.0)]);
        Some(both.into_iter().map(|cell| cell.map(|coefficients| coefficients[0])))
    };
    Lookup::Incidence {
        rows: (0..rows.len()).map(|k| (starts[k], per_step(k))).collect(),
        cells: rows.iter().flat_map(pair).collect(),
        moment: rows.iter().filter_map(moment).flatten().collect(),
    }
}

/// Cubic pieces over the stand-in of two curves, each given with its slope per radian.
fn incidence_cells(curves: impl Fn(f64) -> [(f64, f64); 2]) -> Vec<[[f64; 2]; 4]> {
    let width = 2.0 / INCIDENCE_CELLS as f64;
    let node = |k: usize| {
        let stand_in = k as f64 * width - 1.0;
        let alpha_rad = match k {
            0 => -FRAC_PI_2,
            INCIDENCE_CELLS => FRAC_PI_2,
            _ => stand_in.signum() * stand_in.abs().atan2(1.0 - stand_in.abs()),
        };
        let alpha_per_cell = (1.0 + (2.0 * alpha_rad).sin().abs()) * width;
        curves(alpha_rad).map(|(value, slope)| (value, slope * alpha_per_cell))
    };
    let nodes: Vec<_> = (0..=INCIDENCE_CELLS).map(node).collect();
    nodes
        .windows(2)
        .map(|ends| {
            let [first, second] = [0, 1].map(|k| hermite_cubic(ends[0][k], ends[1][k]));
            [0, 1, 2, 3].map(|power| [first[power], second[power]])
        })
        .collect()
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
