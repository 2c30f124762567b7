//! A whole design: read, checked and turned into values of the crates below.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

use nalgebra::Vector3;
use undulift_chain::{Axis, Carried, Chain, ChainError, Joint, PointMass, Segment};
use undulift_flight::Glider;
use undulift_servo::Servo;

use crate::body::read_body;
use crate::carried::{Battery, Payload, read_battery, read_payload};
use crate::catalogue::read_all_servos;
use crate::document::{Document, Mark, source_of};
use crate::files::{MOST_TOML_BYTES, check_text, read_file};
use crate::gait::read_gait;
use crate::joints::{ServoNames, read_joints};
use crate::key_path::KeyPath;
use crate::mistake::{Mistake, Source};
use crate::named_files::{NamedFiles, sha256_of};
use crate::origin::Origin;
use crate::overrides::apply;
use crate::sections::{read_sections, sections_of_body};
use crate::spread::{Spread, read_spread};
use crate::surroundings::{Limits, read_air, read_launch, read_limits, read_update_hz};
use crate::table::Table;
use crate::{DesignError, DesignErrors, Override};

/// What a design file says.
#[derive(Debug, Clone, PartialEq)]
pub struct Design {
    /// Its own, or else the file's stem.
    pub name: String,
    /// Body, gait, air and launch; servos, battery and payload are masses in its chain.
    pub glider: Glider,
    /// All servos of the file and its catalogue, by name.
    pub servos: BTreeMap<String, Servo>,
    /// Which of them drives what.
    pub servo_names: ServoNames,
    /// What feeds them.
    pub battery: Option<Battery>,
    /// What it carries beside.
    pub payload: Vec<Payload>,
    /// How often the firmware sends new commands, Hz; absent: without pause.
    pub update_hz: Option<f64>,
    /// What a good flight keeps within.
    pub limits: Limits,
    /// What differs from launch to launch.
    pub spread: Spread,
    /// SHA-256, in hexadecimal, of the text and then, for every file it names in turn, of its
    /// length (eight bytes, the lowest first) and bytes.
    pub input_sha256: String,
    /// The file's text with the overrides in it; numbers that a [`crate::Knob`] set later are not.
    pub text: String,
    pub(crate) origin: Origin,
}

impl Design {
    /// SHA-256, in hexadecimal, of a design and a file that it doesn't name: of its
    /// [`Self::input_sha256`] and then of the file's length (eight bytes, the lowest first) and
    /// bytes.
    pub fn input_sha256_with(&self, file: &str) -> String {
        sha256_of(&self.input_sha256, std::iter::once(file))
    }
}

/// Reads a design file, with values set from outside.
///
/// # Errors
///
/// All mistakes that it and the files it names hold.
pub fn read(path: &Path, overrides: &[Override]) -> Result<Design, DesignErrors> {
    let text = read_file(path, MOST_TOML_BYTES).map_err(|error| unusable(path, error))?;
    read_kept(path, text, overrides, BTreeMap::new())
}

/// Reads a design from memory, with values set from outside.
///
/// - `path`: where it would stand; the names of files count from its folder
///
/// # Errors
///
/// As for [`read`].
pub fn read_text(path: &Path, text: &str, overrides: &[Override]) -> Result<Design, DesignErrors> {
    check_text(path, text, MOST_TOML_BYTES).map_err(|error| unusable(path, error))?;
    read_kept(path, text.to_owned(), overrides, BTreeMap::new())
}

pub(crate) fn unusable(path: &Path, error: DesignError) -> DesignErrors {
    DesignErrors::new(path.display().to_string(), vec![Mistake::of_file(error)])
}

/// - `kept`: files that it names and that needn't be read again
pub(crate) fn read_kept(
    path: &Path,
    text: String,
    overrides: &[Override],
    kept: BTreeMap<PathBuf, Source>,
) -> Result<Design, DesignErrors> {
    let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
    let files = NamedFiles::of(path, kept);
    let source = source_of(path, text);
    let document = Document::parse(&source).map_err(fail)?;
    if overrides.is_empty() {
        return read_document(path, source.inner(), document, files).map_err(fail);
    }
    let changed = apply(source.inner(), overrides, |name| files.toml_text(name));
    let document = document.changed(&changed, overrides).map_err(fail)?;
    if changed.refused.is_empty() {
        return read_document(path, &changed.text, document, files).map_err(fail);
    }
    for (set, why) in &changed.refused {
        let what = DesignError::CannotSet { why: why.clone() };
        document.note(set.path(), Mark::Value, &[], what);
    }
    Err(fail(document.into_mistakes()))
}

/// - `text`: what the document holds, overrides included
fn read_document(
    path: &Path,
    text: &str,
    document: Document<'_>,
    mut files: NamedFiles,
) -> Result<Design, Vec<Mistake>> {
    let design = read_tables(&document, path, &mut files);
    let numbers = document.take_numbers();
    let spread = read_spread(&Table::top(&document), &numbers);
    if document.is_sound() {
        document.check_changeable();
    }
    let mistakes = document.into_mistakes();
    match design {
        Some(design) if mistakes.is_empty() => {
            let input_sha256 = files.sha256(text);
            let origin = Origin::new(path, files.into_kept(), numbers);
            Ok(Design { spread, input_sha256, text: text.to_owned(), origin, ..design })
        }
        _ => Err(mistakes),
    }
}

/// All of a design but its text and hash; absent where there are mistakes, noted in the document.
fn read_tables(document: &Document<'_>, path: &Path, files: &mut NamedFiles) -> Option<Design> {
    let top = Table::top(document);
    let stem = || path.file_stem().unwrap_or_default().to_string_lossy().into_owned();
    let name = top.text("name").map_or_else(stem, str::to_owned);
    let servos = read_all_servos(&top, files);
    let body = read_body(top.need_table("body"));
    let n_segments = body.n_segments;
    let joints = read_joints(top.need_table("joints"), n_segments, servos.names().as_deref());
    let sections = read_sections(&top, files);
    let sections = body.section.and_then(|node| sections_of_body(&node, n_segments, &sections));
    let boxes = body.segments.as_deref();
    let battery = Some(top.table("battery")).filter(Table::is_given);
    let battery = battery.map(|table| read_battery(table, n_segments, boxes));
    let payload = top.tables("payload").into_iter();
    let payload: Vec<_> = payload.map(|table| read_payload(table, n_segments, boxes)).collect();
    let surroundings = read_air(top.table("air"));
    let gait = read_gait(top.need_table("gait"), joints.joints.as_deref(), files);
    let launch = read_launch(top.need_table("launch"), n_segments);
    let update_hz = read_update_hz(top.table("firmware"));
    let limits = read_limits(top.table("limits"));
    for read_elsewhere in ["spread", "search", "wiring"] {
        top.leave(read_elsewhere);
    }
    top.finish();
    // What is absent from here on was noted as a mistake.
    let battery = if let Some(read) = battery { Some(read?) } else { None };
    let payload: Vec<Payload> = payload.into_iter().collect::<Option<_>>()?;
    let segments = body.segments?;
    let servos = servos.all_sound()?;
    let mut masses = servo_masses(&segments, &joints.servo_names, &servos);
    masses.extend(battery.iter().map(|battery| battery.mass.clone()));
    masses.extend(payload.iter().map(|payload| payload.mass.clone()));
    let (sections, section_of) = sections?;
    let glider = Glider {
        chain: link(document, segments, joints.joints?, masses)?,
        sections,
        section_of,
        strips_per_segment: body.strips_per_segment,
        gait: gait?,
        air: surroundings.air,
        wind_world_m_s: surroundings.wind_world_m_s,
        scales: surroundings.scales,
        skin_friction: surroundings.skin_friction,
        launch: launch?,
    };
    Some(Design {
        name,
        glider,
        servos,
        servo_names: joints.servo_names,
        battery,
        payload,
        update_hz,
        limits,
        spread: Spread::Default,
        input_sha256: String::new(),
        text: String::new(),
        origin: Origin::default(),
    })
}

/// Each servo sits at the joint that it drives, in the segment ahead of it.
fn servo_masses(
    segments: &[Segment],
    names: &ServoNames,
    servos: &BTreeMap<String, Servo>,
) -> Vec<PointMass> {
    let mut masses = Vec::new();
    for (joint_idx, segment) in segments[..segments.len() - 1].iter().enumerate() {
        for axis in Axis::BOTH {
            let servo = names.of(joint_idx, axis).and_then(|name| servos.get(name));
            masses.extend(servo.map(|servo| PointMass {
                carried: Carried::Servo,
                segment_idx: joint_idx,
                at_m: Vector3::new(-segment.length_m, 0.0, 0.0),
                mass_kg: servo.mass_kg,
            }));
        }
    }
    masses
}

fn link(
    document: &Document<'_>,
    segments: Vec<Segment>,
    joints: Vec<Joint>,
    masses: Vec<PointMass>,
) -> Option<Chain> {
    let refuse = |error: ChainError| {
        document.note(&KeyPath::of(["body"]), Mark::Key, &[], DesignError::Chain(error));
    };
    Chain::new(segments, joints, masses).map_err(refuse).ok()
}
