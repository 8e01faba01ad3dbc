//! Colours of diagrams: our own, told apart in grey and with two kinds of cones.
//!
//! Every colour stands twice: as an attribute, which every program that draws SVG knows, and as a custom property of CSS of the same
//! name, with which a page turns them for a dark ground. Meaning never hangs on colour alone: lines differ in dashes too.

/// A colour with its name in CSS.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Colour {
    /// Class and custom property: `ink` → class `ink-…`, property `--orbsieve-ink`.
    pub name: &'static str,
    /// On white paper.
    pub light: &'static str,
}

/// Bars, arrows, text.
pub const INK: Colour = Colour { name: "ink", light: "#16181d" };
/// Axis, ticks, second lines.
pub const QUIET: Colour = Colour { name: "quiet", light: "#5c616b" };
/// Leader lines from bars to labels: no meaning of their own.
pub const FAINT: Colour = Colour { name: "faint", light: "#868c96" };
/// The gap and transitions.
pub const ACCENT: Colour = Colour { name: "accent", light: "#9c2f63" };
/// Ground behind text.
pub const PAPER: Colour = Colour { name: "paper", light: "#ffffff" };

/// Lines between equal irreps, darkest first.
pub const LINES: [Colour; 4] = [
    Colour { name: "line-1", light: "#1d2f6f" },
    Colour { name: "line-2", light: "#8a3a12" },
    Colour { name: "line-3", light: "#0f7f86" },
    Colour { name: "line-4", light: "#b3871c" },
];

/// Dashes of lines in points; with [`LINES`] they make twelve kinds.
pub const DASHES: [&str; 3] = ["", "4 2", "1.2 1.8"];

/// All colours.
pub const ALL: [Colour; 9] = [INK, QUIET, FAINT, ACCENT, PAPER, LINES[0], LINES[1], LINES[2], LINES[3]];

#[cfg(test)]
mod tests {
    use super::{ACCENT, FAINT, INK, LINES, QUIET};
    use nalgebra::{Matrix3, Vector3};

    /// Linear parts of red, green and blue (sRGB, IEC 61966-2-1; from memory).
    fn linear(hex: &str) -> Vector3<f64> {
        Vector3::from_fn(|at, _| {
            let byte = u8::from_str_radix(&hex[1 + 2 * at..3 + 2 * at], 16).unwrap();
            let part = f64::from(byte) / 255.0;
            if part <= 0.04045 { part / 12.92 } else { ((part + 0.055) / 1.055).powf(2.4) }
        })
    }

    /// CIE 1976 L*a*b*, white D65 (matrix of sRGB; from memory).
    fn lab(colour: &Vector3<f64>) -> Vector3<f64> {
        let matrix = Matrix3::new(0.4124, 0.3576, 0.1805, 0.2126, 0.7152, 0.0722, 0.0193, 0.1192, 0.9505);
        let white = matrix * Vector3::repeat(1.0);
        let f = |t: f64| if t > 216.0 / 24389.0 { t.cbrt() } else { (24389.0 / 27.0 * t + 16.0) / 116.0 };
        let xyz = (matrix * colour.map(|part| part.clamp(0.0, 1.0))).component_div(&white).map(f);
        Vector3::new(116.0 * xyz.y - 16.0, 500.0 * (xyz.x - xyz.y), 200.0 * (xyz.y - xyz.z))
    }

    /// Protanopia, deuteranopia, tritanopia on linear parts: "A physiologically-based model for simulation of color vision
    /// deficiency", IEEE Trans. Vis. Comput. Graph. 15, 1291 (2009), severity 1.0; from memory, rows sum to one.
    fn dichromacies() -> [Matrix3<f64>; 3] {
        [
            Matrix3::new(
                0.152_286, 1.052_583, -0.204_868, 0.114_503, 0.786_281, 0.099_216, -0.003_882, -0.048_116, 1.051_998,
            ),
            Matrix3::new(
                0.367_322, 0.860_646, -0.227_968, 0.280_085, 0.672_501, 0.047_413, -0.011_820, 0.042_940, 0.968_881,
            ),
            Matrix3::new(
                1.255_528, -0.076_749, -0.178_779, -0.078_411, 0.930_809, 0.147_602, 0.004_733, 0.691_367, 0.303_900,
            ),
        ]
    }

    #[test]
    fn white_stays_white_to_everyone() {
        for matrix in dichromacies() {
            assert!((matrix * Vector3::repeat(1.0) - Vector3::repeat(1.0)).amax() < 2e-6);
        }
    }

    #[test]
    fn lines_differ_in_grey_and_with_two_kinds_of_cones() {
        for (at, a) in LINES.iter().enumerate() {
            for b in &LINES[..at] {
                let (a, b) = (linear(a.light), linear(b.light));
                assert!((lab(&a).x - lab(&b).x).abs() >= 10.0, "lightness {} {}", lab(&a).x, lab(&b).x);
                for matrix in dichromacies() {
                    let difference = (lab(&(matrix * a)) - lab(&(matrix * b))).norm();
                    assert!(difference >= 25.0, "{difference}");
                }
            }
        }
    }

    #[test]
    fn all_marks_stand_out_from_paper() {
        // 3 : 1 for marks, 4.5 : 1 for text (Web Content Accessibility Guidelines 2.1, 1.4.3 and 1.4.11).
        let contrast = |hex: &str| 1.05 / (linear(hex).dot(&Vector3::new(0.2126, 0.7152, 0.0722)) + 0.05);
        for colour in [INK, QUIET, ACCENT] {
            assert!(contrast(colour.light) >= 4.5, "{} {}", colour.name, contrast(colour.light));
        }
        for colour in LINES.iter().chain([&FAINT]) {
            assert!(contrast(colour.light) >= 3.0, "{} {}", colour.name, contrast(colour.light));
        }
    }
}
