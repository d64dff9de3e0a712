//! A file that is being written: it gets its name only once it is whole.

use std::fs::{self, File};
use std::io::{self, BufWriter, Write};
use std::path::{Path, PathBuf};

use tempfile::NamedTempFile;

use super::FileFault;

/// A file on its way: a temporary file beside its goal until [`Draft::finish`]; dropped before that, it leaves nothing.
///
/// A device or a pipe, which cannot be replaced, is written directly.
#[derive(Debug)]
pub struct Draft {
    goal: PathBuf,
    way: Way,
}

#[derive(Debug)]
enum Way {
    Beside(BufWriter<NamedTempFile>),
    Straight(BufWriter<File>),
}

impl Draft {
    /// Starts a file.
    ///
    /// # Errors
    /// When the goal is a folder or protected, or its folder does not exist or cannot be written.
    pub fn begin(path: &Path) -> Result<Draft, FileFault> {
        // behind a link it is the link's goal that is replaced
        let goal = fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf());
        match fs::metadata(&goal) {
            Ok(about) if about.is_dir() => return Err(FileFault::IsFolder),
            Ok(about) if about.permissions().readonly() => return Err(FileFault::NoPermission),
            Ok(about) if !about.is_file() => {
                let device = fs::OpenOptions::new().write(true).open(&goal)?;
                return Ok(Draft { goal, way: Way::Straight(BufWriter::new(device)) });
            }
            _ => {}
        }
        if path.as_os_str().as_encoded_bytes().ends_with(b"/") {
            return Err(FileFault::IsFolder);
        }
        let beside = temporary_in(folder_of(&goal))?;
        Ok(Draft { goal, way: Way::Beside(BufWriter::new(beside)) })
    }

    /// The temporary file that has to go when the program ends in the middle.
    pub fn temporary(&self) -> Option<&Path> {
        match &self.way {
            Way::Beside(file) => Some(file.get_ref().path()),
            Way::Straight(_) => None,
        }
    }

    /// Gives the file its name.
    ///
    /// # Errors
    /// When the disk is full or the name cannot be taken; the old file is then untouched.
    pub fn finish(self) -> Result<(), FileFault> {
        let beside = match self.way {
            Way::Straight(mut device) => return Ok(device.flush()?),
            Way::Beside(file) => file.into_inner().map_err(io::IntoInnerError::into_error)?,
        };
        if let Ok(old) = fs::metadata(&self.goal) {
            beside.as_file().set_permissions(old.permissions())?;
        }
        beside.as_file().sync_all()?;
        beside.persist(&self.goal).map_err(|error| error.error)?;
        #[cfg(unix)]
        File::open(folder_of(&self.goal))?.sync_all()?;
        Ok(())
    }
}

impl Write for Draft {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        match &mut self.way {
            Way::Beside(file) => file.write(bytes),
            Way::Straight(device) => device.write(bytes),
        }
    }

    fn flush(&mut self) -> io::Result<()> {
        match &mut self.way {
            Way::Beside(file) => file.flush(),
            Way::Straight(device) => device.flush(),
        }
    }
}

fn folder_of(goal: &Path) -> &Path {
    match goal.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent,
        _ => Path::new("."),
    }
}

/// A temporary file that, once kept, has the rights of any new file.
fn temporary_in(folder: &Path) -> io::Result<NamedTempFile> {
    let mut builder = tempfile::Builder::new();
    builder.prefix(".lossbook-");
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    builder.tempfile_in(folder)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_draft_that_is_dropped_leaves_nothing() {
        let folder = tempfile::tempdir().expect("a temporary folder");
        let goal = folder.path().join("out.csv");
        let mut draft = Draft::begin(&goal).expect("begun");
        draft.write_all(b"half").expect("written");
        assert!(draft.temporary().is_some_and(Path::exists));
        drop(draft);
        assert_eq!(fs::read_dir(folder.path()).expect("listed").count(), 0);
    }

    #[test]
    fn a_protected_file_is_left_alone() {
        let folder = tempfile::tempdir().expect("a temporary folder");
        let goal = folder.path().join("out.csv");
        fs::write(&goal, "old").expect("written");
        let mut rights = fs::metadata(&goal).expect("there").permissions();
        rights.set_readonly(true);
        fs::set_permissions(&goal, rights).expect("protected");
        assert!(matches!(Draft::begin(&goal), Err(FileFault::NoPermission)));
        assert_eq!(fs::read(&goal).expect("read"), b"old");
        assert!(matches!(Draft::begin(&folder.path().join("new/")), Err(FileFault::IsFolder)));
    }
}
