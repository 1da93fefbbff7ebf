//! The file system and standard input as a [`World`].

#![allow(clippy::disallowed_types, reason = "this is where the disk is")]

use std::fs::File;
use std::io::{self, Read};

use crate::world::{LARGEST_TEXT, World};

/// Files by path; `-` is standard input.
pub(crate) struct Disk;

impl World for Disk {
    fn read(&self, path: &str) -> io::Result<Vec<u8>> {
        // One byte more than allowed tells that there is more, without reading all of it.
        let limit = LARGEST_TEXT as u64 + 1;
        let mut bytes = Vec::new();
        if path == "-" {
            io::stdin().lock().take(limit).read_to_end(&mut bytes)?;
        } else {
            File::open(path)?.take(limit).read_to_end(&mut bytes)?;
        }
        Ok(bytes)
    }
}
