//! Air loads on the whole chain, strip by strip.

use std::sync::Arc;

use gauss_quad::GaussLegendre;
use undulift_aero::{FourStrips, PreparedSection, Section, SkinFrictionLaw};
use undulift_chain::Segment;
use undulift_dynamics::{Centroidal, FourFrames, Frames, Outside};
use undulift_lanes::{LANES, Triple, f64x4, lanes};

use crate::Glider;

/// Force and moment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wrench {
    /// N.
    pub force_n: Triple<f64>,
    /// N·m.
    pub moment_nm: Triple<f64>,
}

/// The chain's strips, laid out once per design.
#[derive(Debug, Clone)]
pub(crate) struct AirLoads {
    sections: Vec<Arc<PreparedSection>>,
    friction: SkinFrictionLaw,
    fours: Vec<FourSegments>,
}

/// Four neighbouring segments, side by side; lanes past the tail have no length.
#[derive(Debug, Clone)]
struct FourSegments {
    strips: FourStrips,
    length_m: f64x4,
    chord_m: f64x4,
    perimeter_m: f64x4,
    /// Of each strip: distance behind the front end, and length that it stands for, m.
    stations: Vec<(f64x4, f64x4)>,
}

/// How the chain as a whole moves through the air; root axes.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Through {
    /// Of the root frame's origin relative to the air, m/s.
    origin_velocity_m_s: Triple<f64x4>,
    /// Of the head segment, rad/s.
    angular_velocity_rad_s: Triple<f64x4>,
}

impl Through {
    /// - `velocity_m_s`: of the centre of mass relative to the air, root axes
    /// - `angular_velocity_rad_s`: of the head segment, root axes
    #[inline]
    pub(crate) fn new(
        centroidal: &Centroidal,
        velocity_m_s: Triple<f64>,
        angular_velocity_rad_s: Triple<f64>,
    ) -> Self {
        let origin = velocity_m_s
            - angular_velocity_rad_s.cross(centroidal.centre_m)
            - centroidal.velocity_m_s;
        Self {
            origin_velocity_m_s: origin.in_lanes(),
            angular_velocity_rad_s: angular_velocity_rad_s.in_lanes(),
        }
    }

    /// Velocity of the front ends relative to the air and angular velocity, in segment axes.
    #[inline(always)]
    fn in_segments(&self, at: &FourFrames) -> (Triple<f64x4>, Triple<f64x4>) {
        let velocity = self.origin_velocity_m_s
            + self.angular_velocity_rad_s.cross(at.front_m)
            + at.front_velocity_m_s;
        let spin = self.angular_velocity_rad_s + at.angular_velocity_rad_s;
        let turned = |v: Triple<f64x4>| Triple::new(at.x.dot(v), at.y.dot(v), at.z.dot(v));
        (turned(velocity), turned(spin))
    }
}

/// What one strip meets.
#[derive(Debug, Clone, Copy)]
pub(crate) struct StripAir {
    pub(crate) segment_idx: usize,
    pub(crate) u_y_m_s: f64,
    pub(crate) u_z_m_s: f64,
    pub(crate) chord_m: f64,
    pub(crate) length_m: f64,
}

impl AirLoads {
    pub(crate) fn new(glider: &Glider) -> Self {
        let rule = gauss_legendre(glider.strips_per_segment);
        let segments = glider.chain.segments();
        let four = |first: usize| {
            let here: &[Segment] = &segments[first..];
            // Lanes past the tail copy the last section, so that they ask for nothing more.
            let last = segments.len() - 1;
            let strips: [(usize, f64); LANES] = std::array::from_fn(|lane| {
                let segment_idx = (first + lane).min(last);
                (glider.section_of[segment_idx], segments[segment_idx].width_m)
            });
            let length_m = lanes(here, |segment| segment.length_m);
            FourSegments {
                strips: FourStrips::new(&glider.sections, strips, &glider.air, glider.scales),
                length_m,
                chord_m: lanes(here, |segment| segment.width_m),
                perimeter_m: lanes(here, |segment| 2.0 * (segment.width_m + segment.thickness_m)),
                stations: rule
                    .iter()
                    .map(|&(at, weight)| {
                        (length_m * f64x4::splat(at), length_m * f64x4::splat(weight))
                    })
                    .collect(),
            }
        };
        let fours = (0..segments.len()).step_by(LANES).map(four).collect();
        let friction =
            SkinFrictionLaw::new(glider.skin_friction, &glider.air, glider.chain.length_m());
        let sections = glider.sections.iter().map(Section::prepared).collect();
        Self { sections, friction, fours }
    }

    /// Air loads on the chain, moment about the root frame's origin; root axes.
    #[inline]
    pub(crate) fn wrench(&self, frames: &Frames, through: &Through) -> Wrench {
        let (mut force, mut moment) = (Triple::zero(), Triple::zero());
        for (four, at) in self.fours.iter().zip(&frames.fours) {
            let (force_here, moment_here) =
                four.wrench(&self.sections, &self.friction, at, through);
            force = force + force_here;
            moment = moment + moment_here + at.front_m.cross(force_here);
        }
        Wrench { force_n: force.over_lanes(), moment_nm: moment.over_lanes() }
    }

    /// Air loads on every segment, moment about its front end, and on the chain as
    /// [`AirLoads::wrench`] gives them; root axes.
    ///
    /// - `on_segments`: filled, with a segment for each lane past the tail
    #[inline]
    pub(crate) fn on_segments(
        &self,
        frames: &Frames,
        through: &Through,
        on_segments: &mut Vec<Outside>,
    ) -> Wrench {
        on_segments.clear();
        let (mut force, mut moment) = (Triple::zero(), Triple::zero());
        for (four, at) in self.fours.iter().zip(&frames.fours) {
            let (force_here, moment_here) =
                four.wrench(&self.sections, &self.friction, at, through);
            on_segments.extend((0..LANES).map(|lane| Outside {
                force_n: force_here.lane(lane).into(),
                moment_nm: moment_here.lane(lane).into(),
            }));
            force = force + force_here;
            moment = moment + moment_here + at.front_m.cross(force_here);
        }
        Wrench { force_n: force.over_lanes(), moment_nm: moment.over_lanes() }
    }

    /// What every strip meets, from the head.
    pub(crate) fn strips<'a>(
        &'a self,
        frames: &'a Frames,
        through: &'a Through,
    ) -> impl Iterator<Item = StripAir> + 'a {
        let fours = self.fours.iter().zip(&frames.fours).enumerate();
        fours.flat_map(move |(four_idx, (four, at))| {
            let (velocity, spin) = through.in_segments(at);
            four.stations.iter().flat_map(move |&(behind_m, length_m)| {
                let u_y = (velocity.y - behind_m * spin.z).to_array();
                let u_z = (velocity.z + behind_m * spin.y).to_array();
                let (lengths, chords) = (length_m.to_array(), four.chord_m.to_array());
                (0..LANES).filter(move |&lane| lengths[lane] > 0.0).map(move |lane| StripAir {
                    segment_idx: four_idx * LANES + lane,
                    u_y_m_s: u_y[lane],
                    u_z_m_s: u_z[lane],
                    chord_m: chords[lane],
                    length_m: lengths[lane],
                })
            })
        })
    }
}

/// Places and weights over a unit length, from the front.
fn gauss_legendre(n_points: usize) -> Vec<(f64, f64)> {
    match GaussLegendre::new(n_points) {
        Ok(rule) => rule.iter().map(|(at, weight)| (0.5 * (1.0 - at), 0.5 * weight)).collect(),
        // The library begins at two points; one is the midpoint rule.
        Err(_) => vec![(0.5, 1.0)],
    }
}

impl FourSegments {
    /// Loads on four segments, moment about their front ends; root axes.
    #[inline(always)]
    fn wrench(
        &self,
        sections: &[Arc<PreparedSection>],
        friction: &SkinFrictionLaw,
        at: &FourFrames,
        through: &Through,
    ) -> (Triple<f64x4>, Triple<f64x4>) {
        let (velocity, spin) = through.in_segments(at);
        let along = friction.force_per_length(velocity.x, self.perimeter_m) * self.length_m;
        let mut force = Triple::new(along, f64x4::splat(0.0), f64x4::splat(0.0));
        let mut moment = Triple::<f64x4>::zero();
        for &(behind_m, length_m) in &self.stations {
            let u_y = velocity.y - behind_m * spin.z;
            let u_z = velocity.z + behind_m * spin.y;
            let loads = self.strips.loads(sections, u_y, u_z);
            let (side, up) = (loads.side * length_m, loads.up * length_m);
            force.y += side;
            force.z += up;
            moment.x += loads.couple * length_m;
            moment.y += behind_m * up;
            moment.z -= behind_m * side;
        }
        let in_root = |v: Triple<f64x4>| at.x.times(v.x) + at.y.times(v.y) + at.z.times(v.z);
        (in_root(force), in_root(moment))
    }
}
