//! The sheet as one page of HTML that is well-formed XML, too.

use maud::{DOCTYPE, Markup, PreEscaped, html};

use super::Sheet;
use super::contents::{Block, Page, Section, Table, contents};
use super::svg::svg;
use super::words::{Piece, Words};

const STYLE: &str = include_str!("style.css");

/// The whole page.
pub(super) fn page(sheet: &Sheet<'_>) -> String {
    let (title, sections) = contents(sheet);
    let page = html! {
        (DOCTYPE)
        html lang="en" {
            head {
                // Elements that hold nothing are closed, as XML asks for.
                (PreEscaped("<meta charset=\"utf-8\"/>"))
                (PreEscaped("<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\"/>"))
                title { (plain(&title)) }
                style { (PreEscaped(STYLE)) }
            }
            body {
                main {
                    h1 { (words(&title, "bdi")) }
                    @for part in &sections { (section(sheet, part)) }
                }
            }
        }
    };
    page.into_string() + "\n"
}

fn section(sheet: &Sheet<'_>, section: &Section) -> Markup {
    let class = match section.page {
        Page::Together => "together",
        Page::New => "new-page",
        Page::Flows => "flows",
    };
    let is_drawn = section.blocks.iter().any(|block| matches!(block, Block::Plan { .. }));
    html! {
        section class=(class) {
            // The drawing says its name itself.
            @if !section.heading.0.is_empty() && !is_drawn { h2 { (words(&section.heading, "bdi")) } }
            @for part in &section.blocks { (block(sheet, part)) }
        }
    }
}

fn block(sheet: &Sheet<'_>, block: &Block) -> Markup {
    html! {
        @match block {
            Block::Text(told) => p { (words(told, "bdi")) },
            Block::Verdict { holds, words: told } => {
                p class=(if *holds { "verdict" } else { "verdict not" }) { (words(told, "bdi")) }
            },
            Block::Facts(list) => dl {
                @for (name, told) in list { div { dt { (name) } dd { (words(told, "bdi")) } } }
            },
            Block::ToFill(names) => ul class="to-fill" {
                @for name in names { li { span { (name) } span class="line" {} } }
            },
            Block::Short(list) => ul class="short" { @for told in list { li { (words(told, "bdi")) } } },
            Block::List(list) => ul { @for told in list { li { (words(told, "bdi")) } } },
            Block::Table(rows) => (table(rows, "")),
            Block::Plan { title, told, drawing } => {
                figure { (svg(sheet, drawing, title, told)) }
            },
            Block::Rung { name, about, table: rows, limits } => (rung(name, about, rows, limits)),
        }
    }
}

fn rung(name: &Words, about: &Words, rows: &Table, limits: &Words) -> Markup {
    html! {
        div class="rung" {
            h3 { (words(name, "bdi")) span { (words(about, "bdi")) } }
            (table(rows, "seen"))
            div class="go-on" {
                p { (words(limits, "bdi")) }
                p class="tick" { span class="box" {} " go on" span class="initials" { "initials" } }
            }
        }
    }
}

fn table(table: &Table, class: &str) -> Markup {
    html! {
        div class="wide" {
            table class=(class) {
                thead { tr { @for name in &table.columns { th scope="col" { (words(name, "bdi")) } } } }
                tbody {
                    @for row in &table.rows {
                        tr { @for (n, cell) in row.iter().enumerate() {
                            @if n == 0 { th scope="row" { (words(cell, "bdi")) } }
                            @else { td { (words(cell, "bdi")) } }
                        } }
                    }
                }
            }
        }
    }
}

/// Words, with names set apart from what is beside them.
///
/// - `apart`: the element for it, "bdi" or, within a drawing, "tspan"
pub(super) fn words(words: &Words, apart: &str) -> Markup {
    html! {
        @for piece in &words.0 {
            @match piece {
                // A number isn't torn from its sign.
                Piece::Plain(text) => (text.replace(" %", "\u{a0}%")),
                Piece::Name(name) if apart == "tspan" => tspan class="name" { (name) },
                Piece::Name(name) => bdi { (name) },
                Piece::Exact(text) => code { (text) },
            }
        }
    }
}

fn plain(words: &Words) -> String {
    let of = |piece: &Piece| match piece {
        Piece::Plain(text) | Piece::Name(text) | Piece::Exact(text) => text.clone(),
    };
    words.0.iter().map(of).collect()
}
