//! Doors of `front` that are not open yet: what passes through them is not computed.

use super::super::error::Fault;
use crate::front::{Character, Erosion, Growth, Resolution, Scene};

pub(super) fn grow(_: &Scene, _: &Character, _: f64, _: &Resolution) -> Result<Growth, Fault> {
    Err(Fault::NotComputed("growth"))
}

pub(super) fn erode(_: &Scene, _: &Character, _: f64, _: &Resolution) -> Result<Erosion, Fault> {
    Err(Fault::NotComputed("removal"))
}

pub(super) fn depth_to_reach(
    _: &Scene,
    _: &Character,
    _: &[usize],
    _: f64,
    _: &Resolution,
) -> Result<Option<f64>, Fault> {
    Err(Fault::NotComputed("removal"))
}
