//! A revision of a git repository as a [`World`]: files are read from its objects, nothing is
//! checked out.
//!
//! It asks the `git` program, which is there wherever a repository is worked in, and which knows
//! every object format, replacement and partial clone that a repository may have; a library would
//! add a hundred crates for two questions.

use std::ffi::OsStr;
use std::io::{self, Read};
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use super::output::Failure;
use crate::world::{LARGEST_TEXT, World};

/// The files of one commit.
pub(super) struct Revision {
    /// Folder from which relative paths count: that of the flow.
    folder: PathBuf,
    /// The commit, in full.
    commit: String,
}

impl Revision {
    /// The commit that a revision names, in the repository that holds `flow`.
    ///
    /// # Errors
    /// When git is not there, the flow lies in no repository, or the revision names no commit.
    pub(super) fn find(flow: &str, revision: &str) -> Result<Self, Failure> {
        let folder = Path::new(flow).parent().filter(|p| !p.as_os_str().is_empty());
        let folder = folder.unwrap_or(Path::new(".")).to_path_buf();
        let commit = format!("{revision}^{{commit}}");
        let arguments = ["rev-parse", "--verify", "--quiet", "--end-of-options", &commit];
        let asked = git(&folder).args(arguments).output().map_err(|error| {
            Failure::unusable(format_args!("`--since` needs git, which cannot be run: {error}"))
        })?;
        if asked.status.success() {
            let commit = String::from_utf8_lossy(&asked.stdout).trim().to_owned();
            return Ok(Self { folder, commit });
        }
        let said = String::from_utf8_lossy(&asked.stderr).trim().to_owned();
        let why = if said.is_empty() { "it names no commit".to_owned() } else { said };
        Err(Failure::unusable(format_args!("revision `{revision}`: {why}")))
    }

    /// The path as git finds it: from the folder of the flow.
    fn within(&self, path: &str) -> String {
        let path = Path::new(path);
        let inside = path.strip_prefix(&self.folder).unwrap_or(path);
        format!("{}:./{}", self.commit, inside.to_string_lossy().replace('\\', "/"))
    }
}

impl World for Revision {
    fn read(&self, path: &str) -> io::Result<Vec<u8>> {
        let object = self.within(path);
        let mut child = git(&self.folder)
            .args(["cat-file", "blob", &object])
            .stdin(Stdio::null())
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()?;
        let mut bytes = Vec::new();
        if let Some(stdout) = child.stdout.take() {
            // One byte more than allowed tells that there is more, without reading all of it.
            stdout.take(LARGEST_TEXT as u64 + 1).read_to_end(&mut bytes)?;
        }
        let ended = child.wait()?;
        if ended.success() || bytes.len() > LARGEST_TEXT {
            return Ok(bytes);
        }
        let short: String = self.commit.chars().take(12).collect();
        Err(io::Error::new(io::ErrorKind::NotFound, format!("not in revision {short}")))
    }
}

fn git(folder: &Path) -> Command {
    let mut command = Command::new("git");
    command.arg("-C").arg(folder.as_os_str()).env("LC_ALL", OsStr::new("C"));
    command
}
