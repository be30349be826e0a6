//! The few quantities that could be mistaken for one another, as types. SI inside.

use std::fmt;

/// Molar gas constant, J/(mol K) (SI 2019, exact).
pub const GAS_CONSTANT: f64 = 8.314_462_618;
/// Faraday constant, C/mol (SI 2019, exact to the digits shown).
pub const FARADAY: f64 = 96_485.332_12;
/// Standard temperature of the tables, K.
pub const T_STANDARD: Kelvin = Kelvin(298.15);
/// One standard atmosphere, bar.
pub const ATMOSPHERE_BAR: f64 = 1.013_25;

/// Thermodynamic temperature, K.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Kelvin(pub f64);

impl Kelvin {
    /// From degrees Celsius.
    pub fn from_celsius(celsius: f64) -> Self {
        Self(celsius + 273.15)
    }

    /// In degrees Celsius.
    pub fn celsius(self) -> f64 {
        self.0 - 273.15
    }

    /// RT, J/mol.
    pub fn rt(self) -> f64 {
        GAS_CONSTANT * self.0
    }
}

impl fmt::Display for Kelvin {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{:.1} °C", self.celsius())
    }
}

/// A value with its standard uncertainty, both in the same unit (named by whoever holds it).
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Estimate {
    pub value: f64,
    pub standard_uncertainty: f64,
}

impl Estimate {
    pub const fn new(value: f64, standard_uncertainty: f64) -> Self {
        Self { value, standard_uncertainty }
    }

    /// A value taken as exact.
    pub const fn exact(value: f64) -> Self {
        Self::new(value, 0.0)
    }

    /// Both value and uncertainty times a factor (change of unit).
    pub fn scaled(self, factor: f64) -> Self {
        Self::new(self.value * factor, self.standard_uncertainty * factor.abs())
    }

    /// Value moved by an exact amount (change of origin).
    pub fn shifted(self, offset: f64) -> Self {
        Self::new(self.value + offset, self.standard_uncertainty)
    }
}
