//! Numbers of a design by their keys: read and set in memory.
//!
//! A knob's value is in the unit of the file. Numbers of launch and gait, wind, scales and pressure
//! centres are set in the glider itself, in well under a microsecond; all others by way of the
//! text, which is read again from memory. Both give what reading the file with the value in it
//! gives. A design that was changed in other ways since it was read loses that when the text is
//! read again.

use crate::fast::Way;
use crate::key_path::KeyPath;
use crate::no_number::no_number;
use crate::numbers::{Allowed, Number};
use crate::{Design, DesignError, DesignErrors};

/// A number of a design, by its key.
#[derive(Debug, Clone, PartialEq)]
pub struct Knob {
    key: String,
    path: KeyPath,
    allowed: Allowed,
    way: Way,
}

impl Knob {
    /// Finds a number that the design holds, or that has a default.
    ///
    /// - `key`: as in the file, `gait.frequency_hz`, `body.length_m[3]` with items from 0
    ///
    /// # Errors
    ///
    /// [`DesignError::NoNumber`] where there is none of that key, with the key that may be meant.
    pub fn find(design: &Design, key: &str) -> Result<Self, DesignError> {
        let found = KeyPath::parse(key).and_then(|path| Some((design.origin.number(&path)?, path)));
        match found {
            Some((number, path)) => Ok(Self::new(path, number)),
            None => Err(no_number(design, key)),
        }
    }

    /// All numbers of a design, by their keys' order.
    pub fn all(design: &Design) -> Vec<Self> {
        let numbers = design.origin.numbers().iter();
        numbers.map(|(path, number)| Self::new(path.clone(), *number)).collect()
    }

    pub(crate) fn new(path: KeyPath, number: Number) -> Self {
        let (key, way) = (path.to_string(), Way::of(&path));
        Self { key, path, allowed: number.allowed, way }
    }

    /// As in the file.
    pub fn key(&self) -> &str {
        &self.key
    }

    /// Whether only whole numbers may stand there.
    pub fn is_whole(&self) -> bool {
        self.allowed.is_whole()
    }

    /// Whether it is set without text, and so in no time.
    pub fn is_fast(&self) -> bool {
        self.way != Way::Text
    }

    /// The number in a design, in the file's unit; not a number where another design lacks it.
    pub fn value(&self, design: &Design) -> f64 {
        design.origin.number(&self.path).map_or(f64::NAN, |number| number.value)
    }

    /// Sets the number.
    ///
    /// # Errors
    ///
    /// What reading the file with that value in it would refuse; the design stays as it was.
    pub fn set(&self, design: &mut Design, value: f64) -> Result<(), DesignErrors> {
        set_all(design, &[(self, value)])
    }

    /// Sets the number, or the nearest to it that may stand there.
    ///
    /// # Errors
    ///
    /// As for [`Self::set`]: what isn't a number, or what other numbers of the design don't allow.
    pub fn set_clamped(&self, design: &mut Design, value: f64) -> Result<(), DesignErrors> {
        self.set(design, self.allowed.clamped(value))
    }

    /// Which values may stand under the key, in words: "from 0 to 10".
    pub fn allowed(&self) -> String {
        self.allowed.to_string()
    }

    /// Whether a value may stand under the key, whatever stands under others.
    pub fn allows(&self, value: f64) -> bool {
        self.allowed.contains(value)
    }

    /// Whether a value can be put into a design without text.
    fn can_put(&self, design: &Design, value: f64) -> bool {
        self.is_fast() && self.allows(value) && design.origin.numbers().contains_key(&self.path)
    }
}

/// Sets several numbers at once, so that the text is read at most once, and only what they make
/// together has to be sound.
///
/// # Errors
///
/// As for [`Knob::set`].
pub fn set_all(design: &mut Design, changes: &[(&Knob, f64)]) -> Result<(), DesignErrors> {
    if changes.iter().all(|(knob, value)| knob.can_put(design, *value)) {
        for (knob, value) in changes {
            knob.way.put(&mut design.glider, *value);
            design.origin.remember(&knob.path, *value);
        }
        return Ok(());
    }
    let more = changes.iter().map(|(knob, value)| design.origin.override_of(&knob.path, *value));
    *design = design.read_again(more.collect())?;
    Ok(())
}
