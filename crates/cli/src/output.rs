//! Where data go: standard output, or a file that is written whole or not at all.
//!
//! A verb computes first and hands its bytes over last. A file is written beside its target
//! and renamed; what is no ordinary file (a pipe, a device) is written straight. A reader that
//! closed the pipe has had enough: that is no error.

use std::fs::{self, File, OpenOptions};
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};

/// Where data go.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Target {
    /// Standard output.
    Standard,
    /// A file.
    File(PathBuf),
}

impl Target {
    /// The target that `-o` names; standard output where it is `-` or left out.
    pub fn of(path: Option<&Path>) -> Self {
        match path {
            None => Target::Standard,
            Some(path) if path.as_os_str() == "-" => Target::Standard,
            Some(path) => Target::File(path.to_owned()),
        }
    }

    /// Writes all of it.
    pub fn write(&self, bytes: &[u8]) -> io::Result<()> {
        match self {
            Target::Standard => standard(bytes),
            Target::File(path) => file(path, bytes),
        }
    }
}

fn standard(bytes: &[u8]) -> io::Result<()> {
    let mut out = io::stdout().lock();
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Err(e) if e.kind() == ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

fn file(path: &Path, bytes: &[u8]) -> io::Result<()> {
    // A link is followed, so that it stays a link and its target gets the data.
    let path = fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    match fs::metadata(&path) {
        Ok(known) if known.is_dir() => {
            Err(io::Error::new(ErrorKind::IsADirectory, "it is a folder"))
        }
        Ok(known) if !known.is_file() => straight(&path, bytes),
        _ => whole(&path, bytes),
    }
}

fn straight(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let mut out = OpenOptions::new().write(true).open(path)?;
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Err(e) if e.kind() == ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

fn whole(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let folder = path
        .parent()
        .filter(|p| !p.as_os_str().is_empty())
        .unwrap_or(Path::new("."));
    let mut builder = tempfile::Builder::new();
    builder.prefix(".pulsewright-");
    let permissions = fs::metadata(path).ok().map(|m| m.permissions());
    let mut written = beside(&mut builder, folder)?;
    written.write_all(bytes)?;
    if let Some(permissions) = permissions {
        written.as_file().set_permissions(permissions)?;
    }
    File::sync_all(written.as_file())?;
    written.persist(path).map(|_| ()).map_err(|e| e.error)
}

/// A temporary file in the folder, with what the umask leaves of 0666.
#[cfg(unix)]
fn beside(
    builder: &mut tempfile::Builder<'_, '_>,
    folder: &Path,
) -> io::Result<tempfile::NamedTempFile> {
    use std::os::unix::fs::PermissionsExt;
    builder
        .permissions(fs::Permissions::from_mode(0o666))
        .tempfile_in(folder)
}

#[cfg(not(unix))]
fn beside(
    builder: &mut tempfile::Builder<'_, '_>,
    folder: &Path,
) -> io::Result<tempfile::NamedTempFile> {
    builder.tempfile_in(folder)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_is_replaced_whole() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("shot.json");
        fs::write(&path, "old and much longer").unwrap();
        Target::of(Some(&path)).write(b"new").unwrap();
        assert_eq!(fs::read(&path).unwrap(), b"new");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_folder_is_no_target() {
        let folder = tempfile::tempdir().unwrap();
        assert!(Target::of(Some(folder.path())).write(b"x").is_err());
    }

    #[test]
    fn a_dash_is_standard_output() {
        assert_eq!(Target::of(Some(Path::new("-"))), Target::Standard);
    }
}
