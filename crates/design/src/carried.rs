//! Battery and payload: what the segments carry beside servos.

use nalgebra::Vector3;
use undulift_chain::{Carried, PointMass, Segment};
use undulift_servo::{CellVoltage, Regulator};

use crate::body::read_segment;
use crate::range::Range;
use crate::table::Table;

const MASS_KG: Range = Range::from_to(0.0, 1000.0);
const PLACE_M: Range = Range::within(100.0);
const CURRENT_A: Range = Range::above_0_to(10_000.0);

/// Coulombs in a milliampere hour (exact).
const COULOMB_PER_MAH: f64 = 3.6;

/// Something that is carried and does nothing.
#[derive(Debug, Clone, PartialEq)]
pub struct Payload {
    /// As the design calls it.
    pub name: String,
    /// What and where, as in the chain.
    pub mass: PointMass,
}

/// A battery in the body.
#[derive(Debug, Clone, PartialEq)]
pub struct Battery {
    /// What and where, as in the chain.
    pub mass: PointMass,
    /// Its figures.
    pub supply: undulift_servo::Battery,
}

/// - `segments`: in the body, where that is known
/// - `boxes`: the segments, where nothing is wrong with any
pub(crate) fn read_battery(
    table: Table<'_>,
    segments: Option<u32>,
    boxes: Option<&[Segment]>,
) -> Option<Battery> {
    let cells = table.need_whole("cells", 1..=20);
    let capacity_mah = table.need_number("capacity_mah", Range::above_0_to(1e6));
    let cell_mohm = table.need_number("cell_resistance_mohm", Range::from_to(0.0, 1e5));
    let current_limit_a = table.number("current_limit_a", CURRENT_A);
    let charge = table.number_or("charge", Range::from_to(0.0, 1.0), 1.0);
    let regulator = read_regulator(table.table("regulator"));
    let electronics_w = table.number_or("electronics_w", Range::from_to(0.0, 10_000.0), 0.0);
    let mass = read_mass(&table, Carried::Battery, segments, boxes);
    table.finish();
    let supply = undulift_servo::Battery {
        cells: cells?,
        capacity_coulomb: capacity_mah? * COULOMB_PER_MAH,
        cell_resistance_ohm: cell_mohm? * 1e-3,
        cell_voltage: CellVoltage::default(),
        current_limit_a,
        charge,
        regulator,
        electronics_w,
    };
    Some(Battery { mass: mass?, supply })
}

fn read_regulator(table: Table<'_>) -> Option<Regulator> {
    let volts = table.need_number("volts", Range::above_0_to(1000.0));
    let current_limit_a = table.need_number("current_limit_a", CURRENT_A);
    let efficiency = table.need_number("efficiency", Range::above_0_to(1.0));
    table.finish();
    Some(Regulator { volts: volts?, current_limit_a: current_limit_a?, efficiency: efficiency? })
}

/// - `segments`, `boxes`: as for the battery
pub(crate) fn read_payload(
    table: Table<'_>,
    segments: Option<u32>,
    boxes: Option<&[Segment]>,
) -> Option<Payload> {
    let name = table.need("name", "a text in quotes").and_then(|node| node.text());
    let mass = read_mass(&table, Carried::Payload, segments, boxes);
    table.finish();
    Some(Payload { name: name?.to_owned(), mass: mass? })
}

/// Mass, segment and place, the place by default the segment's middle.
fn read_mass(
    table: &Table<'_>,
    carried: Carried,
    segments: Option<u32>,
    boxes: Option<&[Segment]>,
) -> Option<PointMass> {
    let mass_kg = table.need_number("mass_kg", MASS_KG);
    let segment = read_segment(table.need("segment", "a segment's number, from 1"), segments);
    let at_m = table.triple("at_m", PLACE_M).map(Vector3::from);
    let segment_idx = segment?;
    let middle_m = || boxes?.get(segment_idx).map(Segment::middle_m);
    let at_m = at_m.or_else(middle_m)?;
    Some(PointMass { carried, segment_idx, at_m, mass_kg: mass_kg? })
}
