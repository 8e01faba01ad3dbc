//! Basis functions, their overlap, the conventions of files, and operations on orbitals.
