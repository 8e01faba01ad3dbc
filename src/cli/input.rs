//! Opening what a person names: a file, `-`, gzip or plain, as bytes.
//!
//! Not here: what the bytes mean.

use super::CliError;
use flate2::read::MultiGzDecoder;
use memmap2::Mmap;
use std::fs::File;
use std::io::{self, Read};
use std::ops::Deref;
use std::path::Path;

/// The bytes of an input, mapped or owned.
#[derive(Debug)]
pub enum Bytes {
    /// A file mapped into memory.
    Mapped(Mmap),
    /// Standard input, or something unpacked.
    Owned(Vec<u8>),
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
    let bytes = if path.as_os_str() == "-" {
        let mut bytes = Vec::new();
        io::stdin().lock().read_to_end(&mut bytes).map_err(failed)?;
        Bytes::Owned(bytes)
    } else {
        map(path).map_err(failed)?
    };
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
    unpack(&bytes).map(Bytes::Owned).map_err(|source| CliError::Read { path: path.to_owned(), source })
}

fn map(path: &Path) -> io::Result<Bytes> {
    let mut file = File::open(path)?;
    let metadata = file.metadata()?;
    if !metadata.is_file() || metadata.len() == 0 {
        // A pipe, a device, or nothing to map.
        let mut bytes = Vec::new();
        file.read_to_end(&mut bytes)?;
        return Ok(Bytes::Owned(bytes));
    }
    #[expect(unsafe_code, reason = "the memory map: the one way to read a file larger than memory allows twice")]
    // SAFETY: the map is read-only and private to this process. Should another process shorten the file
    // meanwhile the kernel ends this one with SIGBUS: no undefined value is ever used as Rust data beyond bytes.
    let map = unsafe { Mmap::map(&file)? };
    Ok(Bytes::Mapped(map))
}

fn unpack(packed: &[u8]) -> io::Result<Vec<u8>> {
    let limit = UNPACKED_FLOOR + UNPACKED_RATIO * packed.len() as u64;
    let mut bytes = Vec::new();
    MultiGzDecoder::new(packed).take(limit + 1).read_to_end(&mut bytes)?;
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
