//! The design to start from.

mod common;

use std::collections::BTreeSet;

use common::Folder;
use undulift_design::{Design, DesignError, Knob, starter};
use undulift_flight::{End, Settings, fly, summary};
use undulift_gait::{Commands, Instant};

/// What the examples in the text name.
const FILES: [(&str, &str); 3] =
    [("my-rib.csv", include_str!("my-rib.csv")), ("servos.toml", common::SERVO), ("gait.csv", "")];

fn read(text: &str) -> Result<Design, String> {
    let mut files = FILES.to_vec();
    let columns = |axis: &str| (1..16).map(|k| format!(",{axis}_{k}_deg")).collect::<String>();
    let row = |time_s: f64| format!("{time_s}{}\n", ",10".repeat(30));
    let gait = format!("time_s{}{}\n{}{}", columns("yaw"), columns("pitch"), row(0.0), row(0.5));
    files[2].1 = &gait;
    files.push(("d.toml", text));
    let folder = Folder::with(&files);
    folder.read(&[]).map_err(|_| folder.mistakes(&[]))
}

#[test]
fn twin_the_starter_glides_within_all_its_limits() {
    let design = read(starter()).unwrap();
    let mut flight = fly(&design.glider, &Settings::default()).unwrap();
    let summary = summary(&design.glider, &mut flight);
    assert_eq!(summary.end, End::Landed);
    assert!(summary.glide_ratio.unwrap() > 1.0, "{summary:?}");
    assert!(summary.last_cycle_glide_ratio.unwrap() > 1.0, "{summary:?}");
    assert!(summary.peak_roll_rad < 0.5 * design.limits.tilt_rad, "{summary:?}");
    assert!(summary.peak_pitch_rad < 0.5 * design.limits.tilt_rad, "{summary:?}");
    let glider = &design.glider;
    let commands = Commands::new(&glider.gait, &glider.chain).unwrap();
    let mut motion = commands.room();
    for frame in 0..400 {
        commands.rates(Instant::at(f64::from(frame) * 0.002), &mut motion);
        for (of, angle_rad) in commands.axes().iter().zip(&motion.angles_rad) {
            let travel_rad = glider.chain.joints()[of.joint_idx].travel_rad(of.axis).unwrap();
            assert!(angle_rad.abs() < travel_rad, "{of:?}");
        }
    }
}

/// Pieces of the text in which every line begins with `#` and a key or a table, as (first, end)
/// lines: a table and all below it is one piece, any other line one of its own.
fn examples(lines: &[&str]) -> Vec<(usize, usize)> {
    let is_example = |line: &str| {
        let mut after = line.strip_prefix('#').unwrap_or(" ").chars();
        after.next().is_some_and(|c| c.is_ascii_alphanumeric() || c == '[' || c == '"')
    };
    let mut pieces: Vec<(usize, usize)> = Vec::new();
    for at in (0..lines.len()).filter(|&at| is_example(lines[at])) {
        match pieces.last_mut() {
            Some((first, end)) if *end == at && lines[*first].starts_with("#[") => *end += 1,
            _ => pieces.push((at, at + 1)),
        }
    }
    pieces
}

/// The text with one example in use, and without what it takes the place of.
fn with_example(lines: &[&str], (first, end): (usize, usize)) -> String {
    // The comment may run on below, indented.
    let below = lines[end..].iter().take_while(|line| line.starts_with("      "));
    let above = lines[..first].last().filter(|line| line.ends_with("`:"));
    let around = above.into_iter().chain(&lines[end - 1..end]).chain(below);
    let comment: String = around.map(|line| format!("{line}\n")).collect();
    let replaced: Vec<&str> = match comment.split_once("in place of") {
        Some((_, names)) => names.split('`').skip(1).step_by(2).collect(),
        None => vec![],
    };
    let table_start = lines[..first].iter().rposition(|line| line.starts_with('['));
    let table_end = lines[first..].iter().position(|line| line.starts_with('['));
    let table = table_start.unwrap_or(0)..table_end.map_or(lines.len(), |end| first + end);
    let wave = lines[first].starts_with("#table = \"gait");
    let line = |(at, line): (usize, &&str)| {
        if (first..end).contains(&at) {
            return line.replacen('#', "", 1) + "\n";
        }
        let key = line.split('=').next().unwrap().trim();
        let wave_key = wave && !["phase_deg", "start", "[gait]"].contains(&key);
        let goes = table.contains(&at) && (replaced.contains(&key) || wave_key);
        if goes && !line.starts_with('[') { String::new() } else { line.to_string() + "\n" }
    };
    lines.iter().enumerate().map(line).collect()
}

#[test]
fn twin_every_example_in_the_starter_can_be_used() {
    let lines: Vec<&str> = starter().lines().collect();
    let examples = examples(&lines);
    assert!(examples.len() >= 18, "{examples:?}");
    for example in examples {
        let text = with_example(&lines, example);
        let own = lines[example.0];
        // `interpolation` has a meaning only beside the table above it.
        if own.starts_with("#interpolation") {
            continue;
        }
        let read = read(&text);
        assert!(read.is_ok(), "{own}: {}\n{text}", read.unwrap_err());
    }
}

/// Keys that the reader knows, told by it when another is found beside them.
fn known_keys() -> BTreeSet<(String, String)> {
    let full = include_str!("full.toml");
    let gait_table = full.replace("frequency_hz = 1.3", "table = \"gait.csv\"");
    let mut known = BTreeSet::new();
    for text in [full, gait_table.as_str()] {
        let lines =
            text.lines().map(|line| match (line.starts_with('['), line.split_once("= {")) {
                (true, _) => format!("{line}\nzzzzzzzz = 0\n"),
                (_, Some((before, after))) => format!("{before}= {{ zzzzzzzz = 0, {after}\n"),
                _ => format!("{line}\n"),
            });
        let text = "zzzzzzzz = 0\n".to_owned() + &lines.collect::<String>();
        let files = [("d.toml", text.as_str()), FILES[0], FILES[1]];
        let errors = Folder::with(&files).read(&[]).unwrap_err();
        for mistake in errors.mistakes() {
            if let DesignError::UnknownKey { known: here, .. } = mistake.what() {
                let table = mistake.key().trim_end_matches("zzzzzzzz").trim_end_matches('.');
                known.extend(here.iter().map(|key| (table.to_owned(), key.clone())));
            }
        }
    }
    known
}

#[test]
fn twin_the_starter_names_every_key() {
    let known = known_keys();
    assert!(known.len() > 100, "{known:?}");
    for (table, key) in &known {
        let text = starter();
        let at_line_start = [format!("\n{key} = "), format!("\n#{key} = "), format!("\n[{key}")];
        let elsewhere = [format!("{{ {key} = "), format!(", {key} = "), format!("\n#[{key}")];
        let tables = [format!("\n[[{key}"), format!("\n[{key}.")];
        let mut ways = at_line_start.iter().chain(&elsewhere).chain(&tables);
        assert!(ways.any(|way| text.contains(way.as_str())), "{table}: {key}");
    }
}

/// The comment of a line: behind and below it, or above a table in a line.
fn comment_of(lines: &[&str], at: usize) -> Option<String> {
    let comment: Vec<&str> = if lines[at].contains("= {") {
        let above = lines[..at].iter().rposition(|line| !line.starts_with("# "));
        lines[above.map_or(0, |above| above + 1)..at].to_vec()
    } else {
        let below = lines[at + 1..].iter().take_while(|line| line.starts_with("      "));
        lines[at..=at].iter().chain(below).copied().collect()
    };
    let words = comment.iter().flat_map(|line| line.split_whitespace());
    let words: Vec<&str> = words.filter(|word| *word != "#").collect();
    comment.iter().any(|line| line.contains('#')).then(|| words.join(" "))
}

/// Each range that the text tells is the one that the reader keeps to.
#[test]
fn twin_the_starter_tells_the_readers_ranges() {
    let design = read(starter()).unwrap();
    let knobs = Knob::all(&design);
    let (mut table, mut told) = (String::new(), 0);
    let lines: Vec<&str> = starter().lines().collect();
    for (at, line) in lines.iter().enumerate() {
        if let Some(name) = line.strip_prefix('[') {
            let name = name.split(']').next().unwrap().trim_start_matches('[');
            table = name.replace("payload", "payload[0]");
        }
        let key = line.split_once(" = ").map(|(key, _)| key).filter(|key| !key.starts_with('#'));
        let (Some(key), Some(comment)) = (key, comment_of(&lines, at)) else { continue };
        let own = format!("{table}.{key}");
        let within = [format!("{own}."), format!("{own}[")];
        let is_own = |knob: &&Knob| {
            knob.key() == own || within.iter().any(|within| knob.key().starts_with(within.as_str()))
        };
        for knob in knobs.iter().filter(is_own) {
            assert!(comment.contains(&knob.allowed()), "{}: {} in {comment}", own, knob.allowed());
            told += 1;
        }
    }
    assert!(told >= 70, "{told}");
}
