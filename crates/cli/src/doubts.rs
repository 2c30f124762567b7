//! Doubts in words, each with what to do about it.

use undulift_flight::Doubt;

use crate::terminal;

/// Tells doubts, each with what to do about it.
pub fn tell(doubts: &[Doubt]) {
    for doubt in doubts {
        let (doubt, hint) = in_words(doubt);
        terminal::tell_warning(&doubt);
        terminal::tell_hint(&hint);
    }
}

/// What to say of a doubt, and what to do.
pub fn in_words(doubt: &Doubt) -> (String, String) {
    let (doubt, hint) = match doubt {
        Doubt::Unsteady { reduced_frequency } => (
            format!(
                "reduced frequency {reduced_frequency:.4} is above 0.05: real loads lag behind the \
                 wave more than this model's, which answer at once"
            ),
            "a slower wave, a faster launch or a narrower body lowers it; until then read small \
             differences between gaits as undecided",
        ),
        Doubt::ReynoldsBelow { section, lowest, share } => (
            format!(
                "section `{section}` was used below its lowest Reynolds number ({}) for {} of the \
                 load, with the coefficients of that number",
                thousands(*lowest),
                percent(*share)
            ),
            "add rows at lower Reynolds numbers to its table",
        ),
        Doubt::ReynoldsAbove { section, highest, share } => (
            format!(
                "section `{section}` was used above its highest Reynolds number ({}) for {} of the \
                 load, with the coefficients of that number",
                thousands(*highest),
                percent(*share)
            ),
            "add rows at higher Reynolds numbers in a table of your own, or vary air.lift_scale and \
             air.drag_scale to see how much it matters",
        ),
        Doubt::NotMeasured { section, measured_rad: [low, high], share } => (
            format!(
                "section `{section}` was measured from {:.0}° to {:.0}° only; {} of the load met it \
                 outside, on an engineering completion",
                low.to_degrees(),
                high.to_degrees(),
                percent(*share)
            ),
            "the steeper the air meets the belly, the less the figures are worth; measure or borrow \
             rows there if the flight hangs on them",
        ),
        Doubt::ReynoldsOutside { section, known: [low, high], met: [slow, fast] } => (
            format!(
                "at the estimated glide speed section `{section}` meets Reynolds numbers of {} to {}, \
                 but its table runs from {} to {}; beyond, coefficients are held",
                thousands(*slow),
                thousands(*fast),
                thousands(*low),
                thousands(*high)
            ),
            "add rows there in a table of your own, or vary air.lift_scale and air.drag_scale to see \
             how much it matters",
        ),
        Doubt::PartlyMeasured { section, measured_rad: [low, high] } => (
            format!(
                "section `{section}` was measured from {:.0}° to {:.0}° only; the rest is an \
                 engineering completion",
                low.to_degrees(),
                high.to_degrees()
            ),
            "`undulift fly` says how much of the load meets it there",
        ),
        Doubt::NarrowGap { chords } => (
            format!(
                "runs of the body half a wave apart lie {chords:.1} mean chords apart, under 2: the \
                 one behind flies in the wake of the one ahead, which is left out"
            ),
            "fewer waves, a smaller amplitude or a narrower body sets them apart",
        ),
        Doubt::NotSteady { last_cycle } => (
            format!(
                "over the last cycle it came down {:.2} m and {} as much speed as {:.2} m of height is \
                 worth, so that cycle's glide ratio isn't a steady glide's",
                last_cycle.drop_m,
                if last_cycle.speed_height_m > 0.0 { "lost" } else { "gained" },
                last_cycle.speed_height_m.abs()
            ),
            "let it go from higher, in the computer, to see what it settles to",
        ),
        Doubt::AddedMass { ratio } => (
            format!(
                "the air that moves with the body would weigh {} of it, and is left out",
                percent(*ratio)
            ),
            "expect slower pitching and rolling than computed",
        ),
        Doubt::Overlap { segments: (ahead, behind), at_s, pairs } => (
            format!(
                "segments {ahead} and {behind} take the same space at t = {at_s:.3} s{}",
                match pairs {
                    1 => String::new(),
                    2 => ", and one more pair does at some time".to_owned(),
                    _ => format!(", and {} more pairs do at some time", pairs - 1),
                }
            ),
            "lower the amplitude, use more waves, or make the body narrower there",
        ),
        Doubt::PressureCentre { section, assumed } => {
            let hint = format!(
                "before you trust that it lands upright, fly it again with 0.05 more and less: --set \
                 section.{section}.pressure_centre={:.2}",
                assumed + 0.05
            );
            let doubt = format!(
                "whether it stays upright hangs on the pressure centre of section `{section}`, assumed \
                 at {assumed:.2} of the chord and known least of all numbers"
            );
            return (doubt, hint);
        }
    };
    (doubt, hint.to_owned())
}

fn percent(share: f64) -> String {
    format!("{:.0} %", 100.0 * share)
}

/// A whole number with its thousands set apart.
pub fn thousands(value: f64) -> String {
    let digits = format!("{value:.0}");
    let (sign, digits) = digits.strip_prefix('-').map_or(("", digits.as_str()), |d| ("−", d));
    let mut grouped = String::new();
    for (k, digit) in digits.chars().enumerate() {
        if k > 0 && (digits.len() - k) % 3 == 0 {
            grouped.push('\u{202f}');
        }
        grouped.push(digit);
    }
    format!("{sign}{grouped}")
}
