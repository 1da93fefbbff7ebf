//! A comparison as text for a terminal.

use super::tables::{Cell as Told, tables};
use super::{Comparison, Sections};
use crate::report::Verdict;
use crate::report::columns::{Cell, columns};
use crate::report::paint::Paint;

impl Comparison {
    /// Verdict first, then what changed; with `sections`, these drawn in characters.
    pub fn text(&self, sections: &[Sections], color: bool) -> String {
        let paint = Paint { on: color };
        let verdicts = match self.after.verdict {
            Verdict::Pass => paint.good(&self.verdicts()),
            Verdict::Fail => paint.bad(&self.verdicts()),
            Verdict::Undecided => paint.doubtful(&self.verdicts()),
        };
        let mut text = format!("{verdicts}  {}\n", paint.heading(&self.after.flow));
        for (word, side) in [("before", &self.before), ("after ", &self.after)] {
            text.push_str(&format!(
                "      {word}  {}: {}\n",
                paint.faint(&side.name),
                side.summary
            ));
        }
        if self.is_quiet() {
            text.push_str("\n  nothing changed but layout, comments and numerical noise\n");
        }
        for table in tables(self) {
            let head = table.head.iter().map(|name| Cell::painted(name, |t| paint.faint(t)));
            let rows = table.rows.into_iter().map(|row| row.into_iter().map(cell).collect());
            let all: Vec<Vec<Cell>> = std::iter::once(head.collect()).chain(rows).collect();
            let title = paint.heading(&table.title.to_lowercase());
            text.push_str(&format!("\n  {title}\n{}", columns(&all, 4)));
        }
        text.push_str(&format!("\n  {}\n", self.counts()));
        for section in sections.iter().filter(|section| section.differ()) {
            text.push_str(&format!("\n  {}\n", paint.heading(&section.name)));
            text.push_str(&section.characters(color));
        }
        text
    }

    /// As JSON, two blanks a level, with a final newline.
    pub fn json(&self) -> String {
        // Every number is finite and every key a string: nothing here can fail.
        serde_json::to_string_pretty(self).expect("a comparison is always JSON") + "\n"
    }
}

fn cell(told: Told) -> Cell {
    match told {
        Told::Words(text) | Told::Code(text) => Cell::plain(text),
    }
}
