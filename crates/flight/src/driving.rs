//! Drives on their way through a flight: frames, faults, voltage.

use undulift_chain::Chain;
use undulift_gait::{Instant, Motion};
use undulift_servo::{Load, Servo, Supply, Winding};

use crate::drives::Failure;
use crate::state::LooseAxis;
use crate::supply::Feed;
use crate::turning::{By, Hybrid, Turned, Turning};
use crate::{Drives, Equations, Fault, Mode, State};

/// Between looks at the battery where firmware gives no frames, s.
const FRAME_S: f64 = 0.02;

/// Units of a driven axis's angle, rad, and of its rate, in ω₀/full_at. Its loop takes errors away
/// again, so they may be larger than the body's, which stay: so much that a driven flight still errs
/// less than a commanded one does at the same tolerance (measured on five designs: 0.1 to 2 mm
/// against 0.3 to 4 mm, and less than its own commanded flight on each).
const ANGLE_UNIT_RAD: f64 = 3.0;
const RATE_UNITS: f64 = 30.0;

/// Drives on their way.
#[derive(Debug)]
pub(crate) struct Driving {
    pub(crate) hybrid: Hybrid,
    servos: Vec<Servo>,
    /// Of each servo, at the air's temperature, Ω.
    windings_ohm: Vec<f64>,
    /// Now, by axis.
    modes: Vec<Mode>,
    /// Still to come, the first last.
    faults: Vec<Fault>,
    feed: Option<Feed>,
    /// Commands hold over a frame.
    holds: bool,
    frame_s: f64,
    /// The next to begin.
    frame: u64,
    /// In this frame: at the servos, V, and what they are told, by axis, rad.
    voltage_v: Option<f64>,
    told_rad: Option<Vec<f64>>,
}

impl Driving {
    /// - `air_k`: temperature of the air
    pub(crate) fn new(chain: &Chain, drives: &Drives, air_k: f64) -> Self {
        let mut faults = drives.faults.clone();
        faults.sort_by(|a, b| b.at_s.total_cmp(&a.at_s));
        let winding_ohm = |servo| Winding::new(servo, air_k).resistance_ohm();
        Self {
            hybrid: Hybrid::new(chain, &drives.servos, drives.modes.len()),
            servos: drives.servos.clone(),
            windings_ohm: drives.servos.iter().map(winding_ohm).collect(),
            modes: drives.modes.clone(),
            faults,
            feed: drives.battery.as_ref().map(Feed::new),
            holds: drives.update_hz.is_some(),
            frame_s: drives.update_hz.map_or(FRAME_S, |update_hz| 1.0 / update_hz),
            frame: 0,
            voltage_v: None,
            told_rad: None,
        }
    }

    /// When something begins anew: a fault or a frame.
    pub(crate) fn next_break_s(&self) -> Option<f64> {
        let fault_s = self.faults.last().map(|fault| fault.at_s);
        let frame_s = self.has_frames().then_some(self.frame as f64 * self.frame_s);
        [fault_s, frame_s].into_iter().flatten().reduce(f64::min)
    }

    /// Whether anything changes from frame to frame.
    fn has_frames(&self) -> bool {
        let driven = |mode: &Mode| matches!(mode, Mode::Driven { .. });
        (self.holds || self.feed.is_some()) && self.modes.iter().any(driven)
    }

    /// What turns loose axes from an instant on; absent where all follow their commands.
    ///
    /// - `state`: at that instant; axes that come loose now are added, what is locked now stands
    pub(crate) fn start_piece(
        &mut self,
        equations: &mut Equations,
        at: Instant,
        state: &mut State,
    ) -> Option<Turning> {
        while let Some(fault) = self.faults.pop_if(|fault| fault.at_s <= at.time_s) {
            self.modes[fault.axis_idx] = match fault.failure {
                Failure::Limp => Mode::Limp,
                Failure::Locked => Mode::Locked,
            };
        }
        self.add_loose_axes(equations.motion(at), state);
        if state.loose.is_empty() {
            return None;
        }
        let moves =
            |axis: &&LooseAxis| self.modes[axis.axis_idx] == Mode::Locked && axis.rate_rad_s != 0.0;
        if state.loose.iter().any(|axis| moves(&axis)) {
            self.hybrid.stop(equations, &self.modes, at, state);
        }
        if self.has_frames() && at.time_s >= self.frame as f64 * self.frame_s {
            self.start_frame(equations.motion(at), state);
        }
        let free_rad_s = equations.units().rate_rad_s();
        let turned = |axis: &LooseAxis| self.turned(axis.axis_idx, free_rad_s);
        let axes = state.loose.iter().map(turned).collect();
        Some(Turning { axes, told_rad: self.told_rad.clone() })
    }

    fn add_loose_axes(&self, commands: &Motion, state: &mut State) {
        for (axis_idx, mode) in self.modes.iter().enumerate() {
            let known = state.loose.iter().any(|axis| axis.axis_idx == axis_idx);
            if *mode != Mode::Commanded && !known {
                state.loose.push(LooseAxis {
                    axis_idx,
                    angle_rad: commands.angles_rad[axis_idx],
                    rate_rad_s: commands.rates_rad_s[axis_idx],
                });
            }
        }
    }

    fn start_frame(&mut self, commands: &Motion, state: &State) {
        if self.holds {
            self.told_rad = Some(commands.angles_rad.clone());
        }
        if let Some(mut feed) = self.feed.take() {
            let seconds = if self.frame == 0 { 0.0 } else { self.frame_s };
            let load_at = |voltage_v| self.load(commands, state, voltage_v);
            self.voltage_v = Some(feed.voltage_v(seconds, load_at));
            self.feed = Some(feed);
        }
        self.frame += 1;
    }

    /// What all servos take at a voltage.
    fn load(&self, commands: &Motion, state: &State, voltage_v: f64) -> Load {
        let mut load = Load::default();
        for axis in &state.loose {
            let Mode::Driven { servo_idx } = self.modes[axis.axis_idx] else { continue };
            let servo = &self.servos[servo_idx];
            let supply = Supply { voltage_v, winding_ohm: self.windings_ohm[servo_idx] };
            let error_rad = commands.angles_rad[axis.axis_idx] - axis.angle_rad;
            let torque_nm = servo.loop_torque_nm(error_rad, axis.rate_rad_s, supply);
            load.motors_w += servo.motor_power_w(torque_nm, axis.rate_rad_s, supply.winding_ohm);
            load.idle_a += servo.idle_current_a;
        }
        load
    }

    /// - `free_rad_s`: unit of the rate of an axis that nothing holds
    fn turned(&self, axis_idx: usize, free_rad_s: f64) -> Turned {
        let (mut unit_rad, mut unit_rad_s) = (1.0, free_rad_s);
        let by = match self.modes[axis_idx] {
            Mode::Driven { servo_idx } => {
                let servo = &self.servos[servo_idx];
                let own_v = servo.at_voltage_v;
                // A loop takes away an error of rate in some full_at/ω₀, before it moves much.
                let loop_rad_s = servo.no_load_speed_rad_s / servo.position_loop.full_at_rad;
                unit_rad = ANGLE_UNIT_RAD;
                unit_rad_s = free_rad_s.max(RATE_UNITS * loop_rad_s);
                let supply = Supply {
                    voltage_v: self.voltage_v.unwrap_or(own_v),
                    winding_ohm: self.windings_ohm[servo_idx],
                };
                By::Servo {
                    fed: servo.fed_loop(supply),
                    rotor_kg_m2: servo.rotor_inertia_at_output_kg_m2,
                }
            }
            Mode::Limp => By::Nothing,
            Mode::Locked | Mode::Commanded => By::Lock,
        };
        Turned { axis_idx, by, unit_rad, unit_rad_s }
    }
}
