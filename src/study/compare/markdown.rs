//! A comparison as Markdown, fit for a comment on a pull request.

use std::fmt::Write as _;

use super::tables::{Cell, tables};
use super::{Comparison, Sections};
use crate::report::markdown::{prose, table};

/// Tables longer than this are folded away.
const FOLDED_FROM: usize = 16;

impl Comparison {
    /// Verdict first, then what changed; the sections, drawn in characters, folded away.
    pub fn markdown(&self, sections: &[Sections]) -> String {
        let mut text = format!("## {}: {}\n\n", prose(&self.after.flow), self.verdicts());
        for (word, side) in [("Before", &self.before), ("After", &self.after)] {
            let _ = writeln!(text, "- {word}: `{}`: {}", side.name, side.summary);
        }
        text.push('\n');
        if self.is_quiet() {
            text.push_str("Nothing changed but layout, comments and numerical noise.\n\n");
        }
        for part in tables(self) {
            let count = part.rows.len();
            let rows = part.rows.into_iter().map(|row| row.into_iter().map(written).collect());
            let table = table(part.head, rows);
            let _ = writeln!(text, "### {}\n", part.title);
            if count > FOLDED_FROM {
                let summary = format!("<summary>{count} rows</summary>");
                let _ = writeln!(text, "<details>{summary}\n\n{table}</details>\n");
            } else {
                text.push_str(&table);
            }
        }
        let _ = writeln!(text, "{}", self.counts());
        for section in sections.iter().filter(|section| section.differ()) {
            let _ = writeln!(
                text,
                "\n<details><summary>Section at {}, before and after</summary>\n\n```text\n{}```\n\n\
                 </details>",
                prose(&section.name),
                section.characters(false)
            );
        }
        text
    }
}

fn written(cell: Cell) -> String {
    match cell {
        Cell::Words(words) => prose(&words),
        Cell::Code(code) if code.is_empty() => code,
        Cell::Code(code) => format!("`{code}`"),
    }
}
