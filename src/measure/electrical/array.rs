//! The section that the field sees: seven lines of an array, a row as drawn.
//!
//! An array's cell is repeated by reflection at its walls, three to each side; the outermost walls stay
//! mirrors. Bodies of the copies are joined, the lines' own ones stay apart.

use crate::flow::{Below, Site, Variant};
use crate::geom::{Point, Region};
use crate::library::{Library, MaterialId};
use crate::measure::seal::roof_body;
use crate::sim::{Origin, Section};

/// Copies of an array's cell to each side of the middle one.
const COPIES: i32 = 3;

/// To whom a solid piece belongs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Owner {
    /// A layer of a line, both from 0.
    Line {
        /// From the left.
        line: usize,
        /// From below.
        layer: usize,
    },
    /// The liner of a line.
    Liner {
        /// From the left.
        line: usize,
    },
    /// Bulk or plane: held at zero where it conducts.
    Held,
    /// Nobody.
    Nobody,
}

/// One solid piece.
#[derive(Debug, Clone)]
pub(super) struct Piece {
    pub material: MaterialId,
    pub owner: Owner,
    pub region: Region,
}

/// The section that the field sees.
#[derive(Debug, Clone)]
pub(super) struct Array {
    /// Left and right mirror, in nm.
    pub x: [f64; 2],
    /// Lowest and highest solid, in nm.
    pub z: [f64; 2],
    /// Line top above the line bottom, in nm.
    pub line_top: f64,
    /// The line that the figures are of, from 0.
    pub middle: usize,
    /// Everything solid.
    pub pieces: Vec<Piece>,
    /// Each void with the material of its roof.
    pub voids: Vec<(Region, Option<MaterialId>)>,
    /// What the ambient reaches.
    pub ambient: Region,
}

impl Array {
    /// The lines around a site of a section; `None` for a section without solid.
    pub fn of(
        section: &Section,
        variant: &Variant,
        site: &Site,
        library: &Library,
    ) -> Option<Self> {
        let drawn = &section.drawn;
        let in_cell = drawn.lines.len();
        let (copies, middle) = match site {
            Site::Array { .. } => (-COPIES..=COPIES, COPIES as usize * in_cell),
            Site::Row { space, .. } => (0..=0, (*space - 1).min(in_cell - 1)),
        };
        let copies: Vec<_> = copies.map(|at| Copy { at, walls: drawn.walls }).collect();
        let everywhere = |region: &Region| {
            Region::union_all(copies.iter().map(|copy| copy.of(region)).collect::<Vec<_>>().iter())
        };
        let mut pieces = Vec::new();
        for body in &section.bodies {
            let piece = |owner, region| Piece { material: body.material, owner, region };
            match body.origin {
                Origin::Line { line, layer } => {
                    for (at, copy) in copies.iter().enumerate() {
                        let line = at * in_cell + copy.line(line, in_cell);
                        pieces.push(piece(Owner::Line { line, layer }, copy.of(&body.region)));
                    }
                }
                Origin::Liner(line) => {
                    for (at, copy) in copies.iter().enumerate() {
                        let line = at * in_cell + copy.line(line, in_cell);
                        pieces.push(piece(Owner::Liner { line }, copy.of(&body.region)));
                    }
                }
                Origin::Bulk => pieces.push(piece(Owner::Held, everywhere(&body.region))),
                Origin::Below(at) => {
                    let film = matches!(variant.wafer.below.get(at), Some(Below::Film(_)) | None);
                    let owner = if film { Owner::Nobody } else { Owner::Held };
                    pieces.push(piece(owner, everywhere(&body.region)));
                }
                Origin::Between | Origin::Over(_) | Origin::Step(_) => {
                    pieces.push(piece(Owner::Nobody, everywhere(&body.region)));
                }
            }
        }
        let bounds = pieces.iter().filter_map(|piece| piece.region.bounds());
        let (low, high) =
            bounds.map(|b| (b.min.z, b.max.z)).reduce(|a, b| (a.0.min(b.0), a.1.max(b.1)))?;
        let voids = section.voids.iter();
        let cell = drawn.walls[1] - drawn.walls[0];
        let first = copies.first()?.at;
        let last = copies.last()?.at;
        Some(Self {
            x: [drawn.walls[0] + f64::from(first) * cell, drawn.walls[1] + f64::from(last) * cell],
            z: [low, high],
            line_top: drawn.line_top,
            middle,
            voids: voids.map(|void| (everywhere(void), roof_of(section, void, library))).collect(),
            ambient: everywhere(&section.ambient()),
            pieces,
        })
    }
}

/// The material right above a void, where it insulates.
fn roof_of(section: &Section, void: &Region, library: &Library) -> Option<MaterialId> {
    let material = roof_body(section, void)?.material;
    (!library.material(material).kind.conducts()).then_some(material)
}

/// One copy of a cell: reflected at the walls `at` times to the right, negative to the left.
struct Copy {
    at: i32,
    walls: [f64; 2],
}

impl Copy {
    fn reflected(&self) -> bool {
        self.at.rem_euclid(2) == 1
    }

    fn of(&self, region: &Region) -> Region {
        let [left, right] = self.walls;
        let region =
            if self.reflected() { region.mirrored((left + right) / 2.0) } else { region.clone() };
        region.translated(Point::new(f64::from(self.at) * (right - left), 0.0))
    }

    /// Which of the copy's lines, from the left, a line of the cell becomes.
    fn line(&self, line: usize, in_cell: usize) -> usize {
        if self.reflected() { in_cell - 1 - line } else { line }
    }
}
