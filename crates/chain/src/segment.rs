use nalgebra::{Matrix3, Vector3};

use crate::PointMass;

/// One rigid segment's structure: a box.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Segment {
    /// Along the body, m.
    pub length_m: f64,
    /// The chord: across the body, m.
    pub width_m: f64,
    /// Belly to back, m.
    pub thickness_m: f64,
    /// Mass of the box alone, kg.
    pub structure_kg: f64,
}

/// Mass, centre and inertia of a whole segment, attached masses included.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Inertial {
    /// kg.
    pub mass_kg: f64,
    /// Centre of mass in the segment frame, m.
    pub centre_m: Vector3<f64>,
    /// About that centre, segment axes, kg·m².
    pub inertia_kg_m2: Matrix3<f64>,
}

impl Segment {
    /// Half the box, along its axes, m.
    pub fn half_extents_m(&self) -> Vector3<f64> {
        Vector3::new(self.length_m, self.width_m, self.thickness_m) / 2.0
    }

    /// The box's middle in the segment frame, m.
    pub fn middle_m(&self) -> Vector3<f64> {
        Vector3::new(-self.length_m / 2.0, 0.0, 0.0)
    }

    /// The solid box joined with its point masses by the parallel-axis rule.
    ///
    /// - `attached`: the masses fixed in this segment
    pub fn inertial<'a>(&self, attached: impl Iterator<Item = &'a PointMass> + Clone) -> Inertial {
        let (length, width, thickness) = (self.length_m, self.width_m, self.thickness_m);
        let mass_kg = self.structure_kg + attached.clone().map(|m| m.mass_kg).sum::<f64>();
        let moment = self.structure_kg * self.middle_m()
            + attached.clone().map(|m| m.mass_kg * m.at_m).sum::<Vector3<f64>>();
        let centre_m = moment / mass_kg;
        let of_box = self.structure_kg / 12.0
            * Vector3::new(
                width * width + thickness * thickness,
                length * length + thickness * thickness,
                length * length + width * width,
            );
        let inertia_kg_m2 = Matrix3::from_diagonal(&of_box)
            + point_inertia(self.structure_kg, self.middle_m() - centre_m)
            + attached.map(|m| point_inertia(m.mass_kg, m.at_m - centre_m)).sum::<Matrix3<f64>>();
        Inertial { mass_kg, centre_m, inertia_kg_m2 }
    }
}

/// m(|r|²1 − r rᵀ): a point's inertia about a place it is `offset_m` away from.
fn point_inertia(mass_kg: f64, offset_m: Vector3<f64>) -> Matrix3<f64> {
    mass_kg * (Matrix3::identity() * offset_m.norm_squared() - offset_m * offset_m.transpose())
}
