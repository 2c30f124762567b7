use std::f64::consts::TAU;

use crate::{Clock, Commands, GaitError, Instant, Start};

/// Most rows of a block.
pub(crate) const MOST_ROWS: usize = 65_535;

/// What a start and a return may take of a joint's speed: the rest is left for its load. A loop that
/// takes more itself leaves them half of what it leaves.
const SPEED_SHARE: f64 = 0.9;

/// Longest start or return that is looked for, in periods.
const MOST_PERIODS: usize = 50;

/// Joint angles of a gait at equal steps, rows × axes, rad.
#[derive(Debug, Clone, PartialEq)]
pub struct Blocks {
    /// Between rows, s.
    pub step_s: f64,
    /// From the trigger to the start's first motion, s.
    pub delay_s: f64,
    /// From the trigger's shape to the loop's first row, which comes next.
    pub start: Vec<Vec<f64>>,
    /// One period at full speed from phase 0 on; then its first row comes again.
    pub cycle: Vec<Vec<f64>>,
    /// The row after the loop's last: what its first should be.
    pub closing: Vec<f64>,
    /// From the loop's first row to straight.
    pub stop: Vec<Vec<f64>>,
    /// Heading of the head over the loop, rad.
    pub head_heading_rad: Vec<f64>,
    /// Elevation of the head over the loop, rad.
    pub head_elevation_rad: Vec<f64>,
}

/// How a table begins and ends.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Ends {
    /// Of start and return, s; absent: the start of a held gait is its own, all else as short as
    /// the joints' speeds allow.
    pub start_s: Option<f64>,
    /// From the trigger to the first motion, s; absent: the gait's own, or none.
    pub delay_s: Option<f64>,
    /// Fastest that each axis turns, rad/s; absent where nothing says.
    pub speeds_rad_s: Vec<Option<f64>>,
}

/// Frames in a period, where they are a whole number.
///
/// # Errors
///
/// [`GaitError::PartFrame`] with the two nearest frequencies where they aren't.
pub fn whole_frames(frequency_hz: f64, rate_hz: f64) -> Result<usize, GaitError> {
    let frames = rate_hz / frequency_hz;
    let whole = frames.round();
    if whole >= 2.0 && (frames - whole).abs() <= 1e-6 * frames {
        return Ok(whole as usize);
    }
    let fewer = frames.floor().max(2.0);
    let nearest_hz = [rate_hz / (fewer + 1.0), rate_hz / fewer];
    Err(GaitError::PartFrame { rate_hz, frequency_hz, frames, nearest_hz })
}

impl Blocks {
    /// Samples a gait.
    ///
    /// A gait that is held starts as it flies: in the shape at phase 0, through its own ramp, which
    /// is made longer by less than two steps so that the loop takes over at its first row. One that
    /// runs at release starts straight, swells along a quintic smoothstep and is at phase 0 when
    /// the loop takes over: there it is let go. Both return to straight along the same smoothstep.
    ///
    /// - `n_rows`: of the loop, 2 to 65535
    ///
    /// # Errors
    ///
    /// [`GaitError::Stands`] for a gait without a period, [`GaitError::RowCount`] for a loop, start
    /// or return of too few or too many rows.
    pub fn of(commands: &Commands, n_rows: usize, ends: &Ends) -> Result<Self, GaitError> {
        let period_s = commands.cycle_s().ok_or(GaitError::Stands)?;
        check_rows("the loop", n_rows)?;
        let step_s = period_s / n_rows as f64;
        let steady_s = steady_from_s(commands.clock());
        let mut sampler = Sampler::new(commands);
        let times_s = (0..=n_rows).map(|row| steady_s + step_s * row as f64);
        let mut cycle: Vec<Vec<f64>> =
            times_s.clone().map(|at_s| sampler.angles_rad(at_s)).collect();
        let closing = cycle.pop().expect("a loop has rows");
        let heads = times_s.take(n_rows).map(|at_s| sampler.head_rad(at_s));
        let (head_heading_rad, head_elevation_rad) = heads.unzip();
        let own = match commands.clock().start {
            Start::Held { delay_s, spin_up_s } => Some((delay_s, spin_up_s)),
            Start::Running => None,
        };
        let swell = Swell { cycle: &cycle, step_s };
        let start = match own {
            Some((_, spin_up_s)) => {
                held_start(commands, step_s, n_rows, ends.start_s.unwrap_or(spin_up_s))?
            }
            None => {
                let mut rows = swell.up(swell.steps(ends, Swell::up)?);
                rows.pop();
                rows
            }
        };
        let stop = swell.down(swell.steps(ends, Swell::down)?);
        let delay_s = ends.delay_s.or(own.map(|(delay_s, _)| delay_s)).unwrap_or(0.0);
        Ok(Self {
            step_s,
            delay_s,
            start,
            closing,
            stop,
            head_heading_rad,
            head_elevation_rad,
            cycle,
        })
    }
}

fn check_rows(of: &'static str, rows: usize) -> Result<(), GaitError> {
    let least = if of == "the loop" { 2 } else { 1 };
    if (least..=MOST_ROWS).contains(&rows) {
        Ok(())
    } else {
        Err(GaitError::RowCount { of, rows, least, most: MOST_ROWS })
    }
}

/// The first time at which the phase is whole turns and full speed is reached, s.
pub(crate) fn steady_from_s(clock: &Clock) -> f64 {
    let turns = (clock.angle_rad(clock.settled_s()) / TAU - 1e-9).ceil().max(0.0);
    let from_s = clock.time_of_s(turns * TAU).expect("a gait with a period goes on");
    from_s.max(clock.settled_s())
}

/// The design's own ramp, from its first motion to the loop's first row.
fn held_start(
    commands: &Commands,
    step_s: f64,
    n_rows: usize,
    spin_up_s: f64,
) -> Result<Vec<Vec<f64>>, GaitError> {
    // Half the ramp is what it falls behind: a whole number of steps, so that rows meet the loop's.
    let behind = (0.5 * spin_up_s / step_s - 1e-9).ceil().max(0.0);
    let turns = (behind / n_rows as f64).ceil().max(1.0);
    let rows = behind + turns * n_rows as f64;
    if rows > MOST_ROWS as f64 {
        return Err(GaitError::RowCount {
            of: "the start",
            rows: rows as usize,
            least: 1,
            most: MOST_ROWS,
        });
    }
    let spin_up_s = 2.0 * behind * step_s;
    let slow = commands.starting(Start::Held { delay_s: 0.0, spin_up_s });
    let mut sampler = Sampler::new(&slow);
    Ok((0..rows as usize).map(|row| sampler.angles_rad(step_s * row as f64)).collect())
}

/// A loop that swells up from straight, or down to it.
struct Swell<'a> {
    cycle: &'a [Vec<f64>],
    step_s: f64,
}

impl Swell<'_> {
    /// Ends with the loop's first row.
    fn up(&self, steps: usize) -> Vec<Vec<f64>> {
        let n = self.cycle.len();
        let first = (n - steps % n) % n;
        (0..=steps).map(|row| self.row((first + row) % n, row as f64 / steps as f64)).collect()
    }

    /// Begins with the loop's first row.
    fn down(&self, steps: usize) -> Vec<Vec<f64>> {
        let n = self.cycle.len();
        (0..=steps).map(|row| self.row(row % n, 1.0 - row as f64 / steps as f64)).collect()
    }

    fn row(&self, of_loop: usize, u: f64) -> Vec<f64> {
        let share = u * u * u * (u * (6.0 * u - 15.0) + 10.0);
        self.cycle[of_loop].iter().map(|angle_rad| share * angle_rad).collect()
    }

    /// As many as are asked for, or else as few as the joints' speeds allow.
    fn steps(
        &self,
        ends: &Ends,
        swell: fn(&Self, usize) -> Vec<Vec<f64>>,
    ) -> Result<usize, GaitError> {
        if let Some(start_s) = ends.start_s {
            let steps = (start_s / self.step_s - 1e-9).ceil().clamp(1.0, 1e9) as usize;
            return check_rows("the start or return", steps + 1).map(|()| steps);
        }
        let one_period = self.cycle.len();
        let most = (MOST_PERIODS * one_period).min(MOST_ROWS - 1);
        let of_loop = self.most_share(&[self.cycle, &self.cycle[..1]].concat(), ends);
        // A loop that is itself too fast is told as such; its ends are then of no interest.
        if of_loop == 0.0 || of_loop > 1.0 {
            return Ok(one_period.min(most));
        }
        let share = SPEED_SHARE.max(0.5 * (1.0 + of_loop));
        let keeps = |steps: usize| self.most_share(&swell(self, steps), ends) <= share;
        let doubled = std::iter::successors(Some(1), |steps| Some(2 * steps));
        let tried = doubled.take_while(|&steps| steps < most).chain([most]);
        let Some(mut enough) = tried.into_iter().find(|&steps| keeps(steps)) else {
            return Ok(one_period.min(most));
        };
        let mut too_few = enough / 2;
        while enough - too_few > 1 {
            let middle = (enough + too_few) / 2;
            if keeps(middle) { enough = middle } else { too_few = middle }
        }
        Ok(enough)
    }

    /// Largest share of its joint's speed that a step takes; 0 where no speed is known.
    fn most_share(&self, rows: &[Vec<f64>], ends: &Ends) -> f64 {
        let steps = rows.windows(2).flat_map(|pair| {
            let turns = pair[0].iter().zip(&pair[1]).map(|(from, to)| (to - from).abs());
            turns.zip(&ends.speeds_rad_s)
        });
        let share = |(turn_rad, most_rad_s): (f64, &Option<f64>)| match most_rad_s {
            Some(most_rad_s) if turn_rad > 0.0 => turn_rad / (most_rad_s * self.step_s),
            _ => 0.0,
        };
        steps.map(share).fold(0.0, f64::max)
    }
}

/// Asks commands at one time after another.
struct Sampler<'a> {
    commands: &'a Commands,
    motion: crate::Motion,
    headings_rad: Vec<f64>,
    elevations_rad: Vec<f64>,
}

impl<'a> Sampler<'a> {
    fn new(commands: &'a Commands) -> Self {
        let segments = vec![0.0; commands.n_segments()];
        Self {
            commands,
            motion: commands.room(),
            headings_rad: segments.clone(),
            elevations_rad: segments,
        }
    }

    fn angles_rad(&mut self, at_s: f64) -> Vec<f64> {
        self.commands.rates(Instant::at(at_s), &mut self.motion);
        self.motion.angles_rad[..self.commands.axes().len()].to_vec()
    }

    /// Heading and elevation.
    fn head_rad(&mut self, at_s: f64) -> (f64, f64) {
        self.commands.rates(Instant::at(at_s), &mut self.motion);
        let Self { commands, motion, headings_rad, elevations_rad } = self;
        commands.attitudes(motion, headings_rad, elevations_rad);
        (headings_rad[0], elevations_rad[0])
    }
}
