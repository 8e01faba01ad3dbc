//! The grammar of the Molden format and of XYZ files: bytes in, values with spans out.
