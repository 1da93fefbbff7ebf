//! A comparison as one self-contained page: the sections that differ side by side, then the tables.

use maud::{Markup, PreEscaped, html};

use super::tables::{Cell, Table, tables};
use super::{Comparison, Sections};
use crate::report::Verdict;
use crate::report::html::document;

/// Largest width and height of a picture, and width of a legend, in pixels.
const PICTURE_PX: [f64; 2] = [520.0, 520.0];
const LEGEND_PX: f64 = 520.0;

impl Comparison {
    /// The whole page.
    pub fn html(&self, sections: &[Sections]) -> String {
        let class = match self.after.verdict {
            Verdict::Pass => "good",
            Verdict::Fail => "bad",
            Verdict::Undecided => "doubtful",
        };
        let body = html! {
            header {
                p.verdict.(class) role="status" { (self.verdicts()) }
                h1 { (self.after.flow) ": before and after" }
                @for (word, side) in [("Before", &self.before), ("After", &self.after)] {
                    p.faint { (word) ": " code { (side.name) } " · " (side.summary) }
                }
            }
            main {
                @if self.is_quiet() {
                    p { "Nothing changed but layout, comments and numerical noise." }
                }
                @for sections in sections.iter().filter(|s| s.differ()) { (pictures(sections)) }
                @let same: Vec<&str> =
                    sections.iter().filter(|s| !s.differ()).map(|s| s.name.as_str()).collect();
                @if !same.is_empty() { p.faint { "The same section: " (same.join("; ")) } }
                @for table in tables(self) { (section(&table)) }
                p.faint { (self.counts()) }
            }
        };
        document(&format!("{}: before and after", self.after.flow), &body, None)
    }
}

fn section(table: &Table) -> Markup {
    html! {
        section {
            h2 { (table.title) }
            div.scroll tabindex="0" role="group" aria-label=(table.title) {
                table {
                    thead { tr { @for name in table.head { th scope="col" { (name) } } } }
                    tbody {
                        @for row in &table.rows {
                            tr { @for cell in row { td { (told(cell)) } } }
                        }
                    }
                }
            }
        }
    }
}

fn told(cell: &Cell) -> Markup {
    match cell {
        Cell::Words(words) => html! { (words) },
        Cell::Code(code) => html! { code { (code) } },
    }
}

fn pictures(sections: &Sections) -> Markup {
    html! {
        section {
            h2 { "Section at " (sections.name) }
            div.beside {
                @for (title, picture) in sections.pictures(PICTURE_PX) {
                    figure { figcaption { strong { (title) } } (PreEscaped(picture)) }
                }
            }
            div.legend { (PreEscaped(sections.legend(LEGEND_PX))) }
        }
    }
}
