use std::f64::consts::FRAC_PI_2;
use std::sync::{Arc, LazyLock, OnceLock};

use crate::prepared::PreparedSection;
use crate::{AeroError, Parity, Pchip, domed};

/// Drag coefficient of a long flat plate broadside on (Hoerner, *Fluid-Dynamic Drag*, 1965).
const PLATE_BROADSIDE_DRAG: f64 = 1.98;
/// Friction and edge drag of the plate at any incidence, added to the pressure drag.
const PLATE_EDGE_DRAG: f64 = 0.02;
/// How far the ends of a table may miss ±90° or zero lift there: rounding in a file, no more.
const END_SLACK: f64 = 1e-9;

/// Measured or computed coefficients at one Reynolds number.
#[derive(Debug, Clone, PartialEq)]
pub struct Polar {
    /// On the chord.
    pub reynolds: f64,
    /// Rising, from −π/2 to π/2.
    pub alpha_rad: Vec<f64>,
    /// Lift, same length.
    pub lift: Vec<f64>,
    /// Drag, same length.
    pub drag: Vec<f64>,
    /// Moment about mid-chord, leading side up positive, same length.
    pub moment: Option<Vec<f64>>,
}

/// Coefficients over incidence at one or more Reynolds numbers.
///
/// Smooth in incidence; linear in the Reynolds number's logarithm, held constant outside.
#[derive(Debug, Clone, PartialEq)]
pub struct SectionTable {
    rows: Vec<Row>,
    has_moment: bool,
}

#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Row {
    pub(crate) reynolds: f64,
    pub(crate) lift: Pchip,
    pub(crate) drag: Pchip,
    pub(crate) moment: Option<Pchip>,
}

/// What the coefficients come from.
#[derive(Debug, Clone, PartialEq)]
pub enum SectionKind {
    /// A separated flat plate.
    Plate,
    /// A circular cylinder.
    Round,
    /// Rows over incidence and Reynolds number.
    Table(SectionTable),
}

/// Tables for the inner loop, made when first asked for and shared by copies.
type SharedTables = Arc<OnceLock<Arc<PreparedSection>>>;

/// A cross-section of the body as the air meets it.
///
/// Copies share the tables that the inner loop reads, which are made when first asked for.
#[derive(Debug, Clone)]
pub struct Section {
    /// As files and reports call it.
    pub name: String,
    kind: SectionKind,
    /// Pressure centre at small incidence, fraction of the chord from the leading edge. Not used
    /// by a round section, whose pressure centre is always mid-chord, nor beside a tabulated moment.
    pub pressure_centre: f64,
    /// Incidences between which the coefficients were measured, rad; absent where all or none were.
    pub measured_rad: Option<[f64; 2]>,
    prepared: SharedTables,
}

impl PartialEq for Section {
    fn eq(&self, other: &Self) -> bool {
        self.name == other.name
            && self.kind == other.kind
            && self.pressure_centre == other.pressure_centre
            && self.measured_rad == other.measured_rad
    }
}

/// Lift, drag and moment of a section at one incidence.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Coefficients {
    /// C_l.
    pub lift: f64,
    /// C_d.
    pub drag: f64,
    /// C_m about mid-chord, leading side up positive.
    pub moment: f64,
}

impl SectionTable {
    /// Checks and orders polars by Reynolds number.
    ///
    /// # Errors
    ///
    /// [`AeroError`] where a polar stops short of ±90°, isn't sorted, lifts broadside on, or the
    /// polars don't fit each other.
    pub fn new(table: &str, mut polars: Vec<Polar>) -> Result<Self, AeroError> {
        let unsound = |why| AeroError::TableUnsound { table: table.to_owned(), why };
        polars.sort_by(|a, b| a.reynolds.total_cmp(&b.reynolds));
        let has_moment = polars.first().ok_or(unsound("it has no rows"))?.moment.is_some();
        if polars.iter().any(|polar| polar.moment.is_some() != has_moment) {
            return Err(unsound("only some of its polars have a moment"));
        }
        if polars.windows(2).any(|pair| pair[0].reynolds == pair[1].reynolds) {
            return Err(unsound("a Reynolds number appears twice"));
        }
        let rows =
            polars.into_iter().map(|polar| Row::new(table, polar)).collect::<Result<_, _>>()?;
        Ok(Self { rows, has_moment })
    }

    /// Whether the moment is tabulated rather than made from the pressure centre.
    pub fn has_moment(&self) -> bool {
        self.has_moment
    }

    /// Lowest and highest Reynolds number.
    pub fn reynolds_range(&self) -> [f64; 2] {
        [self.rows[0].reynolds, self.rows[self.rows.len() - 1].reynolds]
    }

    pub(crate) fn rows(&self) -> &[Row] {
        &self.rows
    }
}

impl Row {
    fn new(table: &str, polar: Polar) -> Result<Self, AeroError> {
        check_polar(table, &polar)?;
        let curve = |values: Vec<f64>, parity| Pchip::new(polar.alpha_rad.clone(), values, parity);
        Ok(Self {
            reynolds: polar.reynolds,
            lift: curve(polar.lift, Parity::Odd),
            drag: curve(polar.drag, Parity::Even),
            moment: polar.moment.map(|values| curve(values, Parity::Odd)),
        })
    }
}

fn check_polar(table: &str, polar: &Polar) -> Result<(), AeroError> {
    let unsound = |why| AeroError::TableUnsound { table: table.to_owned(), why };
    let n = polar.alpha_rad.len();
    let columns =
        [Some(&polar.alpha_rad), Some(&polar.lift), Some(&polar.drag), polar.moment.as_ref()];
    if columns.iter().flatten().any(|column| column.len() != n) {
        return Err(unsound("its columns have different lengths"));
    }
    if columns.iter().flatten().any(|column| column.iter().any(|value| !value.is_finite())) {
        return Err(unsound("a value isn't finite"));
    }
    if !(polar.reynolds.is_finite() && polar.reynolds > 0.0) {
        return Err(unsound("a Reynolds number isn't above 0"));
    }
    let (table, reynolds) = (table.to_owned(), polar.reynolds);
    if let Some(k) = (1..n).find(|&k| polar.alpha_rad[k] <= polar.alpha_rad[k - 1]) {
        let alpha_deg = polar.alpha_rad[k].to_degrees();
        return Err(AeroError::TableUnsorted { table, reynolds, alpha_deg });
    }
    let ends = [polar.alpha_rad.first().copied(), polar.alpha_rad.last().copied()];
    let [first_rad, last_rad] = ends.map(|end| end.unwrap_or(0.0));
    if (first_rad + FRAC_PI_2).abs() > END_SLACK || (last_rad - FRAC_PI_2).abs() > END_SLACK {
        let (first_deg, last_deg) = (first_rad.to_degrees(), last_rad.to_degrees());
        return Err(AeroError::TableTooShort { table, reynolds, first_deg, last_deg });
    }
    for (coefficient, values) in [("C_l", Some(&polar.lift)), ("C_m", polar.moment.as_ref())] {
        let Some(values) = values else { continue };
        for (alpha_deg, value) in [(-90.0, values[0]), (90.0, values[n - 1])] {
            if value.abs() > END_SLACK {
                return Err(AeroError::NotZeroBroadside {
                    table,
                    reynolds,
                    coefficient,
                    alpha_deg,
                    value,
                });
            }
        }
    }
    Ok(())
}

impl Section {
    /// A separated flat plate.
    ///
    /// # Source
    ///
    /// Lindenburg, *Stall coefficients*, ECN-RX--01-004, 2001: normal force of a plate of infinite
    /// span; broadside drag after Hoerner, *Fluid-Dynamic Drag*, 1965.
    pub fn plate(pressure_centre: f64) -> Self {
        static PREPARED: LazyLock<SharedTables> = LazyLock::new(Arc::default);
        Self {
            name: "plate".into(),
            kind: SectionKind::Plate,
            pressure_centre,
            measured_rad: None,
            prepared: PREPARED.clone(),
        }
    }

    /// A circular cylinder: no lift, drag by Reynolds number.
    ///
    /// # Source
    ///
    /// Cheng, *Calculation of drag coefficient of a cylinder*, J. Hydraulic Engineering 139, 2013.
    pub fn round() -> Self {
        static PREPARED: LazyLock<SharedTables> = LazyLock::new(Arc::default);
        Self {
            name: "round".into(),
            kind: SectionKind::Round,
            pressure_centre: 0.5,
            measured_rad: None,
            prepared: PREPARED.clone(),
        }
    }

    /// The flattened, hollow-bellied section: measured from −10° to 60°, completed elsewhere.
    ///
    /// # Source
    ///
    /// Holden, Socha, Cardwell, Vlachos, J. Exp. Biol. 217:382–394, 2014; the completion is ours.
    pub fn domed(pressure_centre: f64) -> Self {
        static PREPARED: LazyLock<SharedTables> = LazyLock::new(Arc::default);
        let polar = |(row, reynolds): (usize, f64)| Polar {
            reynolds,
            alpha_rad: domed::ROWS.iter().map(|(alpha_deg, _)| alpha_deg.to_radians()).collect(),
            lift: domed::ROWS.iter().map(|(_, at)| at[row].0).collect(),
            drag: domed::ROWS.iter().map(|(_, at)| at[row].1).collect(),
            moment: None,
        };
        let polars = domed::REYNOLDS.into_iter().enumerate().map(polar).collect();
        let table = SectionTable::new("domed", polars).expect("the built-in table is sound");
        Self {
            name: "domed".into(),
            kind: SectionKind::Table(table),
            pressure_centre,
            measured_rad: Some(domed::MEASURED_DEG.map(f64::to_radians)),
            prepared: PREPARED.clone(),
        }
    }

    /// A section of one's own.
    ///
    /// - `pressure_centre`: not used beside a tabulated moment
    pub fn from_table(name: &str, table: SectionTable, pressure_centre: f64) -> Self {
        Self {
            name: name.to_owned(),
            kind: SectionKind::Table(table),
            pressure_centre,
            measured_rad: None,
            prepared: Arc::default(),
        }
    }

    /// What the coefficients come from.
    pub fn kind(&self) -> &SectionKind {
        &self.kind
    }

    /// The tables that the inner loop reads.
    pub fn prepared(&self) -> Arc<PreparedSection> {
        self.prepared.get_or_init(|| Arc::new(PreparedSection::new(&self.kind))).clone()
    }

    /// Reynolds numbers beyond which the coefficients are held constant, where there are several.
    pub fn reynolds_range(&self) -> Option<[f64; 2]> {
        match &self.kind {
            SectionKind::Table(table) if table.rows.len() > 1 => Some(table.reynolds_range()),
            _ => None,
        }
    }

    /// Coefficients at an incidence in −π/2…π/2, straight from the formula or the table.
    ///
    /// Flights use a [`crate::PreparedSection`] instead, which is faster.
    pub fn at(&self, alpha_rad: f64, reynolds: f64) -> Coefficients {
        let (lift, drag, tabulated) = match &self.kind {
            SectionKind::Plate => {
                let [lift, drag] = plate(alpha_rad);
                (lift.0, drag.0, None)
            }
            SectionKind::Round => (0.0, cylinder_drag(reynolds), None),
            SectionKind::Table(table) => table.at(alpha_rad, reynolds),
        };
        let normal = lift * alpha_rad.cos() + drag * alpha_rad.sin();
        let moment = tabulated.unwrap_or(self.lever() * alpha_rad.cos().powi(2) * normal);
        Coefficients { lift, drag, moment }
    }

    /// Whether the moment is tabulated rather than made from the pressure centre.
    pub fn has_moment(&self) -> bool {
        matches!(&self.kind, SectionKind::Table(table) if table.has_moment)
    }

    /// The pressure centre where it is used, and so is an assumption.
    pub fn assumed_pressure_centre(&self) -> Option<f64> {
        let unused = matches!(self.kind, SectionKind::Round) || self.has_moment();
        (!unused).then_some(self.pressure_centre)
    }

    /// Lever of the normal force ahead of mid-chord at small incidence, chords: ½ − x₀; it falls
    /// with cos²α to nothing broadside on. 0 where no lever is used.
    pub(crate) fn lever(&self) -> f64 {
        self.assumed_pressure_centre().map_or(0.0, |centre| 0.5 - centre)
    }
}

impl SectionTable {
    fn at(&self, alpha_rad: f64, reynolds: f64) -> (f64, f64, Option<f64>) {
        let last = self.rows.len() - 1;
        let above = self.rows.partition_point(|row| row.reynolds <= reynolds);
        let (low, high) = (above.saturating_sub(1), above.min(last));
        let (row, next) = (&self.rows[low], &self.rows[high]);
        let weight = if low == high {
            0.0
        } else {
            (reynolds / row.reynolds).ln() / (next.reynolds / row.reynolds).ln()
        };
        let blend = |a: &Pchip, b: &Pchip| {
            let (start, end) = (a.at(alpha_rad).0, b.at(alpha_rad).0);
            start + weight * (end - start)
        };
        let moment = row.moment.as_ref().zip(next.moment.as_ref()).map(|(a, b)| blend(a, b));
        (blend(&row.lift, &next.lift), blend(&row.drag, &next.drag), moment)
    }
}

/// Lift and drag of the plate, each with its slope per radian.
pub(crate) fn plate(alpha_rad: f64) -> [(f64, f64); 2] {
    let (sine, cosine) = (alpha_rad.abs().sin(), alpha_rad.cos());
    let below = 0.56 + 0.44 * sine;
    let normal = PLATE_BROADSIDE_DRAG * sine / below;
    let normal_slope = PLATE_BROADSIDE_DRAG * 0.56 * cosine / (below * below);
    let lift = (normal * cosine, normal_slope * cosine - normal * sine);
    let drag = (normal * sine + PLATE_EDGE_DRAG, normal_slope * sine + normal * cosine);
    // Lift is odd and drag even, so the slopes are even and odd.
    let sign = if alpha_rad < 0.0 { -1.0 } else { 1.0 };
    [(sign * lift.0, lift.1), (drag.0, sign * drag.1)]
}

/// Drag coefficient of a circular cylinder.
pub(crate) fn cylinder_drag(reynolds: f64) -> f64 {
    11.0 * reynolds.powf(-0.75)
        + 0.9 * (1.0 - (-1000.0 / reynolds).exp())
        + 1.2 * (1.0 - (-(reynolds / 4500.0).powf(0.7)).exp())
}
