//! Ranges outside of which a figure is a slip, and inside of which no sum overflows.

use crate::ServoError;

/// Figures of one thing, checked one by one.
pub(crate) struct Figures<'a> {
    /// What they belong to, as errors call it.
    pub(crate) of: &'a str,
}

impl Figures<'_> {
    /// - `quantity`: its name, with its unit
    /// - `from`, `to`: least and most that it may be
    pub(crate) fn within(
        &self,
        quantity: &'static str,
        value: f64,
        [from, to]: [f64; 2],
    ) -> Result<(), ServoError> {
        if (from..=to).contains(&value) {
            return Ok(());
        }
        Err(ServoError::Figure { of: self.of.to_owned(), quantity, value, from, to })
    }

    pub(crate) fn within_where_given(
        &self,
        quantity: &'static str,
        value: Option<f64>,
        range: [f64; 2],
    ) -> Result<(), ServoError> {
        value.map_or(Ok(()), |value| self.within(quantity, value, range))
    }
}
