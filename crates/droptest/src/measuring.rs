//! What to film, and with what.

use undulift_design::{Camera, Design};
use undulift_gait::Pattern;

/// Frames that a cycle of the faster wave should have, and markers that one of its lengths should:
/// several times the two without which it can't be told from a slower one.
const FRAMES_PER_CYCLE: f64 = 20.0;
const MARKERS_PER_WAVE: f64 = 4.0;

/// What a camera must see.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Measuring {
    /// Of the faster wave; 0 for a gait that stands still, Hz.
    pub wave_hz: f64,
    /// Frames a second that show it well.
    pub frames_needed_per_s: f64,
    /// Its waves on the body; absent for a table.
    pub waves: Option<f64>,
    /// Markers along the body that show it well; one an end and a joint tell all there is.
    pub markers_needed: u32,
    /// The camera's own, where there is one.
    pub camera: Option<Camera>,
}

impl Measuring {
    /// For a design's gait.
    pub fn of(design: &Design, camera: Option<Camera>) -> Self {
        let gait = &design.glider.gait;
        let segments = design.glider.chain.n_segments();
        let (times, waves) = match &gait.pattern {
            Pattern::Wave(wave) => {
                let vertical = wave.vertical_amplitude_rad != 0.0;
                let ratio = if vertical { f64::from(wave.vertical_ratio) } else { 1.0 };
                (ratio.max(1.0), Some(wave.lateral_waves.abs() * ratio.max(1.0)))
            }
            // A table may hold anything; twice its frequency is a wave's usual vertical one.
            Pattern::Table(_) => (2.0, None),
        };
        let wave_hz = times * gait.frequency_hz();
        let all = segments as f64 + 1.0;
        let markers = waves.map_or(all, |waves| (MARKERS_PER_WAVE * waves + 1.0).ceil().min(all));
        Self {
            wave_hz,
            frames_needed_per_s: FRAMES_PER_CYCLE * wave_hz,
            waves,
            markers_needed: (markers as u32).max(2),
            camera,
        }
    }

    /// Whether the camera is fast enough.
    pub fn is_fast_enough(&self) -> Option<bool> {
        self.camera.map(|camera| camera.frames_per_s >= self.frames_needed_per_s)
    }

    /// Whether there are enough markers.
    pub fn has_markers(&self) -> Option<bool> {
        self.camera.map(|camera| camera.markers >= self.markers_needed)
    }
}
