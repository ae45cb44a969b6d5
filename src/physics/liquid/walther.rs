//! Viscosity of an oil against temperature.

use super::CELSIUS_ZERO;

/// The line lg lg(ν + 0.7) = A − B lg T, ν in mm²/s, T in K, of ASTM D341 in its form for more than 2 mm²/s (after
/// Walther 1931).
#[derive(Debug, Clone, Copy)]
pub(super) struct WaltherLine {
    a: f64,
    b: f64,
}

/// lg lg(ν + 0.7)
fn ordinate(nu: f64) -> f64 {
    libm::log10(libm::log10(nu + 0.7))
}

fn abscissa(t: f64) -> f64 {
    libm::log10(t + CELSIUS_ZERO)
}

impl WaltherLine {
    /// The line through the kinematic viscosities (mm²/s) at 40 and 100 °C. Both must exceed 0.3 mm²/s.
    pub fn through(nu_40: f64, nu_100: f64) -> Self {
        let b = (ordinate(nu_40) - ordinate(nu_100)) / (abscissa(100.0) - abscissa(40.0));
        Self { a: ordinate(nu_40) + b * abscissa(40.0), b }
    }

    /// Kinematic viscosity, mm²/s, at a temperature in °C; more than 0.3, and infinite where it overflows in the cold.
    pub fn at(&self, t: f64) -> f64 {
        libm::exp10(libm::exp10(self.a - self.b * abscissa(t))) - 0.7
    }
}

#[cfg(test)]
mod tests {
    use super::WaltherLine;

    #[test]
    fn passes_through_its_points() {
        let line = WaltherLine::through(32.0, 5.4);
        assert!((line.at(40.0) - 32.0).abs() < 1e-9 && (line.at(100.0) - 5.4).abs() < 1e-9);
    }
}
