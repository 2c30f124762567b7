//! Files that are written whole or not at all.

use std::io::{self, Write};
use std::path::Path;

use anyhow::Context;

/// Fills a file beside its place and moves it there when it is complete.
pub fn write(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> anyhow::Result<()>,
) -> anyhow::Result<()> {
    let cannot = || format!("can't write {}", path.display());
    // The system's own words, without the name of the file beside it.
    let plain = |error: io::Error| match error.raw_os_error() {
        Some(code) => io::Error::from_raw_os_error(code),
        None => error,
    };
    let folder = path.parent().filter(|parent| !parent.as_os_str().is_empty());
    let mut beside = tempfile::Builder::new()
        .prefix(".undulift-")
        .tempfile_in(folder.unwrap_or(Path::new(".")))
        .map_err(plain)
        .with_context(cannot)?;
    let mut buffered = std::io::BufWriter::new(beside.as_file_mut());
    fill(&mut buffered).with_context(cannot)?;
    buffered.flush().with_context(cannot)?;
    drop(buffered);
    beside.persist(path).with_context(cannot)?;
    Ok(())
}
