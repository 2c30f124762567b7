//! The design that `undulift new` writes.

/// A robot that glides, in a text that holds every key of a design file with its meaning.
///
/// Lines that begin with `#` and a key are examples that would change the robot.
pub fn starter() -> &'static str {
    include_str!("starter.toml")
}
