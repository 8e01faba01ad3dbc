//! Which files a batch is about: names, folders, patterns and lists, in a fixed order, each once.
//!
//! Not here: opening them. A name that is no file stays in the list and fails by itself.

use super::arguments::Batch;
use crate::cli::CliError;
use std::collections::HashSet;
use std::io::{self, Read};
use std::path::{Path, PathBuf};

/// What the name of an orbital file in a folder holds.
const MARK: &str = ".molden";

/// The names in the order given, those of folders and patterns sorted, each once; then the part of a shard.
///
/// # Errors
/// [`CliError::Usage`] for a pattern or folder without files, [`CliError::Read`] for a list that cannot be read.
pub fn names(arguments: &Batch) -> Result<Vec<PathBuf>, CliError> {
    let mut names = Vec::new();
    for path in &arguments.paths {
        expand(path, arguments.merge, &mut names)?;
    }
    if let Some(list) = &arguments.files_from {
        names.extend(listed(list)?);
    }
    if names.is_empty() && arguments.files_from.is_none() {
        return Err(CliError::Usage("name files, folders, patterns or a list with --files-from".to_owned()));
    }
    let mut met = HashSet::new();
    names.retain(|name| met.insert(name.clone()));
    if let Some((i, n)) = arguments.shard {
        names = names[share(names.len(), i, n)].to_vec();
    }
    Ok(names)
}

/// The `i`-th (from 1) of `n` parts of `len` things in a row, whose sizes differ by one at most.
///
/// # Holds
/// The parts in order make the whole: results of shards joined in order are the result without shards.
fn share(len: usize, i: usize, n: usize) -> std::ops::Range<usize> {
    let (size, larger) = (len / n, len % n);
    let start = |part: usize| part * size + part.min(larger);
    start(i - 1)..start(i)
}

fn expand(path: &Path, merge: bool, names: &mut Vec<PathBuf>) -> Result<(), CliError> {
    if path.as_os_str() == "-" {
        return Err(CliError::Usage("batch reads files: `-` is for --files-from, or label it alone".to_owned()));
    }
    let failed = |source: io::Error| CliError::Read { path: path.to_owned(), source };
    if path.is_dir() && !merge {
        let mut found = Vec::new();
        for entry in std::fs::read_dir(path).map_err(failed)? {
            let inside = entry.map_err(failed)?.path();
            let named = inside.file_name().is_some_and(|name| name.to_string_lossy().contains(MARK));
            if named && inside.is_file() {
                found.push(inside);
            }
        }
        return take(path, found, &format!("no file with {MARK} in its name lies in"), names);
    }
    let pattern = path.to_string_lossy();
    // A name with brackets that is there means itself.
    if path.exists() || !pattern.contains(['*', '?', '[']) {
        names.push(path.to_owned());
        return Ok(());
    }
    let wrong = |error: &dyn std::fmt::Display| CliError::Usage(format!("pattern {pattern}: {error}"));
    let found = glob::glob(&pattern).map_err(|error| wrong(&error))?;
    let found = found.collect::<Result<Vec<_>, _>>().map_err(|error| wrong(&error))?;
    take(path, found.into_iter().filter(|found| !found.is_dir()).collect(), "no file fits the pattern", names)
}

fn take(path: &Path, mut found: Vec<PathBuf>, none: &str, names: &mut Vec<PathBuf>) -> Result<(), CliError> {
    if found.is_empty() {
        return Err(CliError::Usage(format!("{none} {}", path.display())));
    }
    found.sort();
    names.append(&mut found);
    Ok(())
}

/// The names of a list.
fn listed(list: &Path) -> Result<Vec<PathBuf>, CliError> {
    let failed = |source: io::Error| CliError::Read { path: list.to_owned(), source };
    let mut bytes = Vec::new();
    if list.as_os_str() == "-" {
        io::stdin().lock().read_to_end(&mut bytes).map_err(failed)?;
    } else {
        bytes = std::fs::read(list).map_err(failed)?;
    }
    let lines = bytes.split(|byte| *byte == b'\n').map(<[u8]>::trim_ascii);
    Ok(lines.filter(|line| !line.is_empty() && !line.starts_with(b"#")).map(name).collect())
}

#[cfg(unix)]
fn name(bytes: &[u8]) -> PathBuf {
    use std::os::unix::ffi::OsStrExt;
    PathBuf::from(std::ffi::OsStr::from_bytes(bytes))
}

#[cfg(not(unix))]
fn name(bytes: &[u8]) -> PathBuf {
    PathBuf::from(String::from_utf8_lossy(bytes).into_owned())
}

#[cfg(test)]
mod tests {
    use super::share;

    #[test]
    fn shards_in_order_make_the_whole() {
        for len in 0..40 {
            for n in 1..12 {
                let joined: Vec<usize> = (1..=n).flat_map(|i| share(len, i, n)).collect();
                assert_eq!(joined, (0..len).collect::<Vec<_>>());
                let sizes: Vec<usize> = (1..=n).map(|i| share(len, i, n).len()).collect();
                assert!(sizes.iter().max() <= sizes.iter().min().map(|least| least + 1).as_ref(), "{sizes:?}");
            }
        }
    }
}
