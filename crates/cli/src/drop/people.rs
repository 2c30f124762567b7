//! A plan in words for people.

use undulift_design::CatchKind;
use undulift_droptest::{
    Area, Ellipse, REACTION_TIME_S, Rung, Scaled, catch_height_needed_m, fall_speed_m_s,
    held_by_outermost, mean_load_factor,
};
use undulift_flight::Spread;

use super::{FOR_RANKS, Told, seen};
use crate::people::line;

/// The whole answer.
pub fn answer(told: &Told<'_>) -> String {
    let mut text = heading(told);
    landing(told, &mut text);
    faults(told, &mut text);
    room(told, &mut text);
    stopping(told, &mut text);
    ladder(told, &mut text);
    if let Some(how_many) = &told.how_many {
        how_many.answer(&mut text);
    }
    measuring(told, &mut text);
    if let Some((reading, _)) = &told.reading {
        seen::answer(reading, &mut text);
    }
    let fits = match (told.complete, told.misfits.is_empty()) {
        (false, _) => "not known: ended early",
        (true, true) => "all of it, as computed",
        (true, false) => "not all; see below",
    };
    line(&mut text, "The hall holds", fits);
    for path in told.args.csv.iter().chain(&told.args.sheets) {
        line(&mut text, "Wrote", &path.display().to_string());
    }
    text
}

fn heading(told: &Told<'_>) -> String {
    let (hall, plan) = (told.hall, &told.plan);
    format!(
        "{}  {:.3} kg, {:.2} m, in a hall of {:.1} × {:.1} × {:.1} m\n  {} drops from {:.1} m, seed {}\n",
        told.design.name,
        told.design.glider.chain.mass_kg(),
        told.design.glider.chain.length_m(),
        hall.length_m,
        hall.width_m,
        hall.height_m,
        plan.drops,
        hall.release.heights_m.last().copied().unwrap_or_default(),
        told.args.seed
    )
}

fn band(spread: Spread, digits: usize) -> String {
    let Spread { p05, p50, p95 } = spread;
    format!("{p50:.digits$} ({p05:.digits$} to {p95:.digits$})")
}

fn landing(told: &Told<'_>, text: &mut String) {
    let sound = &told.plan.sound;
    let bands = &sound.bands;
    let refused = match sound.refused {
        0 => String::new(),
        refused => format!(", {refused} couldn't be flown"),
    };
    let told_of = format!(
        "{} flown{refused}; {} turned over on the way; median (5 % to 95 %):",
        sound.flown, sound.turned_over
    );
    line(text, "Sound drops", &told_of);
    line(text, "  distance", &format!("{} m", band(bands.distance_m, 1)));
    line(text, "  to the left", &format!("{} m", band(bands.side_m, 1)));
    let [quick_s, slow_s] = REACTION_TIME_S;
    let reaction = format!(
        "{} s; a person moves {quick_s} s after something expected, {slow_s} s after a surprise",
        band(bands.time_s, 2)
    );
    line(text, "  time", &reaction);
    let end = format!(
        "{} m/s, sinking {} m/s, {} J",
        band(bands.speed_m_s, 1),
        band(bands.sink_m_s, 1),
        band(bands.energy_j, 0)
    );
    line(text, "  at the end", &end);
    line(text, "  tilt at the end", &degrees(bands.end_tilt_rad));
    line(text, "  largest tilt", &degrees(bands.peak_tilt_rad));
    line(text, "95 % region", &region(&sound.region, sound.scaled, sound.flown));
}

fn degrees(spread: Spread) -> String {
    let [p05, p50, p95] = [spread.p05, spread.p50, spread.p95].map(f64::to_degrees);
    format!("{p50:.0}° ({p05:.0} to {p95:.0}°)")
}

fn region(region: &Ellipse, scaled: Scaled, landings: usize) -> String {
    let [x, y] = region.centre_m;
    let [a, b] = region.semi_axes_m;
    let why = match scaled {
        Scaled::Normal if landings < FOR_RANKS => {
            " if landings are normally distributed, which so few can't show"
        }
        Scaled::Normal => "",
        Scaled::Ranks => ", made larger for tails longer than a normal distribution's",
    };
    format!(
        "ellipse about {x:.1} m ahead, {y:.1} m left; {a:.1} m and {b:.1} m each way, turned {:.0}°; at \
         95 % confidence{why}",
        region.angle_rad.to_degrees()
    )
}

fn faults(told: &Told<'_>, text: &mut String) {
    let Some(furthest) = &told.plan.furthest else {
        line(text, "Faults", "none were flown");
        return;
    };
    let share = 100.0 * held_by_outermost(furthest.of, 0.95);
    let told_of = format!(
        "{} flown; the furthest, {}, ended {:.1} m away; {share:.1} % of all end no further, at 95 % \
         confidence",
        furthest.of,
        furthest.kind.in_words(),
        furthest.distance_m
    );
    line(text, "Faults", &told_of);
    for row in &told.plan.faults {
        let refused = match row.refused {
            0 => String::new(),
            refused => format!(", {refused} couldn't be flown"),
        };
        let told_of = format!("{:>3} to {:.1} m at most{refused}", row.flown, row.furthest_m);
        line(text, &format!("  {}", row.kind.in_words()), &told_of);
    }
}

fn room(told: &Told<'_>, text: &mut String) {
    let (keep_out, least) = (&told.plan.keep_out, &told.plan.least);
    let [behind, ahead, right, left] = keep_out.outward_m();
    let (long_m, wide_m) = (behind + ahead, right + left);
    let area = format!("{long_m:.1} × {wide_m:.1} m: {} of the release", around_release(keep_out));
    line(text, "Keep-out area", &area);
    let people = if least.people_m.is_finite() {
        format!("people {:.1} m", down(least.people_m))
    } else {
        "no people given".into()
    };
    let clear = format!(
        "walls {:.1} m, {people}, ceiling {:.1} m, of all drops, half the body's length ({:.2} m) taken off",
        down(least.walls_m),
        down(least.ceiling_m),
        told.reach_m
    );
    line(text, "Least clearances", &clear);
    let rig = if least.behind_m > 0.0 {
        format!("drops come back up to {:.1} m behind the release", least.behind_m)
    } else {
        "no drop comes back behind the release".into()
    };
    let room = format!(
        "{rig}; keep {} of it free, as deep as the body is long",
        around_release(&least.at_rig)
    );
    line(text, "Rig", &room);
}

/// A clearance, rounded to 0.1 m so that it is no larger.
fn down(clearance_m: f64) -> f64 {
    (10.0 * clearance_m + 1e-9).floor() / 10.0 + 0.0
}

/// An area in words that go on with "of the release" or the like, rounded outward.
fn around_release(area: &Area) -> String {
    let [behind, ahead, right, left] = area.outward_m();
    format!(
        "{behind:.1} m behind to {ahead:.1} m ahead, {right:.1} m to the right to {left:.1} m to the left"
    )
}

fn stopping(told: &Told<'_>, text: &mut String) {
    let catch = &told.hall.catch;
    let kind = match catch.kind {
        CatchKind::Net => "net",
        CatchKind::Mat => "mat",
        CatchKind::Floor => "floor",
    };
    let sink_m_s = told.plan.sound.bands.sink_m_s.p95.max(0.0);
    let highest_m = told.hall.release.heights_m.last().copied().unwrap_or_default();
    let fall_m = highest_m - catch.height_m;
    let stop = format!(
        "{kind}, {:.2} m of way: {:.0} weights on average from {sink_m_s:.1} m/s of sink, {:.0} if it fell \
         freely ({:.1} m/s); peaks may be twice that",
        catch.stopping_m,
        mean_load_factor(sink_m_s, catch.stopping_m),
        mean_load_factor(fall_speed_m_s(fall_m.max(0.0)), catch.stopping_m),
        fall_speed_m_s(fall_m.max(0.0))
    );
    line(text, "Stopping", &stop);
    if catch.kind == CatchKind::Net {
        let thick = told.design.glider.chain.segments().iter().map(|segment| segment.thickness_m);
        let least_m = catch_height_needed_m(catch.stopping_m, thick.fold(0.0, f64::max));
        line(
            text,
            "Net",
            &format!("must hang at {least_m:.2} m or more; hangs at {:.2} m", catch.height_m),
        );
    }
    if catch.kind != CatchKind::Floor {
        let missed = told.plan.sound.missed_catch;
        line(
            text,
            "Missed the catch",
            &format!("{missed} of {} sound drops", told.plan.sound.flown),
        );
    }
}

fn ladder(told: &Told<'_>, text: &mut String) {
    line(
        text,
        "Release ladder",
        "go higher only when drops lie within these bands (nine in ten should) and none surprises you:",
    );
    let header = format!(
        "{:>6}{:>16}{:>16}{:>16}{:>12}{:>9}{:>16}",
        "height", "distance m", "time s", "speed m/s", "tilt", "weights", "to film m"
    );
    line(text, "", &header);
    for rung in &told.rungs {
        let Rung { height_m, drops, .. } = rung;
        let Some(bands) = &rung.bands else {
            line(text, "", &format!("{height_m:>6.1}  none of {drops} drops could be flown"));
            continue;
        };
        let pair = |spread: &Spread, digits: usize| {
            format!("{:.digits$} to {:.digits$}", spread.p05, spread.p95)
        };
        let [long_m, wide_m, high_m] = rung.film_m();
        let film = format!("{} × {} × {}", long_m, wide_m, high_m);
        let row = format!(
            "{height_m:>6.1}{:>16}{:>16}{:>16}{:>12}{:>9.0}{film:>16}",
            pair(&bands.distance_m, 1),
            pair(&bands.time_s, 2),
            pair(&bands.speed_m_s, 1),
            format!("to {:.0}°", bands.peak_tilt_rad.p95.to_degrees()),
            rung.stop_weights.unwrap_or_default(),
        );
        line(text, "", &row);
    }
}

fn measuring(told: &Told<'_>, text: &mut String) {
    let measuring = &told.measuring;
    let verdict = |enough: Option<bool>| match enough {
        Some(true) => ", as there is",
        Some(false) => ", more than there is",
        None => "",
    };
    let frames = format!(
        "{:.0} frames a second or more for a wave of {:.2} Hz{}; {} markers or more along the body{}",
        measuring.frames_needed_per_s.ceil(),
        measuring.wave_hz,
        verdict(measuring.is_fast_enough()),
        measuring.markers_needed,
        verdict(measuring.has_markers())
    );
    line(text, "Camera", &frames);
}
