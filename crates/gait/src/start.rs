use std::f64::consts::TAU;

/// Whether a gait runs at release or begins in the air.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub enum Start {
    /// Full speed from release on.
    #[default]
    Running,
    /// The shape at phase 0 is held, then the wave spins up along a quintic smoothstep.
    Held {
        /// Time from release to the first motion, s.
        delay_s: f64,
        /// Time from there to full speed, s.
        spin_up_s: f64,
    },
}

/// How far a gait has come.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Phase {
    /// Φ, rad.
    pub angle_rad: f64,
    /// dΦ/dt, rad/s.
    pub rate_rad_s: f64,
    /// d²Φ/dt², rad/s².
    pub acceleration_rad_s2: f64,
}

/// Time to phase: Φ(t) = 2π∫f·r dt, with r the start's ramp.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Clock {
    /// Cycles a second at full speed.
    pub frequency_hz: f64,
    /// How it gets there.
    pub start: Start,
}

impl Clock {
    /// Phase at a time after release.
    ///
    /// - `piece_s`: a time in the same smooth piece, which decides at the ramp's ends
    #[inline]
    pub fn phase(&self, time_s: f64, piece_s: f64) -> Phase {
        let full_rate = TAU * self.frequency_hz;
        let Start::Held { delay_s, spin_up_s } = self.start else {
            return Phase {
                angle_rad: full_rate * time_s,
                rate_rad_s: full_rate,
                acceleration_rad_s2: 0.0,
            };
        };
        if piece_s <= delay_s {
            return Phase { angle_rad: 0.0, rate_rad_s: 0.0, acceleration_rad_s2: 0.0 };
        }
        if piece_s >= delay_s + spin_up_s {
            // The quintic's integral over the ramp is half the ramp.
            return Phase {
                angle_rad: full_rate * (time_s - delay_s - 0.5 * spin_up_s),
                rate_rad_s: full_rate,
                acceleration_rad_s2: 0.0,
            };
        }
        let u = (time_s - delay_s) / spin_up_s;
        let cube = u * u * u;
        Phase {
            angle_rad: full_rate * spin_up_s * cube * u * (u * u - 3.0 * u + 2.5),
            rate_rad_s: full_rate * cube * (6.0 * u * u - 15.0 * u + 10.0),
            acceleration_rad_s2: full_rate / spin_up_s * 30.0 * u * u * (1.0 - u) * (1.0 - u),
        }
    }

    /// Phase alone, rad.
    pub fn angle_rad(&self, time_s: f64) -> f64 {
        self.phase(time_s, time_s).angle_rad
    }

    /// The time at which the phase passes a value at or above 0; absent where it never does.
    pub fn time_of_s(&self, angle_rad: f64) -> Option<f64> {
        let full_rate = TAU * self.frequency_hz;
        if full_rate <= 0.0 {
            return None;
        }
        let Start::Held { delay_s, spin_up_s } = self.start else {
            return Some(angle_rad / full_rate);
        };
        let cruising_s = delay_s + 0.5 * spin_up_s + angle_rad / full_rate;
        if cruising_s >= delay_s + spin_up_s {
            return Some(cruising_s);
        }
        // The phase rises all along the ramp, so halving closes in on the one place.
        let (mut early_s, mut late_s) = (delay_s, delay_s + spin_up_s);
        for _ in 0..100 {
            let middle_s = 0.5 * (early_s + late_s);
            if self.angle_rad(middle_s) < angle_rad {
                early_s = middle_s
            } else {
                late_s = middle_s
            }
        }
        Some(0.5 * (early_s + late_s))
    }

    /// When the gait has come to full speed, s.
    pub fn settled_s(&self) -> f64 {
        match self.start {
            Start::Running => 0.0,
            Start::Held { delay_s, spin_up_s } => delay_s + spin_up_s,
        }
    }

    /// The next time after this one at which the ramp begins or ends.
    pub fn next_break_s(&self, time_s: f64) -> Option<f64> {
        let Start::Held { delay_s, spin_up_s } = self.start else { return None };
        [delay_s, delay_s + spin_up_s].into_iter().find(|&break_s| break_s > time_s)
    }
}
