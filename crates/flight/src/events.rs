//! Where in a step a flight ends.

use crate::End;
use crate::course::Flying;
use crate::crossing::first_at_or_below_zero;
use crate::flying::{Look, PARTS};

/// How closely landing and inversion are located on the interpolant, s.
const EVENT_S: f64 = 1e-11;

impl Flying {
    /// Looks along the step that follows the last look; returns its end if the flight ends in it.
    pub(crate) fn look_along(&mut self, step_end: Look) -> Option<(f64, End)> {
        let start = *self.looks.last().expect("the release is looked at first");
        let part_s = (step_end.time_s - start.time_s) / PARTS as f64;
        for part in 1..=PARTS {
            let before = *self.looks.last().expect("never empty");
            let look = match part {
                PARTS => step_end,
                _ => self.look(start.time_s + part_s * part as f64),
            };
            let landed_s = self.landing_between(&before, &look);
            let inverted_s = self.inversion_between(&before, &look);
            if let Some(event) = self.first_end(landed_s, inverted_s) {
                // The last step is looked at anew, up to the end only.
                self.looks.truncate(self.looks.len() + 1 - part);
                self.look_at_last_step(start.time_s, event.0);
                return Some(event);
            }
            self.looks.push(look);
        }
        None
    }

    fn look_at_last_step(&mut self, from_s: f64, end_s: f64) {
        let part_s = (end_s - from_s) / PARTS as f64;
        for part in 1..=PARTS {
            let to_s = if part == PARTS { end_s } else { from_s + part_s * part as f64 };
            let look = self.look(to_s);
            self.looks.push(look);
        }
    }

    fn first_end(&mut self, landed_s: Option<f64>, inverted_s: Option<f64>) -> Option<(f64, End)> {
        if let Some(inverted_s) = inverted_s {
            let landed_before = landed_s.is_some_and(|landed_s| landed_s <= inverted_s);
            if !landed_before {
                self.inverted_at_s.get_or_insert(inverted_s);
                if !self.settings.through_inversion {
                    return Some((inverted_s, End::Inverted));
                }
            }
        }
        landed_s.map(|landed_s| (landed_s, End::Landed))
    }

    fn landing_between(&self, before: &Look, after: &Look) -> Option<f64> {
        let floor_m = self.settings.floor_m;
        if after.height_m - floor_m > self.reach_m {
            return None;
        }
        let clearance_m = |time_s: f64| {
            let at = self.trajectory.instant(time_s);
            let state = self.trajectory.state(time_s);
            self.equations.borrow_mut().lowest_corner_m(at, &state) - floor_m
        };
        (clearance_m(after.time_s) <= 0.0)
            .then(|| first_at_or_below_zero([before.time_s, after.time_s], EVENT_S, clearance_m))
    }

    fn inversion_between(&self, before: &Look, after: &Look) -> Option<f64> {
        let turns_over = before.attitude.uprightness() > 0.0 && after.attitude.uprightness() <= 0.0;
        turns_over.then(|| {
            let uprightness = |time_s| self.look(time_s).attitude.uprightness();
            first_at_or_below_zero([before.time_s, after.time_s], EVENT_S, uprightness)
        })
    }
}
