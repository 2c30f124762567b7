//! The plan as SVG within the page.

use maud::{Markup, html};
use undulift_design::CatchKind;

use super::Sheet;
use super::drawing::{Drawing, clockwise_deg, height};
use super::html::words;
use super::labels::{LETTERS_MM, Letters};
use super::scale::{MARGIN_MM, PLOT_MM, step_m};

/// Of all that is drawn, mm.
const WIDTH_MM: f64 = 182.0;
/// Below the plan: the axis' numbers and its name.
const AXIS_MM: f64 = 8.0;
/// Of a row of the legend, mm.
const ROW_MM: f64 = 4.6;
/// Of a column of it.
const COLUMN_MM: f64 = 60.5;
/// A scale bar is no shorter than this, where 1, 2 or 5 times a power of ten is.
const BAR_MM: f64 = 18.0;

/// The whole drawing.
pub(super) fn svg(sheet: &Sheet<'_>, drawing: &Drawing, title: &str, told: &str) -> Markup {
    let items = legend(sheet, drawing);
    let rows = items.len().div_ceil(3) as f64;
    let legend_mm = drawing.paper.plot_mm[1][1] + AXIS_MM + ROW_MM;
    let height_mm = legend_mm + (rows + 0.6) * ROW_MM;
    let view = format!("0 0 {} {}", WIDTH_MM, mm(height_mm));
    let letters = format!("font-size:{LETTERS_MM}px");
    html! {
        svg xmlns="http://www.w3.org/2000/svg" role="img" aria-labelledby="plan-title plan-told"
            width={ (WIDTH_MM) "mm" } height={ (mm(height_mm)) "mm" } viewBox=(view) style=(letters) {
            title id="plan-title" { (title) }
            desc id="plan-told" { (told) }
            (patterns(drawing))
            g clip-path="url(#plot)" {
                (floor(sheet, drawing))
                (regions(drawing))
                (people(drawing))
                (points(drawing))
            }
            (axes(drawing))
            (labels(drawing))
            (bar(drawing, legend_mm - 0.4 * ROW_MM))
            @for (n, (sample, name)) in items.iter().enumerate() {
                @let at = [(n % 3) as f64 * COLUMN_MM + 1.0, legend_mm + ((n / 3) as f64 + 0.9) * ROW_MM];
                g transform=(format!("translate({} {})", mm(at[0]), mm(at[1]))) {
                    (sample)
                    text x="9.5" y=(mm(0.36 * LETTERS_MM)) { (name) }
                }
            }
        }
    }
}

/// Thousandths of a millimetre are plenty.
pub(super) fn mm(value_mm: f64) -> String {
    let text = format!("{value_mm:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".into() } else { text.to_owned() }
}

fn points_of(corners_mm: &[[f64; 2]]) -> String {
    let corners = corners_mm.iter().map(|[x, y]| format!("{},{}", mm(*x), mm(*y)));
    corners.collect::<Vec<String>>().join(" ")
}

fn patterns(drawing: &Drawing) -> Markup {
    let [from, to] = drawing.paper.plot_mm;
    html! {
        defs {
            pattern id="stripes" width="2.4" height="2.4" patternUnits="userSpaceOnUse"
                patternTransform="rotate(45)" {
                line class="stripe" x1="0" y1="0" x2="0" y2="2.4" {}
            }
            pattern id="dots" width="2.6" height="2.6" patternUnits="userSpaceOnUse" {
                circle class="dot" cx="0.7" cy="0.7" r="0.2" {}
                circle class="dot" cx="2" cy="2" r="0.2" {}
            }
            clipPath id="plot" {
                rect x=(mm(from[0])) y=(mm(from[1])) width=(mm(PLOT_MM[0])) height=(mm(to[1] - from[1])) {}
            }
            clipPath id="walls" { (hall(drawing, "")) }
        }
    }
}

fn hall(drawing: &Drawing, class: &str) -> Markup {
    let [[left, bottom], [right, top]] = drawing.hall_mm;
    html! {
        rect class=(class) x=(mm(left)) y=(mm(top)) width=(mm(right - left)) height=(mm(bottom - top)) {}
    }
}

fn floor(sheet: &Sheet<'_>, drawing: &Drawing) -> Markup {
    let catch = &sheet.hall.catch;
    // One that is everywhere ends at the walls.
    let measured = catch.length_m.is_some() && catch.width_m.is_some();
    let clip = (!measured).then_some("url(#walls)");
    html! {
        @if let Some(corners_mm) = &drawing.catch_mm {
            g clip-path=[clip] { polygon id="catch" class="catch" points=(points_of(corners_mm)) {} }
        }
        polygon id="keep-out" class="keep-out" points=(points_of(&drawing.keep_out_mm)) {}
        g id="hall" { (hall(drawing, "hall")) }
    }
}

fn regions(drawing: &Drawing) -> Markup {
    html! {
        @for region in drawing.regions.iter().rev() {
            @let [x, y] = region.centre_mm;
            @let turn = format!("rotate({} {} {})", mm(-region.turned_deg), mm(x), mm(y));
            ellipse class=(if region.is_highest { "region" } else { "region lower" })
                cx=(mm(x)) cy=(mm(y)) rx=(mm(region.semi_axes_mm[0])) ry=(mm(region.semi_axes_mm[1]))
                transform=(turn) {}
        }
    }
}

fn people(drawing: &Drawing) -> Markup {
    html! {
        @for circle in &drawing.people {
            @let [x, y] = circle.centre_mm.map(mm);
            circle class="person" cx=(x) cy=(y) r=(mm(circle.radius_mm)) {}
            circle class="middle" cx=(x) cy=(y) r="0.45" {}
        }
    }
}

fn points(drawing: &Drawing) -> Markup {
    let [x, y] = drawing.release_mm;
    let turn_deg = clockwise_deg(drawing.release_mm, drawing.arrow_to_mm);
    html! {
        g id="release" transform=(format!("translate({} {}) rotate({})", mm(x), mm(y), mm(turn_deg))) {
            (release(13.0))
        }
        @if let Some([x, y]) = drawing.fault_mm {
            g id="fault" transform=(format!("translate({} {})", mm(x), mm(y))) { (cross()) }
        }
    }
}

fn release(arrow_mm: f64) -> Markup {
    let head = format!("{},0 {},-1.1 {},1.1", arrow_mm, arrow_mm - 2.8, arrow_mm - 2.8);
    html! {
        line class="halo" x1="0" y1="0" x2=(mm(arrow_mm)) y2="0" {}
        line class="arrow" x1="0" y1="0" x2=(mm(arrow_mm - 2.0)) y2="0" {}
        polygon class="head" points=(head) {}
        circle class="release" cx="0" cy="0" r="1.1" {}
        circle class="head" cx="0" cy="0" r="0.4" {}
    }
}

fn cross() -> Markup {
    html! {
        path class="cross-halo" d="M-1.3-1.3L1.3 1.3M-1.3 1.3L1.3-1.3" {}
        path class="cross" d="M-1.3-1.3L1.3 1.3M-1.3 1.3L1.3-1.3" {}
    }
}

fn axes(drawing: &Drawing) -> Markup {
    html! {
        @for tick in &drawing.ticks {
            @let [x, y] = tick.at_mm;
            @let beside = tick.taken.middle_mm[0] < x - 0.1;
            line class="tick" x1=(mm(x)) y1=(mm(y)) x2=(mm(if beside { x - 1.2 } else { x }))
                y2=(mm(if beside { y } else { y + 1.2 })) {}
            (centred(&tick.text, tick.taken.middle_mm))
        }
        @for (name, [x, y]) in drawing.axis_names() {
            g transform=(format!("translate({} {}) rotate({})", mm(x), mm(y), if name == "y, m" { -90 } else { 0 })) {
                (centred(name, [0.0, 0.0]))
            }
        }
    }
}

fn centred(text: &str, [x, y]: [f64; 2]) -> Markup {
    html! { text class="centred" x=(mm(x)) y=(mm(y + 0.36 * LETTERS_MM)) { (text) } }
}

fn labels(drawing: &Drawing) -> Markup {
    html! {
        @for [from, to] in drawing.labels.iter().filter_map(|label| label.leader_mm) {
            line class="leader" x1=(mm(from[0])) y1=(mm(from[1])) x2=(mm(to[0])) y2=(mm(to[1])) {}
        }
        @for label in &drawing.labels {
            @let (class, x) = match label.letters {
                Letters::From(x) => ("label", x),
                Letters::About(x) => ("label centred", x),
                Letters::UpTo(x) => ("label before", x),
            };
            @let y = label.taken.middle_mm[1];
            text class=(class) x=(mm(x)) y=(mm(y + 0.36 * LETTERS_MM)) { (words(&label.words, "tspan")) }
        }
    }
}

/// Two stretches of the scale bar, black and white.
fn bar(drawing: &Drawing, y_mm: f64) -> Markup {
    let part_m = step_m(drawing.paper.scale, BAR_MM);
    let part_mm = drawing.paper.length_mm(part_m);
    let left_mm = MARGIN_MM[0];
    html! {
        g id="scale-bar" {
            rect class="black" x=(mm(left_mm)) y=(mm(y_mm - 1.2)) width=(mm(part_mm)) height="1.2" {}
            rect class="white" x=(mm(left_mm + part_mm)) y=(mm(y_mm - 1.2)) width=(mm(part_mm)) height="1.2" {}
            @for (n, text) in ["0".to_owned(), height(part_m), height(2.0 * part_m) + " m"].iter().enumerate() {
                (centred(text, [left_mm + n as f64 * part_mm, y_mm - 3.1]))
            }
            text x=(mm(left_mm + 2.0 * part_mm + 7.0)) y=(mm(y_mm)) {
                "Scale 1:" (drawing.paper.scale) " when printed at 100 %"
            }
        }
    }
}

/// Samples, each 8 mm long, with their names.
fn legend(sheet: &Sheet<'_>, drawing: &Drawing) -> Vec<(Markup, &'static str)> {
    let swatch =
        |class: &str| html! { rect class=(class) x="0.5" y="-1.5" width="7" height="3" {} };
    let ring = |class: &str| html! { ellipse class=(class) cx="4" cy="0" rx="3.5" ry="1.5" {} };
    let mut items = vec![
        (html! { g transform="translate(0.5 0)" { (release(7.5)) } }, "release, along the launch"),
        (swatch("keep-out"), "keep-out area: nobody"),
        (swatch("hall"), "walls"),
    ];
    let highest = drawing.regions.last().is_some_and(|region| region.is_highest);
    if highest {
        items.push((ring("region"), "95 % region, highest release"));
    }
    if drawing.regions.len() > usize::from(highest) {
        items.push((ring("region lower"), "95 % regions, lower releases"));
    }
    match sheet.hall.catch.kind {
        CatchKind::Net => items.push((swatch("catch"), "net")),
        CatchKind::Mat => items.push((swatch("catch"), "mat")),
        CatchKind::Floor => {}
    }
    if drawing.fault_mm.is_some() {
        let sample = html! { g transform="translate(4 0)" { (cross()) } };
        items.push((sample, "end of the furthest fault"));
    }
    if !drawing.people.is_empty() {
        let sample = html! {
            circle class="person" cx="4" cy="0" r="1.5" {}
            circle class="middle" cx="4" cy="0" r="0.45" {}
        };
        items.push((sample, "people, with their room"));
    }
    items
}
