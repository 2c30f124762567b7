//! The test sheet as its users meet it.

use std::path::Path;

use approx::assert_relative_eq;
use roxmltree::{Document, Node, ParsingOptions};
use serde_json::Value;
use sha2::{Digest, Sha256};

mod common;
use common::{answer, complaint, json, root, undulift};

const REED: &str = "designs/reed-16.toml";
const GANTRY: &str = "designs/hall-gantry.toml";

/// A folder to write to.
struct Folder(tempfile::TempDir);

impl Folder {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn path(&self, name: &str) -> String {
        self.0.path().join(name).to_str().unwrap().to_owned()
    }

    fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.path(name)).unwrap()
    }

    /// The demo hall with something replaced.
    fn hall(&self, changes: &[(&str, &str)]) -> String {
        let mut text = std::fs::read_to_string(root().join(GANTRY)).unwrap();
        for (from, to) in changes {
            assert!(text.contains(from), "{from}");
            text = text.replace(from, to);
        }
        std::fs::write(self.path("hall.toml"), text).unwrap();
        self.path("hall.toml")
    }

    /// Both sheets of few drops, and the JSON of the same.
    fn sheets(&self, design: &str, hall: &str) -> Value {
        let (html, md) = (self.path("sheet.html"), self.path("sheet.md"));
        let args = ["drop", design, hall, "--flights", "60", "--json", "--sheet", &html];
        let output = undulift(&[&args[..], &["--sheet", &md]].concat());
        assert!(matches!(output.status.code(), Some(0 | 1)), "{}", complaint(&output));
        serde_json::from_str(&answer(&output)).unwrap()
    }
}

/// The page must be well-formed XML, too, which catches whatever a name could break.
fn parse(html: &str) -> Document<'_> {
    let options = ParsingOptions { allow_dtd: true, ..ParsingOptions::default() };
    Document::parse_with_options(html, options).unwrap()
}

fn named<'a>(document: &'a Document<'_>, tag: &str) -> Vec<Node<'a, 'a>> {
    document.descendants().filter(|node| node.tag_name().name() == tag).collect()
}

fn of_class<'a>(document: &'a Document<'_>, class: &str) -> Vec<Node<'a, 'a>> {
    let of = |node: &Node<'_, '_>| {
        node.attribute("class").is_some_and(|all| all.split(' ').any(|one| one == class))
    };
    document.descendants().filter(of).collect()
}

fn text(node: &Node<'_, '_>) -> String {
    node.descendants().filter(Node::is_text).filter_map(|node| node.text()).collect()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

/// Hashes by another library's reading of the files, and by `fly --json`.
#[test]
fn twin_both_sheets_say_what_they_were_made_of() {
    let folder = Folder::new();
    folder.sheets(REED, GANTRY);
    let hall = std::fs::read(root().join(GANTRY)).unwrap();
    let hall: String = Sha256::digest(&hall).iter().map(|byte| format!("{byte:02x}")).collect();
    let design = json(&["fly", REED, "--json"])["input_sha256"].as_str().unwrap().to_owned();
    let html = folder.read("sheet.html");
    let document = parse(&html);
    let page = text(&named(&document, "body")[0]);
    for sheet in [page.as_str(), &folder.read("sheet.md")] {
        for told in [&hall, &design, "60 drops", "seed 1", "reed-16", "hall-gantry.toml"] {
            assert!(sheet.contains(told), "{told}");
        }
        for caution in undulift_droptest::CAUTIONS {
            assert!(sheet.contains(caution), "{caution}");
        }
    }
    assert_eq!(document.root_element().attribute("lang"), Some("en"));
    let svg = named(&document, "svg")[0];
    assert_eq!(svg.attribute("role"), Some("img"));
    for tag in ["title", "desc"] {
        assert!(svg.children().any(|node| node.tag_name().name() == tag), "{tag}");
    }
    // Nothing comes from outside, and nothing runs.
    for tag in ["script", "link", "img", "iframe"] {
        assert!(named(&document, tag).is_empty(), "{tag}");
    }
    assert!(!html.contains("@import") && !html.contains("url(h"));
}

/// Each rung's bands, rounded, are those of the JSON, in both formats.
#[test]
fn twin_the_ladder_is_that_of_json() {
    let folder = Folder::new();
    let object = folder.sheets(REED, GANTRY);
    let (html, markdown) = (folder.read("sheet.html"), folder.read("sheet.md"));
    let document = parse(&html);
    let rungs = of_class(&document, "rung");
    let ladder = object["ladder"].as_array().unwrap();
    assert_eq!(rungs.len(), ladder.len());
    for (rung, told) in rungs.iter().zip(ladder) {
        let rows: Vec<Node<'_, '_>> =
            rung.descendants().filter(|node| node.has_tag_name("tr")).collect();
        assert!(rows.len() >= 7, "a head, bands and five to fill in");
        let cells: Vec<String> =
            rows[1].children().filter(Node::is_element).map(|cell| text(&cell)).collect();
        assert_relative_eq!(cells[1].parse::<f64>().unwrap(), number(&told["height_m"]));
        let keys = [("distance_m", 2), ("side_drift_m", 2), ("time_s", 2), ("peak_tilt_deg", 0)];
        for ((key, digits), cell) in keys.into_iter().zip(&cells[2..]) {
            let [low, high] = ["p05", "p95"].map(|end| number(&told[key][end]));
            assert_eq!(cell, &format!("{low:.digits$} to {high:.digits$}"), "{key}");
        }
        assert!(markdown.contains(&format!("| {} |", cells.join(" | "))));
        let weights = format!("mean stop {:.0} weights", number(&told["mean_stop_weights"]));
        assert!(text(rung).contains(&weights) && markdown.contains(&weights));
        // By hand, of five drops: see `drops_outside_to_stop`.
        assert!(text(rung).contains("3 of 5"));
    }
}

/// The plan, measured with a ruler: 1:n from its name, the hall's corner as the origin, and back into
/// the frame of a launch that is turned by 40°.
#[test]
fn twin_the_plan_is_to_scale() {
    let folder = Folder::new();
    let hall = folder.hall(&[("direction_deg = 0.0", "direction_deg = 40.0")]);
    let object = folder.sheets(REED, &hall);
    let html = folder.read("sheet.html");
    let document = parse(&html);
    let by_id = |id: &str| document.descendants().find(|n| n.attribute("id") == Some(id)).unwrap();
    let of = |node: &Node<'_, '_>, key| node.attribute(key).unwrap().parse::<f64>().unwrap();
    let scale: f64 = text(&by_id("plan-title")).rsplit(':').next().unwrap().parse().unwrap();
    let m_per_mm = scale / 1000.0;
    let walls = by_id("hall").first_element_child().unwrap();
    assert_relative_eq!(of(&walls, "width") * m_per_mm, 60.0, epsilon = 1e-2);
    assert_relative_eq!(of(&walls, "height") * m_per_mm, 40.0, epsilon = 1e-2);
    let origin_mm = [of(&walls, "x"), of(&walls, "y") + of(&walls, "height")];
    let (sin, cos) = 40_f64.to_radians().sin_cos();
    let in_launch_m = |[x_mm, y_mm]: [f64; 2]| {
        let x = (x_mm - origin_mm[0]) * m_per_mm - 6.0;
        let y = (origin_mm[1] - y_mm) * m_per_mm - 20.0;
        [x * cos + y * sin, y * cos - x * sin]
    };
    let drawn = of_class(&document, "region").into_iter().filter(|n| n.has_attribute("transform"));
    let mut told: Vec<&Value> =
        object["ladder"].as_array().unwrap().iter().map(|rung| &rung["region95"]).collect();
    told.reverse();
    assert_eq!(told[0], &object["normal"]["region95"]);
    let drawn: Vec<Node<'_, '_>> = drawn.collect();
    assert_eq!(drawn.len(), told.len());
    for (ellipse, told) in drawn.iter().zip(told) {
        let centre_m = in_launch_m([of(ellipse, "cx"), of(ellipse, "cy")]);
        for axis in 0..2 {
            assert_relative_eq!(centre_m[axis], number(&told["centre_m"][axis]), epsilon = 2e-3);
            let semi_m = of(ellipse, ["rx", "ry"][axis]) * m_per_mm;
            assert_relative_eq!(semi_m, number(&told["semi_axes_m"][axis]), epsilon = 2e-3);
        }
        let turn = ellipse.attribute("transform").unwrap();
        let turn = turn.trim_start_matches("rotate(").split(' ').next().unwrap();
        let launch_deg = -turn.parse::<f64>().unwrap() - 40.0;
        assert_relative_eq!(launch_deg, number(&told["angle_deg"]), epsilon = 2e-3);
    }
    let corners = by_id("keep-out").attribute("points").unwrap();
    let corner = |at: usize| {
        let pair = corners.split(' ').nth(at).unwrap().split_once(',').unwrap();
        in_launch_m([pair.0.parse().unwrap(), pair.1.parse().unwrap()])
    };
    let keep_out = &object["keep_out"];
    for (found, end) in [(corner(0), 0), (corner(2), 1)] {
        assert_relative_eq!(found[0], number(&keep_out["along_m"][end]), epsilon = 2e-3);
        assert_relative_eq!(found[1], number(&keep_out["across_m"][end]), epsilon = 2e-3);
    }
}

/// Whatever a name holds is shown as text, in both formats.
#[test]
fn twin_hostile_names_are_text() {
    let folder = Folder::new();
    let names = [
        ("<script>alert('1')</script>", "<script>alert('1')</script>"),
        ("a & b \\\"c\\\" | `d` *e*", "a & b \"c\" | `d` *e*"),
        ("one\\ntwo\\u202Eeerht\\u200B", "one⟨U+000A⟩two⟨U+202E⟩eerht⟨U+200B⟩"),
        ("שלום 🦎 e\\u0301", "שלום 🦎 e\u{301}"),
        ("]]> --> &amp; </bdi></td>", "]]> --> &amp; </bdi></td>"),
    ];
    let people = names.iter().zip(1..).map(|((name, _), n)| {
        format!("[[people]]\nname = \"{name}\"\nx_m = {n}\ny_m = 38\nradius_m = 0.4\n")
    });
    let people = people.collect::<String>() + "[catch]";
    let hall = folder.hall(&[("[catch]", &people)]);
    let reed = std::fs::read_to_string(root().join(REED)).unwrap();
    let design = folder.path("design.toml");
    let named_anew = reed.replace("name = \"reed-16\"", "name = \"<b>&'\\u202E|\"");
    assert_ne!(named_anew, reed);
    std::fs::write(&design, named_anew).unwrap();
    folder.sheets(&design, &hall);
    let (html, markdown) = (folder.read("sheet.html"), folder.read("sheet.md"));
    let document = parse(&html);
    let shown: Vec<String> = named(&document, "bdi").iter().map(text).collect();
    for name in names.map(|(_, name)| name).iter().chain(&["<b>&'⟨U+202E⟩|"]) {
        assert!(shown.iter().any(|shown| shown == name), "{name} in {shown:?}");
    }
    for tag in ["script", "b"] {
        assert!(named(&document, tag).is_empty(), "{tag}");
    }
    assert!(markdown.contains("\\<script\\>alert\\(\\'1\\'\\)\\<\\/script\\>"));
    assert!(markdown.contains("a \\& b \\\"c\\\" \\| \\`d\\` \\*e\\*"));
    for sheet in [&html, &markdown] {
        assert!(!sheet.contains(['\u{202e}', '\u{200b}']));
    }
    // A row of a table stays a row: as many bars that aren't escaped as in any other.
    let bars = |line: &str| line.replace("\\|", "").matches('|').count();
    let rows: Vec<&str> = markdown.lines().filter(|line| line.starts_with("| person")).collect();
    assert_eq!(rows.len(), names.len() + 2);
    assert!(rows.iter().all(|row| bars(row) == 5), "{rows:?}");
}

/// What can't be a sheet ends with status 2 before a million drops are flown, and leaves nothing.
#[test]
fn twin_what_cant_be_written_is_refused_first() {
    let folder = Folder::new();
    std::fs::create_dir(folder.path("folder.md")).unwrap();
    let good = folder.path("good.html");
    for (name, why) in [
        ("sheet.pdf", "FILE.html, or Markdown, FILE.md"),
        ("sheet", "FILE.html, or Markdown, FILE.md"),
        ("folder.md", "it is a folder"),
        ("missing/sheet.md", "there is no such folder"),
        ("good.html", "is to be written twice"),
    ] {
        let bad = folder.path(name);
        let args = ["drop", REED, GANTRY, "--flights", "1000000", "--sheet", &good];
        let output = undulift(&[&args[..], &["--sheet", &bad]].concat());
        assert_eq!(output.status.code(), Some(2), "{name}");
        assert!(complaint(&output).contains(why), "{name}: {}", complaint(&output));
        assert!(answer(&output).is_empty());
        assert!(!Path::new(&good).exists(), "{name}");
    }
    assert_eq!(std::fs::read_dir(folder.0.path()).unwrap().count(), 1);
}

/// What doesn't fit is said in large letters, and what the sheet says stays as it was.
#[test]
fn frozen_sheet_of_what_doesnt_fit() {
    let folder = Folder::new();
    let (html, md) = (folder.path("sheet.html"), folder.path("sheet.md"));
    let args = ["drop", "designs/sedge-10.toml", GANTRY, "--flights", "200", "--sheet", &html];
    let output = undulift(&[&args[..], &["--sheet", &md]].concat());
    assert_eq!(output.status.code(), Some(1));
    let page = folder.read("sheet.html");
    let document = parse(&page);
    let verdict = of_class(&document, "verdict");
    assert_eq!(verdict[0].attribute("class"), Some("verdict not"));
    assert!(text(&verdict[0]).starts_with("NOT as it stands"));
    let version = format!("undulift {}", env!("CARGO_PKG_VERSION"));
    insta::assert_snapshot!("sheet", folder.read("sheet.md").replace(&version, "undulift VERSION"));
}
