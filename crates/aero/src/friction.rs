use undulift_lanes::f64x4;

use crate::Air;

/// Which flat-plate law drags on the body along its axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum SkinFriction {
    /// C_f = 1.328 Re_L^−½ (Blasius).
    #[default]
    Laminar,
    /// C_f = 0.074 Re_L^−0.2.
    Turbulent,
    /// No friction.
    None,
}

/// Skin friction of one body in one air: force per length −k |u|^p u times the perimeter, with
/// Re_L = ρ|u|L/μ on the whole body's length.
///
/// # Source
///
/// Hoerner, *Fluid-Dynamic Drag*, 1965, ch. II.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SkinFrictionLaw {
    kind: SkinFriction,
    factor: f64,
}

impl SkinFrictionLaw {
    /// - `body_m`: the whole body's length
    pub fn new(kind: SkinFriction, air: &Air, body_m: f64) -> Self {
        let reynolds_per_speed = air.density_kg_m3 * body_m / air.viscosity_pa_s;
        let half_density = 0.5 * air.density_kg_m3;
        let factor = match kind {
            _ if air.density_kg_m3 == 0.0 => 0.0,
            SkinFriction::Laminar => half_density * 1.328 / reynolds_per_speed.sqrt(),
            SkinFriction::Turbulent => half_density * 0.074 * reynolds_per_speed.powf(-0.2),
            SkinFriction::None => 0.0,
        };
        Self { kind, factor }
    }

    /// Force along the axis per length, N/m.
    ///
    /// - `u_x`: velocity relative to the air along the axis, m/s
    /// - `perimeter_m`: 2(chord + thickness)
    #[inline]
    pub fn force_per_length(&self, u_x: f64x4, perimeter_m: f64x4) -> f64x4 {
        let speed = u_x.abs();
        let power = match self.kind {
            SkinFriction::Laminar => speed.sqrt(),
            // The tiny speed keeps the logarithm finite; the product with u_x vanishes all the same.
            SkinFriction::Turbulent => {
                ((speed + f64x4::splat(1e-300)).ln() * f64x4::splat(0.8)).exp()
            }
            SkinFriction::None => f64x4::splat(0.0),
        };
        -(power * u_x) * perimeter_m * f64x4::splat(self.factor)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Drag coefficient of one side of a plate: laminar 1.328 Re^−½ is .013 28, .005 94, .004 20 at
    /// Re 1e4, 5e4, 1e5 (Hoerner 1965 prints 1.33; digits computed); turbulent 0.074 Re^−0.2 as
    /// published.
    #[test]
    fn published_flat_plate_friction() {
        let air = Air::at(293.15, 101_325.0);
        let laminar = [(1e4, 0.013_28), (5e4, 0.005_94), (1e5, 0.004_20)];
        let turbulent = [(5e5, 0.074 / 5e5_f64.powf(0.2))];
        let cases = laminar
            .map(|row| (SkinFriction::Laminar, row))
            .into_iter()
            .chain(turbulent.map(|row| (SkinFriction::Turbulent, row)));
        for (kind, (reynolds, coefficient)) in cases {
            let body_m = 1.5;
            let speed = reynolds * air.viscosity_pa_s / (air.density_kg_m3 * body_m);
            let law = SkinFrictionLaw::new(kind, &air, body_m);
            let force = law.force_per_length(f64x4::splat(speed), f64x4::splat(1.0)).to_array()[0];
            let dynamic_pressure = 0.5 * air.density_kg_m3 * speed * speed;
            assert_relative_eq!(-force / dynamic_pressure, coefficient, epsilon = 6e-6);
        }
    }

    #[test]
    fn still_air_and_no_air_drag_on_nothing() {
        for kind in [SkinFriction::Laminar, SkinFriction::Turbulent, SkinFriction::None] {
            for pressure_pa in [0.0, 101_325.0] {
                let law = SkinFrictionLaw::new(kind, &Air::at(293.15, pressure_pa), 1.0);
                let force = law.force_per_length(f64x4::splat(0.0), f64x4::splat(1.0));
                assert_eq!(force.to_array(), [0.0; 4]);
            }
        }
    }
}
