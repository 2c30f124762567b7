//! Designs by chance: sound texts over all keys, in all the ways in which they may be written.

use std::fmt::Write;

use super::Folder;

/// Chance from a seed: the same seed makes the same design.
pub struct Dice(u64);

impl Dice {
    pub fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(2).wrapping_add(0x9e37_79b9_7f4a_7c15) | 1)
    }

    pub fn next(&mut self) -> u64 {
        // Marsaglia's xorshift, its high bits mixed down.
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 ^ (self.0 >> 31)).wrapping_mul(0x2545_f491_4f6c_dd1d) >> 11
    }

    pub fn below(&mut self, n: usize) -> usize {
        self.next() as usize % n
    }

    pub fn one_in(&mut self, n: usize) -> bool {
        self.below(n) == 0
    }

    pub fn pick<T: Copy>(&mut self, of: &[T]) -> T {
        of[self.below(of.len())]
    }

    pub fn within(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * (self.next() as f64 / (1u64 << 53) as f64)
    }

    /// A number as somebody may write it.
    fn number(&mut self, low: f64, high: f64) -> String {
        let value = self.within(low, high);
        let rounded = (value * 100.0).round() / 100.0;
        let inside = |value: f64| value > low && value < high;
        match self.below(6) {
            0 if inside(rounded) => format!("{rounded:?}"),
            1 if inside(rounded.round()) => format!("{}", rounded.round()),
            2 if value > 0.0 => format!("+{value:?}"),
            3 => format!("{value:e}").replace('e', if value.abs() < 1.0 { "E" } else { "e+" }),
            4 if inside((value * 1e7).round() / 1e7) => {
                format!("{:?}", (value * 1e7).round() / 1e7)
            }
            _ => format!("{value:?}"),
        }
    }

    fn list(&mut self, n: usize, low: f64, high: f64) -> String {
        let items: Vec<String> = (0..n).map(|_| self.number(low, high)).collect();
        let gap = self.pick(&[", ", ",", ",\n    ", " , "]);
        format!("[{}{}]", items.join(gap), self.pick(&["", ","]))
    }

    fn words(&mut self, n: usize, of: &[&str]) -> String {
        let items: Vec<String> = (0..n).map(|_| format!("\"{}\"", self.pick(of))).collect();
        format!("[{}]", items.join(", "))
    }
}

/// A table with some of its keys.
struct Keys<'d> {
    dice: &'d mut Dice,
    text: String,
}

impl Keys<'_> {
    fn must(&mut self, key: &str, value: String) {
        let _ = writeln!(self.text, "{key} = {value}");
    }

    fn number(&mut self, key: &str, low: f64, high: f64) {
        let value = self.dice.number(low, high);
        self.must(key, value);
    }

    fn maybe(&mut self, key: &str, low: f64, high: f64) {
        if self.dice.one_in(2) {
            self.number(key, low, high);
        }
    }

    fn maybe_word(&mut self, key: &str, of: &[&str]) {
        if self.dice.one_in(2) {
            let word = self.dice.pick(of);
            self.must(key, format!("'{word}'"));
        }
    }

    fn maybe_triple(&mut self, key: &str, low: f64, high: f64) {
        if self.dice.one_in(2) {
            let list = self.dice.list(3, low, high);
            self.must(key, list);
        }
    }

    /// Some keys of a table within, in a line or dotted.
    fn inner(&mut self, key: &str, keys: &[(&str, f64, f64)], all: bool) {
        let mut entries = Vec::new();
        for (inner, low, high) in keys {
            if all || self.dice.one_in(2) {
                entries.push((*inner, self.dice.number(*low, *high)));
            }
        }
        self.entries(key, entries);
    }

    fn entries(&mut self, key: &str, entries: Vec<(&str, String)>) {
        if self.dice.one_in(3) {
            for (inner, value) in entries {
                self.must(&format!("{key}.{inner}"), value);
            }
        } else if !entries.is_empty() {
            let entries: Vec<_> =
                entries.iter().map(|(inner, value)| format!("{inner} = {value}")).collect();
            self.must(key, format!("{{ {} }}", entries.join(", ")));
        }
    }
}

/// A folder with a sound design, `d.toml`, and the files that it names.
pub fn random_folder(seed: u64) -> Folder {
    let dice = &mut Dice::new(seed);
    let n = 2 + dice.below(9);
    let folder = Folder::new();
    let axes = random_axes(dice, n);
    let mut tables = vec![body(dice, n), launch(dice, n), joints(dice, n, &axes)];
    tables.push(gait(dice, &axes, &folder));
    tables.push(section(dice, &folder));
    let mut top = String::new();
    if dice.one_in(2) {
        top += "name = \"a \\\"robot\\\" é\"\n";
    }
    let mini = servo(dice, "mini");
    let other = servo(dice, "\"an other\"");
    if dice.one_in(2) {
        folder.write("shelf.toml", format!("{mini}\n{other}").as_bytes());
        top += "servos = \"shelf.toml\"\n";
        if dice.one_in(2) {
            tables.push(servo(dice, "mini"));
        }
    } else {
        tables.extend([mini, other]);
    }
    for table in [air, battery, limits, firmware, payload, spread, search] {
        if dice.one_in(2) {
            let text = table(dice, n);
            tables.push(text);
        }
    }
    let mut text = top;
    while !tables.is_empty() {
        let next = tables.swap_remove(dice.below(tables.len()));
        text += &format!("{}{next}", dice.pick(&["", "\n", "\n# a comment\n"]));
    }
    folder.write("d.toml", text.as_bytes());
    folder
}

fn keys<'d>(dice: &'d mut Dice, header: &str) -> Keys<'d> {
    Keys { dice, text: format!("{header}\n") }
}

fn air(dice: &mut Dice, _: usize) -> String {
    let mut air = keys(dice, "[air]");
    if air.dice.one_in(4) {
        air.number("altitude_m", -400.0, 9000.0);
    } else {
        air.maybe("temperature_c", -50.0, 50.0);
        air.maybe("pressure_pa", 0.0, 150_000.0);
    }
    air.maybe_triple("wind_m_s", -5.0, 5.0);
    air.maybe("lift_scale", 0.0, 2.0);
    air.maybe("drag_scale", 0.0, 2.0);
    air.maybe_word("skin_friction", &["laminar", "turbulent", "none"]);
    air.text
}

fn body(dice: &mut Dice, n: usize) -> String {
    let mut body = keys(dice, "[body]");
    body.must("segments", n.to_string());
    if body.dice.one_in(2) {
        let strips = 1 + body.dice.below(8);
        body.must("strips_per_segment", strips.to_string());
    }
    let length = match body.dice.one_in(2) {
        true => body.dice.list(n, 0.04, 0.2),
        false => body.dice.number(0.2, 2.0),
    };
    body.must("length_m", length);
    measure(&mut body, "width_m", n, 0.02, 0.2);
    measure(&mut body, "thickness_m", n, 0.01, 0.05);
    match body.dice.below(3) {
        0 => body.number("structure_kg", 0.05, 1.0),
        1 => {
            let list = body.dice.list(n, 0.01, 0.1);
            body.must("structure_kg", list);
        }
        _ => {
            let total = body.dice.number(0.05, 1.0);
            let ratio = body.dice.number(0.0, 3.0);
            body.entries("structure_kg", vec![("total", total), ("ends_to_middle", ratio)]);
        }
    }
    let names = ["plate", "round", "domed", "my rib"];
    let section = match body.dice.one_in(2) {
        true => body.dice.words(n, &names),
        false => format!("\"{}\"", body.dice.pick(&names)),
    };
    body.must("section", section);
    body.text
}

fn measure(body: &mut Keys<'_>, key: &str, n: usize, low: f64, high: f64) {
    match body.dice.below(4) {
        0 => body.number(key, low, high),
        1 => {
            let list = body.dice.list(n, low, high);
            body.must(key, list);
        }
        2 => {
            let middle = body.dice.number(low, high);
            body.entries(key, vec![("shape", "\"uniform\"".to_owned()), ("middle", middle)]);
        }
        _ => {
            let (middle, ends) = (body.dice.number(low, high), body.dice.number(0.0, high));
            let mut entries = vec![("ends", ends), ("middle", middle)];
            if body.dice.one_in(2) {
                entries.push(("shape", "\"parabolic\"".to_owned()));
            }
            body.entries(key, entries);
        }
    }
}

fn launch(dice: &mut Dice, n: usize) -> String {
    let mut launch = keys(dice, "[launch]");
    launch.number("height_m", 3.0, 30.0);
    launch.number("speed_m_s", 0.0, 9.0);
    launch.maybe("climb_deg", -90.0, 90.0);
    launch.maybe("roll_deg", -360.0, 360.0);
    launch.maybe("pitch_deg", -90.0, 90.0);
    launch.maybe("yaw_deg", -360.0, 360.0);
    launch.maybe_triple("spin_deg_s", -90.0, 90.0);
    if launch.dice.one_in(3) {
        let segment = 1 + launch.dice.below(n);
        launch.must("grip_segment", segment.to_string());
    }
    launch.text
}

/// For each joint, whether it yaws and whether it pitches, and how that is written.
struct Axes {
    written: String,
    of: Vec<[bool; 2]>,
}

fn random_axes(dice: &mut Dice, n: usize) -> Axes {
    let joint = |word: &str| [word != "pitch" && word != "fixed", word != "yaw" && word != "fixed"];
    if dice.one_in(2) {
        let word = dice.pick(&["universal", "alternate", "yaw", "pitch"]);
        let of = (1..n).map(|k| match word {
            "alternate" => [k % 2 == 1, k % 2 == 0],
            word => joint(word),
        });
        return Axes { written: format!("\"{word}\""), of: of.collect() };
    }
    let words: Vec<&str> =
        (1..n).map(|_| dice.pick(&["universal", "yaw", "pitch", "fixed"])).collect();
    Axes { written: format!("{words:?}"), of: words.into_iter().map(joint).collect() }
}

fn joints(dice: &mut Dice, n: usize, axes: &Axes) -> String {
    let mut joints = keys(dice, "[joints]");
    joints.must("axes", axes.written.clone());
    for (axis, word) in ["yaw", "pitch"].into_iter().enumerate() {
        match joints.dice.below(3) {
            0 => joints.number(&format!("{word}_travel_deg"), 5.0, 180.0),
            1 => {
                let list = joints.dice.list(n - 1, 5.0, 180.0);
                joints.must(&format!("{word}_travel_deg"), list);
            }
            _ => {}
        }
        let servos = ["mini", "an other"];
        match joints.dice.below(3) {
            0 => {
                let name = format!("\"{}\"", joints.dice.pick(&servos));
                joints.must(&format!("{word}_servo"), name);
            }
            1 => {
                let mut name = |has: bool| if has { joints.dice.pick(&servos) } else { "none" };
                let names: Vec<&str> = axes.of.iter().map(|of| name(of[axis])).collect();
                joints.must(&format!("{word}_servo"), format!("{names:?}"));
            }
            _ => {}
        }
    }
    joints.text
}

fn servo(dice: &mut Dice, name: &str) -> String {
    let mut servo = keys(dice, &format!("[servo.{name}]"));
    servo.number("mass_kg", 0.0, 0.05);
    servo.number("at_voltage_v", 5.9, 6.1);
    match servo.dice.one_in(2) {
        true => servo.number("stall_torque_nm", 0.1, 0.8),
        false => servo.number("stall_torque_kgf_cm", 1.0, 8.0),
    }
    match servo.dice.one_in(2) {
        true => servo.number("no_load_speed_deg_s", 300.0, 600.0),
        false => servo.number("no_load_s_per_60deg", 0.1, 0.2),
    }
    servo.number("stall_current_a", 1.9, 2.5);
    servo.number("no_load_current_a", 0.0, 0.1);
    servo.maybe("idle_current_a", 0.0, 0.01);
    servo.maybe("gear_efficiency", 0.1, 1.0);
    servo.maybe("rotor_inertia_at_output_kg_m2", 0.0, 1e-3);
    match servo.dice.below(3) {
        0 => servo.number("continuous_torque_nm", 0.1, 0.3),
        1 => {
            let keys = [
                ("winding_limit_c", 60.0, 120.0),
                ("capacity_j_k", 1.0, 30.0),
                ("resistance_k_w", 1.0, 30.0),
            ];
            servo.inner("thermal", &keys, true);
        }
        _ => {}
    }
    let pulses =
        [("plus_90", 2000.0, 2500.0), ("centre", 1400.0, 1600.0), ("minus_90", 500.0, 900.0)];
    servo.inner("pulse_us", &pulses, false);
    servo.inner("loop", &[("deadband_deg", 0.0, 1.0), ("full_at_deg", 1.0, 20.0)], false);
    servo.maybe("price", 0.0, 100.0);
    servo.text
}

fn battery(dice: &mut Dice, n: usize) -> String {
    let mut battery = keys(dice, "[battery]");
    let (cells, segment) = (1 + battery.dice.below(20), 1 + battery.dice.below(n));
    battery.must("cells", cells.to_string());
    battery.number("capacity_mah", 100.0, 2000.0);
    battery.number("cell_resistance_mohm", 0.0, 100.0);
    battery.maybe("current_limit_a", 1.0, 50.0);
    battery.maybe("charge", 0.0, 1.0);
    if battery.dice.one_in(2) {
        let keys = [("efficiency", 0.5, 1.0), ("current_limit_a", 1.0, 20.0), ("volts", 4.0, 8.0)];
        battery.inner("regulator", &keys, true);
    }
    battery.maybe("electronics_w", 0.0, 5.0);
    battery.number("mass_kg", 0.0, 0.1);
    battery.must("segment", format!("0x{segment:x}"));
    battery.maybe_triple("at_m", -0.1, 0.1);
    battery.text
}

fn payload(dice: &mut Dice, n: usize) -> String {
    let mut text = String::new();
    for k in 0..1 + dice.below(3) {
        let mut payload = keys(dice, "[[payload]]");
        payload.must("name", format!("\"p {k}\""));
        payload.number("mass_kg", 0.0, 0.1);
        let segment = 1 + payload.dice.below(n);
        payload.must("segment", segment.to_string());
        payload.maybe_triple("at_m", -0.1, 0.1);
        text += &payload.text;
    }
    text
}

fn gait(dice: &mut Dice, axes: &Axes, folder: &Folder) -> String {
    let mut gait = keys(dice, "[gait]");
    let turns = axes.of.iter().any(|of| of[0] || of[1]);
    if turns && gait.dice.one_in(3) {
        folder.write("g.csv", gait_table(gait.dice, axes).as_bytes());
        gait.must("table", "\"g.csv\"".into());
        gait.maybe_word("interpolation", &["cubic", "linear"]);
    } else {
        gait.number("frequency_hz", 0.0, 3.0);
        gait.number("lateral_amplitude_deg", -120.0, 120.0);
        gait.number("lateral_waves", 0.0, 3.0);
        gait.maybe("sharpness", 0.0, 5.0);
        gait.maybe("vertical_amplitude_deg", -20.0, 20.0);
        if gait.dice.one_in(2) {
            let ratio = 1 + gait.dice.below(20);
            gait.must("vertical_ratio", ratio.to_string());
        }
        gait.maybe("vertical_lag_deg", -400.0, 400.0);
        gait.maybe("turn_deg", -90.0, 90.0);
        gait.maybe("arch_deg", -90.0, 90.0);
        let taper = [
            ("tail_length", 0.0, 1.0),
            ("head", 0.0, 2.0),
            ("head_length", 0.0, 1.0),
            ("tail", 0.0, 2.0),
        ];
        gait.inner("taper", &taper, false);
    }
    gait.maybe("phase_deg", -720.0, 720.0);
    match gait.dice.below(3) {
        0 => gait.must("start", "{ mode = \"running\" }".into()),
        1 => {
            let mut entries = vec![("mode", "\"held\"".to_owned())];
            for key in ["delay_s", "spin_up_s"] {
                if gait.dice.one_in(2) {
                    entries.push((key, gait.dice.number(0.0, 0.3)));
                }
            }
            gait.entries("start", entries);
        }
        _ => {}
    }
    gait.text
}

fn gait_table(dice: &mut Dice, axes: &Axes) -> String {
    let mut columns = vec!["time_s".to_owned()];
    for (joint, of) in axes.of.iter().enumerate() {
        let words = ["yaw", "pitch"].into_iter().zip(of).filter(|(_, has)| **has);
        columns.extend(words.map(|(word, _)| format!("{word}_{}_deg", joint + 1)));
    }
    let step_s = dice.within(0.01, 0.1);
    let mut text = columns.join(",") + "\n";
    for row in 0..3 + dice.below(8) {
        text += &(step_s * row as f64).to_string();
        for _ in 1..columns.len() {
            text += &format!(",{}", dice.number(-60.0, 60.0));
        }
        text += "\n";
    }
    text
}

fn section(dice: &mut Dice, folder: &Folder) -> String {
    let has_moment = dice.one_in(2);
    let mut rows = format!("reynolds,alpha_deg,cl,cd{}\n", if has_moment { ",cm" } else { "" });
    for reynolds in 1..2 + dice.below(3) {
        for alpha_deg in [-90.0, dice.within(-80.0, -10.0), dice.within(0.0, 80.0), 90.0f64] {
            let lift = if alpha_deg.abs() == 90.0 { 0.0 } else { dice.within(-1.0, 1.0) };
            rows += &format!("{},{alpha_deg},{lift},{}", reynolds * 10_000, dice.number(0.1, 2.0));
            rows += &if has_moment { format!(",{}\n", lift / 10.0) } else { "\n".to_owned() };
        }
    }
    folder.write("rib.csv", rows.as_bytes());
    let mut sections = keys(dice, "[section.\"my rib\"]\ntable = 'rib.csv'");
    sections.maybe("pressure_centre", 0.0, 1.0);
    for name in ["plate", "domed"] {
        if sections.dice.one_in(3) {
            sections.text += &format!("[section.{name}]\n");
            sections.maybe("pressure_centre", 0.0, 1.0);
        }
    }
    sections.text
}

fn limits(dice: &mut Dice, _: usize) -> String {
    let mut limits = keys(dice, "[limits]");
    limits.maybe("torque_factor", 0.1, 9.0);
    limits.maybe("tilt_deg", 0.0, 180.0);
    limits.text
}

fn firmware(dice: &mut Dice, _: usize) -> String {
    let mut firmware = keys(dice, "[firmware]");
    firmware.maybe("update_hz", 1.0, 500.0);
    firmware.text
}

fn spread(dice: &mut Dice, _: usize) -> String {
    let mut spread = keys(dice, "# what differs\n[spread]");
    spread.inner("\"launch.speed_m_s\"", &[("sd", 0.0, 1.0)], true);
    spread.inner("\"air.lift_scale\"", &[("factor_sd", 0.0, 0.2)], true);
    spread.inner("\"gait.phase_deg\"", &[("high", 0.0, 9.0), ("low", -9.0, 0.0)], true);
    spread.text
}

fn search(_: &mut Dice, _: usize) -> String {
    "[search.require] # first\n\"budget.least_margin\" = { at_least = 1.5 }\n\
     [search]\nwant = [{ maximise = \"glide_ratio\" },\n  { minimise = \"sink_m_s\" }] # both\n\n\
     # what varies\n[search.vary]\n\"gait.frequency_hz\" = [0.6, 1.6]\n\
     [wiring]\nyaw = { channel = [0, 1], offset_us = [-12, 0x1F] }\n"
        .to_owned()
}
