//! Budgets against what can be reckoned by hand, and against their own parts.

use approx::assert_relative_eq;
use undulift_servo::{
    Assumption, AxisHistory, Battery, Budget, CellVoltage, Conditions, Endurance, Heat, Histories,
    MissKind, Place, PositionLoop, Pulse, Regulator, Servo, ServoError, budget,
};

/// An invented servo with round figures: R = 1.5 Ω, V_n − I₀R = 5.7 V, η = 0.461 68.
fn servo() -> Servo {
    Servo {
        name: "round".into(),
        mass_kg: 0.030,
        at_voltage_v: 6.0,
        stall_torque_nm: 1.0,
        no_load_speed_rad_s: 10.0,
        stall_current_a: 4.0,
        no_load_current_a: 0.2,
        idle_current_a: 0.01,
        gear_efficiency: None,
        rotor_inertia_at_output_kg_m2: 2e-3,
        endurance: Endurance::Unknown,
        pulse: Pulse::default(),
        position_loop: PositionLoop::default(),
        price: None,
    }
}

fn thermal() -> Servo {
    let (resistance_k_w, capacity_j_k) = (15.0, 12.0);
    let endurance = Endurance::Thermal { resistance_k_w, capacity_j_k, winding_limit_k: 383.15 };
    Servo { endurance, ..servo() }
}

fn battery() -> Battery {
    Battery {
        cells: 2,
        capacity_coulomb: 1620.0,
        cell_resistance_ohm: 0.1,
        cell_voltage: CellVoltage::default(),
        current_limit_a: Some(20.0),
        charge: 1.0,
        regulator: None,
        electronics_w: 1.0,
    }
}

fn axis(joint: usize, torques_nm: &[f64], rates_rad_s: &[f64]) -> AxisHistory {
    AxisHistory {
        place: Place { joint, axis: "yaw" },
        servo_idx: Some(0),
        joint_torque_nm: torques_nm.to_vec(),
        rate_rad_s: rates_rad_s.to_vec(),
        acceleration_rad_s2: vec![0.0; torques_nm.len()],
    }
}

/// One servo that holds a torque for some seconds.
fn held(torque_nm: f64, seconds: f64) -> Histories {
    Histories { times_s: vec![0.0, seconds], axes: vec![axis(1, &[torque_nm; 2], &[0.0; 2])] }
}

fn with_battery(battery: Battery) -> Conditions {
    Conditions { battery: Some(battery), ..Conditions::default() }
}

fn found(servo: Servo, histories: &Histories, conditions: &Conditions) -> Budget {
    budget(&[servo], histories, conditions).unwrap()
}

/// Each kind that is missed, worst first.
fn kinds(budget: &Budget) -> Vec<MissKind> {
    budget.misses.iter().map(|miss| miss.kind).collect()
}

/// By hand at 6 V: joint torques 0.2, 0.3, −0.1 N·m with 50, 0, −100 rad/s² on 2e-3 kg·m² are
/// 0.3, 0.3, −0.3 at the servo. At 4, 0, 4 rad/s there are 0.6, 1 and (driven) 1 N·m left: margins
/// 2, 3.33, 3.33.
#[test]
fn analytic_peaks_and_margins() {
    let mut moves = axis(3, &[0.2, 0.3, -0.1], &[4.0, 0.0, 4.0]);
    moves.acceleration_rad_s2 = vec![50.0, 0.0, -100.0];
    let histories = Histories { times_s: vec![1.0, 1.5, 2.0], axes: vec![moves] };
    let found = found(servo(), &histories, &Conditions::default());
    let axis = &found.axes[0];
    assert_eq!(axis.place, Place { joint: 3, axis: "yaw" });
    assert_relative_eq!(axis.peak_torque_nm, 0.3, max_relative = 1e-14);
    assert_eq!(axis.peak_speed_rad_s, 4.0);
    assert_relative_eq!(axis.least_margin.unwrap(), 2.0, max_relative = 1e-12);
    assert_eq!((axis.least_margin_at_s, axis.least_margin_idx), (Some(1.0), Some(0)));
    assert_eq!(found.least_margin, axis.least_margin);
    assert!(found.passes && found.battery.is_none());
    // 0.3 level for half the time, then straight to −0.3, whose mean square is a third.
    assert_relative_eq!(axis.rms_torque_nm, 0.3 * (2_f64 / 3.0).sqrt(), max_relative = 1e-12);
    assert_eq!(axis.heat, Heat::Unknown);
    assert!(found.assumptions.contains(&Assumption::NoBattery));
}

/// By hand: held at 0.5 N·m the current is 0.2 + 3.8/2 = 2.1 A, the power 1.5·2.1² = 6.615 W, with
/// 0.06 W of electronics 6.675 W, over 2 s 13.35 J.
#[test]
fn analytic_power_and_energy_of_holding() {
    let found = found(servo(), &held(0.5, 2.0), &Conditions::default());
    assert_relative_eq!(found.axes[0].peak_power_w.unwrap(), 6.675, max_relative = 1e-12);
    assert_relative_eq!(found.axes[0].energy_j_per_drop.unwrap(), 13.35, max_relative = 1e-12);
}

/// The same from two cells behind 0.2 Ω with 1 W of electronics, at one instant: V is the fixed
/// point of V = 8.4 − 0.2·(6.615 + 1 + 0.01·V)/V, met here by going round; torque left is
/// (V − 0.3)/5.7 N·m.
#[test]
fn twin_voltage_against_a_fixed_point() {
    let histories = Histories { times_s: vec![0.0], axes: vec![axis(1, &[0.5], &[0.0])] };
    let found = found(servo(), &histories, &with_battery(battery()));
    let mut voltage_v = 8.4;
    for _ in 0..200 {
        voltage_v = 8.4 - 0.2 * (7.615 + 0.01 * voltage_v) / voltage_v;
    }
    let fed = found.battery.unwrap();
    assert_relative_eq!(fed.least_voltage_v.unwrap(), voltage_v, max_relative = 1e-12);
    let current_a = (7.615 + 0.01 * voltage_v) / voltage_v;
    assert_relative_eq!(fed.peak_current_a.unwrap(), current_a, max_relative = 1e-12);
    let margin = (voltage_v - 0.3) / 5.7 / 0.5;
    assert_relative_eq!(found.least_margin.unwrap(), margin, max_relative = 1e-12);
    assert_eq!(fed.energy_j_per_drop, Some(0.0));
    assert_eq!(fed.drops_per_charge, None);
    assert!(found.assumptions.contains(&Assumption::OneInstant));
    let fed_v = fed.least_servo_voltage_v.unwrap();
    let said = Assumption::FedAbove { servo: "round".into(), fed_v, at_voltage_v: 6.0 };
    assert!(found.assumptions.contains(&said), "{:?}", found.assumptions);
}

/// Energy at the terminals is that of the servos over the regulator's efficiency and that of the
/// electronics; a regulated servo is fed its own voltage, so nothing is said of it.
#[test]
fn twin_energy_through_a_regulator() {
    let regulator = Regulator { volts: 6.0, current_limit_a: 10.0, efficiency: 0.9 };
    let battery = Battery { regulator: Some(regulator), ..battery() };
    let torques_nm = [0.1, 0.5, -0.4, 0.2];
    let axes = vec![
        axis(1, &torques_nm, &[1.0, 2.0, 3.0, -2.0]),
        axis(2, &torques_nm, &[-1.0, 0.0, 3.0, 2.0]),
    ];
    let histories = Histories { times_s: vec![0.0, 0.5, 1.2, 2.0], axes };
    let found = found(thermal(), &histories, &with_battery(battery));
    let servos_j: f64 = found.axes.iter().map(|axis| axis.energy_j_per_drop.unwrap()).sum();
    let fed = found.battery.unwrap();
    assert_relative_eq!(fed.energy_j_per_drop.unwrap(), servos_j / 0.9 + 2.0, max_relative = 1e-12);
    assert_relative_eq!(fed.least_servo_voltage_v.unwrap(), 6.0);
    assert!(fed.least_voltage_v.unwrap() > 6.0);
    let above = |doubt: &Assumption| matches!(doubt, Assumption::FedAbove { .. });
    assert!(!found.assumptions.iter().any(above), "{:?}", found.assumptions);
}

/// Where both terminals and regulator give too much, both are told, with when.
#[test]
fn analytic_current_limits() {
    let regulator = Regulator { volts: 6.0, current_limit_a: 1.0, efficiency: 0.9 };
    let battery = Battery { regulator: Some(regulator), current_limit_a: Some(0.5), ..battery() };
    let found = found(servo(), &held(0.5, 2.0), &with_battery(battery));
    assert!(!found.passes);
    assert_eq!(kinds(&found), [MissKind::BatteryCurrent, MissKind::RegulatorCurrent]);
    // 6.675 W at 6 V.
    assert_relative_eq!(found.misses[1].found, 1.1125, max_relative = 1e-12);
    assert_eq!(found.misses[1].limit, 1.0);
    assert_eq!(found.misses[1].place, None);
    assert_eq!(found.worst().unwrap().kind, MissKind::BatteryCurrent);
}

/// Thirty servos held at stall ask 720 W of a battery that has 8.4²/0.8 = 88.2 W at most.
#[test]
fn analytic_collapse_is_told_first() {
    let axes = (1..=30).map(|joint| axis(joint, &[0.1, 1.0], &[0.0; 2])).collect();
    let histories = Histories { times_s: vec![0.0, 1.0], axes };
    let found = found(servo(), &histories, &with_battery(battery()));
    let worst = found.worst().unwrap();
    assert_eq!(worst.kind, MissKind::BatteryCollapse);
    assert_relative_eq!(worst.found, 721.0, max_relative = 1e-12);
    assert_relative_eq!(worst.limit, (8.4_f64 - 0.2 * 0.3).powi(2) / 0.8, max_relative = 1e-3);
    assert_eq!(worst.when.unwrap().at_s, 1.0);
    let fed = found.battery.unwrap();
    assert_eq!([fed.least_voltage_v, fed.peak_current_a, fed.energy_j_per_drop], [None; 3]);
    assert_eq!(fed.drops_per_charge, None);
    assert_eq!(found.least_margin, Some(0.0));
    assert_eq!(found.axes[0].energy_j_per_drop, None);
    assert!(worst.to_string().starts_with("the battery collapses under 721.0 W"), "{worst}");
}

/// A drop that takes more than the battery holds.
#[test]
fn twin_a_drop_empties_a_small_battery() {
    let battery = Battery { capacity_coulomb: 3.0, charge: 0.5, ..battery() };
    let found = found(servo(), &held(0.5, 4.0), &with_battery(battery));
    assert_eq!(kinds(&found), [MissKind::BatteryEmpty]);
    assert_eq!(found.misses[0].limit, 1.5);
    assert!(found.misses[0].found > 3.0);
}

/// A torque of 0.9 N·m at 4 rad/s leaves a margin of 0.6/0.9; a speed of 12 rad/s is above 10.
/// Which servo would do: 2.25 times as strong; at the same strength none is fast enough.
#[test]
fn analytic_misses_and_their_remedies() {
    let axes = vec![axis(1, &[0.1, 0.9], &[0.0, 4.0]), axis(2, &[0.0, 0.0], &[3.0, -12.0])];
    let histories = Histories { times_s: vec![0.0, 1.0], axes };
    let found = found(servo(), &histories, &Conditions::default());
    assert_eq!(kinds(&found), [MissKind::Torque, MissKind::Speed]);
    let [torque, speed] = [found.misses[0], found.misses[1]];
    assert_relative_eq!(torque.found, 2.0 / 3.0, max_relative = 1e-12);
    assert_eq!(torque.limit, 1.5);
    assert_relative_eq!(torque.remedies.stronger.unwrap(), 2.25, max_relative = 1e-12);
    assert_eq!(torque.remedies.faster, None);
    assert_eq!(speed.place.unwrap().joint, 2);
    assert_eq!([speed.found, speed.when.unwrap().at_s], [12.0, 1.0]);
    assert_relative_eq!(speed.remedies.faster.unwrap(), 1.2, max_relative = 1e-12);
    assert_eq!(torque.to_string(), "torque margin 0.67, below 1.50 at joint 1 yaw, t = 1.00 s");
    assert_eq!(torque.limit_and_place(), "torque margin 0.67, below 1.50 at joint 1 yaw");
    assert_eq!(torque.when.unwrap().instant_idx, 1);
}

/// With the remedies in place the budget passes, and with a little less it doesn't.
#[test]
fn twin_remedies_pass_at_every_instant() {
    let axes = vec![axis(1, &[0.5, 0.3, 0.1], &[4.0, 7.0, 9.0])];
    let histories = Histories { times_s: vec![0.0, 1.0, 2.0], axes };
    let remedies = found(servo(), &histories, &Conditions::default()).misses[0].remedies;
    for (factors, passes) in [(1.000_001, true), (0.999, false)] {
        let stall_torque_nm = remedies.stronger.unwrap() * factors;
        // More torque at the same currents would imply too good an efficiency.
        let stall_current_a = 4.0 * stall_torque_nm;
        let no_load_current_a = 0.2 * stall_torque_nm;
        let stronger = Servo { stall_torque_nm, stall_current_a, no_load_current_a, ..servo() };
        assert_eq!(found(stronger, &histories, &Conditions::default()).passes, passes);
        let no_load_speed_rad_s = 10.0 * remedies.faster.unwrap() * factors;
        let faster = Servo { no_load_speed_rad_s, ..servo() };
        assert_eq!(found(faster, &histories, &Conditions::default()).passes, passes);
    }
}

/// Held at 0.5 N·m for 60 s the linear equation's closed form: with g = i²R·α − 1/R_th and 2.1 A,
/// θ = i²R/g·(exp(g·t/C) − 1) above 20 °C, here 29.929 K by hand. Resting for five time constants
/// brings e⁻⁵ of it into the next drop.
#[test]
fn analytic_drops_and_rests_heat_a_winding() {
    let copper_w: f64 = 2.1 * 2.1 * 1.5;
    let growth_w_k: f64 = copper_w * 0.003_93 - 1.0 / 15.0;
    let growth = (growth_w_k * 60.0 / 12.0).exp();
    let once_k = copper_w / growth_w_k * (growth - 1.0);
    assert_relative_eq!(once_k, 29.929, max_relative = 2e-5);
    let peak_k = |drops: u32, rest_s: f64| {
        let conditions = Conditions { drops, rest_s, ..Conditions::default() };
        let found = found(thermal(), &held(0.5, 60.0), &conditions);
        let Heat::Winding { peak_k, limit_k } = found.axes[0].heat else { unreachable!() };
        assert_eq!(limit_k, 383.15);
        peak_k - 293.15
    };
    assert_relative_eq!(peak_k(1, 0.0), once_k, max_relative = 1e-10);
    let twice_k = once_k * (-5_f64).exp() * growth + once_k;
    assert_relative_eq!(peak_k(2, 900.0), twice_k, max_relative = 1e-10);
    assert_relative_eq!(peak_k(400, 1e9), once_k, max_relative = 1e-10);
}

/// A hot servo is a weaker one, and one too hot is told.
#[test]
fn twin_heat_weakens_and_is_missed() {
    let conditions = Conditions { drops: 5, torque_factor: 0.5, ..Conditions::default() };
    let found = found(thermal(), &held(0.7, 30.0), &conditions);
    assert!(found.least_margin.unwrap() < 1.0 / 0.7);
    assert_eq!(kinds(&found), [MissKind::WindingHeat]);
    assert_eq!(found.misses[0].when.unwrap().drop, 5);
    let cold = Conditions { drops: 1, ..conditions };
    let once = budget(&[thermal()], &held(0.7, 1.0), &cold).unwrap();
    assert!(once.passes && once.least_margin > found.least_margin);
}

/// Without thermal data RMS torque stands in, and that is said.
#[test]
fn analytic_continuous_torque_stands_in() {
    let servo = Servo { endurance: Endurance::ContinuousTorque(0.2), ..servo() };
    let found = found(servo, &held(0.3, 1.0), &Conditions::default());
    assert_eq!(kinds(&found), [MissKind::ContinuousTorque]);
    assert_relative_eq!(found.misses[0].times_over, 1.5, max_relative = 1e-12);
    assert_eq!(found.misses[0].when, None);
    let said = Assumption::HeatByRms { servo: "round".into() };
    assert!(found.assumptions.contains(&said));
}

/// An axis without a servo has torque and nothing else.
#[test]
fn twin_no_servo_has_torque_alone() {
    let bare = AxisHistory { servo_idx: None, ..axis(1, &[0.5, 90.0], &[1.0, 99.0]) };
    let histories = Histories { times_s: vec![0.0, 1.0], axes: vec![bare] };
    let found = budget(&[], &histories, &Conditions::default()).unwrap();
    let axis = &found.axes[0];
    assert_eq!((axis.peak_torque_nm, axis.least_margin, axis.peak_power_w), (90.0, None, None));
    assert_eq!((axis.heat, found.least_margin), (Heat::NoServo, None));
    assert!(found.passes);
    assert!(matches!(found.assumptions[0], Assumption::NoServo { .. }));
}

/// What doesn't fit is refused by name.
#[test]
fn twin_histories_that_do_not_fit_are_refused() {
    let refused = |histories: &Histories| {
        budget(&[servo()], histories, &Conditions::default()).unwrap_err().to_string()
    };
    let mut histories = held(0.5, 2.0);
    histories.axes[0].rate_rad_s.pop();
    assert_eq!(refused(&histories), "joint 1 yaw: 1 values of rate_rad_s for 2 instants");
    let mut histories = held(0.5, 2.0);
    histories.times_s[1] = -1.0;
    assert_eq!(refused(&histories), "a history's time falls back to -1 s at row 2");
    let mut histories = held(f64::NAN, 2.0);
    assert!(refused(&histories).contains("joint_torque_nm is NaN"));
    histories.axes[0].servo_idx = Some(1);
    histories.axes[0].joint_torque_nm = vec![0.0; 2];
    assert!(refused(&histories).contains("servo number 1, but there are 1"));
    histories.times_s.clear();
    assert_eq!(refused(&histories), "a history needs one instant or more");
    let conditions = Conditions { drops: 0, ..Conditions::default() };
    let found = budget(&[servo()], &held(0.1, 1.0), &conditions);
    assert!(matches!(found, Err(ServoError::Figure { quantity: "drops", .. })), "{found:?}");
}

/// Instants at one time are poses of their own: by hand at 6 V and at rest 1 N·m is left, and the
/// least margin is that of the largest torque, told by its place; nothing warms between them.
#[test]
fn analytic_poses_without_time_between_them() {
    let torques_nm = [0.2, -0.8, 0.4, 0.8];
    let histories =
        Histories { times_s: vec![0.0; 4], axes: vec![axis(1, &torques_nm, &[0.0; 4])] };
    let found = found(thermal(), &histories, &Conditions::default());
    let axis = &found.axes[0];
    assert_relative_eq!(axis.least_margin.unwrap(), 1.25, max_relative = 1e-12);
    // Of two equal ones the first.
    assert_eq!(axis.least_margin_idx, Some(1));
    assert_eq!(axis.rms_torque_nm, 0.8);
    let Heat::Winding { peak_k, .. } = axis.heat else { unreachable!() };
    assert_eq!(peak_k, 293.15);
}
