//! Launches of a design that differ, each drawn on its own.
//!
//! What differs is what the design's `[spread]` says, or what launches by hand usually do. A launch
//! hangs on the seed and its own number alone, so launches may be drawn in any order and on any
//! number of threads.

use undulift_flight::{Differs, draw};

use crate::{Design, Knob, Spread, Vary};

/// What differs from launch to launch.
#[derive(Debug, Clone, PartialEq)]
pub struct Scatter {
    items: Vec<Item>,
    /// How each item does: shape (items).
    differs: Vec<Differs>,
}

/// One thing that differs.
#[derive(Debug, Clone, PartialEq)]
enum Item {
    /// Numbers of the design that change together.
    Knobs(Vec<Knob>),
    /// All masses.
    Mass,
}

impl Scatter {
    /// As a design says, or as launches by hand usually differ.
    pub fn of(design: &Design) -> Self {
        let items = match &design.spread {
            Spread::None => Vec::new(),
            Spread::Default => usual(design),
            Spread::Own(own) => own
                .iter()
                .map(|(knob, vary)| (Item::Knobs(vec![knob.clone()]), differs(*vary)))
                .collect(),
        };
        let (items, differs) = items.into_iter().unzip();
        Self { items, differs }
    }

    /// Names of what is drawn: keys of the design, and `mass_factor` for all masses.
    pub fn columns(&self) -> Vec<String> {
        let names = |item: &Item| match item {
            Item::Knobs(knobs) => knobs.iter().map(|knob| knob.key().to_owned()).collect(),
            Item::Mass => vec!["mass_factor".to_owned()],
        };
        self.items.iter().flat_map(names).collect()
    }

    /// The design of one launch, with what was drawn for it: a knob's value, a mass's factor.
    ///
    /// Masses differ in the chain alone, so a knob that reads the text again loses that.
    ///
    /// - `design`: the one that the scatter is of, or one with the same keys
    /// - `launch`: from 0
    pub fn launch(&self, design: &Design, seed: u64, launch: u64) -> (Design, Vec<f64>) {
        self.launch_of(design, seed, launch, launch)
    }

    /// One launch of one of many robots: what is a robot's own, such as its mass, is the same in all of
    /// its launches; the release, the gait's phase and the wind aren't.
    ///
    /// - `robot`, `launch`: from 0; with the same number for both as [`Self::launch`]
    pub fn launch_of(
        &self,
        design: &Design,
        seed: u64,
        robot: u64,
        launch: u64,
    ) -> (Design, Vec<f64>) {
        let mut changed = design.clone();
        let mut drawn = Vec::new();
        let changes = draw(&self.differs, seed, robot).into_iter();
        let changes = changes.zip(draw(&self.differs, seed, launch));
        for (item, (own, new)) in self.items.iter().zip(changes) {
            let change = if item.is_own() { own } else { new };
            match item {
                Item::Knobs(knobs) => {
                    for knob in knobs {
                        // What other numbers of the design don't allow stays as the design has it.
                        let _ = knob.set_clamped(&mut changed, change.of(knob.value(design)));
                    }
                    drawn.extend(knobs.iter().map(|knob| knob.value(&changed)));
                }
                Item::Mass => {
                    let factor = change.of(1.0).max(0.01);
                    changed.glider.chain = changed.glider.chain.heavier(factor);
                    drawn.push(factor);
                }
            }
        }
        (changed, drawn)
    }
}

impl Item {
    /// Whether it is a robot's own.
    fn is_own(&self) -> bool {
        let differs = ["launch.", "gait.", "air.wind"];
        let is_own = |knob: &Knob| !differs.iter().any(|start| knob.key().starts_with(start));
        match self {
            Self::Knobs(knobs) => knobs.iter().all(is_own),
            Self::Mass => true,
        }
    }
}

fn differs(vary: Vary) -> Differs {
    match vary {
        Vary::Sd(sd) => Differs::Normal { sd },
        Vary::Range { low, high } => Differs::Uniform { low, high },
        Vary::FactorSd(sd) => Differs::Factor { sd },
    }
}

/// Speed, attitude, spin and phase at release, lift, drag, pressure centre and mass.
fn usual(design: &Design) -> Vec<(Item, Differs)> {
    const DEGREES: Differs = Differs::Normal { sd: 3.0 };
    const SPIN: Differs = Differs::Normal { sd: 10.0 };
    const TENTH: Differs = Differs::Factor { sd: 0.1 };
    let keys = [
        ("launch.speed_m_s", Differs::Factor { sd: 0.05 }),
        ("launch.climb_deg", DEGREES),
        ("launch.roll_deg", DEGREES),
        ("launch.pitch_deg", DEGREES),
        ("launch.yaw_deg", DEGREES),
        ("launch.spin_deg_s[0]", SPIN),
        ("launch.spin_deg_s[1]", SPIN),
        ("launch.spin_deg_s[2]", SPIN),
        ("gait.phase_deg", Differs::Uniform { low: -10.0, high: 10.0 }),
        ("air.lift_scale", TENTH),
        ("air.drag_scale", TENTH),
    ];
    let knob = |key: &str| Knob::find(design, key).ok();
    let one = |(key, differs)| Some((Item::Knobs(vec![knob(key)?]), differs));
    let mut items: Vec<(Item, Differs)> = keys.into_iter().filter_map(one).collect();
    let sections = design.glider.sections.iter();
    let centres = sections
        .filter(|section| section.assumed_pressure_centre().is_some())
        .filter_map(|section| knob(&format!("section.{}.pressure_centre", section.name)));
    items.push((Item::Knobs(centres.collect()), Differs::Uniform { low: -0.05, high: 0.05 }));
    items.push((Item::Mass, Differs::Factor { sd: 0.01 }));
    items
}
