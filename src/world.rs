//! What the world is to the program: a place to read texts from.
//!
//! Everything above reads through [`World`], so that the command line, the editor and the
//! tests share every line.

use std::collections::BTreeMap;
use std::io;

use crate::source::Source;

/// Largest text that is read, in bytes.
pub const LARGEST_TEXT: usize = 1 << 20;

/// A place to read texts from.
pub trait World {
    /// The bytes of a path; at most one more than [`LARGEST_TEXT`] are needed.
    ///
    /// # Errors
    /// Whatever the place says: not there, not readable.
    fn read(&self, path: &str) -> io::Result<Vec<u8>>;
}

/// Texts held in memory, by path.
#[derive(Debug, Clone, Default)]
pub struct Memory(pub BTreeMap<String, Vec<u8>>);

impl World for Memory {
    fn read(&self, path: &str) -> io::Result<Vec<u8>> {
        self.0.get(path).cloned().ok_or_else(|| io::ErrorKind::NotFound.into())
    }
}

/// Why a text could not be taken.
#[derive(Debug, thiserror::Error)]
pub enum ReadError {
    /// The place could not give it.
    #[error("{path}: cannot be read: {cause}")]
    Unreadable {
        /// Path asked for.
        path: String,
        /// What the place said.
        cause: io::Error,
    },
    /// Larger than [`LARGEST_TEXT`].
    #[error("{path}: larger than 1 MiB, the largest text that is read")]
    TooLarge {
        /// Path asked for.
        path: String,
    },
    /// Not UTF-8.
    #[error("{path}: not a text: byte {offset} (line {line}) is not UTF-8")]
    NotText {
        /// Path asked for.
        path: String,
        /// First byte that is not UTF-8, from 0.
        offset: usize,
        /// Its line, from 1.
        line: usize,
    },
}

/// Reads a text and names it in messages.
///
/// # Errors
/// When it cannot be read, is too large, or is not UTF-8.
pub fn read_text(world: &dyn World, path: &str, name: &str) -> Result<Source, ReadError> {
    let bytes =
        world.read(path).map_err(|cause| ReadError::Unreadable { path: name.to_owned(), cause })?;
    if bytes.len() > LARGEST_TEXT {
        return Err(ReadError::TooLarge { path: name.to_owned() });
    }
    match String::from_utf8(bytes) {
        Ok(text) => Ok(Source::new(name, text)),
        Err(error) => {
            let offset = error.utf8_error().valid_up_to();
            let line = error.as_bytes()[..offset].iter().filter(|&&b| b == b'\n').count() + 1;
            Err(ReadError::NotText { path: name.to_owned(), offset, line })
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_cannot_be_a_text_is_refused_with_its_place() {
        let world = Memory(BTreeMap::from([
            ("large".to_owned(), vec![b'#'; LARGEST_TEXT + 1]),
            ("binary".to_owned(), b"flow a\n\xff".to_vec()),
        ]));
        let message = |path| read_text(&world, path, path).unwrap_err().to_string();
        assert!(message("none").contains("cannot be read"));
        assert!(message("large").contains("1 MiB"));
        assert_eq!(message("binary"), "binary: not a text: byte 7 (line 2) is not UTF-8");
    }
}
