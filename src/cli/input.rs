//! Opening what a person names: a file, `-`, gzip or plain, as bytes.
//!
//! Not here: what the bytes mean.

use super::CliError;
use flate2::read::MultiGzDecoder;
use memmap2::{Mmap, UncheckedAdvice};
use std::fs::File;
use std::io::{self, Read, Write};
use std::ops::{Deref, Range};
use std::path::Path;

/// The bytes of an input, mapped or owned.
#[derive(Debug)]
pub enum Bytes {
    /// A file mapped into memory; its own, or one that a long stream was put down in.
    Mapped(Mmap),
    /// A short stream.
    Owned(Vec<u8>),
}

impl Bytes {
    /// Gives the pages of a stretch back: memory stays that of the numbers however long the file is.
    pub fn release(&self, span: Range<usize>) {
        #[cfg(unix)]
        if let Self::Mapped(map) = self
            && span.start < span.end
            && span.end <= map.len()
        {
            #[expect(unsafe_code, reason = "part of the memory map: without it a whole file would stay in memory")]
            // SAFETY: the map is shared and read-only, so dropped pages are read from the file again when they are
            // touched, with the same bytes. A system that refuses the advice loses nothing but memory.
            let _ = unsafe { map.unchecked_advise_range(UncheckedAdvice::DontNeed, span.start, span.len()) };
        }
    }
}

impl Deref for Bytes {
    type Target = [u8];

    fn deref(&self) -> &[u8] {
        match self {
            Self::Mapped(map) => map,
            Self::Owned(bytes) => bytes,
        }
    }
}

/// First bytes of a gzip stream (RFC 1952).
const GZIP: [u8; 2] = [0x1f, 0x8b];
/// A gzip stream may unpack to this many times its size, plus [`UNPACKED_FLOOR`]: orbital files reach
/// about 4, and a stream of zeros 1000.
const UNPACKED_RATIO: u64 = 100;
const UNPACKED_FLOOR: u64 = 1 << 20;

/// Reads the input named by `path`, `-` being standard input; gzip is recognised by its first bytes.
///
/// # Errors
/// [`CliError::Read`] when it cannot be opened, read or unpacked, or unpacks to an absurd size.
pub fn open(path: &Path) -> Result<Bytes, CliError> {
    let failed = |source: io::Error| CliError::Read { path: path.to_owned(), source };
    let bytes = if path.as_os_str() == "-" { stream(io::stdin().lock()) } else { file(path) }.map_err(failed)?;
    unpacked(bytes, path)
}

/// The bytes themselves, or what they hold when they are gzip.
///
/// # Errors
/// [`CliError::Read`] when they cannot be unpacked, or unpack to an absurd size; `path` is only named.
pub fn unpacked(bytes: Bytes, path: &Path) -> Result<Bytes, CliError> {
    if !bytes.starts_with(&GZIP) {
        return Ok(bytes);
    }
    unpack(&bytes).map_err(|source| CliError::Read { path: path.to_owned(), source })
}

/// A stream longer than this is put down in a file without a name, and mapped.
const STREAM_IN_MEMORY: u64 = 16 << 20;

fn stream(mut source: impl Read) -> io::Result<Bytes> {
    let mut bytes = Vec::new();
    source.by_ref().take(STREAM_IN_MEMORY).read_to_end(&mut bytes)?;
    if (bytes.len() as u64) < STREAM_IN_MEMORY {
        return Ok(Bytes::Owned(bytes));
    }
    let mut file = tempfile::tempfile()?;
    file.write_all(&bytes)?;
    drop(bytes);
    io::copy(&mut source, &mut file)?;
    map(&file).map(Bytes::Mapped)
}

fn file(path: &Path) -> io::Result<Bytes> {
    let file = File::open(path)?;
    let metadata = file.metadata()?;
    // A pipe or a device is a stream, and nothing cannot be mapped.
    if !metadata.is_file() || metadata.len() == 0 { stream(file) } else { map(&file).map(Bytes::Mapped) }
}

fn map(file: &File) -> io::Result<Mmap> {
    #[expect(unsafe_code, reason = "the memory map: the one way to read a file larger than memory allows twice")]
    // SAFETY: the map is read-only. Should another process shorten the file meanwhile the kernel ends this one with
    // SIGBUS: no undefined value is ever used as Rust data beyond bytes.
    unsafe {
        Mmap::map(file)
    }
}

fn unpack(packed: &[u8]) -> io::Result<Bytes> {
    let limit = UNPACKED_FLOOR + UNPACKED_RATIO * packed.len() as u64;
    let bytes = stream(MultiGzDecoder::new(packed).take(limit + 1))?;
    if bytes.len() as u64 > limit {
        return Err(io::Error::new(
            io::ErrorKind::InvalidData,
            format!(
                "unpacks to more than {UNPACKED_RATIO} times its size: no orbital file does; unpack it by hand if it is one"
            ),
        ));
    }
    Ok(bytes)
}
