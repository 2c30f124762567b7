//! What drops come to: regions, outermost faults, keep-out area, ladder.

use undulift_flight::Spread;

use crate::{Area, Around, Drop, DropError, Ellipse, FaultKind, Outcome, Scaled, region};

/// What the drops from one height come to.
#[derive(Debug, Clone)]
pub struct Plan {
    /// Drops that were flown or refused.
    pub drops: usize,
    /// Sound ones that were flown.
    pub sound: Sound,
    /// All kinds of faults that occurred.
    pub faults: Vec<FaultRow>,
    /// The fault that ended furthest from the point of release.
    pub furthest: Option<Furthest>,
    /// Where nobody may be.
    pub keep_out: Area,
    /// Least clearances of all drops, faults included.
    pub least: Least,
}

/// Sound drops.
#[derive(Debug, Clone)]
pub struct Sound {
    /// Flown.
    pub flown: usize,
    /// Not let go, or too fast to follow.
    pub refused: usize,
    /// That turned over on the way.
    pub turned_over: usize,
    /// That missed the catch.
    pub missed_catch: usize,
    /// Holds 95 % of all to come, at 95 % confidence.
    pub region: Ellipse,
    /// What made it as large.
    pub scaled: Scaled,
    /// Bands.
    pub bands: Bands,
}

/// Bands of what sound drops are like.
#[derive(Debug, Clone, Copy)]
pub struct Bands {
    /// m.
    pub distance_m: Spread,
    /// To the left, m.
    pub side_m: Spread,
    /// s.
    pub time_s: Spread,
    /// At the end, m/s.
    pub speed_m_s: Spread,
    /// At the end, m/s.
    pub sink_m_s: Spread,
    /// At the end, J.
    pub energy_j: Spread,
    /// Larger of roll and pitch on the way, rad.
    pub peak_tilt_rad: Spread,
    /// Larger of roll and pitch at the end, rad.
    pub end_tilt_rad: Spread,
}

/// One kind of fault.
#[derive(Debug, Clone, Copy)]
pub struct FaultRow {
    /// Which.
    pub kind: FaultKind,
    /// Flown.
    pub flown: usize,
    /// Not let go, or too fast to follow.
    pub refused: usize,
    /// Largest distance, m.
    pub furthest_m: f64,
}

/// The outermost of all faults.
#[derive(Debug, Clone, Copy)]
pub struct Furthest {
    /// Which.
    pub kind: FaultKind,
    /// From the point of release, m.
    pub distance_m: f64,
    /// Where, m.
    pub place_m: [f64; 2],
    /// Faults that were flown.
    pub of: usize,
}

/// Least clearances, m.
#[derive(Debug, Clone, Copy)]
pub struct Least {
    /// To walls, and how many drops touch one.
    pub walls_m: f64,
    /// Drops that touch a wall.
    pub touching: usize,
    /// To people.
    pub people_m: f64,
    /// To the ceiling.
    pub ceiling_m: f64,
    /// What the first body length of the fall takes, body included: a rig must be out of it.
    pub at_rig: Area,
    /// Furthest back behind the point of release.
    pub behind_m: f64,
}

impl Plan {
    /// Of drops from one height.
    ///
    /// # Errors
    ///
    /// [`DropError`] where too few sound drops were flown for a region, or none could be.
    pub fn of(drops: &[Drop], around: &Around<'_>) -> Result<Self, DropError> {
        let sound = Sound::of(drops)?;
        let faults: Vec<FaultRow> =
            FaultKind::ALL.into_iter().filter_map(|kind| fault_row(drops, kind)).collect();
        let keep_out = keep_out(drops, &sound.region, around);
        let least = least(drops, around);
        let furthest = furthest(drops);
        Ok(Self { drops: drops.len(), sound, faults, furthest, keep_out, least })
    }
}

fn flown(drops: &[Drop]) -> impl Iterator<Item = (&Drop, &Outcome)> + Clone {
    drops.iter().filter_map(|drop| Some((drop, drop.result.as_ref().ok()?)))
}

impl Sound {
    fn of(drops: &[Drop]) -> Result<Self, DropError> {
        let all: Vec<&Drop> = drops.iter().filter(|drop| drop.fault.is_none()).collect();
        let outcomes: Vec<&Outcome> =
            all.iter().filter_map(|drop| drop.result.as_ref().ok()).collect();
        if outcomes.is_empty()
            && let Some(error) = all.iter().find_map(|drop| drop.result.as_ref().err())
        {
            return Err(error.clone().into());
        }
        let places_m: Vec<[f64; 2]> = outcomes.iter().map(|outcome| outcome.place_m).collect();
        let (region, scaled) = region(&places_m)?;
        let count = |holds: fn(&Outcome) -> bool| outcomes.iter().filter(|o| holds(o)).count();
        Ok(Self {
            flown: outcomes.len(),
            refused: all.len() - outcomes.len(),
            turned_over: count(|outcome| outcome.summary.inverted),
            missed_catch: count(|outcome| !outcome.caught),
            region,
            scaled,
            bands: Bands::of(&outcomes).expect("a region has landings"),
        })
    }
}

impl Bands {
    /// Of sound drops; absent where there are none.
    pub fn of(outcomes: &[&Outcome]) -> Option<Self> {
        Self::by(|value| Spread::of(outcomes.iter().map(|outcome| value(outcome)).collect()))
    }

    /// Of drops to come, from sound ones that count differently.
    ///
    /// - `weights`: shape (outcomes)
    pub fn to_come(outcomes: &[&Outcome], weights: &[f64]) -> Option<Self> {
        Self::by(|value| {
            let values = outcomes.iter().map(|outcome| value(outcome)).zip(weights.iter().copied());
            Spread::to_come(&values.collect::<Vec<_>>())
        })
    }

    fn by(of: impl Fn(fn(&Outcome) -> f64) -> Option<Spread>) -> Option<Self> {
        Some(Self {
            distance_m: of(|outcome| outcome.summary.distance_m)?,
            side_m: of(|outcome| outcome.summary.side_drift_m)?,
            time_s: of(|outcome| outcome.summary.time_s)?,
            speed_m_s: of(|outcome| outcome.summary.speed_m_s)?,
            sink_m_s: of(|outcome| outcome.summary.sink_m_s)?,
            energy_j: of(|outcome| outcome.summary.landing_energy_j)?,
            peak_tilt_rad: of(Outcome::peak_tilt_rad)?,
            end_tilt_rad: of(|outcome| outcome.tilt_rad[0].abs().max(outcome.tilt_rad[1].abs()))?,
        })
    }

    /// Of the sound ones among drops.
    pub fn of_sound(drops: &[Drop]) -> Option<Self> {
        let sound = drops.iter().filter(|drop| drop.fault.is_none());
        let outcomes: Vec<&Outcome> = sound.filter_map(|drop| drop.result.as_ref().ok()).collect();
        Self::of(&outcomes)
    }
}

fn fault_row(drops: &[Drop], kind: FaultKind) -> Option<FaultRow> {
    let of_kind: Vec<&Drop> = drops.iter().filter(|drop| drop.fault == Some(kind)).collect();
    let flown = of_kind.iter().filter_map(|drop| drop.result.as_ref().ok());
    let row = FaultRow {
        kind,
        flown: flown.clone().count(),
        refused: of_kind.len() - flown.clone().count(),
        furthest_m: flown.map(|outcome| outcome.summary.distance_m).fold(0.0, f64::max),
    };
    (!of_kind.is_empty()).then_some(row)
}

fn furthest(drops: &[Drop]) -> Option<Furthest> {
    let faults = flown(drops).filter_map(|(drop, outcome)| Some((drop.fault?, outcome)));
    let of = faults.clone().count();
    let far = |outcome: &Outcome| outcome.summary.distance_m;
    let (kind, outcome) = faults.max_by(|(_, a), (_, b)| far(a).total_cmp(&far(b)))?;
    Some(Furthest { kind, distance_m: far(outcome), place_m: outcome.place_m, of })
}

/// What holds the region and all ends and ways, body included.
fn keep_out(drops: &[Drop], region: &Ellipse, around: &Around<'_>) -> Area {
    let reach_m = around.reach_m;
    let ways = flown(drops).map(|(_, outcome)| &outcome.clearances.way);
    let ways = ways.fold(Area::POINT, |area, way| area.with_all(way, reach_m));
    region.edge_m(180).fold(ways, |area, place_m| area.with(place_m, reach_m))
}

fn least(drops: &[Drop], around: &Around<'_>) -> Least {
    let clearances = || flown(drops).map(|(_, outcome)| outcome.clearances);
    let least = |values: &mut dyn Iterator<Item = f64>| values.fold(f64::INFINITY, f64::min);
    Least {
        walls_m: least(&mut clearances().map(|c| c.walls_m)),
        touching: clearances().filter(|c| c.walls_m < 0.0).count(),
        people_m: least(&mut clearances().map(|c| c.people_m)),
        ceiling_m: least(&mut clearances().map(|c| c.ceiling_m)),
        at_rig: clearances().fold(Area::POINT, |area, c| area.with_all(&c.at_rig, around.reach_m)),
        behind_m: clearances().map(|c| c.behind_release_m()).fold(0.0, f64::max),
    }
}
