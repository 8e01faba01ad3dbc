//! The energy axis: a scale from eV to places on paper, and ticks at round numbers.

/// eV to height on paper; paper counts downwards.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scale {
    /// Lowest energy, eV.
    pub low: f64,
    /// Highest energy, eV.
    pub high: f64,
    /// Place of the highest energy.
    pub top: f64,
    /// Place of the lowest energy.
    pub bottom: f64,
}

impl Scale {
    /// Place of an energy.
    #[must_use]
    pub fn place(&self, energy_ev: f64) -> f64 {
        self.top + (self.high - energy_ev) / (self.high - self.low) * (self.bottom - self.top)
    }

    /// Ticks at whole multiples of 1, 2 or 5 times a power of ten, with the number of decimals they need; about one in `distance`.
    #[must_use]
    pub fn ticks(&self, distance: f64) -> (Vec<f64>, usize) {
        let wanted = (self.high - self.low) * distance / (self.bottom - self.top);
        let power = 10.0_f64.powf(wanted.log10().floor());
        let steps = [1.0, 2.0, 5.0, 10.0].map(|step| step * power);
        let step = steps.into_iter().find(|step| *step >= wanted * 0.999).unwrap_or(steps[3]);
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a count of decimals, clamped")]
        let decimals = (-step.log10().floor()).clamp(0.0, 9.0) as usize;
        let first = (self.low / step - 1e-9).ceil();
        let ticks =
            (0..1000).map(|at| (first + f64::from(at)) * step).take_while(|tick| *tick <= self.high + step * 1e-9);
        // Adding zero turns −0 into 0.
        (ticks.map(|tick| tick + 0.0).collect(), decimals)
    }
}

#[cfg(test)]
mod tests {
    use super::Scale;

    #[test]
    fn ticks_are_round_and_within() {
        for (low, high, first, step, n, decimals) in [
            (-14.9, 13.7, -10.0, 5.0, 5, 0),
            (-0.31, 0.33, -0.3, 0.1, 7, 1),
            (0.0, 1000.0, 0.0, 200.0, 6, 0),
            (-7.0, -6.0, -7.0, 0.2, 6, 1),
        ] {
            let scale = Scale { low, high, top: 0.0, bottom: 200.0 };
            let (ticks, places) = scale.ticks(30.0);
            assert_eq!((ticks.len(), places), (n, decimals), "{ticks:?}");
            assert!((ticks[0] - first).abs() < 1e-9 && (ticks[1] - ticks[0] - step).abs() < 1e-9, "{ticks:?}");
        }
    }

    #[test]
    fn high_energies_stand_on_top() {
        let scale = Scale { low: -10.0, high: 10.0, top: 20.0, bottom: 120.0 };
        for (energy, place) in [(10.0, 20.0), (0.0, 70.0), (-10.0, 120.0)] {
            assert!((scale.place(energy) - place).abs() < 1e-12);
        }
    }
}
