//! Numbers that arguments may be.

pub fn load_factor(text: &str) -> Result<f64, String> {
    within(text, [-1000.0, 1000.0])
}

pub fn metres(text: &str) -> Result<f64, String> {
    above_0(text, 1000.0)
}

pub fn power(text: &str) -> Result<f64, String> {
    within(text, [0.1, 0.999])
}

pub fn seconds(text: &str) -> Result<f64, String> {
    within(text, [0.0, 1e6])
}

pub fn within(text: &str, [low, high]: [f64; 2]) -> Result<f64, String> {
    let value: f64 = text.parse().map_err(|_| "it must be a number".to_owned())?;
    if (low..=high).contains(&value) {
        Ok(value)
    } else {
        Err(format!("it must be from {low} to {high}"))
    }
}

/// More rows than this would fill a disk rather than tell something.
const LEAST_EVERY_MS: f64 = 1e-3;

pub fn every_ms(text: &str) -> Result<f64, String> {
    within(text, [LEAST_EVERY_MS, 1e6])
}

pub fn above_0(text: &str, most: f64) -> Result<f64, String> {
    let value: f64 = text.parse().map_err(|_| "it must be a number".to_owned())?;
    if value > 0.0 && value <= most {
        Ok(value)
    } else {
        Err(format!("it must be above 0 and at most {most}"))
    }
}
