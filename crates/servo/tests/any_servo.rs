//! Any servo, battery and history gives figures or a refusal, never a number that isn't one.

use proptest::prelude::*;
use undulift_servo::{
    AxisHistory, Battery, CellVoltage, Conditions, Endurance, Heat, Histories, Place, PositionLoop,
    Pulse, Quadrant, Regulator, Servo, Supply, budget,
};

/// A middle, up to some decades less or more, evenly in the logarithm.
fn around(middle: f64, decades: f64) -> impl Strategy<Value = f64> {
    (-decades..decades).prop_map(move |power| middle * 10_f64.powf(power))
}

fn endurance() -> impl Strategy<Value = Endurance> {
    let thermal = (around(15.0, 2.5), around(10.0, 4.0), 300.0..600.0_f64);
    prop_oneof![
        Just(Endurance::Unknown),
        around(0.2, 3.0).prop_map(Endurance::ContinuousTorque),
        thermal.prop_map(|(resistance_k_w, capacity_j_k, winding_limit_k)| Endurance::Thermal {
            resistance_k_w,
            capacity_j_k,
            winding_limit_k,
        }),
    ]
}

prop_compose! {
    fn servo()(
        at_voltage_v in around(6.0, 1.5),
        stall_current_a in around(1.5, 2.5),
        no_load_share in prop_oneof![Just(0.0), 0.0..0.999_f64],
        no_load_speed_rad_s in around(10.0, 2.0),
        efficiency in 1e-3..1.0_f64,
        idle_current_a in prop_oneof![Just(0.0), around(0.01, 2.0)],
        gear_efficiency in prop::option::of(1e-3..=1.0_f64),
        inertia_kg_m2 in prop_oneof![Just(0.0), around(1e-4, 3.0)],
        endurance in endurance(),
    ) -> Servo {
        let no_load_current_a = no_load_share * stall_current_a;
        let taken_w = at_voltage_v * stall_current_a * (1.0 - no_load_share).powi(2);
        Servo {
            name: "any".into(),
            mass_kg: 0.01,
            at_voltage_v,
            stall_torque_nm: efficiency * taken_w / no_load_speed_rad_s,
            no_load_speed_rad_s,
            stall_current_a,
            no_load_current_a,
            idle_current_a,
            gear_efficiency,
            rotor_inertia_at_output_kg_m2: inertia_kg_m2,
            endurance,
            pulse: Pulse::default(),
            position_loop: PositionLoop::default(),
            price: None,
        }
    }
}

fn regulator() -> impl Strategy<Value = Regulator> {
    (around(6.0, 1.5), around(5.0, 2.0), 1e-3..=1.0_f64).prop_map(
        |(volts, current_limit_a, efficiency)| Regulator { volts, current_limit_a, efficiency },
    )
}

prop_compose! {
    fn battery()(
        cells in 1..12_u32,
        capacity_coulomb in around(1000.0, 3.0),
        cell_resistance_ohm in prop_oneof![Just(0.0), around(0.02, 3.0)],
        current_limit_a in prop::option::of(around(10.0, 3.0)),
        charge in prop_oneof![Just(0.0), Just(1.0), 0.0..1.0_f64],
        regulator in prop::option::of(regulator()),
        electronics_w in prop_oneof![Just(0.0), around(1.0, 3.0)],
    ) -> Battery {
        Battery {
            cells, capacity_coulomb, cell_resistance_ohm, current_limit_a, charge, regulator,
            electronics_w, cell_voltage: CellVoltage::default(),
        }
    }
}

/// Those whose figures are accepted.
fn sound_servo() -> impl Strategy<Value = Servo> {
    servo().prop_filter("figures in range", |servo| servo.check().is_ok())
}

/// Of either sign, over many sizes; often nothing.
fn signed(middle: f64, decades: f64) -> impl Strategy<Value = f64> {
    let size = around(middle, decades);
    prop_oneof![Just(0.0), size.prop_flat_map(|size| prop_oneof![Just(size), Just(-size)])]
}

fn column(middle: f64, n_rows: usize) -> impl Strategy<Value = Vec<f64>> {
    prop::collection::vec(signed(middle, 4.0), n_rows)
}

fn axis(joint: usize, n_rows: usize) -> impl Strategy<Value = AxisHistory> {
    (
        prop_oneof![Just(None), (0..2_usize).prop_map(Some)],
        column(0.3, n_rows),
        column(5.0, n_rows),
        column(50.0, n_rows),
    )
        .prop_map(move |(servo_idx, joint_torque_nm, rate_rad_s, acceleration_rad_s2)| {
            let place = Place { joint, axis: "yaw" };
            AxisHistory { place, servo_idx, joint_torque_nm, rate_rad_s, acceleration_rad_s2 }
        })
}

fn histories() -> impl Strategy<Value = Histories> {
    (1..8_usize, 0..4_usize).prop_flat_map(|(n_rows, n_axes)| {
        let steps = prop::collection::vec(prop_oneof![Just(0.0), around(0.1, 4.0)], n_rows);
        let axes: Vec<_> = (1..=n_axes).map(|joint| axis(joint, n_rows)).collect();
        (steps, axes).prop_map(|(steps_s, axes)| {
            let mut now_s = 0.0;
            let times_s = steps_s.into_iter().map(|step_s| {
                now_s += step_s;
                now_s
            });
            Histories { times_s: times_s.collect(), axes }
        })
    })
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 500,
        failure_persistence: None,
        ..ProptestConfig::default()
    })]

    /// Every figure of a budget is finite or absent.
    #[test]
    fn twin_budgets_are_made_of_numbers(
        servos in prop::array::uniform2(sound_servo()),
        histories in histories(),
        battery in prop::option::of(battery()),
        drops in 1..4_u32,
        rest_s in around(10.0, 3.0),
    ) {
        let conditions = Conditions { battery, drops, rest_s, ..Conditions::default() };
        let found = budget(&servos, &histories, &conditions).unwrap();
        // Infinite is allowed to `times_over` alone.
        let printed = format!("{found:?}").replace("times_over: inf", "");
        prop_assert!(!printed.contains("NaN") && !printed.contains("inf"), "{}", printed);
        prop_assert_eq!(found.passes, found.misses.is_empty());
        for miss in &found.misses {
            prop_assert!(miss.times_over > 1.0, "{:?}", miss);
            for factor in [miss.remedies.stronger, miss.remedies.faster].into_iter().flatten() {
                prop_assert!(factor > 1.0, "{:?}", miss);
            }
        }
        for axis in &found.axes {
            if let Heat::Winding { peak_k, .. } = axis.heat {
                prop_assert!(peak_k >= conditions.air_temperature_k);
            }
        }
    }

    /// More voltage is never less margin, and a colder winding neither; nor is speed dearer.
    #[test]
    fn twin_margin_rises_with_voltage(
        servo in sound_servo(),
        torque_nm in signed(0.3, 3.0),
        rate_rad_s in signed(5.0, 2.0),
        volts in prop::array::uniform2(around(6.0, 1.0)),
    ) {
        let winding_ohm = servo.winding_resistance_ohm() * 1.2;
        let low = Supply { voltage_v: volts[0].min(volts[1]), winding_ohm };
        let high = Supply { voltage_v: volts[0].max(volts[1]), winding_ohm };
        prop_assert!(servo.margin(torque_nm, rate_rad_s, low) <= servo.margin(torque_nm, rate_rad_s, high));
        prop_assert!(servo.unloaded_speed_rad_s(low) <= servo.unloaded_speed_rad_s(high));
        let left = |quadrant| servo.torque_left_nm(quadrant, rate_rad_s, low);
        prop_assert!(left(Quadrant::Drives) <= left(Quadrant::IsDriven));
    }

    /// No instant gives out more than it takes in.
    #[test]
    fn twin_every_instant_loses_power(
        servo in sound_servo(),
        torque_nm in signed(0.3, 3.0),
        rate_rad_s in signed(5.0, 2.0),
        hotter in 0.8..3.0_f64,
    ) {
        let winding_ohm = servo.winding_resistance_ohm() * hotter;
        let taken_w = servo.motor_power_w(torque_nm, rate_rad_s, winding_ohm);
        let copper_w = servo.copper_loss_w(torque_nm, rate_rad_s, winding_ohm);
        let given_w = torque_nm * rate_rad_s;
        let slack_w = 1e-9 * (taken_w + copper_w + given_w.abs());
        prop_assert!(taken_w + slack_w >= copper_w + given_w, "{} {} {}", taken_w, copper_w, given_w);
    }

    /// The loop never gives more than the line leaves.
    #[test]
    fn twin_loop_keeps_to_the_line(
        servo in sound_servo(),
        error_rad in signed(0.05, 2.0),
        rate_rad_s in signed(5.0, 2.0),
        voltage_v in around(6.0, 1.0),
    ) {
        let supply = servo.cold_supply(voltage_v);
        let torque_nm = servo.loop_torque_nm(error_rad, rate_rad_s, supply);
        let quadrant = Quadrant::of(torque_nm, rate_rad_s);
        let left_nm = servo.torque_left_nm(quadrant, rate_rad_s, supply).max(0.0);
        // The loop adds the line up in another order, so it rounds otherwise.
        let rounding_nm = 1e-12 * servo.stall_torque_nm;
        prop_assert!(torque_nm.abs() <= left_nm + rounding_nm, "{} {}", torque_nm, left_nm);
    }
}
