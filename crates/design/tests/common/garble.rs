//! Files spoilt by chance, as slips, broken transfers and other programs spoil them.

use super::random::Dice;

/// Pieces that change the meaning of a file.
const PIECES: [&str; 34] = [
    "\"",
    "'",
    "\"\"\"",
    "[",
    "]",
    "{",
    "}",
    "=",
    ".",
    ",",
    ",,",
    "\n",
    "\r",
    "\t",
    "#",
    "é°",
    "\u{feff}",
    "\0",
    "[[payload]]\n",
    "[servo.x]\n",
    "[gait]\n",
    "[spread]\n\"launch.speed_m_s\" = { sd = 1 }\n",
    "table = \"g.csv\"\n",
    "table = \"d.toml\"\n",
    "servos = \"shelf.toml\"\n",
    "servos = \"d.toml\"\n",
    "section = \"plate\"\n",
    "none",
    "true",
    "\"\"",
    "[1, 2]",
    "{ middle = 1, ends = 1 }",
    "1979-05-27T07:32:00Z",
    "\\u0000",
];

/// Numbers that stand in another's place.
const NUMBERS: [&str; 26] = [
    "0",
    "-0.0",
    "1",
    "2",
    "-1",
    "0.5",
    "nan",
    "-nan",
    "inf",
    "-inf",
    "1e300",
    "-1e300",
    "1e-300",
    "5e-324",
    "1e999",
    "127",
    "128",
    "129",
    "4294967296",
    "9223372036854775807",
    "9223372036854775808",
    "0x7fffffffffffffff",
    "0b1",
    "1_0",
    "00",
    "90",
];

/// Spoils a file in one or a few ways.
///
/// - `others`: files that a piece may come from
pub fn spoil(dice: &mut Dice, bytes: &[u8], others: &[Vec<u8>]) -> Vec<u8> {
    let mut spoilt = bytes.to_vec();
    // One slip is what most files have; many show what follows what.
    let rounds = if dice.one_in(2) { 1 } else { 1 + dice.below(6) };
    for _ in 0..rounds {
        spoil_once(dice, &mut spoilt, others);
    }
    spoilt.truncate(200_000);
    spoilt
}

fn spoil_once(dice: &mut Dice, bytes: &mut Vec<u8>, others: &[Vec<u8>]) {
    match dice.below(14) {
        0 => flip(dice, bytes),
        1 => swap_tokens(dice, bytes),
        2 => drop_line(dice, bytes),
        3..=6 => change_number(dice, bytes),
        7 => splice(dice, bytes, others),
        8 => insert(dice, bytes),
        9 => drop_some(dice, bytes),
        10 => repeat(dice, bytes),
        11 => swap_lines(dice, bytes),
        12 => change_word(dice, bytes),
        _ => nest(dice, bytes),
    }
}

fn place(dice: &mut Dice, bytes: &[u8]) -> usize {
    dice.below(bytes.len() + 1)
}

fn flip(dice: &mut Dice, bytes: &mut [u8]) {
    if !bytes.is_empty() {
        let at = dice.below(bytes.len());
        bytes[at] ^= 1 << dice.below(8);
    }
}

/// Runs of letters, digits and the like, as (start, end).
fn tokens(bytes: &[u8], belongs: impl Fn(u8) -> bool) -> Vec<(usize, usize)> {
    let mut tokens = Vec::new();
    let mut start = None;
    for (at, &byte) in bytes.iter().chain(b"\n").enumerate() {
        match (belongs(byte) && at < bytes.len(), start) {
            (true, None) => start = Some(at),
            (false, Some(from)) => {
                tokens.push((from, at));
                start = None;
            }
            _ => {}
        }
    }
    tokens
}

fn is_word(byte: u8) -> bool {
    byte.is_ascii_alphanumeric() || b"_-.+".contains(&byte)
}

fn swap_tokens(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let tokens = tokens(bytes, is_word);
    if tokens.len() < 2 {
        return;
    }
    let [a, b] = [dice.below(tokens.len()), dice.below(tokens.len())];
    let (first, second) = (tokens[a.min(b)], tokens[a.max(b)]);
    if first != second {
        let one = bytes[first.0..first.1].to_vec();
        let other = bytes[second.0..second.1].to_vec();
        bytes.splice(second.0..second.1, one);
        bytes.splice(first.0..first.1, other);
    }
}

fn change_number(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let tokens = tokens(bytes, is_word);
    let numbers: Vec<_> = tokens
        .into_iter()
        .filter(|&(start, end)| bytes[start..end].iter().any(u8::is_ascii_digit))
        .collect();
    if numbers.is_empty() {
        return;
    }
    let (start, end) = dice.pick(&numbers);
    let old = String::from_utf8_lossy(&bytes[start..end]).into_owned();
    let value: Option<f64> = old.parse().ok();
    let new = match (dice.below(4), value) {
        (0, Some(value)) => format!("{:?}", -value),
        (1, Some(value)) => format!("{:?}", value * dice.pick(&[10.0, 1000.0, 0.1, 1e-3, 1.0001])),
        (2, Some(value)) => format!("{:?}", value + dice.pick(&[1.0, -1.0, 90.0, 1e-12])),
        _ => dice.pick(&NUMBERS).to_owned(),
    };
    bytes.splice(start..end, new.into_bytes());
}

fn change_word(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let tokens = tokens(bytes, is_word);
    if tokens.is_empty() {
        return;
    }
    let (start, end) = dice.pick(&tokens);
    let at = start + dice.below(end - start);
    match dice.below(3) {
        0 => drop(bytes.remove(at)),
        1 => bytes.insert(at, bytes[at]),
        _ if at + 1 < end => bytes.swap(at, at + 1),
        _ => bytes[at] = b'x',
    }
}

/// Lines, as (start, end), each with its end of line.
fn lines(bytes: &[u8]) -> Vec<(usize, usize)> {
    let mut start = 0;
    let line = |line: &[u8]| {
        start += line.len();
        (start - line.len(), start)
    };
    bytes.split_inclusive(|&byte| byte == b'\n').map(line).collect()
}

fn drop_line(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let lines = lines(bytes);
    if !lines.is_empty() {
        let (start, end) = dice.pick(&lines);
        bytes.drain(start..end);
    }
}

fn swap_lines(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let lines = lines(bytes);
    if lines.is_empty() {
        return;
    }
    let [from, to] = [dice.pick(&lines), dice.pick(&lines)];
    let moved = bytes[from.0..from.1].to_vec();
    // Copied or moved.
    bytes.splice(to.0..to.0, moved);
}

fn splice(dice: &mut Dice, bytes: &mut Vec<u8>, others: &[Vec<u8>]) {
    if others.is_empty() {
        return;
    }
    let other = &others[dice.below(others.len())];
    let (at, from) = (place(dice, bytes), place(dice, other));
    if dice.one_in(2) {
        bytes.truncate(at);
        bytes.extend_from_slice(&other[from..]);
    } else {
        let to = from + dice.below(other.len() - from + 1);
        bytes.splice(at..at, other[from..to].iter().copied());
    }
}

fn insert(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let at = place(dice, bytes);
    if dice.one_in(6) {
        let random: Vec<u8> = (0..1 + dice.below(8)).map(|_| dice.next() as u8).collect();
        bytes.splice(at..at, random);
    } else {
        let end = (at + dice.below(12)).min(bytes.len());
        let piece = dice.pick(&PIECES).bytes();
        bytes.splice(at..end, piece);
    }
}

fn drop_some(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let at = place(dice, bytes);
    if dice.one_in(3) {
        bytes.truncate(at);
    } else {
        let end = (at + dice.below(60)).min(bytes.len());
        bytes.drain(at..end);
    }
}

/// A stretch of the file over and over.
fn repeat(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let at = place(dice, bytes);
    let end = (at + 1 + dice.below(40)).min(bytes.len());
    let times = dice.pick(&[1, 2, 10, 300]);
    let again = bytes[at..end].repeat(times);
    bytes.splice(end..end, again);
}

/// Brackets in brackets.
fn nest(dice: &mut Dice, bytes: &mut Vec<u8>) {
    let at = place(dice, bytes);
    let piece = dice.pick(&["[", "{ a = ", "a.", "[[", "\"", "["]);
    let deep = piece.repeat(dice.pick(&[3, 50, 90, 3000]));
    bytes.splice(at..at, deep.into_bytes());
}
