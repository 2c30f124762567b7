//! One candidate: servos put into the design, flown, and asked whether they can do it.

use nalgebra::Vector3;
use undulift_chain::{Axis, AxisOf, Carried, Chain, PointMass};
use undulift_design::Design;
use undulift_flight::{
    Flight, FlightError, Glider, Settings, Summary, fly, histories as joint_histories, summary,
};
use undulift_servo::{Assumption, AxisHistory, Conditions, Histories, Servo, budget};

use crate::asked::{Drops, conditions, servo_histories};
use crate::misses::{Missed, of_flight, of_travel};
use crate::{Choice, SizingError, Split, driven};

/// Servos for a design, and what they come to.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidate {
    /// Which go where.
    pub choice: Choice,
    /// All of them.
    pub servos_kg: f64,
    /// The whole robot.
    pub mass_kg: f64,
    /// All servos; absent where one has no price.
    pub price: Option<f64>,
    /// Distance over drop; absent unless it came down.
    pub glide_ratio: Option<f64>,
    /// Horizontal, m.
    pub distance_m: f64,
    /// Of all servos; absent where the flight ended so that no budget was made.
    pub least_margin: Option<f64>,
    /// Limits that are missed.
    pub misses: Vec<String>,
    /// By how many times the worst is, 1 where none is; infinite where no factor tells it.
    pub times_over: f64,
    /// What the budget took for granted.
    pub assumptions: Vec<Assumption>,
}

impl Candidate {
    /// Whether nothing is missed.
    pub fn passes(&self) -> bool {
        self.misses.is_empty()
    }
}

/// Where candidates are tried.
pub(crate) struct Bench<'a> {
    design: &'a Design,
    pub(crate) shelf: &'a [Servo],
    pub(crate) driven: [Vec<usize>; 2],
    conditions: Conditions,
    settings: Settings,
}

impl<'a> Bench<'a> {
    pub(crate) fn new(
        design: &'a Design,
        shelf: &'a [Servo],
        settings: Settings,
    ) -> Result<Self, SizingError> {
        let conditions = conditions(design, Drops::default());
        Ok(Self { design, shelf, driven: driven(design)?, conditions, settings })
    }

    /// All choices with one kind of servo for each axis.
    pub(crate) fn uniform(&self) -> Vec<Choice> {
        let of_axis = |at: usize| -> Vec<Option<Split>> {
            let servos = 0..self.shelf.len();
            match self.driven[at].is_empty() {
                true => vec![None],
                false => servos.map(|servo| Some(Split::uniform(servo))).collect(),
            }
        };
        let (yaw, pitch) = (of_axis(0), of_axis(1));
        let pairs = yaw.iter().flat_map(|yaw| pitch.iter().map(|pitch| [*yaw, *pitch]));
        pairs.map(|splits| Choice { splits }).collect()
    }

    /// Flies a choice and makes its budget.
    ///
    /// - `every_s`: between the instants that the budget is made from
    pub(crate) fn judge(&self, choice: Choice, every_s: f64) -> Result<Candidate, SizingError> {
        let (glider, mut flight) = self.fly(choice)?;
        let flown = summary(&glider, &mut flight);
        let mut missed = of_flight(self.design, &flown);
        let mut candidate = self.candidate(choice, &glider, &flown);
        // Nothing that servos could do would help a flight that isn't one.
        if missed.iter().all(|(_, times_over)| times_over.is_finite()) {
            let histories = self.histories(choice, &glider, &mut flight, every_s)?;
            let found = budget(self.shelf, &histories, &self.conditions)?;
            missed.extend(of_travel(self.design, &flight));
            missed.extend(found.misses.iter().map(|miss| (miss.to_string(), miss.times_over)));
            candidate.least_margin = found.least_margin;
            candidate.assumptions = found.assumptions;
        }
        candidate.note(missed);
        Ok(candidate)
    }

    fn candidate(&self, choice: Choice, glider: &Glider, flown: &Summary) -> Candidate {
        let price_of = |at: usize| match choice.splits[at] {
            Some(split) => split
                .sum(self.driven[at].len(), |servo| self.shelf[servo].price.unwrap_or(f64::NAN)),
            None => 0.0,
        };
        let price = price_of(0) + price_of(1);
        Candidate {
            choice,
            servos_kg: glider.chain.mass_split().servos_kg,
            mass_kg: flown.mass_kg,
            price: (!price.is_nan()).then_some(price),
            glide_ratio: flown.glide_ratio,
            distance_m: flown.distance_m,
            least_margin: None,
            misses: Vec::new(),
            times_over: 1.0,
            assumptions: Vec::new(),
        }
    }

    /// Per driven joint of an axis, how many times over its limits each servo of the shelf would be
    /// under the loads of a choice: shape (servos, joints), 1 where it would pass; absent where the
    /// flight didn't come to an upright end, and so tells nothing of one that does.
    ///
    /// The battery's own drop of voltage is left out: it hangs on all servos at once.
    pub(crate) fn strain(
        &self,
        choice: Choice,
        at: usize,
        every_s: f64,
    ) -> Result<Option<Vec<Vec<f64>>>, SizingError> {
        let (glider, mut flight) = self.fly(choice)?;
        let missed = of_flight(self.design, &summary(&glider, &mut flight));
        if missed.iter().any(|(_, times_over)| times_over.is_infinite()) {
            return Ok(None);
        }
        let mut histories = self.histories(choice, &glider, &mut flight, every_s)?;
        histories.axes.retain(|axis| axis.servo_idx.is_some() && axis.place.axis == WORDS[at]);
        let mut conditions = self.conditions.clone();
        if let Some(battery) = &mut conditions.battery {
            battery.cell_resistance_ohm = 0.0;
        }
        let with = |servo: usize| {
            histories.axes.iter_mut().for_each(|axis| axis.servo_idx = Some(servo));
            let found = budget(self.shelf, &histories, &conditions)?;
            let over = |axis: &AxisHistory| {
                let own = found.misses.iter().filter(|miss| miss.place == Some(axis.place));
                own.map(|miss| miss.times_over).fold(1.0, f64::max)
            };
            Ok(histories.axes.iter().map(over).collect())
        };
        (0..self.shelf.len()).map(with).collect::<Result<_, _>>().map(Some)
    }

    fn fly(&self, choice: Choice) -> Result<(Glider, Flight), FlightError> {
        let mut glider = self.design.glider.clone();
        glider.chain = self.chain(choice)?;
        let flight = fly(&glider, &self.settings)?;
        Ok((glider, flight))
    }

    /// The design's chain with other servos, each where and in the order that a design has them.
    fn chain(&self, choice: Choice) -> Result<Chain, FlightError> {
        let chain = &self.design.glider.chain;
        let mut masses = Vec::new();
        for (joint_idx, segment) in chain.segments()[..chain.joints().len()].iter().enumerate() {
            for axis in Axis::BOTH {
                let servo = choice.servo_of(&self.driven, joint_idx, axis);
                masses.extend(servo.map(|servo| PointMass {
                    carried: Carried::Servo,
                    segment_idx: joint_idx,
                    at_m: Vector3::new(-segment.length_m, 0.0, 0.0),
                    mass_kg: self.shelf[servo].mass_kg,
                }));
            }
        }
        let others = chain.attached().iter().filter(|mass| mass.carried != Carried::Servo);
        masses.extend(others.cloned());
        Ok(Chain::new(chain.segments().to_vec(), chain.joints().to_vec(), masses)?)
    }

    fn histories(
        &self,
        choice: Choice,
        glider: &Glider,
        flight: &mut Flight,
        every_s: f64,
    ) -> Result<Histories, FlightError> {
        let found = joint_histories(glider, flight, every_s)?;
        let servo_of = |of: &AxisOf| choice.servo_of(&self.driven, of.joint_idx, of.axis);
        Ok(servo_histories(&glider.chain, found, servo_of))
    }
}

/// Words of the axes, in their order.
const WORDS: [&str; 2] = ["yaw", "pitch"];

impl Candidate {
    fn note(&mut self, missed: Vec<Missed>) {
        self.times_over = missed.iter().map(|(_, times_over)| *times_over).fold(1.0, f64::max);
        self.misses = missed.into_iter().map(|(text, _)| text).collect();
    }
}
