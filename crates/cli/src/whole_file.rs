//! Files that are written whole or not at all.

use std::io::{self, Write};
use std::path::{Path, PathBuf};

use anyhow::{Context, anyhow};
use tempfile::NamedTempFile;

/// Fills a file beside its place and moves it there when it is complete.
pub fn write(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> anyhow::Result<()>,
) -> anyhow::Result<()> {
    let beside = filled(path, fill)?;
    put(beside, path)
}

/// Writes several files, none of them moved to its place before all are complete.
pub fn write_all(files: &[(PathBuf, String)]) -> anyhow::Result<()> {
    let mut complete = Vec::new();
    for (path, text) in files {
        anyhow::ensure!(!path.is_dir(), "can't write {}: it is a folder", path.display());
        complete.push(filled(path, |file| Ok(file.write_all(text.as_bytes())?))?);
    }
    for (beside, (path, _)) in complete.into_iter().zip(files) {
        put(beside, path)?;
    }
    Ok(())
}

/// A file beside its place.
fn filled(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> anyhow::Result<()>,
) -> anyhow::Result<NamedTempFile> {
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
    Ok(beside)
}

fn put(beside: NamedTempFile, path: &Path) -> anyhow::Result<()> {
    let refused = |refused: tempfile::PersistError| {
        anyhow!("can't write {}: {}", path.display(), why(&refused.error))
    };
    beside.persist(path).map(|_| ()).map_err(refused)
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
