//! A point of the section and an upright box around points.

use crate::num::tolerance::GRID_PER_NM;

/// A point of the section, or a vector between two, in nm: x across the lines, z up.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Point {
    /// Across the lines, in nm.
    pub x: f64,
    /// Upward, in nm; 0 is the line bottom.
    pub z: f64,
}

impl Point {
    /// The point (x, z), in nm.
    pub const fn new(x: f64, z: f64) -> Self {
        Self { x, z }
    }

    /// The nearest point of the polygon grid.
    pub fn snapped(self) -> Self {
        let snap = |v: f64| (v * GRID_PER_NM).round() / GRID_PER_NM;
        Self::new(snap(self.x), snap(self.z))
    }

    /// z-component of the cross product `self × other`: positive when `other` lies to the left.
    pub fn cross(self, other: Self) -> f64 {
        self.x * other.z - self.z * other.x
    }

    /// Scalar product.
    pub fn dot(self, other: Self) -> f64 {
        self.x * other.x + self.z * other.z
    }

    /// Length of the vector, in nm.
    pub fn norm(self) -> f64 {
        self.x.hypot(self.z)
    }

    /// Distance to another point, in nm.
    pub fn distance(self, other: Self) -> f64 {
        (other - self).norm()
    }

    /// Distance to the segment from `a` to `b`, in nm.
    pub fn distance_to_segment(self, a: Self, b: Self) -> f64 {
        let along = b - a;
        let length2 = along.dot(along);
        if length2 == 0.0 {
            return self.distance(a);
        }
        let t = ((self - a).dot(along) / length2).clamp(0.0, 1.0);
        self.distance(a + along * t)
    }
}

impl std::ops::Add for Point {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self::new(self.x + other.x, self.z + other.z)
    }
}

impl std::ops::Sub for Point {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        Self::new(self.x - other.x, self.z - other.z)
    }
}

impl std::ops::Mul<f64> for Point {
    type Output = Self;
    fn mul(self, factor: f64) -> Self {
        Self::new(self.x * factor, self.z * factor)
    }
}

/// An upright box, in nm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bounds {
    /// Lower left corner.
    pub min: Point,
    /// Upper right corner.
    pub max: Point,
}

impl Bounds {
    /// The smallest box around some points; `None` when there are none.
    pub fn around(points: impl IntoIterator<Item = Point>) -> Option<Self> {
        points.into_iter().fold(None, |bounds, p| {
            let Self { min, max } = bounds.unwrap_or(Self { min: p, max: p });
            Some(Self {
                min: Point::new(min.x.min(p.x), min.z.min(p.z)),
                max: Point::new(max.x.max(p.x), max.z.max(p.z)),
            })
        })
    }
}
