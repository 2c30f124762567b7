use wide::f64x4;

/// 1.5·2⁵²: a double of this size has no bits left for a fraction, so adding it and taking it away
/// rounds, without the checks that a conversion to an integer makes.
const ROUNDING: f64 = 6_755_399_441_055_744.0;

/// Whole number nearest to each value, of size below 2⁵¹.
#[inline(always)]
pub fn round(values: f64x4) -> f64x4 {
    let rounding = f64x4::splat(ROUNDING);
    (values + rounding) - rounding
}

/// The whole number at or below a value at or above 0 and below 2³¹, and the rest.
///
/// A value that is whole may count as the number before it with a rest of 1.
#[inline(always)]
pub fn whole_and_rest(value: f64) -> (usize, f64) {
    let rounded = (value - 0.5) + ROUNDING;
    // The whole number stands in the last bits.
    (rounded.to_bits() as u32 as usize, value - (rounded - ROUNDING))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the platform's own conversions.
    #[test]
    fn twin_wholes_and_rests() {
        for step in 0..100_000_u32 {
            let value = f64::from(step) * 0.037;
            let (whole, rest) = whole_and_rest(value);
            assert_eq!(whole as f64 + rest, value);
            assert!((0.0..=1.0).contains(&rest));
            let centred = f64x4::splat(value - 1850.0);
            assert_eq!(round(centred).to_array()[0], (value - 1850.0).round_ties_even());
        }
    }
}
