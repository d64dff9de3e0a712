//! The file system: read with a size cap, list a folder, write whole or not at all. Nothing else uses `std::fs`.
#![expect(clippy::disallowed_methods, reason = "this is the one file that may")]

use std::collections::BTreeSet;
use std::fs::{self, File};
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};
use std::sync::{Mutex, PoisonError};

use sha2::{Digest, Sha256};
use thiserror::Error;

mod draft;
pub use draft::Draft;

/// Largest file that is read, in bytes.
pub const SIZE_CAP: u64 = 64 * 1024 * 1024;

/// Why a file could not be read or written.
#[derive(Debug, Error)]
pub enum FileFault {
    /// Nothing of that name.
    #[error("there is no such file or folder")]
    NotFound,
    /// A folder where a file is needed.
    #[error("it is a folder, a file is needed")]
    IsFolder,
    /// A file where a folder is needed.
    #[error("it is a file, a folder is needed")]
    IsFile,
    /// The system refuses access.
    #[error("permission is denied")]
    NoPermission,
    /// Longer than [`SIZE_CAP`].
    #[error("it is larger than {} MiB", SIZE_CAP / (1024 * 1024))]
    TooLarge,
    /// Bytes that are not UTF-8.
    #[error("it is not UTF-8 text (first at line {line})")]
    NotUtf8 {
        /// Line of the first wrong byte.
        line: usize,
    },
    /// UTF-16, as some editors save it.
    #[error("it is UTF-16 text, UTF-8 is needed")]
    Utf16,
    /// A zero byte, which no text contains.
    #[error("it contains a zero byte at line {line}; it is no text file")]
    ZeroByte {
        /// Line of the first zero byte.
        line: usize,
    },
    /// A file that this very answer was computed from.
    #[error("it is one of the files that this answer was read from")]
    IsInput,
    /// Anything else.
    #[error("{0}")]
    Other(io::Error),
}

impl From<io::Error> for FileFault {
    fn from(error: io::Error) -> Self {
        match error.kind() {
            io::ErrorKind::NotFound => FileFault::NotFound,
            io::ErrorKind::PermissionDenied => FileFault::NoPermission,
            io::ErrorKind::IsADirectory => FileFault::IsFolder,
            io::ErrorKind::NotADirectory => FileFault::NotFound,
            _ => FileFault::Other(error),
        }
    }
}

impl FileFault {
    /// The way out.
    pub fn hint(&self) -> &'static str {
        match self {
            FileFault::NotFound => "check the name and the folder you are in",
            FileFault::IsFolder => "name a file in it",
            FileFault::IsFile => "name the folder it is in",
            FileFault::NoPermission => "check the rights of the file and of its folder",
            FileFault::TooLarge => "split it into several files",
            FileFault::NotUtf8 { .. } | FileFault::Utf16 => "save it as UTF-8 in your editor",
            FileFault::ZeroByte { .. } => "name a text file",
            FileFault::IsInput => "name another file: inputs are never written over",
            FileFault::Other(_) => "check the disk and the path",
        }
    }
}

/// A text file as it was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TextFile {
    /// Its text with `\n` line ends and without a byte order mark.
    pub text: String,
    /// SHA-256 of its bytes, lower case hexadecimal.
    pub sha256: String,
}

/// Reads a text file.
///
/// # Errors
/// Anything that [`FileFault`] lists.
pub fn read_text(path: &Path) -> Result<TextFile, FileFault> {
    let file = File::open(path)?;
    let about = file.metadata()?;
    if about.is_dir() {
        return Err(FileFault::IsFolder);
    }
    let mut bytes = Vec::with_capacity(about.len().min(SIZE_CAP) as usize + 1);
    // a pipe or a growing file has no length to trust
    file.take(SIZE_CAP + 1).read_to_end(&mut bytes)?;
    if bytes.len() as u64 > SIZE_CAP {
        return Err(FileFault::TooLarge);
    }
    remember_read(path);
    let sha256 = sha256_hex(&bytes);
    Ok(TextFile { text: decode(bytes)?, sha256 })
}

/// True places of the files read in this run: no answer is ever written over one of them.
static READ: Mutex<BTreeSet<PathBuf>> = Mutex::new(BTreeSet::new());

fn remember_read(path: &Path) {
    if let Ok(place) = fs::canonicalize(path) {
        READ.lock().unwrap_or_else(PoisonError::into_inner).insert(place);
    }
}

/// Refuses a file that was read in this run as the place of an answer, behind links too.
///
/// # Errors
/// [`FileFault::IsInput`].
pub fn refuse_input(path: &Path) -> Result<(), FileFault> {
    let read = READ.lock().unwrap_or_else(PoisonError::into_inner);
    match fs::canonicalize(path) {
        Ok(place) if read.contains(&place) => Err(FileFault::IsInput),
        _ => Ok(()),
    }
}

/// Text of a file's bytes: UTF-8, byte order mark dropped, every line end a `\n`.
fn decode(bytes: Vec<u8>) -> Result<String, FileFault> {
    if bytes.starts_with(&[0xFF, 0xFE]) || bytes.starts_with(&[0xFE, 0xFF]) {
        return Err(FileFault::Utf16);
    }
    let line_at = |bytes: &[u8], place: usize| 1 + bytes[..place].iter().filter(|b| **b == b'\n').count();
    if let Some(place) = bytes.iter().position(|byte| *byte == 0) {
        return Err(FileFault::ZeroByte { line: line_at(&bytes, place) });
    }
    let mut text = String::from_utf8(bytes).map_err(|error| {
        let place = error.utf8_error().valid_up_to();
        FileFault::NotUtf8 { line: line_at(error.as_bytes(), place) }
    })?;
    if text.starts_with('\u{FEFF}') {
        text.drain(..'\u{FEFF}'.len_utf8());
    }
    if text.contains('\r') {
        text = text.replace("\r\n", "\n").replace('\r', "\n");
    }
    Ok(text)
}

/// SHA-256 in lower case hexadecimal.
pub fn sha256_hex(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect()
}

/// Files `*.yaml` and `*.yml` of a folder, sorted by name; its sub-folders and hidden files are left alone.
///
/// # Errors
/// When the folder cannot be listed.
pub fn list_yaml(folder: &Path) -> Result<Vec<PathBuf>, FileFault> {
    if fs::metadata(folder)?.is_file() {
        return Err(FileFault::IsFile);
    }
    let mut found = Vec::new();
    for entry in fs::read_dir(folder)? {
        let path = entry?.path();
        let hidden = path.file_name().is_some_and(|name| name.as_encoded_bytes().starts_with(b"."));
        let yaml = path
            .extension()
            .is_some_and(|ending| ending.eq_ignore_ascii_case("yaml") || ending.eq_ignore_ascii_case("yml"));
        // a link that leads nowhere stays in: reading it will say so
        let skipped = fs::metadata(&path).is_ok_and(|about| !about.is_file());
        if yaml && !hidden && !skipped {
            found.push(path);
        }
    }
    found.sort();
    Ok(found)
}

/// True for a folder, also behind a link.
pub fn is_folder(path: &Path) -> bool {
    fs::metadata(path).is_ok_and(|about| about.is_dir())
}

/// The one true place of a path, for telling whether two paths are the same; the path itself when there is none.
pub fn true_place(path: &Path) -> PathBuf {
    fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf())
}

/// `base/relative` with `..` steps taken out where that names the same place: `budgets/../parts` is `parts`.
pub fn join(base: &Path, relative: &Path) -> PathBuf {
    let joined = base.join(relative);
    let mut tidy = PathBuf::new();
    for part in joined.components() {
        match part {
            std::path::Component::ParentDir
                if matches!(tidy.components().next_back(), Some(std::path::Component::Normal(_))) =>
            {
                tidy.pop();
            }
            std::path::Component::CurDir => {}
            other => tidy.push(other),
        }
    }
    if tidy.as_os_str().is_empty() {
        tidy.push(".");
    }
    let same = fs::canonicalize(&joined).ok().zip(fs::canonicalize(&tidy).ok()).is_none_or(|(a, b)| a == b);
    if same { tidy } else { joined }
}

/// Removes a file if it is there.
pub fn remove(path: &Path) {
    // nothing can be done, and nothing is lost, when it has gone already
    let _ = fs::remove_file(path);
}

/// Writes a file whole or not at all: see [`Draft`].
///
/// # Errors
/// When the folder does not exist or cannot be written, or the disk is full; the old file is then untouched.
pub fn write_whole(path: &Path, bytes: &[u8]) -> Result<(), FileFault> {
    let mut draft = Draft::begin(path)?;
    draft.write_all(bytes)?;
    draft.finish()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn folder() -> tempfile::TempDir {
        tempfile::tempdir().expect("a temporary folder")
    }

    #[test]
    fn text_is_made_plain_and_hashed_as_it_stands() {
        let folder = folder();
        let path = folder.path().join("a.yaml");
        fs::write(&path, b"\xEF\xBB\xBFa: 1\r\nb: 2\r").expect("written");
        let read = read_text(&path).expect("readable");
        assert_eq!(read.text, "a: 1\nb: 2\n");
        // FIPS 180-4, the one-block example "abc"
        assert_eq!(sha256_hex(b"abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
        assert_ne!(read.sha256, sha256_hex(read.text.as_bytes()));
    }

    #[test]
    fn what_is_no_text_is_refused() {
        let fault = |bytes: &[u8]| decode(bytes.to_vec()).expect_err("no text").to_string();
        assert_eq!(fault(b"a\nb\xFF"), "it is not UTF-8 text (first at line 2)");
        assert_eq!(fault(b"a\0"), "it contains a zero byte at line 1; it is no text file");
        assert_eq!(fault(b"\xFF\xFEa\0"), "it is UTF-16 text, UTF-8 is needed");
        let folder = folder();
        assert!(matches!(read_text(folder.path()), Err(FileFault::IsFolder)));
        assert!(matches!(read_text(&folder.path().join("none")), Err(FileFault::NotFound)));
        assert!(matches!(list_yaml(&folder.path().join("none")), Err(FileFault::NotFound)));
    }

    #[test]
    fn a_file_over_the_cap_is_refused() {
        let folder = folder();
        let path = folder.path().join("large.yaml");
        File::create(&path).and_then(|file| file.set_len(SIZE_CAP + 1)).expect("sparse file");
        assert!(matches!(read_text(&path), Err(FileFault::TooLarge)));
    }

    #[test]
    fn only_yaml_files_of_the_folder_itself_are_listed() {
        let folder = folder();
        for name in ["b.yml", "a.yaml", "c.txt", ".hidden.yaml"] {
            fs::write(folder.path().join(name), "").expect("written");
        }
        fs::create_dir(folder.path().join("deep.yaml")).expect("made");
        fs::write(folder.path().join("deep.yaml/x.yaml"), "").expect("written");
        #[cfg(unix)]
        std::os::unix::fs::symlink(folder.path(), folder.path().join("loop.yaml")).expect("linked");
        let names: Vec<_> = list_yaml(folder.path())
            .expect("listed")
            .iter()
            .map(|path| path.file_name().expect("named").to_string_lossy().into_owned())
            .collect();
        assert_eq!(names, ["a.yaml", "b.yml"]);
    }

    #[test]
    fn writing_replaces_whole_and_leaves_nothing_beside() {
        let folder = folder();
        let path = folder.path().join("out.json");
        write_whole(&path, b"one").expect("written");
        write_whole(&path, b"two").expect("replaced");
        assert_eq!(fs::read(&path).expect("read"), b"two");
        assert_eq!(fs::read_dir(folder.path()).expect("listed").count(), 1);
        assert!(matches!(write_whole(folder.path(), b"x"), Err(FileFault::IsFolder)));
        assert!(matches!(write_whole(&folder.path().join("no/out"), b"x"), Err(FileFault::NotFound)));
    }

    #[test]
    fn paths_lose_their_detours() {
        assert_eq!(join(Path::new("budgets"), Path::new("../parts")), Path::new("parts"));
        assert_eq!(join(Path::new(""), Path::new("../parts")), Path::new("../parts"));
        assert_eq!(join(Path::new("a"), Path::new("..")), Path::new("."));
        assert_eq!(join(Path::new("a"), Path::new("/b")), Path::new("/b"));
    }
}
