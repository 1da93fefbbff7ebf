//! The finished sections of both flows, space by space.

use super::Judged;
use crate::report::drawing::{self, Panel};
use crate::report::html::Grown;

/// One cell of one variant, before and after.
pub struct Sections<'a> {
    /// Its spaces and split.
    pub name: String,
    /// As it was.
    pub before: Option<Panel<'a>>,
    /// As it is.
    pub after: Option<Panel<'a>>,
}

/// Pairs the finished sections of both by their spaces and split.
pub fn sections<'a>(
    before: (Judged<'a>, &[Grown<'a>]),
    after: (Judged<'a>, &[Grown<'a>]),
) -> Vec<Sections<'a>> {
    let mut old = finished(before.0, before.1);
    let mut all = Vec::new();
    for (name, panel) in finished(after.0, after.1) {
        let at = old.iter().position(|(known, _)| *known == name);
        let before = at.map(|at| old.remove(at).1);
        all.push(Sections { name, before, after: Some(panel) });
    }
    all.extend(old.into_iter().map(|(name, panel)| Sections {
        name,
        before: Some(panel),
        after: None,
    }));
    all
}

fn finished<'a>(judged: Judged<'a>, grown: &[Grown<'a>]) -> Vec<(String, Panel<'a>)> {
    let cells = grown.iter().flat_map(|grown| {
        let variant = &judged.flow.variants[grown.variant];
        grown.cells.iter().map(move |cell| (variant, cell))
    });
    let last = |(variant, cell)| {
        let panels = drawing::panels(judged.flow, variant, judged.report, cell);
        Some((drawing::cell_name(variant, cell), panels.into_iter().next_back()?))
    };
    cells.filter_map(last).collect()
}

impl Sections<'_> {
    /// Whether there is a difference to see.
    pub(super) fn differ(&self) -> bool {
        match (&self.before, &self.after) {
            (Some(before), Some(after)) => before.section != after.section,
            _ => true,
        }
    }

    fn panels(&self) -> Vec<Panel<'_>> {
        let both = [(&self.before, "before"), (&self.after, "after")];
        let named = both
            .into_iter()
            .filter_map(|(panel, title)| Some(Panel { title: title.to_owned(), ..panel.clone()? }));
        named.collect()
    }

    /// Drawn in characters, side by side at one scale.
    pub(super) fn characters(&self, color: bool) -> String {
        drawing::characters(&self.panels(), color)
    }

    /// Drawn as SVG at one scale, with their titles.
    pub(super) fn pictures(&self, size_px: [f64; 2]) -> Vec<(String, String)> {
        let panels = self.panels();
        let titles = panels.iter().map(|panel| panel.title.clone());
        titles.zip(drawing::frames(&panels, size_px)).collect()
    }

    /// The legend of both.
    pub(super) fn legend(&self, width_px: f64) -> String {
        drawing::legend_of(&self.panels(), width_px)
    }
}
