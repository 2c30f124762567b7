//! Files that are written whole or not at all.

use std::io::{self, Write};
use std::path::Path;

use anyhow::{Context, anyhow};

/// Fills a file beside its place and moves it there when it is complete.
pub fn write(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> anyhow::Result<()>,
) -> anyhow::Result<()> {
    let cannot = || format!("can't write {}", path.display());
    let folder = path.parent().filter(|parent| !parent.as_os_str().is_empty());
    let mut builder = tempfile::Builder::new();
    // Readable as any new file is; by default only the owner could read it.
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut beside = builder
        .prefix(".undulift-")
        .tempfile_in(folder.unwrap_or(Path::new(".")))
        .map_err(|error| anyhow!("{}: {}", cannot(), why(&error)))?;
    let mut buffered = std::io::BufWriter::new(beside.as_file_mut());
    fill(&mut buffered).with_context(cannot)?;
    buffered.flush().with_context(cannot)?;
    drop(buffered);
    beside.persist(path).map_err(|refused| anyhow!("{}: {}", cannot(), why(&refused.error)))?;
    Ok(())
}

/// Why a file can't be made, without the name of the one beside it.
pub fn why(error: &io::Error) -> String {
    match error.kind() {
        io::ErrorKind::NotFound => "there is no such folder".into(),
        io::ErrorKind::PermissionDenied => "permission is denied".into(),
        io::ErrorKind::IsADirectory => "it is a folder".into(),
        kind => kind.to_string(),
    }
}
