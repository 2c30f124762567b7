//! What a search was asked to do, as run.json has it.

use std::path::{Path, PathBuf};

use anyhow::bail;
use serde::{Deserialize, Serialize};
use serde_json::{Map, Value, json};
use undulift_design::{Design, Tuning};
use undulift_flight::Settings;

use super::full;

/// What was asked for by flags.
pub struct Asked {
    pub design: PathBuf,
    pub search: Option<PathBuf>,
    pub sets: Vec<String>,
    pub evaluations: Option<u32>,
    pub seed: u64,
}

/// What a search was asked to do.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Record {
    pub version: String,
    pub input_sha256: String,
    pub seed: u64,
    pub evaluations: u32,
    /// As it was given.
    pub design: String,
    pub design_path: String,
    pub search: Option<String>,
    pub search_path: Option<String>,
    pub sets: Vec<String>,
    tolerance: f64,
    max_time_s: f64,
    /// As it was read.
    pub tuning: Value,
}

impl Record {
    pub fn new(
        asked: &Asked,
        design: &Design,
        tuning: &Tuning,
        evaluations: u32,
        settings: &Settings,
    ) -> anyhow::Result<Self> {
        let shown = |path: &Path| path.display().to_string();
        Ok(Self {
            version: env!("CARGO_PKG_VERSION").into(),
            input_sha256: design.input_sha256.clone(),
            seed: asked.seed,
            evaluations,
            design: shown(&asked.design),
            design_path: full(&asked.design)?,
            search: asked.search.as_deref().map(shown),
            search_path: asked.search.as_deref().map(full).transpose()?,
            sets: asked.sets.clone(),
            tolerance: settings.tolerance,
            max_time_s: settings.max_time_s,
            tuning: as_read(tuning),
        })
    }

    /// The flags that lead to the same, wherever they are given.
    pub fn asked(&self) -> Asked {
        Asked {
            design: PathBuf::from(&self.design_path),
            search: self.search_path.as_ref().map(PathBuf::from),
            sets: self.sets.clone(),
            evaluations: Some(self.evaluations),
            seed: self.seed,
        }
    }

    /// Refuses to go on with something else.
    ///
    /// - `again`: made now from the same files
    pub fn check_same(&self, again: &Self, folder: &Path) -> anyhow::Result<()> {
        let folder = folder.display();
        let anew = "begin anew in another folder";
        if self.version != again.version {
            let (made, own) = (&self.version, &again.version);
            bail!("{folder} is of undulift {made}, this is {own}: go on with {made}, or {anew}");
        }
        let search = self.search_path.as_ref().unwrap_or(&self.design_path);
        if self.input_sha256 != again.input_sha256 {
            let design = &self.design_path;
            bail!("{design}, or a file that it names, has changed since: put it back, or {anew}");
        }
        if self.tuning != again.tuning {
            bail!("{search} says something else to search for now: put it back, or {anew}");
        }
        if (self.tolerance, self.max_time_s) != (again.tolerance, again.max_time_s) {
            bail!("run.json in {folder} has other settings than this program; {anew}");
        }
        Ok(())
    }
}

fn as_read(tuning: &Tuning) -> Value {
    let wishes = tuning.wishes.iter().map(|wish| {
        let way = if wish.maximise { "maximise" } else { "minimise" };
        json!({ way: wish.key })
    });
    let vary = tuning.vary.iter().map(|one| (one.knob.key().into(), json!([one.low, one.high])));
    let require = tuning.require.iter().map(|one| {
        let sides = [("at_least", one.at_least), ("at_most", one.at_most)];
        let sides =
            sides.into_iter().filter_map(|(side, value)| Some((side.into(), json!(value?))));
        (one.key.clone(), Value::Object(sides.collect()))
    });
    let robust = tuning
        .robust
        .map(|robust| json!({ "launches": robust.launches, "take": robust.take.word() }));
    json!({
        "want": wishes.collect::<Vec<_>>(),
        "robust": robust,
        "limits": if tuning.limits_kept { "kept" } else { "ignored" },
        "vary": Value::Object(vary.collect::<Map<_, _>>()),
        "require": Value::Object(require.collect::<Map<_, _>>()),
    })
}
