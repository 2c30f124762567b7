use std::f64::consts::FRAC_PI_2;

use undulift_chain::{Axis, AxisOf};
use undulift_servo::Pulse;

use crate::firmware::Unit;

/// One output of a board, and the joint axis whose servo it tells what to do.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Channel {
    /// As the board counts.
    pub number: u8,
    /// What it turns.
    pub of: AxisOf,
    /// Whether the servo sits the other way round.
    pub reversed: bool,
    /// Added to every pulse, µs.
    pub offset_us: f64,
    /// The servo's pulses.
    pub pulse: Pulse,
}

impl Channel {
    /// An axis under its own number, unturned: for tables of joint angles.
    pub fn plain(number: u8, of: AxisOf) -> Self {
        Self { number, of, reversed: false, offset_us: 0.0, pulse: Pulse::default() }
    }

    /// What the axis is called: `yaw_1`.
    pub fn name(&self) -> String {
        axis_name(self.of)
    }

    /// An angle of the joint in a unit, as it goes out.
    pub fn value(&self, unit: Unit, angle_rad: f64) -> f64 {
        let turned_rad = self.turned(angle_rad);
        match unit.per_rad() {
            Some(per_rad) => turned_rad * per_rad,
            None => {
                self.zero_us() + turned_rad / FRAC_PI_2 * self.us_per_quarter(turned_rad >= 0.0)
            }
        }
    }

    /// The angle of the joint that a value asks for, rad.
    pub fn angle_rad(&self, unit: Unit, value: f64) -> f64 {
        self.turned(match unit.per_rad() {
            Some(per_rad) => value / per_rad,
            None => {
                let beyond_us = value - self.zero_us();
                let to_plus = beyond_us * self.us_per_quarter(true) >= 0.0;
                beyond_us / self.us_per_quarter(to_plus) * FRAC_PI_2
            }
        })
    }

    /// The angle that its offset alone turns the servo by, rad.
    pub fn trim_rad(&self) -> f64 {
        let to_plus = self.offset_us * self.us_per_quarter(true) >= 0.0;
        self.offset_us / self.us_per_quarter(to_plus) * FRAC_PI_2
    }

    /// Most that an angle changes over one count of a unit, rad.
    pub fn rad_per(&self, unit: Unit) -> f64 {
        unit.per_rad().map_or_else(
            || {
                let least_us =
                    self.us_per_quarter(true).abs().min(self.us_per_quarter(false).abs());
                FRAC_PI_2 / least_us
            },
            |per_rad| 1.0 / per_rad,
        )
    }

    fn turned(&self, angle_rad: f64) -> f64 {
        if self.reversed { -angle_rad } else { angle_rad }
    }

    fn zero_us(&self) -> f64 {
        self.pulse.centre_us + self.offset_us
    }

    /// Pulse for 90° to the plus or the minus side, µs; negative where pulses fall.
    fn us_per_quarter(&self, to_plus: bool) -> f64 {
        let Pulse { minus_90_us, centre_us, plus_90_us } = self.pulse;
        if to_plus { plus_90_us - centre_us } else { centre_us - minus_90_us }
    }
}

/// `yaw_1` for the yaw axis of the first joint.
pub(crate) fn axis_name(of: AxisOf) -> String {
    format!("{}_{}", of.axis.word(), of.joint_idx + 1)
}

/// The axis that a name is of.
pub(crate) fn axis_named(name: &str) -> Option<AxisOf> {
    let (word, joint) = name.split_once('_')?;
    let axis = Axis::BOTH.into_iter().find(|axis| axis.word() == word)?;
    let joint_idx = joint.parse::<usize>().ok()?.checked_sub(1)?;
    Some(AxisOf { joint_idx, axis })
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    fn channel(minus_90_us: f64, plus_90_us: f64) -> Channel {
        let of = AxisOf { joint_idx: 0, axis: Axis::Yaw };
        let pulse = Pulse { minus_90_us, centre_us: 1500.0, plus_90_us };
        Channel { pulse, ..Channel::plain(0, of) }
    }

    /// The convention of model servos, 1000 µs, 1500 µs and 2000 µs at −45°, 0° and 45° where
    /// 500 µs to 2500 µs are 180° (common practice; no source). Reversed, the same angle is as far
    /// on the other side; an offset moves all.
    #[test]
    fn analytic_pulses_follow_the_convention() {
        let plain = channel(500.0, 2500.0);
        let eighth_rad = FRAC_PI_2 / 2.0;
        for (angle_rad, us) in [(-eighth_rad, 1000.0), (0.0, 1500.0), (eighth_rad, 2000.0)] {
            assert_relative_eq!(plain.value(Unit::Us, angle_rad), us, max_relative = 1e-14);
        }
        let turned = Channel { reversed: true, offset_us: 12.0, ..plain };
        assert_relative_eq!(turned.value(Unit::Us, eighth_rad), 1012.0, max_relative = 1e-14);
        assert_relative_eq!(turned.value(Unit::Deg, eighth_rad), -45.0, max_relative = 1e-14);
    }

    /// By hand, for pulses that are longer to one side, and for pulses that fall.
    #[test]
    fn analytic_uneven_and_falling_pulses() {
        let uneven = channel(600.0, 2500.0);
        assert_relative_eq!(uneven.value(Unit::Us, -FRAC_PI_2 / 3.0), 1200.0, max_relative = 1e-14);
        assert_relative_eq!(uneven.rad_per(Unit::Us), FRAC_PI_2 / 900.0, max_relative = 1e-14);
        let falling = channel(2500.0, 500.0);
        assert_relative_eq!(falling.value(Unit::Us, FRAC_PI_2), 500.0, max_relative = 1e-14);
        for channel in [uneven, falling, Channel { reversed: true, offset_us: -30.0, ..uneven }] {
            for angle_rad in [-1.2, -0.01, 0.0, 0.7] {
                let value = channel.value(Unit::Us, angle_rad);
                assert_relative_eq!(channel.angle_rad(Unit::Us, value), angle_rad, epsilon = 1e-13);
            }
        }
    }

    /// Names of axes read back; others are none.
    #[test]
    fn twin_names_read_back() {
        let of = AxisOf { joint_idx: 11, axis: Axis::Pitch };
        assert_eq!(axis_name(of), "pitch_12");
        assert_eq!(axis_named("pitch_12"), Some(of));
        for name in ["pitch_0", "roll_1", "yaw", "yaw_x"] {
            assert_eq!(axis_named(name), None);
        }
    }
}
