//! `undulift size`.

use std::fmt::Write;
use std::path::Path;

use anyhow::Context;
use serde_json::{Value, json};
use undulift_design::{Catalogue, Design, DesignErrors, read_catalogue};
use undulift_flight::Settings;
use undulift_search::{Candidate, Sized, Split, Step, Want, size, with_servos};

use crate::args::{Size as Args, Wish};
use crate::{Outcome, Refused, json, many, terminal, whole_file};

/// Lines of what the nearest miss misses.
const MOST_MISSES: usize = 5;

pub fn run(args: &Args) -> anyhow::Result<Outcome> {
    let design = match undulift_design::read(&args.design, &args.sets) {
        Ok(design) => design,
        Err(errors) => return Ok(refuse(errors)),
    };
    let catalogue = match read_catalogue(&args.from) {
        Ok(catalogue) => catalogue,
        Err(errors) => return Ok(refuse(errors)),
    };
    whole_file::ensure_apart([&args.design, &args.from], &args.write)?;
    let sized = search(&design, &catalogue, args)?;
    if args.json {
        json::print(vec![object(&design, &catalogue, &sized, args)], 1)?;
    } else {
        terminal::answer(&answer(&design, &catalogue, &sized, args))?;
        tell(&design, &catalogue, &sized, args);
    }
    match (sized.best(), &args.write) {
        (Some(best), Some(path)) => write(path, &design, &catalogue, best, args)?,
        (None, Some(path)) => {
            terminal::tell_hint(&format!("{} was not written", path.display()));
        }
        (_, None) => {}
    }
    Ok(if sized.best().is_some() { Outcome::WithinLimits } else { Outcome::LimitMissed })
}

fn refuse(errors: DesignErrors) -> Outcome {
    Refused::from(errors).tell();
    Outcome::CouldNotRun
}

fn search(design: &Design, catalogue: &Catalogue, args: &Args) -> anyhow::Result<Sized> {
    let bar = many::bar(0, &design.name);
    let told = |step: Step| match step {
        Step::Planned(more) => bar.inc_length(more as u64),
        Step::Flown => bar.inc(1),
        Step::Stopped => bar.set_length(bar.position()),
    };
    let want = match args.want {
        Wish::Lightest => Want::Lightest,
        Wish::Furthest => Want::Furthest,
        Wish::Cheapest => Want::Cheapest,
    };
    let pool = many::threads(args.threads.map_or(0, usize::from))?;
    let settings = Settings::default();
    let sized = pool.install(|| size(design, &catalogue.servos, want, settings, &told));
    bar.finish_and_clear();
    sized.with_context(|| design.name.clone())
}

fn answer(design: &Design, catalogue: &Catalogue, sized: &Sized, args: &Args) -> String {
    let passing: Vec<&Candidate> = sized.passing().collect();
    let from = args.from.display();
    let (told, shown) = match passing.is_empty() {
        false => (format!("{} first", wish(args.want)), passing),
        true => {
            ("nothing passes; the nearest miss".into(), sized.candidates.iter().take(1).collect())
        }
    };
    let mut text = format!("{}  servos of {from}, {told}, of {} flown\n", design.name, sized.flown);
    let cells: Vec<[String; 2]> =
        shown.iter().map(|one| [0, 1].map(|at| cell(one.choice.splits[at], catalogue))).collect();
    let width = |at: usize| {
        let widths = cells.iter().map(|cells: &[String; 2]| cells[at].chars().count());
        widths.max().unwrap_or(0).max(5)
    };
    let [yaw, pitch] = [width(0), width(1)];
    // Writing to a string can't fail.
    let _ = writeln!(
        text,
        "        {:<yaw$}   {:<pitch$}   servos kg   total kg   glide   dist. m   margin   price",
        "yaw", "pitch"
    );
    for (k, (one, cells)) in shown.iter().zip(&cells).enumerate() {
        let or_none = |value: Option<f64>, digits: usize| match value {
            Some(value) => format!("{value:.digits$}"),
            None => "-".into(),
        };
        let _ = writeln!(
            text,
            "    {:>2}  {:<yaw$}   {:<pitch$}   {:>9.3}   {:>8.3}   {:>5}   {:>7.2}   {:>6}   {:>5}",
            k + 1,
            cells[0],
            cells[1],
            one.servos_kg,
            one.mass_kg,
            or_none(one.glide_ratio, 2),
            one.distance_m,
            or_none(one.least_margin, 2),
            or_none(one.price, 0)
        );
    }
    if cells.iter().flatten().any(|cell| cell.contains('+')) {
        text.push_str(
            "    \"a + 2 × b\": of the joints driven, b drives the first two and the last two, a the others
",
        );
    }
    text
}

fn wish(want: Wish) -> &'static str {
    match want {
        Wish::Lightest => "the lightest",
        Wish::Furthest => "the one that goes furthest",
        Wish::Cheapest => "the cheapest",
    }
}

/// Servos of one axis in a few words.
fn cell(split: Option<Split>, catalogue: &Catalogue) -> String {
    let name = |servo: usize| catalogue.servos[servo].name.as_str();
    match split {
        None => "-".into(),
        Some(Split { middle, end_joints: 0, .. }) => name(middle).into(),
        Some(Split { middle, ends, end_joints }) => {
            format!("{} + {end_joints} × {}", name(middle), name(ends))
        }
    }
}

fn tell(design: &Design, catalogue: &Catalogue, sized: &Sized, args: &Args) {
    let Some(first) = sized.candidates.first() else { return };
    for assumption in &first.assumptions {
        terminal::tell_warning(&assumption.to_string());
    }
    if args.want == Wish::Cheapest && first.passes() && first.price.is_none() {
        terminal::tell_warning("nothing that passes has a price for all its servos");
    }
    if !sized.complete {
        let more =
            "there are mixes that may pass and weren't flown; those shown may not be the best";
        terminal::tell_warning(more);
    }
    for miss in first.misses.iter().take(MOST_MISSES) {
        terminal::tell_limit(&format!("{}: {miss}", design.name));
    }
    if first.misses.len() > MOST_MISSES {
        let more = first.misses.len() - MOST_MISSES;
        let told = if more == 1 { "limit is missed" } else { "limits are missed" };
        terminal::tell_limit(&format!("{}: {more} more {told}", design.name));
    }
    if !first.passes() && catalogue.servos.len() > 1 {
        terminal::tell_hint(&format!(
            "a slower gait may help, or stronger servos: --set gait.frequency_hz=… tries a gait; \
             the torque factor asked for is {:.2}",
            design.limits.torque_factor
        ));
    }
}

fn write(
    path: &Path,
    design: &Design,
    catalogue: &Catalogue,
    best: &Candidate,
    args: &Args,
) -> anyhow::Result<()> {
    let folder = path.parent().unwrap_or(Path::new(""));
    let text = design.text_for(folder)?;
    let text = with_servos(design, &text, &catalogue.text, &catalogue.servos, &best.choice)?;
    let text = format!(
        "# Servos chosen by undulift {} size from {}: {} that pass.\n\
         # All else, comments too, is of {},\n# input SHA-256 with that catalogue {}.\n\n{}",
        env!("CARGO_PKG_VERSION"),
        args.from.display(),
        wish(args.want),
        args.design.display(),
        design.input_sha256_with(&catalogue.text),
        text.trim_start()
    );
    undulift_design::read_text(path, &text, &[])
        .with_context(|| format!("{} isn't written, for it could not be read", path.display()))?;
    whole_file::write(path, |file| Ok(file.write_all(text.as_bytes())?))?;
    if !args.json {
        terminal::answer(&format!("Wrote {}\n", path.display()))?;
    }
    Ok(())
}

fn object(design: &Design, catalogue: &Catalogue, sized: &Sized, args: &Args) -> Value {
    let mut object = json::heading(design);
    // What is chosen hangs on the catalogue, too.
    let input_sha256 = design.input_sha256_with(&catalogue.text);
    object.insert("input_sha256".into(), json!(input_sha256));
    let of = |candidate: &Candidate| candidate_object(candidate, catalogue);
    object.insert(
        "want".into(),
        json!(match args.want {
            Wish::Lightest => "lightest",
            Wish::Furthest => "furthest",
            Wish::Cheapest => "cheapest",
        }),
    );
    object.insert("flown".into(), json!(sized.flown));
    object.insert("complete".into(), json!(sized.complete));
    object.insert("candidates".into(), sized.candidates.iter().map(of).collect());
    object.insert("best".into(), json!(sized.best().map(of)));
    let first = sized.candidates.first().map_or(&[][..], |first| &first.assumptions);
    object.insert("warnings".into(), first.iter().map(ToString::to_string).collect());
    Value::Object(object)
}

fn candidate_object(candidate: &Candidate, catalogue: &Catalogue) -> Value {
    let name = |servo: usize| catalogue.servos[servo].name.as_str();
    let [yaw, pitch] = candidate.choice.splits.map(|split| {
        split.map(|Split { middle, ends, end_joints }| {
            json!({ "middle": name(middle), "ends": name(ends), "end_joints": end_joints })
        })
    });
    json!({
        "yaw": yaw,
        "pitch": pitch,
        "servos_kg": candidate.servos_kg,
        "mass_kg": candidate.mass_kg,
        "glide_ratio": candidate.glide_ratio,
        "distance_m": candidate.distance_m,
        "least_margin": candidate.least_margin,
        "price": candidate.price,
        "passes": candidate.passes(),
        "misses": candidate.misses,
    })
}
