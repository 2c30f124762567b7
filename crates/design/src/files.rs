//! Files read whole, within a size and as text.

use std::fs::File;
use std::io::Read;
use std::path::Path;

use crate::DesignError;

/// Largest TOML file that is read, bytes.
pub(crate) const MOST_TOML_BYTES: u64 = 16 << 20;

/// Largest CSV file that is read, bytes.
pub(crate) const MOST_CSV_BYTES: u64 = 64 << 20;

/// Reads a text file.
///
/// # Errors
///
/// What kept it from being read, the name of the file left to the caller.
pub(crate) fn read_file(path: &Path, most_bytes: u64) -> Result<String, DesignError> {
    let named = || path.display().to_string();
    let unreadable = |source| DesignError::Unreadable { file: named(), source };
    let file = File::open(path).map_err(unreadable)?;
    let kind = file.metadata().map_err(unreadable)?;
    if kind.is_dir() {
        return Err(DesignError::Folder { file: named() });
    }
    let mut bytes = Vec::new();
    // One byte more than allowed tells a file that is too large from one that just fits, whatever
    // its length is said to be.
    file.take(most_bytes + 1).read_to_end(&mut bytes).map_err(unreadable)?;
    if bytes.len() as u64 > most_bytes {
        return Err(DesignError::TooLarge { file: named(), most_mb: most_bytes >> 20 });
    }
    let other_at = |bytes: &[u8]| {
        let line = 1 + bytes.iter().filter(|&&byte| byte == b'\n').count();
        DesignError::NotText { file: named(), line }
    };
    let text = String::from_utf8(bytes)
        .map_err(|error| other_at(&error.as_bytes()[..error.utf8_error().valid_up_to()]))?;
    // Bytes of 0 are UTF-8, but nobody's text.
    if let Some(at) = text.find('\0') {
        return Err(other_at(&text.as_bytes()[..at]));
    }
    if text.trim().is_empty() { Err(DesignError::Empty { file: named() }) } else { Ok(text) }
}

/// Checks a text that stands for a file as one that is read from it.
///
/// # Errors
///
/// [`DesignError::TooLarge`] and [`DesignError::Empty`].
pub(crate) fn check_text(path: &Path, text: &str, most_bytes: u64) -> Result<(), DesignError> {
    let file = path.display().to_string();
    if text.len() as u64 > most_bytes {
        return Err(DesignError::TooLarge { file, most_mb: most_bytes >> 20 });
    }
    if text.trim().is_empty() { Err(DesignError::Empty { file }) } else { Ok(()) }
}
