use std::fmt::Write;

use crate::firmware::{Block, FirmwareTable};

/// One block as CSV: comments, then `time_s` and a column for each channel in its unit; the loop
/// has the head's heading and elevation too, so that it reads back as a gait's table.
pub fn csv_text(table: &FirmwareTable, block: Block) -> String {
    let preamble = &table.preamble;
    let (rows, head) = match block {
        Block::Start => (&table.start, None),
        Block::Loop => (&table.cycle, table.head_deg.as_ref()),
        Block::Stop => (&table.stop, None),
    };
    let mut text = String::new();
    for line in preamble.lines(rows.len()) {
        let _ = writeln!(text, "# {line}");
    }
    let _ = writeln!(text, "# block: {}", block.word());
    let unit = preamble.scale.unit.word();
    text.push_str("time_s");
    for channel in &preamble.channels {
        let _ = write!(text, ",{}_{unit}", channel.name());
    }
    text.push_str(if head.is_some() { ",head_heading_deg,head_elevation_deg\n" } else { "\n" });
    for (k, row) in rows.iter().enumerate() {
        let _ = write!(text, "{}", preamble.step_s * k as f64);
        for &count in row {
            let _ = write!(text, ",{}", preamble.scale.value(count));
        }
        for degrees in head.iter().flat_map(|head| head.iter()) {
            let _ = write!(text, ",{}", degrees[k]);
        }
        text.push('\n');
    }
    text
}
