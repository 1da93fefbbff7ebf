//! What changed in the text, statement by statement.
//!
//! Layout, comments and the order of clauses count nothing: statements are compared as `tidy`
//! prints them. A step is known by its operation number, a net, split or row by its name, all
//! else by its first word: equal statements of one key are paired first, the rest in order. Of the
//! statements that both texts have, the least number that moved is told (the others are a longest
//! rising sequence; Schensted, Can. J. Math. 13, 179 (1961)).

use super::{Edit, StatementChange, Written};
use crate::source::Source;
use crate::syntax::{self, Change as Split, Content, Section, Statement, WaferStatement};

/// A statement as compared.
#[derive(Debug, Clone, PartialEq)]
struct Entry {
    section: Option<&'static str>,
    key: String,
    written: Written,
}

/// The statements that differ, in the order of the newer text, each gone one at its section's end.
pub(super) fn changes(before: &Source, after: &Source) -> Vec<StatementChange> {
    let (before, after) = (entries(before), entries(after));
    let partner = partners(&before, &after);
    let stay = staying(&after, &partner);
    let mut changes = Vec::new();
    for (at, entry) in after.iter().enumerate() {
        let old = partner[at].map(|old| &before[old]);
        let edit = match old {
            None => Some(Edit::Added),
            Some(old) if old.key != entry.key => Some(Edit::Renumbered),
            Some(old) if old.written.text != entry.written.text => Some(Edit::Changed),
            Some(_) => (!stay[at]).then_some(Edit::Moved),
        };
        changes.extend(edit.map(|edit| change(edit, old, Some(entry))));
    }
    let kept: Vec<usize> = partner.iter().flatten().copied().collect();
    let gone = before.iter().enumerate().filter(|(at, _)| !kept.contains(at));
    changes.extend(gone.map(|(_, entry)| change(Edit::Removed, Some(entry), None)));
    changes.sort_by_key(|change| section_rank(change.section.as_deref()));
    changes
}

fn change(edit: Edit, before: Option<&Entry>, after: Option<&Entry>) -> StatementChange {
    let known = after.or(before);
    StatementChange {
        section: known.and_then(|entry| entry.section).map(str::to_owned),
        key: known.map_or(String::new(), |entry| entry.key.clone()),
        edit,
        before: before.map(|entry| entry.written.clone()),
        after: after.map(|entry| entry.written.clone()),
    }
}

/// Sections in the order of the grammar.
fn section_rank(section: Option<&str>) -> usize {
    const ORDER: &[&str] = &["wafer", "steps", "splits", "nets", "limits", "waivers"];
    section.map_or(0, |name| 1 + ORDER.iter().position(|s| *s == name).unwrap_or(ORDER.len()))
}

/// For each statement of the newer text the older one that it was.
fn partners(before: &[Entry], after: &[Entry]) -> Vec<Option<usize>> {
    let mut partner = vec![None; after.len()];
    let mut taken = vec![false; before.len()];
    let same: [fn(&Entry, &Entry) -> bool; 3] = [
        |a, b| a.key == b.key && a.written.text == b.written.text,
        |a, b| a.key == b.key,
        |a, b| a.section == Some("steps") && rest(a) == rest(b),
    ];
    for same in same {
        for (at, entry) in after.iter().enumerate() {
            let fits = |&old: &usize| {
                !taken[old] && before[old].section == entry.section && same(&before[old], entry)
            };
            if partner[at].is_none()
                && let Some(old) = (0..before.len()).find(fits)
            {
                taken[old] = true;
                partner[at] = Some(old);
            }
        }
    }
    partner
}

/// A step without its number.
fn rest(entry: &Entry) -> &str {
    entry.written.text.split_once(' ').map_or("", |(_, rest)| rest)
}

/// Whether a statement keeps its place among those that both texts have.
fn staying(after: &[Entry], partner: &[Option<usize>]) -> Vec<bool> {
    // Best chain that ends at each statement, and the one before it in that chain.
    let mut length = vec![0_usize; after.len()];
    let mut previous = vec![None; after.len()];
    for at in 0..after.len() {
        let Some(old) = partner[at] else { continue };
        length[at] = 1;
        for earlier in 0..at {
            if partner[earlier].is_some_and(|p| p < old) && length[earlier] >= length[at] {
                length[at] = length[earlier] + 1;
                previous[at] = Some(earlier);
            }
        }
    }
    let mut stay = vec![false; after.len()];
    let mut end = (0..after.len()).rev().max_by_key(|&at| length[at]);
    while let Some(at) = end {
        stay[at] = true;
        end = previous[at];
    }
    stay
}

fn entries(source: &Source) -> Vec<Entry> {
    let (tree, _) = syntax::parse(source);
    let mut section = None;
    let mut entries = Vec::new();
    for line in &tree.lines {
        match &line.content {
            Content::Section(opened) => section = Some(*opened),
            Content::Statement(statement) => entries.push(Entry {
                section: section.map(Section::word),
                key: key(statement),
                written: Written {
                    line: source.position(line.tokens_span().start).line,
                    text: syntax::line_text(&source.text, line),
                },
            }),
            Content::Blank | Content::Broken(_) => {}
        }
    }
    entries
}

/// What a statement is known by.
fn key(statement: &Statement) -> String {
    match statement {
        Statement::Use(_) => "use".to_owned(),
        Statement::Flow { .. } => "flow".to_owned(),
        Statement::Wafer(WaferStatement::Row(row)) => format!("row {}", row.name.value),
        Statement::Wafer(wafer) => wafer.word().to_owned(),
        Statement::Step(step) => step.op.text.clone(),
        Statement::Split(split) => {
            let what = match &split.change {
                Split::Step(op, _) | Split::Skip(op) => op.text.as_str(),
                Split::Wafer(wafer) => wafer.word(),
            };
            format!("{} {what}", split.name.value)
        }
        Statement::Net(net) => net.name.value.clone(),
        Statement::NextLevel(_) => "next-level".to_owned(),
        Statement::Limit(limit) => match &limit.bound {
            Some(bound) => {
                format!("{} {}", limit.subject.value, if bound.at_most { "<=" } else { ">=" })
            }
            None => limit.subject.value.clone(),
        },
        Statement::Waiver(waiver) => waiver.rule.value.clone(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn told(before: &str, after: &str) -> Vec<(Edit, String)> {
        let source = |text: &str| Source::new("a", format!("flow a\n{text}"));
        let all = changes(&source(before), &source(after));
        all.into_iter().map(|change| (change.edit, change.key)).collect()
    }

    const STEPS: &str = "steps\n 010 etch 90 nm SiCOH by rie\n 020 deposit 3 nm SiCN by ald\n 030 seal 95 nm SiO2 by cvd\n";

    #[test]
    fn layout_and_comments_count_nothing() {
        let loose = "steps # the steps\n\n 010   etch  90nm SiCOH by rie # deep\n 020 deposit 3 nm SiCN \\\n by ald\n 030 seal 95 nm SiO2 by cvd\n";
        assert_eq!(told(STEPS, loose), []);
    }

    #[test]
    fn steps_are_known_by_their_number() {
        let changed = STEPS.replace("95", "80").replace(" 020 deposit 3 nm SiCN by ald\n", "");
        let wanted = [(Edit::Changed, "030".to_owned()), (Edit::Removed, "020".to_owned())];
        assert_eq!(told(STEPS, &changed), wanted);
        assert_eq!(
            told(STEPS, &STEPS.replace("020", "025")),
            [(Edit::Renumbered, "025".to_owned())]
        );
    }

    #[test]
    fn the_least_number_of_moved_statements_is_told() {
        let moved = "steps\n 030 seal 95 nm SiO2 by cvd\n 010 etch 90 nm SiCOH by rie\n 020 deposit 3 nm SiCN by ald\n";
        assert_eq!(told(STEPS, moved), [(Edit::Moved, "030".to_owned())]);
    }

    #[test]
    fn a_film_put_between_others_is_added_alone() {
        let before = "wafer\n film 20 nm SiCN\n film 60 nm SiCOH\n";
        let after = "wafer\n film 20 nm SiCN\n film 5 nm SiN\n film 60 nm SiCOH\n";
        assert_eq!(told(before, after), [(Edit::Added, "film".to_owned())]);
    }
}
