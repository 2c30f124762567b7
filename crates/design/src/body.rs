//! The body: lengths, widths, thicknesses and masses of its segments.

use undulift_chain::{MOST_SEGMENTS, Profile, ProfileShape, Segment, line_density_masses};

use crate::DesignError;
use crate::key_path::KeyPath;
use crate::node::{Count, Node};
use crate::range::Range;
use crate::table::Table;

const LENGTH_M: Range = Range::above_0_to(100.0);
const STRUCTURE_KG: Range = Range::above_0_to(1000.0);
const SHAPES: [(&str, ProfileShape); 2] =
    [("parabolic", ProfileShape::Parabolic), ("uniform", ProfileShape::Uniform)];

/// What `[body]` says.
#[derive(Debug)]
pub(crate) struct Body<'d> {
    /// As asked for, where that makes sense.
    pub(crate) n_segments: Option<u32>,
    pub(crate) strips_per_segment: usize,
    /// All of them, where nothing is wrong with any.
    pub(crate) segments: Option<Vec<Segment>>,
    /// The sections' names, not yet looked up.
    pub(crate) section: Option<Node<'d>>,
}

/// How many items a list over the segments has.
pub(crate) fn per_segment(segments: Option<u32>) -> Count {
    let why = format!("the body has {} segments", segments.unwrap_or(0));
    let items = segments.map(|segments| segments as usize);
    Count { items, why, decided_by: Some(KeyPath::of(["body", "segments"])) }
}

/// How many items a list over the joints has.
pub(crate) fn per_joint(segments: Option<u32>) -> Count {
    let items = segments.map(|segments| segments as usize - 1);
    let (segments, joints) = (segments.unwrap_or(0), items.unwrap_or(0));
    let why = format!("a body of {segments} segments has {joints} joints");
    Count { items, why, decided_by: Some(KeyPath::of(["body", "segments"])) }
}

/// A segment's number, from 1, as its index, from 0.
pub(crate) fn read_segment(node: Option<Node<'_>>, segments: Option<u32>) -> Option<usize> {
    let node = node?;
    let number = node.whole(1..=MOST_SEGMENTS as u32)?;
    if segments.is_some_and(|segments| number > segments) {
        let what = DesignError::OutOfRange {
            found: format!("segment {number}"),
            allowed: format!("from 1 to {}, the segments of the body", segments.unwrap_or(0)),
        };
        node.note_beside(KeyPath::of(["body", "segments"]), what);
        return None;
    }
    Some(number as usize - 1)
}

pub(crate) fn read_body(table: Table<'_>) -> Body<'_> {
    let n_segments = table.need_whole("segments", 2..=MOST_SEGMENTS as u32);
    let strips_per_segment = table.whole_or("strips_per_segment", 1..=8, 2) as usize;
    let count = per_segment(n_segments);
    let lengths_m = table
        .need("length_m", "the body's length, or a list with one length a segment")
        .and_then(|node| read_lengths_m(&node, &count));
    let measure = |key| {
        let wanted = "a number, a list with one a segment, or { middle, ends, shape }";
        let node = table.need(key, wanted)?;
        read_measure_m(&node, &count, lengths_m.as_deref())
    };
    let widths_m = measure("width_m");
    let thicknesses_m = measure("thickness_m");
    let wanted = "a total, a list with one a segment, or { total, ends_to_middle, shape }";
    let structure_kg = table
        .need("structure_kg", wanted)
        .and_then(|node| read_structure_kg(&node, &count, lengths_m.as_deref()));
    let section = table.need("section", "the name of a section, or a list with one a segment");
    table.finish();
    let segments = (|| {
        let parts = lengths_m?.into_iter().zip(widths_m?).zip(thicknesses_m?).zip(structure_kg?);
        let segment = |(((length_m, width_m), thickness_m), structure_kg)| Segment {
            length_m,
            width_m,
            thickness_m,
            structure_kg,
        };
        Some(parts.map(segment).collect())
    })();
    Body { n_segments, strips_per_segment, segments, section }
}

fn read_lengths_m(node: &Node<'_>, count: &Count) -> Option<Vec<f64>> {
    if node.is_list() {
        return node.numbers(LENGTH_M, count);
    }
    let (body_m, n) = (node.number(LENGTH_M)?, count.items?);
    Some(vec![body_m / n as f64; n])
}

fn read_measure_m(node: &Node<'_>, count: &Count, lengths_m: Option<&[f64]>) -> Option<Vec<f64>> {
    if !node.is_table() {
        return node.number_or_numbers(LENGTH_M, count);
    }
    let table = node.table()?;
    let shape = table.word("shape", &SHAPES).unwrap_or(ProfileShape::Parabolic);
    let profile = match shape {
        ProfileShape::Parabolic => {
            let middle = table.need_number("middle", LENGTH_M);
            // Ends may taper to nothing; segments are sampled within them.
            let ends = table.need_number("ends", Range::from_to(0.0, 100.0));
            middle.zip(ends).map(|(middle, ends)| Profile { middle, ends, shape })
        }
        ProfileShape::Uniform => read_uniform(&table),
    };
    table.finish();
    Some(profile?.sampled(lengths_m?))
}

fn read_uniform(table: &Table<'_>) -> Option<Profile> {
    let ends = table.number("ends", LENGTH_M);
    let middle = if table.holds("ends") {
        table.number("middle", LENGTH_M)
    } else {
        table.need_number("middle", LENGTH_M)
    };
    if let (Some(middle), Some(ends)) = (middle, ends)
        && middle != ends
    {
        let why =
            format!("a uniform profile can't be {middle} at the middle and {ends} at the ends");
        let remedy = "make both equal, leave one out, or write shape = \"parabolic\"";
        table.disagree("shape", &["middle", "ends"], why, remedy);
    }
    let value = middle.or(ends)?;
    Some(Profile { middle: value, ends: value, shape: ProfileShape::Uniform })
}

fn read_structure_kg(
    node: &Node<'_>,
    count: &Count,
    lengths_m: Option<&[f64]>,
) -> Option<Vec<f64>> {
    if node.is_list() {
        return node.numbers(STRUCTURE_KG, count);
    }
    if !node.is_table() {
        let total_kg = node.number(STRUCTURE_KG)?;
        return Some(line_density_masses(lengths_m?, total_kg, 1.0, ProfileShape::Uniform));
    }
    const RATIO: Range = Range::from_to(0.0, 100.0);
    let table = node.table()?;
    let total_kg = table.need_number("total", STRUCTURE_KG);
    let shape = table.word("shape", &SHAPES).unwrap_or(ProfileShape::Parabolic);
    let ratio = match shape {
        ProfileShape::Parabolic => table.need_number("ends_to_middle", RATIO),
        ProfileShape::Uniform => Some(table.number_or("ends_to_middle", RATIO, 1.0)),
    };
    if let (ProfileShape::Uniform, Some(ratio)) = (shape, ratio)
        && ratio != 1.0
    {
        let why = format!("a uniform profile can't have {ratio} of the middle at its ends");
        let remedy = "leave `ends_to_middle` out, or write shape = \"parabolic\"";
        table.disagree("shape", &["ends_to_middle"], why, remedy);
    }
    table.finish();
    Some(line_density_masses(lengths_m?, total_kg?, ratio?, shape))
}
