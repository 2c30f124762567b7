/// Why air or a section can't be used.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum AeroError {
    /// The standard atmosphere's lowest layer is all that is built in.
    #[error(
        "altitude {altitude_m} m is outside the standard atmosphere's lowest layer, −500…11 000 m"
    )]
    Altitude {
        /// Geopotential altitude, m.
        altitude_m: f64,
    },
    /// A section table must reach both broadsides; we never extrapolate incidence.
    #[error(
        "section table `{table}`, Re {reynolds}: incidence runs {first_deg}…{last_deg}°, but must run −90…90°"
    )]
    TableTooShort {
        /// Name of the table.
        table: String,
        /// Reynolds number of the polar.
        reynolds: f64,
        /// First incidence given.
        first_deg: f64,
        /// Last incidence given.
        last_deg: f64,
    },
    /// Incidence must rise from row to row.
    #[error("section table `{table}`, Re {reynolds}: incidence {alpha_deg}° repeats or falls back")]
    TableUnsorted {
        /// Name of the table.
        table: String,
        /// Reynolds number of the polar.
        reynolds: f64,
        /// The incidence that isn't above the one before it.
        alpha_deg: f64,
    },
    /// Sections are left–right symmetric, so broadside on they lift neither way.
    #[error(
        "section table `{table}`, Re {reynolds}: {coefficient} is {value} at {alpha_deg}°, but must be 0 there"
    )]
    NotZeroBroadside {
        /// Name of the table.
        table: String,
        /// Reynolds number of the polar.
        reynolds: f64,
        /// Which coefficient.
        coefficient: &'static str,
        /// −90 or 90.
        alpha_deg: f64,
        /// What was given.
        value: f64,
    },
    /// Columns of different lengths, a value that isn't finite, no polar, a Reynolds number that repeats.
    #[error("section table `{table}` can't be used: {why}")]
    TableUnsound {
        /// Name of the table.
        table: String,
        /// What is wrong.
        why: &'static str,
    },
}
