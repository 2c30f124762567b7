//! Files that are written whole or not at all.

use std::io::{self, Write};
use std::path::{Path, PathBuf};

use anyhow::{Context, anyhow};
use tempfile::NamedTempFile;

/// Fills a file beside its place and moves it there when it is complete.
///
/// A link stays, and what it leads to is replaced. What is no file (a pipe, a terminal) takes what is
/// complete, as nothing can be moved there.
pub fn write(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> anyhow::Result<()>,
) -> anyhow::Result<()> {
    if is_stream(path) {
        let mut text = Vec::new();
        fill(&mut text)?;
        return stream(path, &text);
    }
    let path = &place(path);
    put(filled(path, fill)?, path)
}

/// Writes several files, none of them moved to its place before all are complete.
pub fn write_all(files: &[(PathBuf, String)]) -> anyhow::Result<()> {
    let (streams, files): (Vec<_>, Vec<_>) = files.iter().partition(|(path, _)| is_stream(path));
    let mut complete = Vec::new();
    for (path, text) in files {
        anyhow::ensure!(!path.is_dir(), "can't write {}: it is a folder", path.display());
        let path = place(path);
        complete.push((filled(&path, |file| Ok(file.write_all(text.as_bytes())?))?, path));
    }
    for (beside, path) in complete {
        put(beside, &path)?;
    }
    streams.into_iter().try_for_each(|(path, text)| stream(path, text.as_bytes()))
}

/// Refuses to write over what was read, and two things to one place.
///
/// - `read`: files that were named to be read
/// - `written`: files that were named to be written
pub fn ensure_apart<'p>(
    read: impl IntoIterator<Item = &'p PathBuf>,
    written: impl IntoIterator<Item = &'p PathBuf>,
) -> anyhow::Result<()> {
    let read: Vec<PathBuf> = read.into_iter().map(|path| place(path)).collect();
    let mut taken = Vec::new();
    for path in written.into_iter().filter(|path| !is_stream(path)) {
        let place = place(path);
        anyhow::ensure!(
            !read.contains(&place),
            "can't write {}: it is read, too, and would be lost; name another file",
            path.display()
        );
        anyhow::ensure!(
            !taken.contains(&place),
            "{} is to be written twice, but each needs a file of its own",
            path.display()
        );
        taken.push(place);
    }
    Ok(())
}

/// Where a path leads: through links, and without detours.
fn place(path: &Path) -> PathBuf {
    if let Ok(place) = path.canonicalize() {
        return place;
    }
    // The file isn't there yet, but its folder may be.
    let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty());
    let folder = folder.unwrap_or(Path::new(".")).canonicalize();
    match (folder, path.file_name()) {
        (Ok(folder), Some(name)) => folder.join(name),
        _ => path.to_owned(),
    }
}

/// Whether something is there that is neither a file nor a folder.
fn is_stream(path: &Path) -> bool {
    path.metadata().is_ok_and(|about| !about.is_file() && !about.is_dir())
}

fn stream(path: &Path, text: &[u8]) -> anyhow::Result<()> {
    let written = std::fs::OpenOptions::new().write(true).open(path);
    let written = written.and_then(|mut stream| {
        stream.write_all(text)?;
        stream.flush()
    });
    written.map_err(|error| anyhow!("can't write {}: {}", path.display(), why(&error)))
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

#[cfg(all(test, unix))]
mod tests {
    use super::*;

    /// A link stays a link, what is no file stays what it is, and only the same place is refused.
    #[test]
    fn twin_what_is_there_stays_what_it_is() {
        let folder = tempfile::tempdir().unwrap();
        let path = |name: &str| folder.path().join(name);
        std::fs::write(path("old"), "old").unwrap();
        std::os::unix::fs::symlink(path("old"), path("link")).unwrap();
        write(&path("link"), |file| Ok(file.write_all(b"new")?)).unwrap();
        assert_eq!(std::fs::read_to_string(path("old")).unwrap(), "new");
        assert!(path("link").is_symlink());
        assert!(is_stream(Path::new("/dev/null")));
        write(Path::new("/dev/null"), |file| Ok(file.write_all(b"new")?)).unwrap();
        write_all(&[("/dev/null".into(), "new".into())]).unwrap();
        assert!(is_stream(Path::new("/dev/null")));
        assert!(stream(Path::new("/dev/full"), b"new").is_err());
        let apart = |read: &str, written: &[PathBuf]| ensure_apart(&[path(read)], written);
        assert!(apart("old", &[path("new")]).is_ok());
        assert!(apart("old", &[path("link")]).is_err());
        assert!(apart("old", &[path("./old")]).is_err());
        assert!(apart("old", &[path("a"), path("./a")]).is_err());
        assert!(apart("old", &["/dev/null".into(), "/dev/null".into()]).is_ok());
    }
}
