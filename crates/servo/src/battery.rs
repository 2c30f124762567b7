//! Batteries as makers give them, and their regulators.
//!
//! Cells are alike, and their resistance holds at any charge, heat and age.

use crate::ServoError;
use crate::figures::Figures;

/// A lithium-polymer cell's voltage when empty: where chargers and speed controllers cut off, V
/// (the trade's usual 3.0 to 3.5, from memory).
const CUT_OFF_V: f64 = 3.3;

/// The same when full, V (makers' charging voltage).
const FULL_V: f64 = 4.2;

/// A battery's figures.
#[derive(Debug, Clone, PartialEq)]
pub struct Battery {
    /// In series.
    pub cells: u32,
    /// Charge when full, C.
    pub capacity_coulomb: f64,
    /// Of one cell, Ω.
    pub cell_resistance_ohm: f64,
    /// Of one cell, without load.
    pub cell_voltage: CellVoltage,
    /// Most that it may give, A.
    pub current_limit_a: Option<f64>,
    /// At release, 0 empty to 1 full.
    pub charge: f64,
    /// Between battery and servos.
    pub regulator: Option<Regulator>,
    /// What everything but the servos draws, W.
    pub electronics_w: f64,
}

/// A cell's voltage without load, over its charge.
#[derive(Debug, Clone, PartialEq)]
pub enum CellVoltage {
    /// A straight line from empty to full, V.
    Linear {
        /// At charge 0.
        empty_v: f64,
        /// At charge 1.
        full_v: f64,
    },
    /// Charge and volts of some points, straight between them.
    Curve(Vec<[f64; 2]>),
}

impl Default for CellVoltage {
    fn default() -> Self {
        CellVoltage::Linear { empty_v: CUT_OFF_V, full_v: FULL_V }
    }
}

/// Holds the servos' voltage.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Regulator {
    /// What it holds, V.
    pub volts: f64,
    /// Most that it may give, A.
    pub current_limit_a: f64,
    /// Power out over power in.
    pub efficiency: f64,
}

impl Battery {
    /// Refuses figures that no battery has.
    ///
    /// # Errors
    ///
    /// [`ServoError::Figure`] or [`ServoError::Curve`], the first that is met.
    pub fn check(&self) -> Result<(), ServoError> {
        let figures = Figures { of: "battery" };
        figures.within("cells", f64::from(self.cells), [1.0, 1000.0])?;
        figures.within("capacity_coulomb", self.capacity_coulomb, [1e-6, 3.6e6])?;
        figures.within("cell_resistance_ohm", self.cell_resistance_ohm, [0.0, 100.0])?;
        figures.within_where_given("current_limit_a", self.current_limit_a, [1e-6, 1e4])?;
        figures.within("charge", self.charge, [0.0, 1.0])?;
        figures.within("electronics_w", self.electronics_w, [0.0, 1e4])?;
        if let Some(Regulator { volts, current_limit_a, efficiency }) = self.regulator {
            figures.within("regulator.volts", volts, [1e-3, 1000.0])?;
            figures.within("regulator.current_limit_a", current_limit_a, [1e-6, 1e4])?;
            figures.within("regulator.efficiency", efficiency, [1e-6, 1.0])?;
        }
        self.cell_voltage.check(&figures)
    }

    /// Of all cells, Ω.
    pub fn resistance_ohm(&self) -> f64 {
        f64::from(self.cells) * self.cell_resistance_ohm
    }

    /// Of all cells without load, V.
    ///
    /// - `charge`: 0 empty to 1 full, held to that
    pub fn open_circuit_v(&self, charge: f64) -> f64 {
        f64::from(self.cells) * self.cell_voltage.volts(charge)
    }
}

impl CellVoltage {
    fn check(&self, figures: &Figures<'_>) -> Result<(), ServoError> {
        const CELL_V: [f64; 2] = [0.1, 10.0];
        let line;
        let points = match self {
            CellVoltage::Curve(points) => points,
            &CellVoltage::Linear { empty_v, full_v } => {
                line = vec![[0.0, empty_v], [1.0, full_v]];
                &line
            }
        };
        if points.first().is_none_or(|first| first[0] != 0.0) {
            return Err(ServoError::Curve { point: 1 });
        }
        for [_, volts] in points {
            figures.within("cell voltage", *volts, CELL_V)?;
        }
        let rises = |pair: &[[f64; 2]]| pair[1][0] > pair[0][0] && pair[1][1] >= pair[0][1];
        if let Some(after) = points.windows(2).position(|pair| !rises(pair)) {
            return Err(ServoError::Curve { point: after + 2 });
        }
        match points.last() {
            Some([charge, _]) if *charge == 1.0 => Ok(()),
            _ => Err(ServoError::Curve { point: points.len() }),
        }
    }

    /// Of one cell, V.
    ///
    /// - `charge`: held to 0…1
    pub fn volts(&self, charge: f64) -> f64 {
        let charge = charge.clamp(0.0, 1.0);
        match self {
            CellVoltage::Linear { empty_v, full_v } => empty_v + charge * (full_v - empty_v),
            CellVoltage::Curve(points) => {
                let above = points.partition_point(|point| point[0] <= charge);
                let above = above.clamp(1, points.len() - 1);
                let ([c0, v0], [c1, v1]) = (points[above - 1], points[above]);
                v0 + (charge - c0) / (c1 - c0) * (v1 - v0)
            }
        }
    }
}

#[cfg(test)]
pub(crate) mod tests {
    use approx::assert_relative_eq;

    use super::*;

    pub(crate) fn battery() -> Battery {
        Battery {
            cells: 2,
            capacity_coulomb: 1620.0,
            cell_resistance_ohm: 0.015,
            cell_voltage: CellVoltage::default(),
            current_limit_a: Some(20.0),
            charge: 1.0,
            regulator: None,
            electronics_w: 1.0,
        }
    }

    /// A cell reads 4.2 V full, 3.3 V at the cut-off, and its nominal 3.7 V (makers' figure) on
    /// the way: 0.444 of the charge on our straight line.
    #[test]
    fn published_cell_voltages() {
        let cell = CellVoltage::default();
        assert_relative_eq!(cell.volts(1.0), 4.2, max_relative = 1e-14);
        assert_relative_eq!(cell.volts(0.0), 3.3, max_relative = 1e-14);
        assert_relative_eq!(cell.volts(4.0 / 9.0), 3.7, max_relative = 1e-14);
        assert_relative_eq!(battery().open_circuit_v(1.0), 8.4, max_relative = 1e-14);
        assert_eq!(cell.volts(-1.0), cell.volts(0.0));
    }

    /// A curve is met at its points and straight between them.
    #[test]
    fn analytic_curve() {
        let curve = CellVoltage::Curve(vec![[0.0, 3.3], [0.1, 3.6], [0.9, 4.0], [1.0, 4.2]]);
        for (charge, volts) in [(0.0, 3.3), (0.1, 3.6), (0.5, 3.8), (0.95, 4.1), (1.0, 4.2)] {
            assert_relative_eq!(curve.volts(charge), volts, max_relative = 1e-14);
        }
    }

    /// Each wrong figure is refused by name.
    #[test]
    fn twin_impossible_figures_are_refused() {
        assert_eq!(battery().check(), Ok(()));
        let refused = |battery: Battery| battery.check().unwrap_err().to_string();
        assert!(refused(Battery { charge: 1.2, ..battery() }).contains("charge is 1.2"));
        assert!(refused(Battery { cells: 0, ..battery() }).contains("cells is 0"));
        let regulator = Some(Regulator { volts: 6.0, current_limit_a: 5.0, efficiency: 0.0 });
        let found = refused(Battery { regulator, ..battery() });
        assert!(found.contains("regulator.efficiency is 0"), "{found}");
        for (points, wrong) in [
            (vec![], 1),
            (vec![[0.1, 3.3], [1.0, 4.2]], 1),
            (vec![[0.0, 3.3]], 1),
            (vec![[0.0, 3.3], [0.0, 3.4], [1.0, 4.2]], 2),
            (vec![[0.0, 3.3], [0.5, 3.2], [1.0, 4.2]], 2),
            (vec![[0.0, 3.3], [0.9, 4.2]], 2),
            (vec![[0.0, 3.3], [f64::NAN, 3.4], [1.0, 4.2]], 2),
        ] {
            let cell_voltage = CellVoltage::Curve(points);
            let found = Battery { cell_voltage, ..battery() }.check();
            assert_eq!(found, Err(ServoError::Curve { point: wrong }));
        }
    }
}
