//! The cautions in short: every plan and every sheet ends with them.

/// Reminders, not rules: `safety/README.md` says more, and local rules decide.
pub const CAUTIONS: [&str; 7] = [
    "A plan is no permission: local rules, the hall's owner and competent, licensed people decide.",
    "Keep everyone out of the keep-out area and from under the release.",
    "Wear eye protection, all in the hall.",
    "Begin with a dummy mass, low, over the catch.",
    "Set lithium cells apart after a hard landing.",
    "One person stops everything, at anyone's word.",
    "Read safety/README.md before the first drop.",
];

/// All of them as one line that goes on after "warning:" or the like.
pub fn cautions_in_a_line() -> String {
    let line = CAUTIONS.join(" ");
    let line = line.strip_suffix('.').unwrap_or(&line);
    let (first, rest) = line.split_at(1);
    first.to_lowercase() + rest
}
