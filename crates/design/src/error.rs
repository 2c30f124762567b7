use undulift_aero::AeroError;
use undulift_chain::ChainError;
use undulift_gait::GaitError;

/// What is wrong in one place of a file.
///
/// Messages say what was found and what may stand there; [`DesignError::help`] says what to do.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum DesignError {
    /// The system wouldn't open or read it.
    #[error("`{file}` can't be read: {}", plainly(source))]
    Unreadable {
        /// Its path.
        file: String,
        /// Why.
        source: std::io::Error,
    },
    /// A folder where a file is needed.
    #[error("`{file}` is a folder, not a file")]
    Folder {
        /// Its path.
        file: String,
    },
    /// Larger than anything that is meant.
    #[error("`{file}` is larger than {most_mb} MB, the most that is read")]
    TooLarge {
        /// Its path.
        file: String,
        /// Limit, MB of 2²⁰ bytes.
        most_mb: u64,
    },
    /// Not UTF-8.
    #[error("`{file}` isn't text in UTF-8: line {line} holds other bytes")]
    NotText {
        /// Its path.
        file: String,
        /// First such line.
        line: usize,
    },
    /// Nothing in it.
    #[error("`{file}` is empty")]
    Empty {
        /// Its path.
        file: String,
    },
    /// A path that can't be written into a file.
    #[error("the path `{file}` isn't text in UTF-8, and so can't stand in a design")]
    NotInText {
        /// Its path, as far as it can be shown.
        file: String,
    },
    /// Not TOML.
    #[error("this can't be read as TOML: {why}")]
    Syntax {
        /// The parser's words.
        why: String,
    },
    /// A key that nothing reads.
    #[error("there is no such key{}", meant(nearest))]
    UnknownKey {
        /// The known key that was probably meant.
        nearest: Option<String>,
        /// Keys that may stand there.
        known: Vec<String>,
    },
    /// A key that has to be there.
    #[error("this is missing; it must be {wanted}")]
    Missing {
        /// What it is.
        wanted: String,
    },
    /// Text for a number, a table for a list.
    #[error("this is {found}, but must be {wanted}")]
    WrongKind {
        /// What stands there.
        found: String,
        /// What may.
        wanted: String,
    },
    /// A number that can't be, not finite ones included.
    #[error("{found} is out of range: it must be {allowed}")]
    OutOfRange {
        /// As written.
        found: String,
        /// Which numbers may stand there.
        allowed: String,
    },
    /// A list with too few or too many items.
    #[error("this list has {found} {}, but {why}", if *found == 1 { "item" } else { "items" })]
    ListLength {
        /// Items in the list.
        found: usize,
        /// How many there must be, where that is known.
        wanted: Option<usize>,
        /// What decides how many there must be.
        why: String,
    },
    /// A word that isn't one of those understood.
    #[error("\"{found}\" isn't understood here; it must be {known}{}", meant(nearest))]
    UnknownWord {
        /// As written.
        found: String,
        /// The word that was probably meant.
        nearest: Option<String>,
        /// The words that may stand there.
        known: String,
    },
    /// A name of something that no table defines.
    #[error("no {what} is called \"{name}\"{}", meant(nearest))]
    Undefined {
        /// "servo" or "section".
        what: &'static str,
        /// As written.
        name: String,
        /// The name that was probably meant.
        nearest: Option<String>,
        /// Where to define it.
        remedy: String,
    },
    /// A name that means something already.
    #[error("\"{name}\" can't be the name of a {what}: {why}")]
    TakenName {
        /// "servo" or "section".
        what: &'static str,
        /// As written.
        name: String,
        /// What it means.
        why: &'static str,
    },
    /// Two keys that say different things.
    #[error("this can't stand beside `{other}`: {why}")]
    Clash {
        /// The other key.
        other: String,
        /// Why.
        why: &'static str,
        /// What to do.
        remedy: &'static str,
    },
    /// A number that its neighbours don't allow.
    #[error("{why}")]
    Disagree {
        /// What was found, and against what.
        why: String,
        /// What to do.
        remedy: &'static str,
    },
    /// A catalogue naming a catalogue.
    #[error("a servo catalogue can't name another one")]
    NestedCatalogue,
    /// An override that isn't KEY=VALUE.
    #[error("`{text}` isn't a setting: {why}")]
    Setting {
        /// As given.
        text: String,
        /// What is wrong with it.
        why: String,
    },
    /// An override of something that isn't there.
    #[error("this can't be set: {why}")]
    CannotSet {
        /// What is in the way.
        why: String,
    },
    /// A key that is none of a design's numbers.
    #[error("`{key}` isn't a number of this design: {why}{}", meant(nearest))]
    NoNumber {
        /// As given.
        key: String,
        /// What is in the way.
        why: String,
        /// The key that was probably meant.
        nearest: Option<String>,
    },
    /// A key of nothing that is printed as a number.
    #[error("`{key}` isn't a number that is printed: {why}{}", meant(nearest))]
    NoQuantity {
        /// As given.
        key: String,
        /// What is in the way.
        why: String,
        /// The key that was probably meant.
        nearest: Option<String>,
    },
    /// A table of numbers without a column.
    #[error("the column `{column}` is missing{}", meant(nearest))]
    MissingColumn {
        /// Its name.
        column: String,
        /// What may be meant for it.
        nearest: Option<String>,
        /// Columns there must be.
        wanted: String,
    },
    /// A column that nothing reads, or a second one of the same name.
    #[error("the column `{column}` {why}")]
    ExtraColumn {
        /// Its name.
        column: String,
        /// Why it can't stay.
        why: String,
        /// Columns there may be.
        wanted: String,
    },
    /// A row that can't be read.
    #[error("{why}")]
    Row {
        /// What is wrong.
        why: String,
        /// What to do.
        remedy: &'static str,
    },
    /// A table's rows don't make a section.
    #[error(transparent)]
    Section(#[from] AeroError),
    /// A table's rows don't make a gait.
    #[error(transparent)]
    Gait(#[from] GaitError),
    /// The parts don't make a chain.
    #[error(transparent)]
    Chain(#[from] ChainError),
}

impl DesignError {
    /// What to do about it.
    pub fn help(&self) -> Option<String> {
        let remedy = match self {
            Self::Unreadable { .. } => {
                "check the name; a path in a file counts from the folder of that file".into()
            }
            Self::Folder { .. } => "name a file in it".into(),
            Self::TooLarge { .. } => "check that this is the file you mean, or shorten it".into(),
            Self::NotText { .. } => {
                "check that this is the file you mean, and save it as plain text in UTF-8".into()
            }
            Self::NotInText { .. } => "rename its folders, or choose another place".into(),
            Self::Empty { .. } => "check that this is the file you mean".into(),
            Self::Syntax { .. } => {
                "lines read `key = value`: words in quotes, a point in numbers, each key once"
                    .into()
            }
            Self::UnknownKey { nearest: Some(nearest), .. } => {
                format!("write `{nearest}`, or take the line out")
            }
            Self::UnknownKey { nearest: None, known } => {
                format!("keys here are {}", listed(known.iter().map(|key| format!("`{key}`"))))
            }
            Self::Missing { .. } => "add it".into(),
            Self::WrongKind { found, wanted } => {
                let number_in_quotes = found.starts_with("the text") && wanted.contains("number");
                let as_number =
                    if number_in_quotes { ", without quotes and without its unit" } else { "" };
                format!("write {wanted}{as_number}")
            }
            Self::OutOfRange { .. } => "check the number and its sign".into(),
            Self::ListLength { wanted: Some(1), .. } => "give 1 item".into(),
            Self::ListLength { wanted: Some(wanted), .. } => format!("give {wanted} items"),
            Self::ListLength { wanted: None, .. } => "check that this is what you mean".into(),
            Self::UnknownWord { known, .. } => format!("write {known}"),
            Self::Undefined { remedy, .. } => remedy.clone(),
            Self::TakenName { .. } => "choose another name".into(),
            Self::Clash { remedy, .. } | Self::Disagree { remedy, .. } => (*remedy).into(),
            Self::NestedCatalogue => "put all servos in one file".into(),
            Self::Setting { .. } => {
                "write --set KEY=VALUE, such as --set gait.frequency_hz=1.2 or \
                 --set body.length_m[3]=0.1 (items count from 0)"
                    .into()
            }
            Self::CannotSet { .. } => "set what holds it as a whole, or change the file".into(),
            Self::NoNumber { .. } => {
                "numbers are named as in the file, such as gait.frequency_hz or \
                 body.length_m[3] (items count from 0)"
                    .into()
            }
            Self::NoQuantity { .. } => {
                "any number of `fly --json`, or of `budget --json` with `budget.` before it, such as \
                 glide_ratio or budget.least_margin"
                    .into()
            }
            Self::MissingColumn { wanted, .. } | Self::ExtraColumn { wanted, .. } => {
                format!("the first row names the columns, with commas between: {wanted}")
            }
            Self::Row { remedy, .. } => (*remedy).into(),
            Self::Section(_) | Self::Gait(_) | Self::Chain(_) => return None,
        };
        Some(remedy)
    }
}

/// The system's reason without its number.
fn plainly(error: &std::io::Error) -> String {
    match error.kind() {
        std::io::ErrorKind::NotFound => "there is no such file".into(),
        std::io::ErrorKind::PermissionDenied => "permission is denied".into(),
        _ => error.to_string(),
    }
}

fn meant(nearest: &Option<String>) -> String {
    nearest.as_ref().map(|nearest| format!("; did you mean `{nearest}`?")).unwrap_or_default()
}

fn listed(items: impl Iterator<Item = String>) -> String {
    items.collect::<Vec<_>>().join(", ")
}
