//! Where a value stands in a file: `body.length_m[3]`, `servo.mid-34.mass_kg`.

use std::fmt;

/// One step from a table or a list to what it holds.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) enum Step {
    /// Of a table.
    Key(String),
    /// Of a list, from 0.
    Item(usize),
}

/// Most keys of a path that is read from a text.
const MOST_STEPS: usize = 16;

/// Steps from the top of a file.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Default)]
pub(crate) struct KeyPath(pub(crate) Vec<Step>);

impl KeyPath {
    /// From keys alone.
    pub(crate) fn of<const N: usize>(keys: [&str; N]) -> Self {
        Self(keys.iter().map(|&key| Step::Key(key.to_owned())).collect())
    }

    /// What a table here holds under a key.
    pub(crate) fn key(&self, key: &str) -> Self {
        self.then(Step::Key(key.to_owned()))
    }

    /// What a list here holds.
    pub(crate) fn item(&self, idx: usize) -> Self {
        self.then(Step::Item(idx))
    }

    fn then(&self, step: Step) -> Self {
        let mut steps = self.0.clone();
        steps.push(step);
        Self(steps)
    }

    /// The path of its first steps, where it has that many.
    pub(crate) fn first(&self, steps: usize) -> Option<Self> {
        Some(Self(self.0.get(..steps)?.to_vec()))
    }

    /// Whether this is the other or stands within it.
    pub(crate) fn is_within(&self, outer: &KeyPath) -> bool {
        self.0.starts_with(&outer.0)
    }

    /// Reads a path as it is written, quotes allowed around a key; no design has one of many steps.
    pub(crate) fn parse(text: &str) -> Option<Self> {
        let mut steps = Vec::new();
        let mut rest = text.trim();
        loop {
            if steps.len() > MOST_STEPS {
                return None;
            }
            let (step, after) = parse_key(rest)?;
            steps.push(step);
            rest = after;
            while let Some(inside) = rest.strip_prefix('[').filter(|_| steps.len() <= MOST_STEPS) {
                let (idx, after) = inside.split_once(']')?;
                steps.push(Step::Item(idx.trim().parse().ok()?));
                rest = after;
            }
            if rest.is_empty() {
                return Some(Self(steps));
            }
            rest = rest.strip_prefix('.')?;
        }
    }
}

fn parse_key(text: &str) -> Option<(Step, &str)> {
    if let Some(quote) = text.bytes().next().filter(|first| b"\"'".contains(first)) {
        let end = 1 + quoted_len(&text.as_bytes()[1..], quote)?;
        let key: toml_edit::Key = text[..=end].parse().ok()?;
        return Some((Step::Key(key.get().to_owned()), &text[end + 1..]));
    }
    let end = text.find(|c: char| !is_bare(c)).unwrap_or(text.len());
    (end > 0).then(|| (Step::Key(text[..end].to_owned()), &text[end..]))
}

/// Bytes up to the quote that ends a text; in double quotes a backslash goes with what follows it.
fn quoted_len(text: &[u8], quote: u8) -> Option<usize> {
    let mut at = 0;
    while *text.get(at)? != quote {
        at += if quote == b'"' && text[at] == b'\\' { 2 } else { 1 };
    }
    Some(at)
}

fn is_bare(c: char) -> bool {
    c.is_ascii_alphanumeric() || c == '_' || c == '-'
}

impl fmt::Display for KeyPath {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (place, step) in self.0.iter().enumerate() {
            match step {
                Step::Item(idx) => write!(f, "[{idx}]")?,
                Step::Key(key) => {
                    f.write_str(if place > 0 { "." } else { "" })?;
                    if !key.is_empty() && key.chars().all(is_bare) {
                        f.write_str(key)?;
                    } else {
                        // Quoted and escaped as in a file.
                        write!(f, "{}", toml_edit::Key::new(key.as_str()))?;
                    }
                }
            }
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn twin_paths_read_back_as_they_are_written() {
        for key in ["", "a \"b\"", "it's", "\\", "\n\0", "é", "a.b[3]", "'\""] {
            let path = KeyPath::of(["section", key]).item(2);
            assert_eq!(KeyPath::parse(&path.to_string()), Some(path.clone()), "{path}");
        }
        for text in ["body.length_m[3]", "servo.mid-34.mass_kg", "spread.\"launch.speed_m_s\".sd"] {
            assert_eq!(KeyPath::parse(text).unwrap().to_string(), text);
        }
        let deep = "a.".repeat(100_000) + "a";
        for text in [deep.as_str(), "", "a..b", "a[", "a[x]", "a b", ".a", "a.", "\"a"] {
            assert_eq!(KeyPath::parse(text), None, "{text}");
        }
    }
}
