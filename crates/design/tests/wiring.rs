//! `[wiring]`: what it gives, and what is wrong with it.

mod common;

use std::path::Path;

use common::SOUND;
use insta::assert_snapshot;
use undulift_design::{DesignErrors, Override, read, read_text};
use undulift_gait::firmware::Channel;

fn sedge() -> undulift_design::Design {
    read(&Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/sedge-10.toml"), &[]).unwrap()
}

fn wired(wiring: &str) -> Result<Vec<Channel>, DesignErrors> {
    let text = format!("{}\n[wiring]\n{wiring}\n", sedge().text);
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/wired.toml");
    read_text(&path, &text, &[]).unwrap().wiring()
}

/// Channels come in the board's order with the axes that the lists name, head first; without a table
/// they are numbered as axes are.
#[test]
fn twin_channels_are_as_wired() {
    let own = sedge().wiring().unwrap();
    let names: Vec<String> = own.iter().map(Channel::name).collect();
    assert_eq!(names.join(" "), "yaw_1 yaw_3 yaw_5 yaw_7 yaw_9 pitch_2 pitch_4 pitch_6 pitch_8");
    assert!(own.iter().enumerate().all(|(at, channel)| usize::from(channel.number) == at));
    assert_eq!(own[0].pulse.minus_90_us, sedge().servos["small-13"].pulse.minus_90_us);
    let wired = wired(
        "yaw = { channel = [9, 8, 7, 6, 5], reversed = [true, false, false, false, true] }\n\
         pitch = { channel = [0, 20, 2, 3], offset_us = [0, -12.5, 0, 31] }",
    )
    .unwrap();
    let told: Vec<String> = wired
        .iter()
        .map(|c| format!("{} {} {} {}", c.number, c.name(), c.reversed, c.offset_us))
        .collect();
    assert_eq!(
        told.join("\n"),
        "0 pitch_2 false 0\n2 pitch_6 false 0\n3 pitch_8 false 31\n5 yaw_9 true 0\n6 yaw_7 false 0\n\
         7 yaw_5 false 0\n8 yaw_3 false 0\n9 yaw_1 true 0\n20 pitch_4 false -12.5"
    );
}

#[test]
fn frozen_mistakes_in_wiring() {
    let yaw = "yaw = { channel = [0, 1, 2, 3, 4] }";
    let pitch = "pitch = { channel = [5, 6, 7, 8] }";
    let cases = [
        ("two on one channel", format!("{yaw}\npitch = {{ channel = [5, 3, 7, 8] }}")),
        ("twice on one axis", format!("yaw = {{ channel = [0, 1, 2, 1, 4] }}\n{pitch}")),
        ("too few", format!("yaw = {{ channel = [0, 1, 2] }}\n{pitch}")),
        ("too many", format!("{yaw}\npitch = {{ channel = [5, 6, 7, 8, 9] }}")),
        ("an unknown joint", format!("{yaw}\n{pitch}\nroll = {{ channel = [9] }}")),
        ("an axis left out", yaw.to_owned()),
        ("no channels", format!("{yaw}\npitch = {{ reversed = [true, true, true, true] }}")),
        (
            "a list too short",
            format!("{pitch}\nyaw = {{ channel = [0, 1, 2, 3, 4], reversed = [true] }}"),
        ),
        ("not a channel", format!("yaw = {{ channel = [0, 1, 2, 3, 256] }}\n{pitch}")),
        ("half a channel", format!("yaw = {{ channel = [0, 1, 2, 3, 4.5] }}\n{pitch}")),
        (
            "words",
            format!(
                "{yaw}\npitch = {{ channel = [5, 6, 7, 8], reversed = [\"no\", 1, true, true] }}"
            ),
        ),
        (
            "offset beyond travel",
            format!("{yaw}\npitch = {{ channel = [5, 6, 7, 8], offset_us = [0, 0, 900, -901] }}"),
        ),
        ("one for all", format!("{yaw}\npitch = {{ channel = 5 }}")),
    ];
    let told = cases.map(|(name, wiring)| {
        let lines = match wired(&wiring) {
            Ok(_) => "read".to_owned(),
            Err(errors) => {
                let line = |mistake: &undulift_design::Mistake| {
                    let line = mistake.line();
                    let line = line.rsplit("wired.toml").next().unwrap_or_default().to_owned();
                    format!("{line}\n    {}", mistake.remedy().unwrap_or_default())
                };
                errors.mistakes().iter().map(line).collect::<Vec<_>>().join("\n")
            }
        };
        format!("# {name}\n{lines}\n")
    });
    assert_snapshot!(told.join("\n"));
}

/// A design without pitch needs no channels for it, and other commands leave the table alone.
#[test]
fn twin_wiring_is_read_when_asked_for() {
    let path = Path::new("x.toml");
    let text = format!("{SOUND}\n[wiring]\nz = 3\n");
    let design = read_text(path, &text, &[Override::parse("joints.axes=yaw").unwrap()]).unwrap();
    let told = design.wiring().unwrap_err();
    assert!(told.mistakes().iter().any(|mistake| mistake.key() == "wiring.z"));
    let text = format!("{SOUND}\n[wiring]\nyaw = {{ channel = [2, 1, 0] }}\n");
    let design = read_text(path, &text, &[Override::parse("joints.axes=yaw").unwrap()]).unwrap();
    assert_eq!(design.wiring().unwrap().len(), 3);
}
