use nalgebra::{Quaternion, UnitQuaternion, Vector3};
use ode_solvers::SVector;
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_chain::Chain;

/// Where the chain is and how it moves, apart from joints that follow their commands.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct State {
    /// Centre of mass, world, m.
    pub place_m: Vector3<f64>,
    /// Takes vectors of segment 0 to world.
    pub head_to_world: UnitQuaternion<f64>,
    /// Of the centre of mass over the ground, world, m/s.
    pub velocity_m_s: Vector3<f64>,
    /// Angular momentum about the centre of mass, world, kg·m²/s.
    pub momentum_kg_m2_s: Vector3<f64>,
    /// Axes that don't follow their commands.
    pub loose: Vec<LooseAxis>,
}

/// One axis with a motion of its own.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LooseAxis {
    /// In the order of [`undulift_chain::joint_axes`].
    pub axis_idx: usize,
    /// rad.
    pub angle_rad: f64,
    /// rad/s.
    pub rate_rad_s: f64,
}

/// The thirteen numbers that are integrated, scaled so that small robots are held as well as large.
pub(crate) type Scaled = SVector<f64, 13>;

/// Units of the scaled state: length L, speed √(gL), angular momentum M·L·√(gL).
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Units {
    pub(crate) length_m: f64,
    pub(crate) speed_m_s: f64,
    pub(crate) momentum_kg_m2_s: f64,
}

impl Units {
    pub(crate) fn of(chain: &Chain) -> Self {
        let length_m = chain.length_m();
        let speed_m_s = (STANDARD_GRAVITY_M_S2 * length_m).sqrt();
        Self { length_m, speed_m_s, momentum_kg_m2_s: chain.mass_kg() * length_m * speed_m_s }
    }

    pub(crate) fn scaled(&self, state: &State) -> Scaled {
        let mut scaled = Scaled::zeros();
        let q = state.head_to_world.quaternion();
        scaled.fixed_rows_mut::<3>(0).copy_from(&(state.place_m / self.length_m));
        scaled.fixed_rows_mut::<4>(3).copy_from_slice(&[q.w, q.i, q.j, q.k]);
        scaled.fixed_rows_mut::<3>(7).copy_from(&(state.velocity_m_s / self.speed_m_s));
        scaled.fixed_rows_mut::<3>(10).copy_from(&(state.momentum_kg_m2_s / self.momentum_kg_m2_s));
        scaled
    }

    pub(crate) fn state(&self, scaled: &Scaled) -> State {
        let triple =
            |first: usize| Vector3::new(scaled[first], scaled[first + 1], scaled[first + 2]);
        let quaternion = Quaternion::new(scaled[3], scaled[4], scaled[5], scaled[6]);
        State {
            place_m: triple(0) * self.length_m,
            head_to_world: UnitQuaternion::from_quaternion(quaternion),
            velocity_m_s: triple(7) * self.speed_m_s,
            momentum_kg_m2_s: triple(10) * self.momentum_kg_m2_s,
            loose: Vec::new(),
        }
    }
}
