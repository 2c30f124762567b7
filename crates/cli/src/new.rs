//! `undulift new`.

use std::path::Path;

use anyhow::bail;

use crate::args::New;
use crate::{Outcome, Refused, terminal, whole_file};

pub fn run(args: &New) -> anyhow::Result<Outcome> {
    let path = &args.file;
    if path.exists() && !args.force {
        bail!("{} exists; --force replaces it, or choose another name", path.display());
    }
    let text = match &args.from {
        None => undulift_design::starter().to_owned(),
        Some(from) => {
            let folder = path.parent().unwrap_or(Path::new(""));
            match undulift_design::copy_for(from, folder) {
                Ok(text) => text,
                Err(errors) => {
                    Refused::Design(errors).tell();
                    return Ok(Outcome::CouldNotRun);
                }
            }
        }
    };
    whole_file::write(path, |file| Ok(file.write_all(text.as_bytes())?))?;
    let shown = path.display();
    terminal::answer(&format!("Wrote {shown}. Fly it with: undulift fly {shown}\n"))?;
    Ok(Outcome::WithinLimits)
}
