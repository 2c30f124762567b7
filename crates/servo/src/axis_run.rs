//! An axis on its way through a history.

use crate::heat::mean_square;
use crate::worst::{Worst, keep, miss, times_over};
use crate::{AxisHistory, Endurance, Load, Miss, MissKind, Remedies, Servo, Supply, When, Winding};

/// What feeds the servos at an instant.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Share {
    /// Each at the voltage of its figures.
    OwnVoltage,
    /// All at this, V.
    Voltage(f64),
    /// The battery has collapsed.
    Nothing,
}

/// An axis on its way.
pub(crate) struct AxisRun<'a> {
    pub(crate) history: &'a AxisHistory,
    pub(crate) servo: Option<&'a Servo>,
    /// Rotor inertia in.
    pub(crate) torques_nm: Vec<f64>,
    pub(crate) peak_power_w: f64,
    pub(crate) energy_j: f64,
    /// Highest voltage so far.
    pub(crate) fed_v: f64,
    currents_a: Vec<f64>,
    air_k: f64,
    winding: Option<Winding>,
    /// Of the last instant.
    motor_w: f64,
    power_w: f64,
    least_margin: Option<Worst>,
    fastest: Option<Worst>,
    hottest: Option<Worst>,
    /// Factors that the servo would need; 0 where it passes.
    stronger: f64,
    faster: f64,
}

impl<'a> AxisRun<'a> {
    pub(crate) fn new(history: &'a AxisHistory, servo: Option<&'a Servo>, air_k: f64) -> Self {
        let torques_nm = history.servo_torques_nm(servo);
        let moments = torques_nm.iter().zip(&history.rate_rad_s);
        let currents_a = servo.map_or(Vec::new(), |servo| {
            moments.map(|(&torque, &rate)| servo.current_a(torque, rate)).collect()
        });
        Self {
            history,
            servo,
            torques_nm,
            peak_power_w: 0.0,
            energy_j: 0.0,
            fed_v: 0.0,
            currents_a,
            air_k,
            winding: servo.map(|servo| Winding::new(servo, air_k)),
            motor_w: 0.0,
            power_w: 0.0,
            least_margin: None,
            fastest: None,
            hottest: None,
            stronger: 0.0,
            faster: 0.0,
        }
    }

    /// Whether drops differ for it.
    pub(crate) fn warms(&self) -> bool {
        self.winding.is_some_and(|winding| winding.temperature_k().is_some())
    }

    /// Without current.
    pub(crate) fn rest(&mut self, seconds: f64) {
        if let Some(winding) = &mut self.winding {
            winding.go_on(0.0, seconds);
        }
    }

    /// To an instant, heating on the way.
    pub(crate) fn go_on(&mut self, idx: usize, seconds: f64, when: When) {
        let (Some(servo), Some(winding)) = (self.servo, &mut self.winding) else { return };
        if idx > 0 {
            let square_a2 = mean_square(self.currents_a[idx - 1], self.currents_a[idx]);
            winding.go_on(square_a2, seconds);
        }
        let (torque_nm, rate_rad_s) = (self.torques_nm[idx], self.history.rate_rad_s[idx]);
        self.motor_w = servo.motor_power_w(torque_nm, rate_rad_s, winding.resistance_ohm());
        if let (Endurance::Thermal { winding_limit_k, .. }, Some(now_k)) =
            (servo.endurance, winding.temperature_k())
        {
            let limit = winding_limit_k;
            keep(&mut self.hottest, Worst { figure: now_k, limit, rank: now_k, when });
        }
    }

    /// What all of them ask at the instant that they have come to.
    pub(crate) fn load_of(axes: &[Self]) -> Load {
        axes.iter().fold(Load::default(), |load, axis| Load {
            motors_w: load.motors_w + axis.motor_w,
            idle_a: load.idle_a + axis.servo.map_or(0.0, |servo| servo.idle_current_a),
        })
    }

    /// Margin, speed and power at the instant that it has come to.
    pub(crate) fn judge(
        &mut self,
        idx: usize,
        seconds: f64,
        when: When,
        share: Share,
        torque_factor: f64,
    ) {
        let (Some(servo), Some(winding)) = (self.servo, self.winding) else { return };
        let voltage_v = match share {
            Share::OwnVoltage => servo.at_voltage_v,
            Share::Voltage(voltage_v) => voltage_v,
            Share::Nothing => 0.0,
        };
        let before_w = if idx == 0 { 0.0 } else { self.power_w };
        self.power_w = self.motor_w + servo.idle_current_a * voltage_v;
        self.peak_power_w = self.peak_power_w.max(self.power_w);
        self.energy_j += 0.5 * (before_w + self.power_w) * seconds;
        if !matches!(share, Share::Nothing) {
            self.fed_v = self.fed_v.max(voltage_v);
            let supply = Supply { voltage_v, winding_ohm: winding.resistance_ohm() };
            self.judge_line(servo, idx, when, supply, torque_factor);
        } else if self.torques_nm[idx] != 0.0 {
            self.judge_margin(0.0, [f64::INFINITY; 2], when, torque_factor);
        }
    }

    fn judge_line(
        &mut self,
        servo: &Servo,
        idx: usize,
        when: When,
        supply: Supply,
        torque_factor: f64,
    ) {
        let (torque_nm, rate_rad_s) = (self.torques_nm[idx], self.history.rate_rad_s[idx]);
        if let Some(margin) = servo.margin(torque_nm, rate_rad_s, supply) {
            let factors = [
                servo.stronger(margin, torque_factor),
                servo.faster(torque_nm, rate_rad_s, supply, torque_factor),
            ];
            self.judge_margin(margin, factors, when, torque_factor);
        }
        self.judge_speed(rate_rad_s.abs(), servo.unloaded_speed_rad_s(supply).max(0.0), when);
    }

    /// - `factors`: on stall torque and no-load speed that would lift the margin to the factor
    fn judge_margin(&mut self, margin: f64, factors: [f64; 2], when: When, torque_factor: f64) {
        if margin < torque_factor {
            self.stronger = self.stronger.max(factors[0]);
            self.faster = self.faster.max(factors[1]);
        }
        let limit = torque_factor;
        keep(&mut self.least_margin, Worst { figure: margin, limit, rank: -margin, when });
    }

    fn judge_speed(&mut self, speed_rad_s: f64, unloaded_rad_s: f64, when: When) {
        if speed_rad_s > unloaded_rad_s {
            let (figure, limit) = (speed_rad_s, unloaded_rad_s);
            keep(&mut self.fastest, Worst { figure, limit, rank: times_over(figure, limit), when });
        }
    }

    pub(crate) fn least_margin(&self) -> Option<(f64, When)> {
        self.least_margin.map(|worst| (worst.figure, worst.when))
    }

    pub(crate) fn hottest_k(&self) -> f64 {
        self.hottest.map_or(self.air_k, |worst| worst.figure)
    }

    /// Torque, speed and winding heat, where they are missed.
    pub(crate) fn misses(&self, torque_factor: f64) -> Vec<Miss> {
        let place = Some(self.history.place);
        let torque = self.least_margin.filter(|worst| worst.figure < torque_factor);
        let torque = torque.map(|worst| Miss {
            remedies: Remedies { stronger: factor(self.stronger), faster: factor(self.faster) },
            times_over: times_over(worst.limit, worst.figure.max(0.0)),
            ..miss(MissKind::Torque, worst)
        });
        let speed = self.fastest.map(|worst| Miss {
            remedies: Remedies { stronger: None, faster: factor(worst.rank) },
            ..miss(MissKind::Speed, worst)
        });
        let heat = self.hottest.filter(|worst| worst.figure > worst.limit).map(|worst| Miss {
            // A rise over the rise that may be.
            times_over: times_over(worst.figure - self.air_k, (worst.limit - self.air_k).max(0.0)),
            ..miss(MissKind::WindingHeat, worst)
        });
        let all = [torque, speed, heat].into_iter().flatten();
        all.map(|miss| Miss { place, ..miss }).collect()
    }
}

fn factor(factor: f64) -> Option<f64> {
    (factor.is_finite() && factor > 0.0).then_some(factor)
}
