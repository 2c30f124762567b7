//! The test sheet's files.

use std::path::{Path, PathBuf};

use undulift_droptest::{Seen, Sheet};

use super::Told;
use crate::whole_file;

/// What a sheet is written as.
#[derive(Debug, Clone, Copy)]
enum Format {
    Html,
    Markdown,
}

impl Format {
    fn of(path: &Path) -> anyhow::Result<Self> {
        match path.extension().and_then(|ending| ending.to_str()) {
            Some("html") => Ok(Self::Html),
            Some("md") => Ok(Self::Markdown),
            _ => anyhow::bail!(
                "can't write {}: a sheet is a page to print, FILE.html, or Markdown, FILE.md",
                path.display()
            ),
        }
    }
}

/// Refuses paths that no sheet can be written to, before anything is flown.
pub fn check(paths: &[PathBuf]) -> anyhow::Result<()> {
    for path in paths {
        anyhow::ensure!(!path.is_dir(), "can't write {}: it is a folder", path.display());
        Format::of(path)?;
        let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty());
        anyhow::ensure!(
            folder.is_none_or(Path::is_dir),
            "can't write {}: there is no such folder",
            path.display()
        );
    }
    Ok(())
}

/// Writes all sheets that were asked for, or none.
pub fn write(told: &Told<'_>) -> anyhow::Result<()> {
    let hall_name = told.args.hall.file_name().map(|name| name.to_string_lossy());
    let set: Vec<String> = told.args.sets.iter().map(|set| set.text().to_owned()).collect();
    let sheet = Sheet {
        design: told.design,
        hall: told.hall,
        hall_name: &hall_name.unwrap_or_default(),
        set: &set,
        version: env!("CARGO_PKG_VERSION"),
        seed: told.args.seed,
        asked: told.args.flights as usize,
        complete: told.complete,
        plan: &told.plan,
        rungs: &told.rungs,
        misfits: &told.misfits,
        seen: told.reading.as_ref().map(|(reading, drops)| Seen { reading, drops }),
        measuring: &told.measuring,
        reach_m: told.reach_m,
    };
    let text = |path: &PathBuf| match Format::of(path)? {
        Format::Html => Ok((path.clone(), sheet.html())),
        Format::Markdown => Ok((path.clone(), sheet.markdown())),
    };
    let files = told.args.sheets.iter().map(text).collect::<anyhow::Result<Vec<_>>>()?;
    whole_file::write_all(&files)
}
