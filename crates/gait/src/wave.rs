//! The wave: heading and elevation of the body's spans, and their exact derivatives.

use std::f64::consts::TAU;

use undulift_chain::Span;
use undulift_lanes::{CmpGe, LANES, f64x4, lanes, polynomial};

use crate::Phase;

/// Below this sharpness the hyperbolic tangent is replaced by its series, which is then exact to
/// rounding and keeps the digits that a quotient of two small numbers loses.
const SERIES_SHARPNESS: f64 = 1e-3;

/// 1/k!, highest first: the exponential's series, exact to rounding below ¼.
const EXPONENTIAL: [f64; 12] = [
    1.0 / 39_916_800.0,
    1.0 / 3_628_800.0,
    1.0 / 362_880.0,
    1.0 / 40_320.0,
    1.0 / 5040.0,
    1.0 / 720.0,
    1.0 / 120.0,
    1.0 / 24.0,
    1.0 / 6.0,
    0.5,
    1.0,
    1.0,
];

/// A wave of heading, and one of elevation, travelling from nose to tail.
///
/// θ(ξ, t) = 2πkξ − Φ(t) + φ,
/// heading η = e(ξ)·A_l·W_σ(cos θ) + β(ξ − ½),
/// elevation ε = e(ξ)·A_v·cos(νθ + φ_v) + α_a(ξ − ½).
///
/// # Source
///
/// Serpenoid curve (σ = 0): Hirose, *Biologically Inspired Robots*, Oxford 1993.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wave {
    /// f, Hz.
    pub frequency_hz: f64,
    /// A_l.
    pub lateral_amplitude_rad: f64,
    /// k: waves on the body.
    pub lateral_waves: f64,
    /// σ ≥ 0: 0 is the serpenoid heading, more gives straighter runs and tighter bends.
    pub sharpness: f64,
    /// A_v.
    pub vertical_amplitude_rad: f64,
    /// ν: vertical waves for each lateral one.
    pub vertical_ratio: u32,
    /// φ_v.
    pub vertical_lag_rad: f64,
    /// β: positive curves the body to the right going forward.
    pub turn_rad: f64,
    /// α_a: positive stands the middle up and hangs both ends down.
    pub arch_rad: f64,
    /// e(ξ).
    pub taper: Taper,
}

/// Smaller waves toward the ends.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Taper {
    /// Factor at the nose.
    pub head: f64,
    /// Fraction of the body over which it grows to 1.
    pub head_length: f64,
    /// Factor at the tail.
    pub tail: f64,
    /// Fraction of the body over which it falls from 1.
    pub tail_length: f64,
}

impl Default for Taper {
    fn default() -> Self {
        Self { head: 1.0, head_length: 0.0, tail: 1.0, tail_length: 0.0 }
    }
}

impl Taper {
    /// Factor on the waves at a fraction of the body from the nose.
    pub fn at(&self, fraction: f64) -> f64 {
        tip_factor(self.head, self.head_length, fraction)
            * tip_factor(self.tail, self.tail_length, 1.0 - fraction)
    }
}

fn tip_factor(tip: f64, length: f64, from_tip: f64) -> f64 {
    if from_tip >= length {
        return 1.0;
    }
    let u = from_tip / length;
    tip + (1.0 - tip) * u * u * (3.0 - 2.0 * u)
}

/// One of a wave's two parts laid on its spans, four spans to a register.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct SpanWave {
    profile: Crest,
    fours: Vec<FourSpans>,
}

#[derive(Debug, Clone, Copy, PartialEq)]
struct FourSpans {
    amplitude: f64x4,
    cos_offset: f64x4,
    sin_offset: f64x4,
    steady: f64x4,
}

/// W_σ and what its derivatives need.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Crest {
    /// W_0(c) = c.
    Round,
    /// c(1 − σ²c²/3 + 2σ⁴c⁴/15) over its value at 1.
    Nearly { third: f64, fifth: f64, scale: f64 },
    /// tanh(σc)/tanh(σ).
    Sharp { sharpness: f64, scale: f64, squarings: u32 },
}

/// Angle, rate and acceleration of each span, padded to whole registers.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct SpanMotion {
    pub(crate) angles: Vec<f64>,
    pub(crate) rates: Vec<f64>,
    pub(crate) accelerations: Vec<f64>,
}

impl SpanMotion {
    pub(crate) fn for_spans(n_spans: usize) -> Self {
        let padded = vec![0.0; n_spans.next_multiple_of(LANES)];
        Self { angles: padded.clone(), rates: padded.clone(), accelerations: padded }
    }
}

impl SpanWave {
    pub(crate) fn lateral(wave: &Wave, phase_rad: f64, spans: &[Span]) -> Self {
        let offset = |at: f64| TAU * wave.lateral_waves * at + phase_rad;
        let amplitude = wave.lateral_amplitude_rad;
        Self::new(Crest::new(wave.sharpness), &wave.taper, spans, amplitude, wave.turn_rad, offset)
    }

    pub(crate) fn vertical(wave: &Wave, phase_rad: f64, spans: &[Span]) -> Self {
        let ratio = f64::from(wave.vertical_ratio);
        let offset =
            |at: f64| ratio * (TAU * wave.lateral_waves * at + phase_rad) + wave.vertical_lag_rad;
        let amplitude = wave.vertical_amplitude_rad;
        Self::new(Crest::Round, &wave.taper, spans, amplitude, wave.arch_rad, offset)
    }

    fn new(
        profile: Crest,
        taper: &Taper,
        spans: &[Span],
        amplitude_rad: f64,
        bend_rad: f64,
        offset_rad: impl Fn(f64) -> f64,
    ) -> Self {
        let four = |spans: &[Span]| FourSpans {
            amplitude: lanes(spans, |span| amplitude_rad * taper.at(span.at_fraction)),
            cos_offset: lanes(spans, |span| offset_rad(span.at_fraction).cos()),
            sin_offset: lanes(spans, |span| offset_rad(span.at_fraction).sin()),
            steady: lanes(spans, |span| bend_rad * (span.at_fraction - 0.5)),
        };
        Self { profile, fours: spans.chunks(LANES).map(four).collect() }
    }

    /// Fills the spans' angles and rates, and the accelerations where asked.
    ///
    /// - `phase`: of this part's own wave, so ν times the gait's for the vertical one
    /// - `sin_cos`: of that phase
    #[inline]
    pub(crate) fn fill<const ACCELERATIONS: bool>(
        &self,
        phase: Phase,
        sin_cos: (f64, f64),
        motion: &mut SpanMotion,
    ) {
        let (sin_phase, cos_phase) = (f64x4::splat(sin_cos.0), f64x4::splat(sin_cos.1));
        let rate = f64x4::splat(phase.rate_rad_s);
        let outputs = motion
            .angles
            .chunks_exact_mut(LANES)
            .zip(motion.rates.chunks_exact_mut(LANES))
            .zip(motion.accelerations.chunks_exact_mut(LANES));
        for (four, ((angles, rates), accelerations)) in self.fours.iter().zip(outputs) {
            // cos θ and sin θ with θ = offset − Φ.
            let cosine = four.cos_offset * cos_phase + four.sin_offset * sin_phase;
            let sine = four.sin_offset * cos_phase - four.cos_offset * sin_phase;
            let [value, slope, bend] = self.profile.at(cosine);
            let cosine_rate = sine * rate;
            angles.copy_from_slice((four.amplitude * value + four.steady).as_array_ref());
            rates.copy_from_slice((four.amplitude * slope * cosine_rate).as_array_ref());
            if ACCELERATIONS {
                let cosine_acceleration =
                    sine * f64x4::splat(phase.acceleration_rad_s2) - cosine * rate * rate;
                let acceleration = four.amplitude
                    * (slope * cosine_acceleration + bend * cosine_rate * cosine_rate);
                accelerations.copy_from_slice(acceleration.as_array_ref());
            }
        }
    }
}

impl Crest {
    fn new(sharpness: f64) -> Self {
        let square = sharpness * sharpness;
        if sharpness == 0.0 {
            Crest::Round
        } else if sharpness < SERIES_SHARPNESS {
            let (third, fifth) = (-square / 3.0, 2.0 * square * square / 15.0);
            Crest::Nearly { third, fifth, scale: 1.0 / (1.0 + third + fifth) }
        } else {
            // e^(−2σ|c|) comes from a short series at an argument below ¼, squared back up.
            let squarings = (8.0 * sharpness).log2().ceil().max(0.0) as u32;
            Crest::Sharp { sharpness, scale: 1.0 / sharpness.tanh(), squarings }
        }
    }

    /// W, dW/dc and d²W/dc² at c = cos θ.
    #[inline]
    fn at(&self, cosine: f64x4) -> [f64x4; 3] {
        let (zero, one) = (f64x4::splat(0.0), f64x4::splat(1.0));
        match *self {
            Crest::Round => [cosine, one, zero],
            Crest::Nearly { third, fifth, scale } => {
                let (third, fifth, scale) =
                    (f64x4::splat(third), f64x4::splat(fifth), f64x4::splat(scale));
                let square = cosine * cosine;
                [
                    scale * cosine * (one + square * (third + square * fifth)),
                    scale * (one + square * (third * 3.0 + square * fifth * 5.0)),
                    scale * cosine * (third * 6.0 + square * fifth * 20.0),
                ]
            }
            Crest::Sharp { sharpness, scale, squarings } => {
                let reduced = -2.0 * sharpness / f64::from(1_u32 << squarings);
                let mut decay = polynomial(cosine.abs() * f64x4::splat(reduced), &EXPONENTIAL);
                for _ in 0..squarings {
                    decay *= decay;
                }
                let (sharpness, scale) = (f64x4::splat(sharpness), f64x4::splat(scale));
                let upright = (one - decay) / (one + decay);
                let tanh = cosine.cmp_ge(zero).blend(upright, -upright);
                let slope = scale * sharpness * (one - tanh * tanh);
                [scale * tanh, slope, sharpness * tanh * slope * -2.0]
            }
        }
    }
}
