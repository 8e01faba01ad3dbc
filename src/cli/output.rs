//! Writing results: to standard output, or to a file that appears whole or not at all.

use super::CliError;
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
        Some(path) => replace(path, bytes).map_err(|source| CliError::Write { path: Some(path.to_owned()), source }),
    }
}

fn replace(path: &Path, bytes: &[u8]) -> io::Result<()> {
    // A device or a pipe is written into; renaming a file over it would take its place.
    if std::fs::metadata(path).is_ok_and(|metadata| !metadata.is_file() && !metadata.is_dir()) {
        return std::fs::OpenOptions::new().write(true).open(path)?.write_all(bytes);
    }
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let mut file = tempfile::Builder::new().prefix(".orbsieve-").tempfile_in(folder)?;
    file.write_all(bytes)?;
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
