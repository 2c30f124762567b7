#![allow(missing_docs)]
use nalgebra::Vector3;
use undulift_aero::*;
use undulift_chain::*;
use undulift_flight::*;
use undulift_gait::*;
fn deg(d: f64) -> f64 {
    d.to_radians()
}
fn main() {
    let par = |m, e| Profile { middle: m, ends: e, shape: ProfileShape::Parabolic };
    // 1
    let n = 12;
    let l = vec![1.1 / n as f64; n];
    let w = par(0.11, 0.07).sampled(&l);
    let m = line_density_masses(&l, 0.36, 0.6, ProfileShape::Parabolic);
    let segs = (0..n)
        .map(|k| Segment { length_m: l[k], width_m: w[k], thickness_m: 0.02, structure_kg: m[k] })
        .collect();
    let g1 = Glider {
        chain: Chain::new(
            segs,
            vec![Joint { yaw: true, pitch: true, ..Default::default() }; n - 1],
            vec![PointMass {
                carried: Carried::Payload,
                segment_idx: 4,
                at_m: Vector3::new(-0.04, 0.01, -0.005),
                mass_kg: 0.03,
            }],
        )
        .unwrap(),
        sections: vec![Section::plate(0.25)],
        section_of: vec![0; n],
        strips_per_segment: 2,
        gait: Gait {
            pattern: Pattern::Wave(Wave {
                frequency_hz: 1.2,
                lateral_amplitude_rad: deg(82.),
                lateral_waves: 1.4,
                sharpness: 0.6,
                vertical_amplitude_rad: deg(4.),
                vertical_ratio: 2,
                vertical_lag_rad: deg(60.),
                turn_rad: 0.,
                arch_rad: deg(8.),
                taper: Taper::default(),
            }),
            phase_rad: deg(20.),
            start: Start::Running,
        },
        air: Air::at(293.15, 101325.),
        wind_world_m_s: Vector3::zeros(),
        scales: Scales { lift: 1., drag: 1. },
        skin_friction: SkinFriction::Laminar,
        launch: Launch {
            height_m: 6.,
            speed_m_s: 4.,
            climb_rad: 0.,
            roll_rad: 0.,
            pitch_rad: deg(-15.),
            yaw_rad: 0.,
            spin_world_rad_s: Vector3::zeros(),
            grip_segment_idx: None,
        },
    };
    let n = 14;
    let l = vec![1.3 / n as f64; n];
    let w = par(0.13, 0.08).sampled(&l);
    let h = par(0.03, 0.02).sampled(&l);
    let segs = (0..n)
        .map(|k| Segment {
            length_m: l[k],
            width_m: w[k],
            thickness_m: h[k],
            structure_kg: 0.55 / n as f64,
        })
        .collect();
    let joints = (0..n - 1)
        .map(|k| Joint { yaw: k % 2 == 0, pitch: k % 2 == 1, ..Default::default() })
        .collect();
    let g2 = Glider {
        chain: Chain::new(
            segs,
            joints,
            vec![PointMass {
                carried: Carried::Battery,
                segment_idx: 6,
                at_m: Vector3::new(-l[6] / 2., 0., 0.),
                mass_kg: 0.03,
            }],
        )
        .unwrap(),
        sections: vec![Section::domed(0.25)],
        section_of: vec![0; n],
        strips_per_segment: 2,
        gait: Gait {
            pattern: Pattern::Wave(Wave {
                frequency_hz: 1.0,
                lateral_amplitude_rad: deg(70.),
                lateral_waves: 1.3,
                sharpness: 0.4,
                vertical_amplitude_rad: deg(3.),
                vertical_ratio: 2,
                vertical_lag_rad: deg(30.),
                turn_rad: deg(6.),
                arch_rad: deg(9.),
                taper: Taper { head: 0.7, head_length: 0.2, tail: 1., tail_length: 0. },
            }),
            phase_rad: deg(100.),
            start: Start::Held { delay_s: 0.1, spin_up_s: 0.4 },
        },
        air: Air::standard(400.).unwrap(),
        wind_world_m_s: Vector3::new(-0.4, 0.3, 0.),
        scales: Scales { lift: 1., drag: 1. },
        skin_friction: SkinFriction::Laminar,
        launch: Launch {
            height_m: 7.,
            speed_m_s: 4.2,
            climb_rad: deg(-3.),
            roll_rad: 0.,
            pitch_rad: deg(-18.),
            yaw_rad: 0.,
            spin_world_rad_s: Vector3::new(deg(10.), deg(-5.), 0.),
            grip_segment_idx: None,
        },
    };
    for g in [g1, g2] {
        for tol in [1e-6, 1e-9] {
            let mut f = fly(&g, &Settings { tolerance: tol, ..Default::default() }).unwrap();
            println!("{:?}", f.trajectory.state(0.0));
            let s = summary(&g, &mut f);
            println!(
                "{s:?}\n glide angle {} roll {} pitch {} steps {}",
                s.glide_angle_rad.to_degrees(),
                s.peak_roll_rad.to_degrees(),
                s.peak_pitch_rad.to_degrees(),
                f.steps
            );
            let b = bands(&g, &mut f);
            println!("{:?} {:?}\n", b.alpha_rad.map(|a| a.map(f64::to_degrees)), b.reynolds);
        }
    }
}
