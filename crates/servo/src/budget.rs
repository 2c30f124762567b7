//! Budgets: what a history asks of servos and battery, against what they have.
//!
//! Torque and motion are as given, whatever the servos can do: nothing sags when a margin is
//! missed. Between instants torque and current go straight; peaks between them are missed, so
//! give many. Joint travel is judged elsewhere.

use crate::assumptions::assumptions;
use crate::axis_run::{AxisRun, Share};
use crate::battery_run::BatteryRun;
use crate::figures::Figures;
use crate::history::rms;
use crate::{
    Assumption, Battery, Endurance, Heat, Histories, Miss, MissKind, Place, Remedies, Servo,
    ServoError, When,
};

/// What a history is judged under.
#[derive(Debug, Clone, PartialEq)]
pub struct Conditions {
    /// Feeds all servos; absent: each at the voltage of its figures.
    pub battery: Option<Battery>,
    /// At rest before the first drop servos are as warm, K.
    pub air_temperature_k: f64,
    /// Margin that passes.
    pub torque_factor: f64,
    /// How often the history is gone through; each time the battery is charged as at first, and
    /// servos are as warm as the rest before left them.
    pub drops: u32,
    /// Between drops, servos without current, s.
    pub rest_s: f64,
}

impl Default for Conditions {
    fn default() -> Self {
        Self { battery: None, air_temperature_k: 293.15, torque_factor: 1.5, drops: 1, rest_s: 0.0 }
    }
}

/// What a history asks, and whether it passes.
#[derive(Debug, Clone, PartialEq)]
pub struct Budget {
    /// In the order of the histories.
    pub axes: Vec<AxisBudget>,
    /// Absent without a battery.
    pub battery: Option<BatteryBudget>,
    /// Of all axes; absent where no servo is asked for torque.
    pub least_margin: Option<f64>,
    /// Nothing is missed.
    pub passes: bool,
    /// What is, worst first: a collapse, then by how many times over; one for each axis and kind.
    pub misses: Vec<Miss>,
    /// What was taken for granted.
    pub assumptions: Vec<Assumption>,
}

/// Of one axis, over all drops.
#[derive(Debug, Clone, PartialEq)]
pub struct AxisBudget {
    /// Which.
    pub place: Place,
    /// Its servo's place in the list of servos.
    pub servo_idx: Option<usize>,
    /// Servo torque, rotor inertia in; joint torque without a servo, N·m.
    pub peak_torque_nm: f64,
    /// The same, over the history.
    pub rms_torque_nm: f64,
    /// rad/s.
    pub peak_speed_rad_s: f64,
    /// Torque left over torque asked, 0 under a collapsed battery; absent without a servo or where
    /// no torque is asked.
    pub least_margin: Option<f64>,
    /// When that is, by the history's clock, s.
    pub least_margin_at_s: Option<f64>,
    /// The same as a place in the history, from 0.
    pub least_margin_idx: Option<usize>,
    /// Into motor and electronics, W; absent without a servo.
    pub peak_power_w: Option<f64>,
    /// The same over a drop, mean of all drops, J; absent without a servo or where the battery
    /// collapses.
    pub energy_j_per_drop: Option<f64>,
    /// How it bore that.
    pub heat: Heat,
}

/// Of the battery, over all drops; a figure is absent where the battery collapses.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BatteryBudget {
    /// A.
    pub peak_current_a: Option<f64>,
    /// At its terminals, V.
    pub least_voltage_v: Option<f64>,
    /// At the servos, V.
    pub least_servo_voltage_v: Option<f64>,
    /// Out of its terminals, mean of all drops, J.
    pub energy_j_per_drop: Option<f64>,
    /// From full to empty or to where it would collapse, nothing drawn between drops; absent where
    /// a drop draws nothing.
    pub drops_per_charge: Option<f64>,
    /// Out of the regulator, A; absent without one.
    pub regulator_peak_current_a: Option<f64>,
}

impl Budget {
    /// What is missed most.
    pub fn worst(&self) -> Option<&Miss> {
        self.misses.first()
    }
}

impl Conditions {
    fn check(&self) -> Result<(), ServoError> {
        let figures = Figures { of: "budget" };
        figures.within("air_temperature_k", self.air_temperature_k, [173.15, 373.15])?;
        figures.within("torque_factor", self.torque_factor, [0.0, 1000.0])?;
        figures.within("drops", f64::from(self.drops), [1.0, 1e6])?;
        figures.within("rest_s", self.rest_s, [0.0, 1e9])?;
        self.battery.as_ref().map_or(Ok(()), Battery::check)
    }
}

/// What histories ask of their servos and battery.
///
/// - `servos`: those that the histories name by number; others aren't looked at
///
/// # Errors
///
/// [`ServoError`] where a servo, the battery, a history or a condition can't be reckoned with.
/// Whatever is missed, the battery's collapse included, is a result.
pub fn budget(
    servos: &[Servo],
    histories: &Histories,
    conditions: &Conditions,
) -> Result<Budget, ServoError> {
    conditions.check()?;
    histories.check(servos.len())?;
    let used = |idx: usize| histories.axes.iter().any(|axis| axis.servo_idx == Some(idx));
    (0..servos.len()).filter(|&idx| used(idx)).try_for_each(|idx| servos[idx].check())?;

    let air_k = conditions.air_temperature_k;
    let mut axes: Vec<AxisRun<'_>> = histories
        .axes
        .iter()
        .map(|axis| AxisRun::new(axis, axis.servo_idx.map(|idx| &servos[idx]), air_k))
        .collect();
    let mut battery = conditions.battery.as_ref().map(BatteryRun::new);
    // Only heat tells one drop from another.
    let drops = if axes.iter().any(AxisRun::warms) { conditions.drops } else { 1 };
    for drop in 1..=drops {
        if drop > 1 {
            axes.iter_mut().for_each(|axis| axis.rest(conditions.rest_s));
        }
        go_through(&histories.times_s, drop, conditions.torque_factor, &mut axes, &mut battery);
    }

    let mut fed_v = vec![None; servos.len()];
    for (axis, run) in histories.axes.iter().zip(&axes) {
        if let Some(idx) = axis.servo_idx {
            fed_v[idx] = Some(run.fed_v.max(fed_v[idx].unwrap_or(0.0)));
        }
    }
    let assumptions = assumptions(servos, histories, conditions, &fed_v);
    Ok(summed_up(&histories.times_s, conditions, drops, &axes, battery.as_ref(), assumptions))
}

/// One drop, instant by instant.
fn go_through(
    times_s: &[f64],
    drop: u32,
    torque_factor: f64,
    axes: &mut [AxisRun<'_>],
    battery: &mut Option<BatteryRun<'_>>,
) {
    if let Some(battery) = battery {
        battery.start();
    }
    for (idx, &at_s) in times_s.iter().enumerate() {
        let when = When { at_s, drop, instant_idx: idx };
        let seconds = if idx == 0 { 0.0 } else { at_s - times_s[idx - 1] };
        axes.iter_mut().for_each(|axis| axis.go_on(idx, seconds, when));
        let share = match battery {
            None => Share::OwnVoltage,
            Some(battery) => {
                let load = AxisRun::load_of(axes);
                battery.go_on(load, seconds, when).map_or(Share::Nothing, Share::Voltage)
            }
        };
        axes.iter_mut().for_each(|axis| axis.judge(idx, seconds, when, share, torque_factor));
    }
    if let Some(battery) = battery {
        battery.end();
    }
}

fn summed_up(
    times_s: &[f64],
    conditions: &Conditions,
    drops: u32,
    runs: &[AxisRun<'_>],
    battery: Option<&BatteryRun<'_>>,
    assumptions: Vec<Assumption>,
) -> Budget {
    let collapsed = battery.is_some_and(BatteryRun::collapsed);
    let axes: Vec<AxisBudget> =
        runs.iter().map(|run| axis_budget(times_s, run, drops, collapsed)).collect();
    let mut misses: Vec<Miss> = battery.map_or(Vec::new(), BatteryRun::misses);
    for (run, axis) in runs.iter().zip(&axes) {
        misses.extend(run.misses(conditions.torque_factor));
        misses.extend(continuous_miss(axis));
    }
    misses.sort_by(|a, b| {
        let after_collapse = |miss: &Miss| miss.kind != MissKind::BatteryCollapse;
        after_collapse(a)
            .cmp(&after_collapse(b))
            .then_with(|| b.times_over.total_cmp(&a.times_over))
    });
    Budget {
        least_margin: axes.iter().filter_map(|axis| axis.least_margin).reduce(f64::min),
        battery: battery.map(|run| run.budget(drops)),
        passes: misses.is_empty(),
        axes,
        misses,
        assumptions,
    }
}

fn axis_budget(times_s: &[f64], run: &AxisRun<'_>, drops: u32, collapsed: bool) -> AxisBudget {
    let largest = |values: &[f64]| values.iter().fold(0.0, |most: f64, v| most.max(v.abs()));
    let rms_torque_nm = rms(times_s, &run.torques_nm);
    let least = run.least_margin();
    let with_servo = |figure: f64| run.servo.map(|_| figure);
    AxisBudget {
        place: run.history.place,
        servo_idx: run.history.servo_idx,
        peak_torque_nm: largest(&run.torques_nm),
        rms_torque_nm,
        peak_speed_rad_s: largest(&run.history.rate_rad_s),
        least_margin: least.map(|(margin, _)| margin),
        least_margin_at_s: least.map(|(_, when)| when.at_s),
        least_margin_idx: least.map(|(_, when)| when.instant_idx),
        peak_power_w: with_servo(run.peak_power_w),
        energy_j_per_drop: with_servo(run.energy_j / f64::from(drops)).filter(|_| !collapsed),
        heat: match run.servo.map(|servo| servo.endurance) {
            None => Heat::NoServo,
            Some(Endurance::Unknown) => Heat::Unknown,
            Some(Endurance::ContinuousTorque(limit_nm)) => {
                Heat::RmsShare { rms_nm: rms_torque_nm, limit_nm }
            }
            Some(Endurance::Thermal { winding_limit_k: limit_k, .. }) => {
                Heat::Winding { peak_k: run.hottest_k(), limit_k }
            }
        },
    }
}

fn continuous_miss(axis: &AxisBudget) -> Option<Miss> {
    let Heat::RmsShare { rms_nm, limit_nm } = axis.heat else { return None };
    (rms_nm > limit_nm).then(|| Miss {
        kind: MissKind::ContinuousTorque,
        place: Some(axis.place),
        when: None,
        found: rms_nm,
        limit: limit_nm,
        times_over: rms_nm / limit_nm,
        remedies: Remedies::default(),
    })
}
