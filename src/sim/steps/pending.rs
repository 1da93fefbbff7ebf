//! The door of `front` that is not open yet: growth is not computed.

use super::super::error::Fault;
use crate::front::{Character, Growth, Resolution, Scene};

pub(super) fn grow(_: &Scene, _: &Character, _: f64, _: &Resolution) -> Result<Growth, Fault> {
    Err(Fault::NotComputed("growth"))
}
