//! The folder of a search.
//!
//! A generation is appended to history.csv, then the state, which knows how long that file is, takes
//! the place of the one before in one step. So whenever the program is killed, the state there is
//! whole; what the history has beyond it is cut off when the search goes on, and made again. A new
//! folder appears under its name with all its files in it. One program at a time works in it.

use std::fs::{self, File, OpenOptions, TryLockError};
use std::io::{ErrorKind, Write};
use std::path::{Path, PathBuf};

use anyhow::{Context, anyhow, bail};
use indicatif::ProgressBar;
use undulift_search::tuning::{Judge, Ledger, Limit, Run, Store, Tried};

use super::people;
use super::record::Record;
use crate::{trace_file, whole_file};

const RECORD: &str = "run.json";
const STATE: &str = "state.postcard";
const HISTORY: &str = "history.csv";
const BEST: &str = "best.toml";

/// How names of files begin that are being written.
const UNFINISHED: &str = ".undulift-";

/// The folder of a search, held so that no other program goes on with it.
pub struct Folder {
    path: PathBuf,
    history: File,
    history_bytes: u64,
    _held: File,
}

/// Refuses a folder that can't become one.
pub fn check_free(out: &Path) -> anyhow::Result<()> {
    let shown = out.display();
    let mut entries = match fs::read_dir(out) {
        Ok(entries) => entries,
        Err(error) if error.kind() == ErrorKind::NotFound => return Ok(()),
        Err(error) => bail!("can't use {shown} as a folder: {}", error.kind()),
    };
    if out.join(RECORD).exists() {
        bail!(
            "{shown} holds a search already: go on with it by --resume {shown}, or choose another \
             folder; nothing was changed"
        );
    }
    match entries.next() {
        None => Ok(()),
        Some(_) => bail!("{shown} isn't empty: choose a new folder; nothing was changed"),
    }
}

impl Folder {
    /// Makes the folder with all but a best.
    pub fn new(out: &Path, record: &Record, judge: &Judge, run: &Run) -> anyhow::Result<Self> {
        let cannot = || format!("can't make the folder {}", out.display());
        let parent = out.parent().filter(|parent| !parent.as_os_str().is_empty());
        let mut builder = tempfile::Builder::new();
        // As open to others as any new folder is.
        #[cfg(unix)]
        builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o777));
        let beside = builder
            .prefix(UNFINISHED)
            .tempdir_in(parent.unwrap_or(Path::new(".")))
            .map_err(|error| anyhow!("{}: {}", cannot(), whole_file::why(&error)))?;
        let head = history_head(judge)?;
        let inside = |name: &str| beside.path().join(name);
        fs::write(inside(HISTORY), &head).with_context(cannot)?;
        fs::write(inside(STATE), state(head.len() as u64, run)).with_context(cannot)?;
        let text = serde_json::to_string_pretty(record)? + "\n";
        fs::write(inside(RECORD), text).with_context(cannot)?;
        fs::rename(beside.path(), out)
            .map_err(|error| anyhow!("{}: {}", cannot(), whole_file::why(&error)))?;
        Ok(Self::open(out)?.0)
    }

    /// Opens a folder to go on with.
    pub fn open(path: &Path) -> anyhow::Result<(Self, Record, Run)> {
        let shown = path.display();
        let read = |name: &str| {
            let file = path.join(name);
            fs::read(&file).map_err(|error| {
                let why = match error.kind() {
                    ErrorKind::NotFound => format!("there is no {name} in it"),
                    kind => format!("{name} can't be read: {kind}"),
                };
                anyhow!("{shown} is no folder of a search: {why}")
            })
        };
        let record: Record = serde_json::from_slice(&read(RECORD)?)
            .with_context(|| format!("{RECORD} in {shown} isn't as it was written"))?;
        let held = hold(&path.join(RECORD), path)?;
        let bytes = read(STATE)?;
        let spoilt = || anyhow!("{STATE} in {shown} isn't as it was written; begin anew");
        let (length, bytes) = bytes.split_first_chunk().ok_or_else(spoilt)?;
        let (history_bytes, run) =
            (u64::from_le_bytes(*length), Run::from_bytes(bytes).ok_or_else(spoilt)?);
        let history = cut(&path.join(HISTORY), history_bytes)?;
        remove_unfinished(path);
        let folder = Self { path: path.to_owned(), history, history_bytes, _held: held };
        Ok((folder, record, run))
    }

    pub fn path(&self) -> &Path {
        &self.path
    }

    pub fn state_path(&self) -> PathBuf {
        self.path.join(STATE)
    }

    pub fn history_path(&self) -> PathBuf {
        self.path.join(HISTORY)
    }

    pub fn best_path(&self) -> PathBuf {
        self.path.join(BEST)
    }

    /// Writes the design with the best numbers in it.
    pub fn write_best(
        &self,
        judge: &Judge,
        record: &Record,
        ledger: &Ledger,
    ) -> anyhow::Result<()> {
        let best = ledger.best().context("nothing was tried")?;
        // One that can't even be read is no design to write.
        let Ok(design) = judge.design_with(&best.values) else { return Ok(()) };
        let text = design.text_for(&self.path)?;
        let head = people::head_of_best(judge, record, ledger);
        whole_file::write(&self.best_path(), |file| {
            Ok(file.write_all(format!("{head}\n{}", text.trim_start()).as_bytes())?)
        })
    }

    fn keep(&mut self, tried: &[Tried], run: &Run) -> anyhow::Result<()> {
        let mut rows = csv::Writer::from_writer(Vec::new());
        for one in tried {
            rows.write_record(row(one))?;
        }
        let rows = rows.into_inner().map_err(|error| error.into_error())?;
        let cannot = format!("can't write {}", self.history_path().display());
        self.history.write_all(&rows).context(cannot)?;
        self.history_bytes += rows.len() as u64;
        let state = state(self.history_bytes, run);
        whole_file::write(&self.state_path(), |file| Ok(file.write_all(&state)?))
    }
}

/// A folder as the search's store, with the bar that says how far it has come.
pub struct Keeping<'a> {
    pub folder: Folder,
    pub judge: &'a Judge,
    pub record: &'a Record,
    pub bar: &'a ProgressBar,
}

impl Store for Keeping<'_> {
    type Error = anyhow::Error;

    fn keep(&mut self, tried: &[Tried], run: &Run, improved: bool) -> anyhow::Result<()> {
        self.folder.keep(tried, run)?;
        let ledger = run.ledger();
        if improved {
            self.folder.write_best(self.judge, self.record, ledger)?;
            let best = ledger.best().map(|best| people::in_short(self.judge, best));
            self.bar.set_message(format!(
                "{}: {}, {:.0} % feasible",
                self.judge.design().name,
                best.unwrap_or_default(),
                100.0 * ledger.feasible_share()
            ));
        }
        self.bar.set_position(u64::from(self.judge.launches()) * ledger.tried() as u64);
        Ok(())
    }
}

fn state(history_bytes: u64, run: &Run) -> Vec<u8> {
    [&history_bytes.to_le_bytes()[..], &run.to_bytes()].concat()
}

fn history_head(judge: &Judge) -> anyhow::Result<Vec<u8>> {
    let own = ["evaluation", "generation", "feasible", "wish", "violation"].map(str::to_owned);
    let varied = judge.varied().iter().map(|one| one.knob.key().to_owned());
    let mut head = csv::Writer::from_writer(Vec::new());
    head.write_record(own.into_iter().chain(varied).chain(Limit::columns(judge.limits())))?;
    Ok(head.into_inner().map_err(|error| error.into_error())?)
}

fn row(tried: &Tried) -> Vec<String> {
    let verdict = &tried.verdict;
    let or_empty = |value: &Option<f64>| value.map(trace_file::number).unwrap_or_default();
    let mut row = vec![tried.evaluation.to_string(), tried.generation.to_string()];
    row.push(u8::from(verdict.is_feasible()).to_string());
    row.push(or_empty(&verdict.wish));
    row.push(trace_file::number(verdict.violation));
    row.extend(verdict.values.iter().map(|value| trace_file::number(*value)));
    row.extend(verdict.limits.iter().map(or_empty));
    row
}

/// Keeps other programs out until this one ends, however it ends.
fn hold(record: &Path, folder: &Path) -> anyhow::Result<File> {
    let file = File::open(record)?;
    match file.try_lock() {
        // Not every file system can hold files; then nothing keeps two programs apart.
        Ok(()) | Err(TryLockError::Error(_)) => Ok(file),
        Err(TryLockError::WouldBlock) => {
            let shown = folder.display();
            bail!("another program goes on with {shown} at this moment; wait for it, or end it")
        }
    }
}

/// Cuts off what was not told to the state.
fn cut(path: &Path, bytes: u64) -> anyhow::Result<File> {
    let cannot = || format!("can't go on with {}", path.display());
    let mut options = OpenOptions::new();
    let file = options.append(true).read(true).open(path).with_context(cannot)?;
    let found = file.metadata().with_context(cannot)?.len();
    if found < bytes {
        bail!("{}: rows are missing at its end ({found} bytes of {bytes}); begin anew", cannot());
    }
    file.set_len(bytes).with_context(cannot)?;
    Ok(file)
}

/// What a program that was killed had not finished is of no use.
fn remove_unfinished(folder: &Path) {
    for entry in fs::read_dir(folder).into_iter().flatten().flatten() {
        if entry.file_name().to_string_lossy().starts_with(UNFINISHED) {
            // What can't be removed does no harm.
            let _ = fs::remove_file(entry.path());
        }
    }
}
