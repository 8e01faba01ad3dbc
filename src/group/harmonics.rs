//! How real solid harmonics of any degree turn.
//!
//! Order of the functions of one degree l: 0, +1, −1, +2, −2, … (cosine type +m, sine type −m, no
//! alternating sign; m = ±1, 0 of l = 1 are x, y, z), that of pure shells in Molden files.
