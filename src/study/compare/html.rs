//! A comparison as one self-contained page: the sections side by side, then the tables.

use maud::{Markup, PreEscaped, html};

use super::tables::{Cell, Table, tables};
use super::{Comparison, Sections};
use crate::report::Verdict;
use crate::report::html::document;

const WIDTH_PX: f64 = 420.0;

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
                @for table in tables(self) { (section(&table)) }
                p.faint { (self.counts()) }
                @for sections in sections { (pictures(sections)) }
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
            h2 { (sections.name) @if !sections.differ() { " (unchanged)" } }
            div.beside {
                @for (title, picture) in sections.pictures(WIDTH_PX) {
                    figure { figcaption { strong { (title) } } (PreEscaped(picture)) }
                }
            }
        }
    }
}
