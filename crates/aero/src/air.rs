use crate::AeroError;

/// Standard gravity, m/s² (exact; 3rd CGPM, 1901).
pub const STANDARD_GRAVITY_M_S2: f64 = 9.806_65;

/// Specific gas constant of dry air, J/(kg·K) (ISO 2533:1975).
pub const DRY_AIR_GAS_CONSTANT: f64 = 287.052_87;

/// Sea-level temperature of the standard atmosphere, K (ISO 2533).
const SEA_LEVEL_K: f64 = 288.15;
/// Sea-level pressure of the standard atmosphere, Pa (ISO 2533).
const SEA_LEVEL_PA: f64 = 101_325.0;
/// Fall of temperature with height in the lowest layer, K/m (ISO 2533).
const LAPSE_K_PER_M: f64 = 0.0065;

/// Still, dry air.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Air {
    /// K.
    pub temperature_k: f64,
    /// Pa.
    pub pressure_pa: f64,
    /// kg/m³.
    pub density_kg_m3: f64,
    /// Dynamic viscosity, Pa·s.
    pub viscosity_pa_s: f64,
}

impl Air {
    /// Dry air as an ideal gas; viscosity after Sutherland.
    ///
    /// # Source
    ///
    /// U.S. Standard Atmosphere 1976, eqs. 42 and 51.
    pub fn at(temperature_k: f64, pressure_pa: f64) -> Self {
        Self {
            temperature_k,
            pressure_pa,
            density_kg_m3: pressure_pa / (DRY_AIR_GAS_CONSTANT * temperature_k),
            viscosity_pa_s: 1.458e-6 * temperature_k.powf(1.5) / (temperature_k + 110.4),
        }
    }

    /// The standard atmosphere's lowest layer.
    ///
    /// - `altitude_m`: geopotential, −500…11 000 m
    ///
    /// # Errors
    ///
    /// [`AeroError::Altitude`] outside that layer.
    ///
    /// # Source
    ///
    /// ISO 2533:1975.
    pub fn standard(altitude_m: f64) -> Result<Self, AeroError> {
        if !(-500.0..=11_000.0).contains(&altitude_m) {
            return Err(AeroError::Altitude { altitude_m });
        }
        let temperature_k = SEA_LEVEL_K - LAPSE_K_PER_M * altitude_m;
        let exponent = STANDARD_GRAVITY_M_S2 / (DRY_AIR_GAS_CONSTANT * LAPSE_K_PER_M);
        let pressure_pa = SEA_LEVEL_PA * (temperature_k / SEA_LEVEL_K).powf(exponent);
        Ok(Self::at(temperature_k, pressure_pa))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Geopotential altitude, ISO 2533 constants: 1000 m 281.650 K, 89 874.56 Pa, 1.111 64 kg/m³;
    /// 3000 m 268.650 K, 70 108.53 Pa, 0.909 12 (computed with the libraries `ambiance` 1.3.1 and
    /// `fluids` 1.3.1, which agree). Sea level is the standard's own definition.
    #[test]
    fn published_standard_atmosphere_by_geopotential_altitude() {
        let rows = [
            (0.0, 288.150, 101_325.00, 1.225_00),
            (1000.0, 281.650, 89_874.56, 1.111_64),
            (3000.0, 268.650, 70_108.53, 0.909_12),
        ];
        for (altitude_m, temperature_k, pressure_pa, density_kg_m3) in rows {
            let air = Air::standard(altitude_m).unwrap();
            assert_relative_eq!(air.temperature_k, temperature_k, epsilon = 1e-9);
            assert_relative_eq!(air.pressure_pa, pressure_pa, epsilon = 0.006);
            assert_relative_eq!(air.density_kg_m3, density_kg_m3, epsilon = 6e-6);
        }
    }

    /// U.S. Standard Atmosphere 1976 by geometric altitude Z, as printed in Mechanical Engineers'
    /// Handbook vol. 4, table 6 (T, ρ) with viscosity from `ambiance` 1.3.1; geopotential altitude
    /// is H = r Z/(r + Z), r = 6 356 766 m.
    #[test]
    fn published_standard_atmosphere_by_geometric_altitude() {
        let rows = [
            (1000.0, 281.65, 1.1117, 1.757_85e-5),
            (2000.0, 275.15, 1.0066, 1.725_98e-5),
            (3000.0, 268.66, 0.9093, 1.693_76e-5),
        ];
        for (geometric_m, temperature_k, density_kg_m3, viscosity_pa_s) in rows {
            let altitude_m = 6_356_766.0 * geometric_m / (6_356_766.0 + geometric_m);
            let air = Air::standard(altitude_m).unwrap();
            assert_relative_eq!(air.temperature_k, temperature_k, epsilon = 0.006);
            assert_relative_eq!(air.density_kg_m3, density_kg_m3, epsilon = 6e-5);
            assert_relative_eq!(air.viscosity_pa_s, viscosity_pa_s, epsilon = 6e-11);
        }
    }

    /// Dry air at 101 325 Pa, computed with the library `fluids` 1.3.1.
    #[test]
    fn published_dry_air_at_room_temperature() {
        for (celsius, density_kg_m3, viscosity_pa_s) in
            [(20.0, 1.204_11, 1.813_41e-5), (25.0, 1.183_91, 1.837_23e-5)]
        {
            let air = Air::at(celsius + 273.15, 101_325.0);
            assert_relative_eq!(air.density_kg_m3, density_kg_m3, epsilon = 6e-6);
            assert_relative_eq!(air.viscosity_pa_s, viscosity_pa_s, epsilon = 6e-11);
        }
    }

    #[test]
    fn altitude_beyond_the_lowest_layer_is_refused() {
        assert_eq!(Air::standard(11_001.0), Err(AeroError::Altitude { altitude_m: 11_001.0 }));
        assert!(Air::standard(f64::NAN).is_err());
    }
}
