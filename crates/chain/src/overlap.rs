use nalgebra::Vector3;

use crate::{Segment, Shape};

/// Pairs of segments whose boxes share space in this shape, neighbours left out.
///
/// Separating axes of two boxes: the three directions of each and their nine cross products.
///
/// - `segments`: shape (n), those that `shape` was made from
/// - returns pairs of indices from 0, the one nearer to the head first
///
/// # Source
///
/// Gottschalk, Lin, Manocha, *OBBTree*, SIGGRAPH 1996.
pub fn overlapping_segments(segments: &[Segment], shape: &Shape) -> Vec<(usize, usize)> {
    let middles_m: Vec<Vector3<f64>> = (0..segments.len())
        .map(|idx| shape.fronts_m[idx] + shape.rotations[idx] * segments[idx].middle_m())
        .collect();
    let radii_m: Vec<f64> = segments.iter().map(|s| s.half_extents_m().norm()).collect();
    let mut pairs = Vec::new();
    for ahead in 0..segments.len() {
        // Neighbours share the place of their joint at any angle.
        for behind in ahead + 2..segments.len() {
            let apart_m = middles_m[behind] - middles_m[ahead];
            let near = apart_m.norm() < radii_m[ahead] + radii_m[behind];
            if near && boxes_overlap(segments, shape, ahead, behind, apart_m) {
                pairs.push((ahead, behind));
            }
        }
    }
    pairs
}

fn boxes_overlap(
    segments: &[Segment],
    shape: &Shape,
    ahead: usize,
    behind: usize,
    apart_m: Vector3<f64>,
) -> bool {
    let half_ahead = segments[ahead].half_extents_m();
    let half_behind = segments[behind].half_extents_m();
    let (axes_ahead, axes_behind) = (&shape.rotations[ahead], &shape.rotations[behind]);
    let separates = |axis: Vector3<f64>| {
        let reach = half_ahead.dot(&axes_ahead.tr_mul(&axis).abs())
            + half_behind.dot(&axes_behind.tr_mul(&axis).abs());
        // A cross product of parallel directions is no axis at all.
        axis.norm_squared() > 1e-12 && apart_m.dot(&axis).abs() > reach
    };
    let faces = (0..3).flat_map(|i| [axes_ahead.column(i), axes_behind.column(i)]);
    let edges = (0..9).map(|i| axes_ahead.column(i / 3).cross(&axes_behind.column(i % 3)));
    !faces.map(|face| face.into_owned()).chain(edges).any(separates)
}
