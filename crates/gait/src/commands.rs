//! A gait laid on one chain.

use undulift_chain::{Axis, AxisOf, Chain, Span, joint_axes, spans};
use undulift_lanes::{f64x4, sin_cos};

use crate::table::RowMotion;
use crate::wave::{SpanMotion, SpanWave};
use crate::{Clock, Gait, GaitError, GaitTable, Interpolation, Pattern, Phase, Start};

/// When a gait is asked.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Instant {
    /// Time after release, s.
    pub time_s: f64,
    /// A time inside the same smooth piece, s: where a piece ends, it says which side is meant.
    pub piece_s: f64,
}

impl Instant {
    /// An instant that belongs to its own piece.
    pub fn at(time_s: f64) -> Self {
        Self { time_s, piece_s: time_s }
    }
}

/// Commands of all axes at one instant, with the room that computing them takes.
#[derive(Debug, Clone, PartialEq)]
pub struct Motion {
    /// rad; yaw axes from the head, then pitch axes from the head.
    pub angles_rad: Vec<f64>,
    /// rad/s, same order.
    pub rates_rad_s: Vec<f64>,
    /// rad/s², same order; filled only when asked for.
    pub accelerations_rad_s2: Vec<f64>,
    lateral: SpanMotion,
    vertical: SpanMotion,
}

/// A gait laid on one chain, ready to be asked at any time.
#[derive(Debug, Clone, PartialEq)]
pub struct Commands {
    clock: Clock,
    phase_rad: f64,
    axes: Vec<AxisOf>,
    n_yaw: usize,
    laid: Laid,
    yaw_spans: Vec<Span>,
    pitch_spans: Vec<Span>,
    length_shares: Vec<f64>,
    joint_has: Vec<[bool; 2]>,
}

#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Laid {
    Wave { lateral: SpanWave, vertical: SpanWave, vertical_ratio: f64, sharpness: f64 },
    Table(GaitTable),
}

impl Commands {
    /// Lays a gait on a chain.
    ///
    /// # Errors
    ///
    /// [`GaitError::ColumnCount`] if a table's columns are not the chain's axes;
    /// [`GaitError::Unusable`] for a frequency that is negative or not finite.
    pub fn new(gait: &Gait, chain: &Chain) -> Result<Self, GaitError> {
        let (lengths_m, joints) = (chain.lengths_m(), chain.joints());
        let axes = joint_axes(joints);
        let frequency_hz = gait.frequency_hz();
        if !(frequency_hz.is_finite() && frequency_hz >= 0.0) {
            return Err(GaitError::Unusable { quantity: "frequency in Hz", value: frequency_hz });
        }
        let yaw_spans = spans(&lengths_m, joints, Axis::Yaw);
        let pitch_spans = spans(&lengths_m, joints, Axis::Pitch);
        let laid = match &gait.pattern {
            Pattern::Wave(wave) => Laid::Wave {
                lateral: SpanWave::lateral(wave, gait.phase_rad, &yaw_spans),
                vertical: SpanWave::vertical(wave, gait.phase_rad, &pitch_spans),
                vertical_ratio: f64::from(wave.vertical_ratio),
                sharpness: wave.sharpness,
            },
            Pattern::Table(table) if table.n_axes() == axes.len() => Laid::Table(table.clone()),
            Pattern::Table(table) => {
                return Err(GaitError::ColumnCount { found: table.n_axes(), axes: axes.len() });
            }
        };
        let body_m: f64 = lengths_m.iter().sum();
        Ok(Self {
            clock: Clock { frequency_hz, start: gait.start },
            phase_rad: gait.phase_rad,
            n_yaw: axes.iter().filter(|of| of.axis == Axis::Yaw).count(),
            axes,
            laid,
            yaw_spans,
            pitch_spans,
            length_shares: lengths_m.iter().map(|length_m| length_m / body_m).collect(),
            joint_has: joints.iter().map(|joint| [joint.yaw, joint.pitch]).collect(),
        })
    }

    /// Which axis each command is for: yaw axes from the head, then pitch axes from the head.
    pub fn axes(&self) -> &[AxisOf] {
        &self.axes
    }

    /// Number of yaw axes, which come first.
    pub fn n_yaw(&self) -> usize {
        self.n_yaw
    }

    /// Time to phase.
    pub fn clock(&self) -> &Clock {
        &self.clock
    }

    /// Length of a cycle at full speed, s; absent at frequency 0.
    pub fn cycle_s(&self) -> Option<f64> {
        (self.clock.frequency_hz > 0.0).then(|| 1.0 / self.clock.frequency_hz)
    }

    pub(crate) fn laid(&self) -> &Laid {
        &self.laid
    }

    /// Segments of the chain.
    pub fn n_segments(&self) -> usize {
        self.length_shares.len()
    }

    /// The same gait with another start.
    pub fn starting(&self, start: Start) -> Self {
        Self { clock: Clock { start, ..self.clock }, ..self.clone() }
    }

    /// Held rows joined by straight lines; absent where rows aren't held.
    pub(crate) fn straightened(&self) -> Option<Self> {
        match &self.laid {
            Laid::Table(table) if table.interpolation() == Interpolation::Hold => {
                let laid = Laid::Table(table.running(Interpolation::Linear));
                Some(Self { laid, ..self.clone() })
            }
            _ => None,
        }
    }

    /// Room for one instant's commands.
    pub fn room(&self) -> Motion {
        let columns = match &self.laid {
            Laid::Wave { .. } => self.axes.len(),
            Laid::Table(table) => table.n_columns(),
        };
        Motion {
            angles_rad: vec![0.0; columns],
            rates_rad_s: vec![0.0; columns],
            accelerations_rad_s2: vec![0.0; columns],
            lateral: SpanMotion::for_spans(self.yaw_spans.len()),
            vertical: SpanMotion::for_spans(self.pitch_spans.len()),
        }
    }

    /// Angles and rates at an instant.
    #[inline]
    pub fn rates(&self, at: Instant, motion: &mut Motion) {
        self.fill::<false>(at, motion);
    }

    /// Angles, rates and accelerations at an instant.
    pub fn accelerations(&self, at: Instant, motion: &mut Motion) {
        self.fill::<true>(at, motion);
    }

    #[inline]
    fn fill<const ACCELERATIONS: bool>(&self, at: Instant, motion: &mut Motion) {
        let phase = self.clock.phase(at.time_s, at.piece_s);
        match &self.laid {
            Laid::Wave { lateral, vertical, vertical_ratio, .. } => {
                fill_spans::<ACCELERATIONS>(lateral, vertical, *vertical_ratio, phase, motion);
                self.differences::<ACCELERATIONS>(motion);
            }
            Laid::Table(table) => self.fill_from_table(table, phase, at, motion),
        }
    }

    /// A joint's command is what the span behind it has more than the span ahead.
    #[inline]
    fn differences<const ACCELERATIONS: bool>(&self, motion: &mut Motion) {
        let parts =
            [(&motion.lateral, 0, self.n_yaw), (&motion.vertical, self.n_yaw, self.axes.len())];
        for (spans, first, end) in parts {
            let differ = |of_spans: &[f64], of_axes: &mut [f64]| {
                let pairs = of_spans.iter().zip(&of_spans[1..]);
                for (command, (ahead, behind)) in of_axes[first..end].iter_mut().zip(pairs) {
                    *command = behind - ahead;
                }
            };
            differ(&spans.angles, &mut motion.angles_rad);
            differ(&spans.rates, &mut motion.rates_rad_s);
            if ACCELERATIONS {
                differ(&spans.accelerations, &mut motion.accelerations_rad_s2);
            }
        }
    }

    fn fill_from_table(&self, table: &GaitTable, phase: Phase, at: Instant, motion: &mut Motion) {
        let piece_rad = self.clock.phase(at.piece_s, at.piece_s).angle_rad;
        let read_at = Phase { angle_rad: phase.angle_rad - self.phase_rad, ..phase };
        let out = RowMotion {
            angles: &mut motion.angles_rad,
            rates: &mut motion.rates_rad_s,
            accelerations: &mut motion.accelerations_rad_s2,
        };
        table.fill(read_at, piece_rad - self.phase_rad, out);
    }

    /// Heading and elevation of each segment along the body's axis, rad; an axis that the chain
    /// lacks counts 0.
    ///
    /// - `motion`: commands of the instant that is meant
    /// - `headings_rad`, `elevations_rad`: shape (n), filled
    pub fn attitudes(&self, motion: &Motion, headings_rad: &mut [f64], elevations_rad: &mut [f64]) {
        match &self.laid {
            Laid::Wave { .. } => {
                spread(&self.yaw_spans, &motion.lateral.angles, headings_rad);
                spread(&self.pitch_spans, &motion.vertical.angles, elevations_rad);
            }
            Laid::Table(table) => {
                let [heading, elevation] =
                    table.head_columns().map(|column| column.map(|k| motion.angles_rad[k]));
                let (yaw_rad, pitch_rad) = motion.angles_rad.split_at(self.n_yaw);
                self.sum_from_nose(0, yaw_rad, heading, headings_rad);
                self.sum_from_nose(1, pitch_rad, elevation, elevations_rad);
            }
        }
    }

    /// Sums of joint angles from the nose, plus the head's own or less their mean by length.
    fn sum_from_nose(
        &self,
        which: usize,
        angles_rad: &[f64],
        head_rad: Option<f64>,
        out: &mut [f64],
    ) {
        let mut of_axis = angles_rad.iter();
        let mut sum_rad = 0.0;
        out[0] = 0.0;
        for (has, segment) in self.joint_has.iter().zip(&mut out[1..]) {
            if has[which] {
                sum_rad += of_axis.next().expect("one angle for each axis");
            }
            *segment = sum_rad;
        }
        let mean_rad: f64 =
            out.iter().zip(&self.length_shares).map(|(sum, share)| sum * share).sum();
        let head_rad = head_rad.unwrap_or(-mean_rad);
        for segment in out {
            *segment += head_rad;
        }
    }

    /// The next time after this one at which the commands or their rates are not smooth.
    pub fn next_break_s(&self, time_s: f64) -> Option<f64> {
        let of_ramp = self.clock.next_break_s(time_s);
        let of_table = match &self.laid {
            Laid::Table(table) if table.interpolation().jumps() => {
                let rows = table.rows_at(self.clock.angle_rad(time_s) - self.phase_rad);
                // A time that rounds onto a row belongs to the piece after it.
                let next_rad = |rows: f64| table.angle_at_rows(rows) + self.phase_rad;
                let next = self.clock.time_of_s(next_rad((rows + 1e-9).floor() + 1.0));
                next.filter(|&next_s| next_s > time_s)
            }
            _ => None,
        };
        [of_ramp, of_table].into_iter().flatten().reduce(f64::min)
    }
}

#[inline]
fn fill_spans<const ACCELERATIONS: bool>(
    lateral: &SpanWave,
    vertical: &SpanWave,
    vertical_ratio: f64,
    phase: Phase,
    motion: &mut Motion,
) {
    let vertical_phase = Phase {
        angle_rad: phase.angle_rad * vertical_ratio,
        rate_rad_s: phase.rate_rad_s * vertical_ratio,
        acceleration_rad_s2: phase.acceleration_rad_s2 * vertical_ratio,
    };
    let (sines, cosines) =
        sin_cos(f64x4::new([phase.angle_rad, vertical_phase.angle_rad, 0.0, 0.0]));
    let (sines, cosines) = (sines.to_array(), cosines.to_array());
    lateral.fill::<ACCELERATIONS>(phase, (sines[0], cosines[0]), &mut motion.lateral);
    vertical.fill::<ACCELERATIONS>(vertical_phase, (sines[1], cosines[1]), &mut motion.vertical);
}

fn spread(spans: &[Span], of_spans: &[f64], of_segments: &mut [f64]) {
    // One span over the whole body means that no joint turns about this axis: it counts 0.
    let lacks_axis = spans.len() == 1;
    for (span, &angle_rad) in spans.iter().zip(of_spans) {
        of_segments[span.first..span.end].fill(if lacks_axis { 0.0 } else { angle_rad });
    }
}
