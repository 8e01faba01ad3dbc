//! Writing results: to standard output, or to a file that appears whole or not at all.

use super::CliError;
use std::fs::File;
use std::io::{self, Write};
use std::path::Path;

/// Writes `bytes` to `path`, or to `out` without one.
///
/// A file is written beside its place under another name, then renamed, so that an error or a kill
/// leaves either the old file or the new one.
///
/// # Errors
/// [`CliError::Write`] with the reason.
pub fn deliver(path: Option<&Path>, bytes: &[u8], out: &mut dyn Write) -> Result<(), CliError> {
    match path {
        None => {
            out.write_all(bytes).and_then(|()| out.flush()).map_err(|source| CliError::Write { path: None, source })
        }
        Some(path) => replace(path, |file| file.write_all(bytes)),
    }
}

/// Whether writing to `path` means writing into it: a device or a pipe, whose place no file may take.
pub fn is_stream(path: &Path) -> bool {
    std::fs::metadata(path).is_ok_and(|metadata| !metadata.is_file() && !metadata.is_dir())
}

/// Lets `write` fill a file that then takes the place of `path`, or fill the device that `path` is.
///
/// # Errors
/// [`CliError::Write`] with the reason; `path` is then untouched.
pub fn replace(path: &Path, write: impl FnOnce(&mut File) -> io::Result<()>) -> Result<(), CliError> {
    try_replace(path, write).map_err(|source| CliError::Write { path: Some(path.to_owned()), source })
}

fn try_replace(path: &Path, write: impl FnOnce(&mut File) -> io::Result<()>) -> io::Result<()> {
    if is_stream(path) {
        return write(&mut std::fs::OpenOptions::new().write(true).open(path)?);
    }
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let mut file = tempfile::Builder::new().prefix(".orbsieve-").tempfile_in(folder)?;
    write(file.as_file_mut())?;
    file.as_file().sync_all()?;
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        // A temporary file is readable by its owner only; an output is an ordinary file.
        let mode = std::fs::metadata(path).map_or(0o644, |metadata| metadata.permissions().mode() & 0o777);
        file.as_file().set_permissions(std::fs::Permissions::from_mode(mode))?;
    }
    file.persist(path).map_err(|error| error.error)?;
    Ok(())
}
