use std::f64::consts::TAU;

use crate::{GaitError, Phase, periodic_second_derivatives};

/// How a table runs between its rows.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Interpolation {
    /// Straight lines; accelerations are impulses, so joint loads refuse it.
    Linear,
    /// The periodic cubic spline.
    #[default]
    Cubic,
    /// Each row stands until the next; only what follows commands as well as it can flies it.
    Hold,
}

impl Interpolation {
    /// Whether angles or rates jump at the rows.
    pub fn jumps(self) -> bool {
        self != Interpolation::Cubic
    }
}

/// A repeating table of joint angles in equal steps.
#[derive(Debug, Clone, PartialEq)]
pub struct GaitTable {
    step_s: f64,
    n_rows: usize,
    n_axes: usize,
    interpolation: Interpolation,
    has_heading: bool,
    has_elevation: bool,
    /// Rows × columns: yaw axes, pitch axes, then heading and elevation of the head if given.
    values: Vec<f64>,
    /// The same of second derivatives times step²/6.
    bends: Vec<f64>,
}

/// Value and derivatives of one row of columns.
pub(crate) struct RowMotion<'a> {
    pub(crate) angles: &'a mut [f64],
    pub(crate) rates: &'a mut [f64],
    pub(crate) accelerations: &'a mut [f64],
}

impl GaitTable {
    /// A table from its columns, each one period long, the first row not repeated.
    ///
    /// - `axes_rad`: yaw axes from the head, then pitch axes from the head; shape (axes, rows)
    /// - `head_heading_rad`, `head_elevation_rad`: attitude of the head along the body's axis
    ///
    /// # Errors
    ///
    /// [`GaitError`] for fewer than two rows, columns of different lengths or unusable numbers.
    pub fn new(
        step_s: f64,
        axes_rad: Vec<Vec<f64>>,
        head_heading_rad: Option<Vec<f64>>,
        head_elevation_rad: Option<Vec<f64>>,
        interpolation: Interpolation,
    ) -> Result<Self, GaitError> {
        if !(step_s.is_finite() && step_s > 0.0) {
            return Err(GaitError::Unusable { quantity: "table step in s", value: step_s });
        }
        let n_axes = axes_rad.len();
        let (has_heading, has_elevation) =
            (head_heading_rad.is_some(), head_elevation_rad.is_some());
        let columns: Vec<Vec<f64>> =
            axes_rad.into_iter().chain(head_heading_rad).chain(head_elevation_rad).collect();
        let n_rows = columns.first().map_or(0, Vec::len);
        if n_rows < 2 {
            return Err(GaitError::TooFewRows { rows: n_rows });
        }
        if let Some(short) = columns.iter().find(|column| column.len() != n_rows) {
            return Err(GaitError::TooFewRows { rows: short.len() });
        }
        if let Some(&value) = columns.iter().flatten().find(|value| !value.is_finite()) {
            return Err(GaitError::Unusable { quantity: "table angle", value });
        }
        Ok(Self {
            step_s,
            n_rows,
            n_axes,
            interpolation,
            has_heading,
            has_elevation,
            values: by_rows(&columns),
            bends: by_rows(&bends(&columns, interpolation)),
        })
    }

    /// Rows times step, s.
    pub fn period_s(&self) -> f64 {
        self.step_s * self.n_rows as f64
    }

    /// Joint axes it has columns for.
    pub fn n_axes(&self) -> usize {
        self.n_axes
    }

    /// How it runs between its rows.
    pub fn interpolation(&self) -> Interpolation {
        self.interpolation
    }

    /// The same rows, run through in another way.
    pub fn running(&self, interpolation: Interpolation) -> Self {
        let columns: Vec<Vec<f64>> = (0..self.n_columns())
            .map(|column| {
                self.values.iter().skip(column).step_by(self.n_columns()).copied().collect()
            })
            .collect();
        Self { interpolation, bends: by_rows(&bends(&columns, interpolation)), ..self.clone() }
    }

    pub(crate) fn n_rows(&self) -> usize {
        self.n_rows
    }

    pub(crate) fn n_columns(&self) -> usize {
        self.n_axes + usize::from(self.has_heading) + usize::from(self.has_elevation)
    }

    /// Columns of the head's heading and elevation.
    pub(crate) fn head_columns(&self) -> [Option<usize>; 2] {
        let heading = self.has_heading.then_some(self.n_axes);
        let elevation = self.has_elevation.then_some(self.n_axes + usize::from(self.has_heading));
        [heading, elevation]
    }

    /// Rows passed at a phase, as a real number.
    pub(crate) fn rows_at(&self, angle_rad: f64) -> f64 {
        angle_rad / TAU * self.n_rows as f64
    }

    /// Phase at which a number of rows is passed, rad.
    pub(crate) fn angle_at_rows(&self, rows: f64) -> f64 {
        rows * TAU / self.n_rows as f64
    }

    /// Fills all columns at a phase.
    ///
    /// - `phase`: less the gait's phase offset
    /// - `piece_angle_rad`: a phase in the same step, which decides at the rows of a linear table
    pub(crate) fn fill(&self, phase: Phase, piece_angle_rad: f64, out: RowMotion<'_>) {
        let place = self.rows_at(phase.angle_rad);
        let row = match self.interpolation {
            Interpolation::Cubic => place.floor(),
            Interpolation::Linear | Interpolation::Hold => self.rows_at(piece_angle_rad).floor(),
        };
        let f = place - row;
        let rows_per_rad = self.n_rows as f64 / TAU;
        let rate = phase.rate_rad_s * rows_per_rad;
        let acceleration = phase.acceleration_rad_s2 * rows_per_rad;
        let columns = self.n_columns();
        let start = row.rem_euclid(self.n_rows as f64) as usize % self.n_rows;
        let holds = self.interpolation == Interpolation::Hold;
        let end = if holds { start } else { (start + 1) % self.n_rows };
        let g = 1.0 - f;
        for column in 0..columns {
            let [a, b] = [start, end].map(|row| self.values[row * columns + column]);
            let [bend_a, bend_b] = [start, end].map(|row| self.bends[row * columns + column]);
            let slope = b - a + (1.0 - 3.0 * g * g) * bend_a + (3.0 * f * f - 1.0) * bend_b;
            let second = 6.0 * (g * bend_a + f * bend_b);
            out.angles[column] =
                g * a + f * b + (g * g * g - g) * bend_a + (f * f * f - f) * bend_b;
            out.rates[column] = slope * rate;
            out.accelerations[column] = slope * acceleration + second * rate * rate;
        }
    }
}

/// Second derivatives of columns, times step²/6.
fn bends(columns: &[Vec<f64>], interpolation: Interpolation) -> Vec<Vec<f64>> {
    let of_column = |column: &Vec<f64>| match interpolation {
        Interpolation::Cubic => periodic_second_derivatives(column),
        Interpolation::Linear | Interpolation::Hold => vec![0.0; column.len()],
    };
    columns.iter().map(of_column).collect()
}

fn by_rows(columns: &[Vec<f64>]) -> Vec<f64> {
    let n_rows = columns.first().map_or(0, Vec::len);
    (0..n_rows).flat_map(|row| columns.iter().map(move |column| column[row])).collect()
}
