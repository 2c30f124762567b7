//! Candidates put into the design, flown and held against the limits.

use rayon::prelude::*;
use undulift_design::{Design, DesignErrors, Knob, Robust, Scatter, Tuning, Varied, Wish, set_all};
use undulift_flight::{FlightError, Settings};
use undulift_gait::{Interpolation, Pattern};

use super::outcome::{Outcome, TIMES_OVER, TRAVEL_SHARE};
use super::several::taken;
use super::{Bound, Limit, TuningError, Verdict};

/// Share of a limit on loads or travel that is kept to spare where peaks between looks are missed.
const SPARE: f64 = 0.005;

/// Numbers that vary are rounded to the decimal place below this share of their range.
const ROUNDED: f64 = 1e-6;

/// How closely loads are looked at.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fineness {
    /// Every 10 ms, limits on them and on travel kept with 0.5 % to spare: for searching.
    Coarse,
    /// Every millisecond, against the limits themselves, as in a budget.
    Fine,
}

/// Says what candidates come to.
#[derive(Debug, Clone)]
pub struct Judge {
    design: Design,
    varied: Vec<Varied>,
    wish: Wish,
    limits: Vec<Limit>,
    robust: Option<(Scatter, Robust)>,
    seed: u64,
    settings: Settings,
}

impl Judge {
    /// - `seed`: of launches that differ, the same for every candidate
    ///
    /// # Errors
    ///
    /// [`TuningError::SeveralWishes`]; and where loads are asked for of a gait that has none.
    pub fn new(
        design: &Design,
        tuning: &Tuning,
        seed: u64,
        settings: Settings,
    ) -> Result<Self, TuningError> {
        let [wish] = tuning.wishes.as_slice() else {
            return Err(TuningError::SeveralWishes { wishes: tuning.wishes.len() });
        };
        let judge = Self {
            design: design.clone(),
            varied: tuning.vary.clone(),
            wish: wish.clone(),
            limits: Limit::all(design, tuning),
            robust: tuning.robust.map(|robust| (Scatter::of(design), robust)),
            seed,
            settings,
        };
        match &design.glider.gait.pattern {
            Pattern::Table(table)
                if judge.asks_for_loads() && table.interpolation() == Interpolation::Linear =>
            {
                Err(FlightError::Impulses.into())
            }
            _ => Ok(judge),
        }
    }

    /// The design that is tuned, as it was read.
    pub fn design(&self) -> &Design {
        &self.design
    }

    /// What may vary.
    pub fn varied(&self) -> &[Varied] {
        &self.varied
    }

    /// What is wanted.
    pub fn wish(&self) -> &Wish {
        &self.wish
    }

    /// What is required.
    pub fn limits(&self) -> &[Limit] {
        &self.limits
    }

    /// Of the random numbers.
    pub fn seed(&self) -> u64 {
        self.seed
    }

    /// Flights that a judgement takes.
    pub fn launches(&self) -> u32 {
        self.robust.as_ref().map_or(1, |(_, robust)| robust.launches)
    }

    /// The same with one limit eased by a share of its scale.
    pub(crate) fn with_eased_limit(&self, limit: usize, share: f64) -> Self {
        let mut judge = self.clone();
        judge.limits[limit].bound = judge.limits[limit].bound.eased(share);
        judge
    }

    /// The same with other ends for a number that varies.
    pub(crate) fn with_ends(&self, varied: usize, low: f64, high: f64) -> Self {
        let mut judge = self.clone();
        (judge.varied[varied].low, judge.varied[varied].high) = (low, high);
        judge
    }

    /// The design's own numbers in the unit box, those outside of their ends moved to the nearest.
    pub fn start(&self) -> Vec<f64> {
        let own: Vec<f64> = self.varied.iter().map(|one| one.knob.value(&self.design)).collect();
        self.unit(&own)
    }

    /// Numbers of a candidate in the unit box.
    pub fn unit(&self, values: &[f64]) -> Vec<f64> {
        self.varied.iter().zip(values).map(|(one, value)| unit_of(one, *value)).collect()
    }

    /// Numbers of a candidate in the file's units, rounded.
    pub fn values(&self, unit: &[f64]) -> Vec<f64> {
        self.varied.iter().zip(unit).map(|(one, unit)| value_of(one, *unit)).collect()
    }

    /// The design with a candidate's numbers in it.
    ///
    /// # Errors
    ///
    /// What reading a file with them would refuse.
    pub fn design_with(&self, values: &[f64]) -> Result<Design, DesignErrors> {
        let mut design = self.design.clone();
        let knobs = self.varied.iter().map(|one| &one.knob);
        let changes: Vec<(&Knob, f64)> = knobs.zip(values.iter().copied()).collect();
        set_all(&mut design, &changes)?;
        Ok(design)
    }

    /// What a candidate comes to.
    pub fn judge(&self, values: Vec<f64>, fineness: Fineness) -> Verdict {
        match self.design_with(&values) {
            Ok(design) => self.verdict(&design, values, fineness),
            Err(_) => self.unjudged(values),
        }
    }

    /// What the design comes to as it was read.
    pub fn before(&self) -> Verdict {
        let own = self.varied.iter().map(|one| one.knob.value(&self.design)).collect();
        self.verdict(&self.design, own, Fineness::Fine)
    }

    /// Refuses a wish that nothing moves: the start and, for each number that varies, designs with
    /// it at a quarter and three quarters of its range are tried.
    ///
    /// # Errors
    ///
    /// [`TuningError::ConstantWish`].
    pub fn check_wish(&self) -> Result<(), TuningError> {
        let start = self.start();
        let mut units = vec![start.clone()];
        for idx in 0..start.len() {
            units.extend([0.25, 0.75].map(|at| {
                let mut unit = start.clone();
                unit[idx] = at;
                unit
            }));
        }
        let wish = |unit: &Vec<f64>| self.judge(self.values(unit), Fineness::Coarse).wish;
        let wishes: Vec<f64> = units.par_iter().filter_map(wish).collect();
        match wishes.first() {
            Some(&value) if wishes.len() > 1 && wishes.iter().all(|other| *other == value) => {
                let (key, designs) = (self.wish.key.clone(), units.len());
                Err(TuningError::ConstantWish { key, value, designs })
            }
            _ => Ok(()),
        }
    }

    fn asks_for_loads(&self) -> bool {
        self.wish.key.starts_with("budget.") || self.limits.iter().any(Limit::is_of_loads)
    }

    fn verdict(&self, design: &Design, values: Vec<f64>, fineness: Fineness) -> Verdict {
        let with_loads = self.asks_for_loads();
        let fly = |design: &Design| Outcome::of(design, &self.settings, fineness, with_loads).ok();
        let launches: Vec<Option<Outcome>> = match &self.robust {
            None => vec![fly(design)],
            Some((scatter, robust)) => (0..u64::from(robust.launches))
                .into_par_iter()
                .map(|launch| fly(&scatter.launch(design, self.seed, launch).0))
                .collect(),
        };
        if launches.iter().all(Option::is_none) {
            return self.unjudged(values);
        }
        let wish = self.taken(&launches, &self.wish.key, self.wish.maximise);
        let limits: Vec<Option<f64>> = self
            .limits
            .iter()
            .map(|limit| {
                let high_is_good = matches!(limit.bound, Bound::Least(_));
                self.taken(&launches, &limit.key, high_is_good)
            })
            .collect();
        let missed = self.limits.iter().zip(&limits).map(|(limit, value)| match fineness {
            Fineness::Coarse => with_spare(limit).miss(*value),
            Fineness::Fine => limit.miss(*value),
        });
        let violation = missed.sum::<f64>() + if wish.is_none() { 1.0 } else { 0.0 };
        Verdict { values, wish, limits, violation }
    }

    /// One value of all launches.
    fn taken(&self, launches: &[Option<Outcome>], key: &str, high_is_good: bool) -> Option<f64> {
        let value = |launch: &Option<Outcome>| launch.as_ref().and_then(|of| of.value(key));
        match &self.robust {
            None => value(&launches[0]),
            Some((_, robust)) => {
                taken(launches.iter().map(value).collect(), robust.take, high_is_good)
            }
        }
    }

    fn unjudged(&self, values: Vec<f64>) -> Verdict {
        let limits = vec![None; self.limits.len()];
        Verdict { values, wish: None, limits, violation: f64::INFINITY }
    }
}

/// A limit on what peaks between looks may move, kept with something to spare; what is 1 where all
/// is well stays as it is.
fn with_spare(limit: &Limit) -> Limit {
    let is_verdict = [TIMES_OVER, "budget.passes"].contains(&limit.key.as_str());
    let moves = limit.key == TRAVEL_SHARE || limit.is_of_loads() && !is_verdict;
    let bound = if moves { limit.bound.eased(-SPARE) } else { limit.bound };
    Limit { bound, ..limit.clone() }
}

fn unit_of(one: &Varied, value: f64) -> f64 {
    let unit = match one.knob.is_whole() {
        true => (value - one.low + 0.5) / (one.high - one.low + 1.0),
        false => (value - one.low) / (one.high - one.low),
    };
    unit.clamp(0.0, 1.0)
}

fn value_of(one: &Varied, unit: f64) -> f64 {
    let range = one.high - one.low;
    if one.knob.is_whole() {
        // Each whole number has the same share of the box.
        return (one.low + (unit * (range + 1.0)).floor()).min(one.high);
    }
    let value = one.low + unit * range;
    let digits = (-(range * ROUNDED).log10()).ceil().clamp(0.0, 17.0) as usize;
    let rounded: f64 = format!("{value:.digits$}").parse().unwrap_or(value);
    rounded.clamp(one.low, one.high)
}
