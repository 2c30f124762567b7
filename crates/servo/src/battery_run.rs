//! A battery on its way through a history.

use crate::worst::{Worst, keep, miss};
use crate::{Battery, BatteryBudget, Collapse, Discharge, Fed, Load, Miss, MissKind, When};

/// A battery on its way.
pub(crate) struct BatteryRun<'a> {
    battery: &'a Battery,
    discharge: Discharge<'a>,
    /// Of the drop it is in: seconds since the instant before, and the load.
    loads: Vec<(f64, Load)>,
    least_voltage_v: f64,
    least_servo_voltage_v: f64,
    energy_j: f64,
    current: Option<Worst>,
    regulator: Option<Worst>,
    empty: Option<Worst>,
    collapse: Option<(Collapse, When)>,
}

impl<'a> BatteryRun<'a> {
    pub(crate) fn new(battery: &'a Battery) -> Self {
        Self {
            battery,
            discharge: Discharge::new(battery, battery.charge),
            loads: Vec::new(),
            least_voltage_v: f64::INFINITY,
            least_servo_voltage_v: f64::INFINITY,
            energy_j: 0.0,
            current: None,
            regulator: None,
            empty: None,
            collapse: None,
        }
    }

    pub(crate) fn start(&mut self) {
        self.discharge = Discharge::new(self.battery, self.battery.charge);
        self.loads.clear();
    }

    /// Voltage at the servos; absent where it collapses.
    pub(crate) fn go_on(&mut self, load: Load, seconds: f64, when: When) -> Option<f64> {
        self.loads.push((seconds, load));
        let fed = match self.discharge.go_on(load, seconds) {
            Ok(fed) => fed,
            Err(collapse) => {
                self.collapse.get_or_insert((collapse, when));
                return None;
            }
        };
        self.keep_worst(fed, when);
        Some(fed.servo_voltage_v)
    }

    fn keep_worst(&mut self, fed: Fed, when: When) {
        self.least_voltage_v = self.least_voltage_v.min(fed.voltage_v);
        self.least_servo_voltage_v = self.least_servo_voltage_v.min(fed.servo_voltage_v);
        let at = |figure: f64, limit: f64| Worst { figure, limit, rank: figure, when };
        let limit_a = self.battery.current_limit_a.unwrap_or(f64::INFINITY);
        keep(&mut self.current, at(fed.current_a, limit_a));
        if let Some(regulator) = self.battery.regulator {
            keep(&mut self.regulator, at(fed.servo_current_a, regulator.current_limit_a));
        }
        if self.discharge.charge() < 0.0 {
            let held_coulomb = self.battery.charge * self.battery.capacity_coulomb;
            keep(&mut self.empty, at(self.discharge.coulomb(), held_coulomb));
        }
    }

    pub(crate) fn end(&mut self) {
        self.energy_j += self.discharge.energy_j();
    }

    pub(crate) fn collapsed(&self) -> bool {
        self.collapse.is_some()
    }

    pub(crate) fn budget(&self, drops: u32) -> BatteryBudget {
        let known = |figure: f64| (!self.collapsed()).then_some(figure);
        let peak = |worst: Option<Worst>| worst.map(|worst| worst.figure).and_then(known);
        BatteryBudget {
            peak_current_a: peak(self.current),
            least_voltage_v: known(self.least_voltage_v),
            least_servo_voltage_v: known(self.least_servo_voltage_v),
            energy_j_per_drop: known(self.energy_j / f64::from(drops)),
            drops_per_charge: self.battery.repeats_per_charge(&self.loads).and_then(known),
            regulator_peak_current_a: peak(self.regulator),
        }
    }

    pub(crate) fn misses(&self) -> Vec<Miss> {
        let over = |kind: MissKind, worst: Option<Worst>| {
            worst.filter(|worst| worst.figure > worst.limit).map(|worst| miss(kind, worst))
        };
        let collapse = self.collapse.map(|(Collapse { asked_w, most_w }, when)| {
            let worst = Worst { figure: asked_w, limit: most_w, rank: 0.0, when };
            miss(MissKind::BatteryCollapse, worst)
        });
        let all = [
            collapse,
            over(MissKind::BatteryCurrent, self.current),
            over(MissKind::RegulatorCurrent, self.regulator),
            over(MissKind::BatteryEmpty, self.empty),
        ];
        all.into_iter().flatten().collect()
    }
}
