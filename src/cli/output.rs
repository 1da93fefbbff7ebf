//! Results to standard output or whole into a file, messages to standard error.

use std::fmt::Display;
use std::io::{self, ErrorKind, Write};
use std::path::Path;

use super::Exit;

/// A command that could not do its work.
#[derive(Debug)]
pub(crate) struct Failure {
    /// How the program ends.
    pub exit: Exit,
    /// What is said on standard error; one message may have many lines.
    pub message: String,
}

impl Failure {
    /// A check of the program on itself failed.
    pub fn internal(message: &dyn Display) -> Self {
        Self {
            exit: Exit::Internal,
            message: format!(
                "internal check failed, no figure is given: {message}\nPlease report the flow that \
                 shows it."
            ),
        }
    }

    /// The input or the command line cannot be used.
    pub fn unusable(message: impl Display) -> Self {
        Self { exit: Exit::Unusable, message: message.to_string() }
    }
}

/// Says a last message on standard error and hands back the exit status.
pub(crate) fn fail(exit: Exit, message: &dyn Display) -> Exit {
    tell(&format!("gapwright: {message}"));
    exit
}

/// Writes a message to standard error; a closed one is nobody's loss.
pub(crate) fn tell(message: &str) {
    let _ = writeln!(io::stderr().lock(), "{}", message.trim_end());
}

/// Writes a result to standard output, or to a file whole or not at all.
///
/// # Errors
/// When the file or its folder cannot be written.
pub(crate) fn emit(bytes: &[u8], file: Option<&Path>) -> Result<(), Failure> {
    let written = match file {
        None => io::stdout().lock().write_all(bytes),
        Some(path) => write_whole(bytes, path),
    };
    match written {
        // A reader that has seen enough (`| head`) is not an error.
        Err(error) if file.is_none() && error.kind() == ErrorKind::BrokenPipe => Ok(()),
        Err(error) => {
            let place = file.map_or("standard output".into(), |path| path.display().to_string());
            Err(Failure::unusable(format_args!("{place}: cannot be written: {error}")))
        }
        Ok(()) => Ok(()),
    }
}

/// A temporary file beside the target, renamed onto it once complete.
fn write_whole(bytes: &[u8], path: &Path) -> io::Result<()> {
    let folder = path.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or(Path::new("."));
    let mut file = new_file().tempfile_in(folder)?;
    file.write_all(bytes)?;
    // What replaces a file keeps that file's permissions.
    if let Ok(before) = path.metadata() {
        file.as_file().set_permissions(before.permissions())?;
    }
    file.as_file().sync_all()?;
    file.persist(path).map_err(|error| error.error)?;
    Ok(())
}

/// A file as any program makes one: a temporary file is its owner's alone unless asked otherwise;
/// the system takes away what the user's mask forbids.
#[cfg(unix)]
fn new_file() -> tempfile::Builder<'static, 'static> {
    use std::os::unix::fs::PermissionsExt;
    let mut builder = tempfile::Builder::new();
    builder.permissions(std::fs::Permissions::from_mode(0o666));
    builder
}

#[cfg(not(unix))]
fn new_file() -> tempfile::Builder<'static, 'static> {
    tempfile::Builder::new()
}
