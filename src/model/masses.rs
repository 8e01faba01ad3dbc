//! Standard atomic weights.
//!
//! For telling translations and rotations from vibrations; no irrep depends on them.

/// By atomic number from 1, in daltons; for elements without a standard weight the mass of a long-lived isotope.
///
/// # Source
/// "Standard atomic weights of the elements 2013 (IUPAC Technical Report)", Pure Appl. Chem. 88, 265 (2016), to four decimals
/// as tabulated by a general-purpose chemistry library.
#[rustfmt::skip]
const MASSES: [f64; 118] = [
    1.008, 4.0026, 6.94, 9.0122, 10.81, 12.011, 14.007, 15.999, 18.9984, 20.1797,
    22.9898, 24.305, 26.9815, 28.085, 30.9738, 32.06, 35.45, 39.948, 39.0983, 40.078,
    44.9559, 47.867, 50.9415, 51.9961, 54.938, 55.845, 58.9332, 58.6934, 63.546, 65.38,
    69.723, 72.63, 74.9216, 78.971, 79.904, 83.798, 85.4678, 87.62, 88.9058, 91.224,
    92.9064, 95.95, 97.9072, 101.07, 102.9055, 106.42, 107.8682, 112.414, 114.818, 118.71,
    121.76, 127.6, 126.9045, 131.293, 132.9055, 137.327, 138.9055, 140.116, 140.9077, 144.242,
    144.9128, 150.36, 151.964, 157.25, 158.9254, 162.5, 164.9303, 167.259, 168.9342, 173.054,
    174.9668, 178.49, 180.9479, 183.84, 186.207, 190.23, 192.217, 195.084, 196.9666, 200.592,
    204.38, 207.2, 208.9804, 208.9824, 209.9872, 222.0176, 223.0197, 226.0254, 227.0277, 232.0377,
    231.0359, 238.0289, 237.0482, 244.0642, 243.0614, 247.0703, 247.0703, 251.0796, 252.083, 257.0951,
    258.0984, 259.101, 262.11, 267.122, 268.126, 271.134, 270.133, 269.1338, 278.156, 281.165,
    281.166, 285.177, 286.182, 289.19, 289.194, 293.204, 293.208, 294.214,
];

/// Standard atomic weight in daltons; None for 0 and what lies beyond the table.
#[must_use]
pub fn mass(element: u8) -> Option<f64> {
    usize::from(element).checked_sub(1).and_then(|at| MASSES.get(at)).copied()
}
