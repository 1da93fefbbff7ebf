//! Cross-sections as pictures: colours, one panel, a film strip of panels, SVG and PNG.

mod canvas;
mod characters;
mod palette;
mod panel;
mod panels;
mod png;
mod strip;

pub use characters::characters;
pub use palette::{Fill, Pattern, fills};
pub use panel::{Marks, Panel};
pub use panels::{cell_name, panels};
pub use png::{PngError, png};
pub use strip::{frames, legend_of, strip};
