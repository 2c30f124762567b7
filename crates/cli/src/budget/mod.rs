//! `undulift budget`.

mod answer;
mod asking;
mod histories;
mod launches;
mod object;
mod remedies;

use anyhow::bail;

use crate::args::{Budget as Args, Case};
use crate::{Outcome, Refused, json, terminal, whole_file};
use asking::judge;
use launches::Launches;
use remedies::Remedies;

pub fn run(args: &Args) -> anyhow::Result<Outcome> {
    refuse_what_does_not_go_together(args)?;
    let design = match undulift_design::read(&args.design, &args.sets) {
        Ok(design) => design,
        Err(errors) => return Ok(refuse(errors)),
    };
    whole_file::ensure_apart([&args.design], &args.histories)?;
    let mut judged = match judge(&design, args)? {
        Ok(judged) => judged,
        Err(errors) => return Ok(refuse(errors)),
    };
    let remedies = match (judged.passes(), &args.case) {
        (false, Case::Flight) => Remedies::find(&design, &judged, args),
        _ => Remedies::default(),
    };
    let launches = match args.launches {
        Some(number) => Some(Launches::fly(&design, number, args)?),
        None => None,
    };
    if let Some(path) = &args.histories {
        histories::write(path, &design, &mut judged, args)?;
    }
    if args.json {
        let object = object::object(&design, &judged, &remedies, launches.as_ref());
        json::print(vec![object], 1)?;
    } else {
        terminal::answer(&answer::answer(&design, &judged, launches.as_ref(), args))?;
        for assumption in &judged.asked.budget.assumptions {
            terminal::tell_warning(&assumption.to_string());
        }
        answer::tell_misses(&design, &judged, &remedies);
    }
    Ok(if judged.passes() { Outcome::WithinLimits } else { Outcome::LimitMissed })
}

fn refuse(errors: undulift_design::DesignErrors) -> Outcome {
    Refused::from(errors).tell();
    Outcome::CouldNotRun
}

/// Flags that say nothing of the case asked for.
fn refuse_what_does_not_go_together(args: &Args) -> anyhow::Result<()> {
    if args.at_s.is_some() && args.case != Case::Release {
        bail!("--at-s names a time of the gait, so it goes with --case release alone");
    }
    if args.clamp.is_some() && args.case == Case::Flight {
        bail!("--clamp holds the body on the bench, so it goes with the other cases than flight");
    }
    if args.launches.is_some() && args.case != Case::Flight {
        bail!("--launches fly, so they go with --case flight alone");
    }
    Ok(())
}
