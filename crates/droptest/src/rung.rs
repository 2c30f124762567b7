//! One height of the release ladder: what must be seen there before the next.

use crate::{Area, Around, Bands, Drop, Ellipse, Outcome, mean_load_factor, region};

/// Sound drops from one height.
#[derive(Debug, Clone)]
pub struct Rung {
    /// Of the centre of mass at release, m.
    pub height_m: f64,
    /// Drops that were flown or refused.
    pub drops: usize,
    /// What sound drops are like; absent where none could be flown.
    pub bands: Option<Bands>,
    /// Holds 95 % of all to come, at 95 % confidence; absent for less than five drops.
    pub region: Option<Ellipse>,
    /// From the release to the region's far end, body included: what a camera must see.
    pub to_film: Area,
    /// From the floor to the release, body included, m.
    pub film_height_m: f64,
    /// Largest roll or pitch on the way of any, rad; absent where none could be flown.
    pub largest_tilt_rad: Option<f64>,
    /// How many turned over on the way.
    pub turned_over: usize,
    /// Mean force of the stop over weight, from the sink that 95 % stay under.
    pub stop_weights: Option<f64>,
}

impl Rung {
    /// Length, width and height of what a camera must see, rounded up to whole metres.
    pub fn film_m(&self) -> [f64; 3] {
        let [long_m, wide_m] = self.to_film.size_m();
        [long_m, wide_m, self.film_height_m].map(|size_m| (size_m - 1e-9).ceil())
    }

    /// Of drops from one height, those with faults left out.
    pub fn of(height_m: f64, drops: &[Drop], around: &Around<'_>) -> Self {
        let sound = || drops.iter().filter(|drop| drop.fault.is_none());
        let flown = || sound().filter_map(|drop| drop.result.as_ref().ok());
        let bands = Bands::of_sound(drops);
        let places_m: Vec<[f64; 2]> = flown().map(|outcome| outcome.place_m).collect();
        let reach_m = around.reach_m;
        let region = region(&places_m).ok().map(|(region, _)| region);
        let ends_m: Vec<[f64; 2]> =
            region.as_ref().map_or(places_m, |region| region.edge_m(180).collect());
        let film = |area: Area, &place_m: &[f64; 2]| area.with(place_m, reach_m);
        let stop = |bands: &Bands| {
            mean_load_factor(bands.sink_m_s.p95.max(0.0), around.hall.catch.stopping_m)
        };
        let tilts = flown().map(Outcome::peak_tilt_rad);
        Self {
            height_m,
            largest_tilt_rad: tilts.reduce(f64::max),
            turned_over: flown().filter(|outcome| outcome.summary.inverted).count(),
            drops: sound().count(),
            region,
            to_film: ends_m.iter().fold(Area::POINT.with([0.0; 2], reach_m), film),
            film_height_m: height_m + reach_m,
            stop_weights: bands.as_ref().map(stop),
            bands,
        }
    }
}
