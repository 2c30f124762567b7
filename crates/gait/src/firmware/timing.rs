use crate::firmware::FirmwareTable;

/// Most rows that faults may stretch a loop to.
const MOST_ROWS: usize = 65_535;

/// What goes wrong with a board's timing.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Timing {
    /// A channel of the board whose numbers come a row late.
    pub late: Option<u8>,
    /// Every so many rows one is lost, and the row before it stands in.
    pub drop_every: Option<usize>,
    /// Times as fast as it should be.
    pub clock: f64,
}

impl Default for Timing {
    fn default() -> Self {
        Self { late: None, drop_every: None, clock: 1.0 }
    }
}

impl Timing {
    /// The table as the servos get it; absent where the loop with its lost rows repeats only after
    /// more than 65535 rows, or nothing is on the late channel.
    ///
    /// The start of a lost row's count is the loop's first row; where the two don't come out even,
    /// the loop is as many turns long as it takes until they do.
    pub fn on(&self, table: &FirmwareTable) -> Option<FirmwareTable> {
        let n = table.cycle.len();
        let drop_every = self.drop_every.unwrap_or(1);
        let turns = drop_every / common_divisor(n, drop_every);
        if n * turns > MOST_ROWS {
            return None;
        }
        let late = match self.late {
            Some(number) => {
                let channels = &table.preamble.channels;
                Some(channels.iter().position(|channel| channel.number == number)?)
            }
            None => None,
        };
        let sent = |row: usize| -> Vec<i32> {
            let row = row + n * turns;
            let kept = |row: usize| {
                let lost = self.drop_every.is_some_and(|every| row % every == every - 1);
                &table.cycle[(row - usize::from(lost)) % n]
            };
            let mut counts = kept(row).clone();
            if let Some(column) = late {
                counts[column] = kept(row - 1)[column];
            }
            counts
        };
        let mut faulty = table.clone();
        faulty.cycle = (0..n * turns).map(sent).collect();
        faulty.preamble.step_s /= self.clock;
        let repeated = |degrees: &Vec<f64>| degrees.repeat(turns);
        faulty.head_deg = table.head_deg.as_ref().map(|head| head.each_ref().map(repeated));
        Some(faulty)
    }
}

fn common_divisor(a: usize, b: usize) -> usize {
    if b == 0 { a } else { common_divisor(b, a % b) }
}
