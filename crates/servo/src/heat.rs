//! The winding's heat: one thermal mass between copper loss and the air.
//!
//! C dT/dt = i²R_T − (T − T_air)/R_th with R rising as copper's does. Case and gear have no heat
//! of their own; friction and the electronics heat nothing. Over a step the mean square of the
//! current holds, and the equation, linear then, is solved exactly, so that any step is stable.

use crate::{Endurance, Servo};

/// Rise of copper's resistance, 1/K of that at 20 °C (handbooks print 0.0039 to 0.00393).
pub const COPPER_PER_K: f64 = 0.003_93;

/// Temperature that catalogue figures are taken to hold at, K (our choice; 20 °C).
pub const COPPER_REFERENCE_K: f64 = 293.15;

/// Copper's melting point, K (1084.62 °C, fixed point of the ITS-90). Hotter than that the model has
/// nothing to say, and stays there.
const COPPER_MELTS_K: f64 = 1357.77;

/// What is known of how a servo bore a history.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Heat {
    /// There is no servo.
    NoServo,
    /// Nothing is known of what it bears.
    Unknown,
    /// RMS torque against the torque that it holds for ever stands in.
    RmsShare {
        /// Over the history, N·m.
        rms_nm: f64,
        /// For ever, N·m.
        limit_nm: f64,
    },
    /// From its thermal data.
    Winding {
        /// Hottest that it became, K.
        peak_k: f64,
        /// Hottest that it may be, K.
        limit_k: f64,
    },
}

/// A servo's winding on its way through a history.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Winding {
    cold_ohm: f64,
    air_k: f64,
    /// Winding to air, K/W, and capacity, J/K; a winding without stays at 20 °C.
    thermal: Option<[f64; 2]>,
    /// 1/K.
    rise_per_k: f64,
    /// Above the air, K.
    above_air_k: f64,
}

impl Winding {
    /// At the air's temperature; without thermal data it stays as the catalogue has it.
    pub fn new(servo: &Servo, air_k: f64) -> Self {
        let thermal = match servo.endurance {
            Endurance::Thermal { resistance_k_w, capacity_j_k, .. } => {
                Some([resistance_k_w, capacity_j_k])
            }
            _ => None,
        };
        let cold_ohm = servo.winding_resistance_ohm();
        Self { cold_ohm, air_k, thermal, rise_per_k: COPPER_PER_K, above_air_k: 0.0 }
    }

    /// K; absent without thermal data.
    pub fn temperature_k(&self) -> Option<f64> {
        self.thermal.map(|_| self.air_k + self.above_air_k)
    }

    /// R_T, Ω.
    pub fn resistance_ohm(&self) -> f64 {
        self.temperature_k().map_or(self.cold_ohm, |now_k| self.resistance_at_ohm(now_k))
    }

    fn resistance_at_ohm(&self, temperature_k: f64) -> f64 {
        self.cold_ohm * (1.0 + self.rise_per_k * (temperature_k - COPPER_REFERENCE_K))
    }

    /// Goes on by a stretch of time.
    ///
    /// - `mean_square_a2`: of the current over it
    pub fn go_on(&mut self, mean_square_a2: f64, seconds: f64) {
        let Some([resistance_k_w, capacity_j_k]) = self.thermal else { return };
        // Above the air by θ: C dθ/dt = i²R_air + (i²R·rise − 1/R_th)·θ.
        let heating_k_s = mean_square_a2 * self.resistance_at_ohm(self.air_k) / capacity_j_k;
        let growth_per_s = (mean_square_a2 * self.cold_ohm * self.rise_per_k
            - 1.0 / resistance_k_w)
            / capacity_j_k;
        // A winding that runs away has melted long before this.
        let exponent = (growth_per_s * seconds).min(500.0);
        let mean_growth = if exponent == 0.0 { 1.0 } else { exponent.exp_m1() / exponent };
        let above_k = self.above_air_k * exponent.exp() + heating_k_s * seconds * mean_growth;
        self.above_air_k = above_k.min(COPPER_MELTS_K - self.air_k);
    }
}

/// Mean square over a stretch on which a value goes straight from one to another.
pub(crate) fn mean_square(from: f64, to: f64) -> f64 {
    (from * from + from * to + to * to) / 3.0
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;
    use crate::servo::tests::servo;

    /// Copper 60 K warmer resists 1.2358 times as much.
    #[test]
    fn analytic_copper_sixty_kelvin_warmer() {
        let winding = Winding::new(&servo(), COPPER_REFERENCE_K + 60.0);
        assert_relative_eq!(winding.resistance_ohm() / 1.5, 1.2358, max_relative = 1e-12);
    }

    /// With a resistance that doesn't rise, T = T_air + i²R·R_th·(1 − exp(−t/(R_th·C))): for 2 A
    /// through 1.5 Ω, 15 K/W, 12 J/K and 60 s by hand 90·(1 − e^(−1/3)) = 25.512 K.
    #[test]
    fn analytic_heating_follows_its_exponential() {
        for n_steps in [1, 7] {
            let mut winding = Winding { rise_per_k: 0.0, ..Winding::new(&servo(), 293.15) };
            for _ in 0..n_steps {
                winding.go_on(4.0, 60.0 / f64::from(n_steps));
            }
            let found_k = winding.temperature_k().unwrap() - 293.15;
            assert_relative_eq!(found_k, 25.512_182, max_relative = 1e-6);
            winding.go_on(0.0, 180.0);
            let found_k = winding.temperature_k().unwrap() - 293.15;
            assert_relative_eq!(found_k, 25.512_182 * (-1_f64).exp(), max_relative = 1e-6);
        }
    }

    /// With copper's rise: the exact step against ten thousand steps of the midpoint rule written
    /// out here.
    #[test]
    fn twin_rising_resistance_against_small_steps() {
        let (air_k, seconds, n_steps) = (303.15, 90.0, 10_000);
        let mut winding = Winding::new(&servo(), air_k);
        winding.go_on(6.0, seconds);
        let slope_k_s = |now_k: f64| {
            let copper_w = 6.0 * 1.5 * (1.0 + 0.003_93 * (now_k - 293.15));
            (copper_w - (now_k - air_k) / 15.0) / 12.0
        };
        let step_s = seconds / f64::from(n_steps);
        let mut now_k = air_k;
        for _ in 0..n_steps {
            let middle_k = now_k + 0.5 * step_s * slope_k_s(now_k);
            now_k += step_s * slope_k_s(middle_k);
        }
        assert_relative_eq!(winding.temperature_k().unwrap(), now_k, max_relative = 1e-8);
    }

    /// Where copper's rise outruns the cooling, i²R·rise > 1/R_th, no step is too long: it melts.
    #[test]
    fn analytic_runaway_ends_where_copper_melts() {
        let mut winding = Winding::new(&servo(), 293.15);
        winding.go_on(1e6, 1e9);
        assert_relative_eq!(winding.temperature_k().unwrap(), COPPER_MELTS_K);
        winding.go_on(1e6, 1e9);
        assert!(winding.resistance_ohm().is_finite());
    }

    /// Without thermal data nothing warms.
    #[test]
    fn twin_unknown_heat_stays_cold() {
        let unknown = Servo { endurance: Endurance::Unknown, ..servo() };
        let mut winding = Winding::new(&unknown, 320.0);
        winding.go_on(16.0, 100.0);
        assert_eq!(winding.temperature_k(), None);
        assert_eq!(winding.resistance_ohm(), 1.5);
    }
}
