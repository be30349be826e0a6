//! Liquid water by the IAPWS formulations.
//!
//! Everything along one line of pressure: 1 bar while water does not boil at 1 bar, its vapour pressure above.

mod dielectric;
mod ionization;
mod region1;
mod saturation;

pub use dielectric::{debye_hueckel_a, debye_hueckel_b, dielectric_constant};
pub use ionization::log10_ion_product;
pub use region1::{LiquidWater, liquid};
pub use saturation::saturation_pressure;

use crate::quantity::{Kelvin, T_STANDARD};

/// Molar mass of water, kg/mol (IAPWS R6-95(2018)).
pub const MOLAR_MASS: f64 = 0.018_015_268;

/// Standard molar entropy of liquid water at 298.15 K on the third-law scale, J/(mol K) (CODATA Key Values 1989: 69.95 ± 0.03).
const STANDARD_ENTROPY: f64 = 69.95;

/// A formulation was asked for something that its source does not cover.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum RangeError {
    /// The quantity, named with its unit, lies outside the range in which the formulation is stated.
    #[error("{quantity} {value} is outside {from} … {to}, where its formulation holds")]
    Outside { quantity: String, value: f64, from: f64, to: f64 },
    /// No solubility curve is carried for the gas.
    #[error("there is no curve of Henry's constant for {gas}")]
    NoSolubilityCurve { gas: String },
}

/// Accepts `value` from `from` to `to`, ends included; `quantity` names it with its unit.
///
/// # Errors
/// [`RangeError::Outside`] otherwise, also for a value that is not a number.
pub fn check_range(quantity: &str, value: f64, from: f64, to: f64) -> Result<(), RangeError> {
    if (from..=to).contains(&value) {
        return Ok(());
    }
    Err(RangeError::Outside { quantity: quantity.to_owned(), value, from, to })
}

/// Pressure on liquid water in every property here, bar: the larger of 1 bar and the vapour pressure.
///
/// # Errors
/// [`RangeError`] outside 273.15 … 647.096 K.
pub fn pressure(t: Kelvin) -> Result<f64, RangeError> {
    Ok(saturation_pressure(t)?.max(1.0))
}

/// Density of liquid water, kg/m³, at the larger of 1 bar and its vapour pressure (IAPWS-IF97 region 1).
///
/// # Errors
/// [`RangeError`] outside 273.15 … 623.15 K.
pub fn density(t: Kelvin) -> Result<f64, RangeError> {
    Ok(1.0 / liquid_on_line(t)?.volume)
}

/// G(T) − G(298.15 K) of liquid water, J/mol, from 1 bar to the larger of 1 bar and its vapour pressure.
///
/// M [g(T) − g(298.15 K)] − [S°(298.15 K) − M s(298.15 K)] (T − 298.15 K), with g and s of IAPWS-IF97 region 1: the formulation
/// sets the entropy of the liquid to zero at the triple point, the last term moves it to the third-law scale.
///
/// # Errors
/// [`RangeError`] outside 273.15 … 623.15 K.
pub fn liquid_water_gibbs_change(t: Kelvin) -> Result<f64, RangeError> {
    let standard = liquid_on_line(T_STANDARD)?;
    let here = liquid_on_line(t)?;
    let entropy_shift = STANDARD_ENTROPY - MOLAR_MASS * standard.entropy;
    let energy = MOLAR_MASS * (here.gibbs_energy - standard.gibbs_energy);
    Ok(energy - entropy_shift * (t.0 - T_STANDARD.0))
}

/// H(T) − H(298.15 K) of liquid water, J/mol, from 1 bar to the larger of 1 bar and its vapour pressure (IAPWS-IF97 region 1).
///
/// # Errors
/// [`RangeError`] outside 273.15 … 623.15 K.
pub fn liquid_water_enthalpy_change(t: Kelvin) -> Result<f64, RangeError> {
    Ok(MOLAR_MASS * (liquid_on_line(t)?.enthalpy - liquid_on_line(T_STANDARD)?.enthalpy))
}

/// Liquid water at `t` and the pressure of this module.
fn liquid_on_line(t: Kelvin) -> Result<LiquidWater, RangeError> {
    liquid(t, pressure(t)?)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Kell, J. Chem. Eng. Data 20 (1975) 97, kg/m³ at 1 atm (value from memory); above 100 °C saturated liquid, IAPWS-95
    /// through `iapws` 1.5.5.
    const DENSITIES: &[(f64, f64, f64)] = &[
        (4.0, 999.972, 0.02),
        (25.0, 997.045, 0.01),
        (60.0, 983.19, 0.04),
        (100.0, 958.35, 0.03),
        (200.0, 864.66, 0.1),
        (300.0, 712.14, 0.2),
    ];

    #[test]
    fn density_agrees_with_tables() {
        for &(celsius, expected, tolerance) in DENSITIES {
            let found = density(Kelvin::from_celsius(celsius)).unwrap();
            assert!((found - expected).abs() < tolerance, "{celsius} °C: {found}");
        }
    }

    #[test]
    fn water_at_298_15_kelvin_is_the_origin() {
        assert_eq!(liquid_water_gibbs_change(T_STANDARD), Ok(0.0));
        assert_eq!(liquid_water_enthalpy_change(T_STANDARD), Ok(0.0));
    }

    /// dG/dT along a line of pressure is −S + V dp/dT.
    #[test]
    fn gibbs_energy_falls_by_the_entropy() {
        let step = 0.01;
        let standard = liquid_on_line(T_STANDARD).unwrap();
        for celsius in [5.0, 25.0, 60.0, 90.0, 150.0, 250.0, 300.0] {
            let t = Kelvin::from_celsius(celsius);
            let (low, high) = (Kelvin(t.0 - step), Kelvin(t.0 + step));
            let slope =
                (liquid_water_gibbs_change(high).unwrap() - liquid_water_gibbs_change(low).unwrap()) / (2.0 * step);
            let here = liquid_on_line(t).unwrap();
            let entropy = STANDARD_ENTROPY + MOLAR_MASS * (here.entropy - standard.entropy);
            let pressure_slope = (pressure(high).unwrap() - pressure(low).unwrap()) * 1e5 / (2.0 * step);
            let expected = -entropy + MOLAR_MASS * here.volume * pressure_slope;
            assert!((slope - expected).abs() < 1e-3, "{celsius} °C: {slope} against {expected}");
        }
    }

    /// Cp of liquid water 75.3 J/(mol K) (CODATA 75.35; within 0.3 % from 20 to 80 °C) and S° 69.95 J/(mol K).
    #[test]
    fn constant_heat_capacity_gives_the_same_near_25_celsius() {
        let t0 = T_STANDARD.0;
        for celsius in [30.0, 50.0, 80.0] {
            let t = Kelvin::from_celsius(celsius);
            let simple = -69.95 * (t.0 - t0) + 75.3 * ((t.0 - t0) - t.0 * (t.0 / t0).ln());
            let found = liquid_water_gibbs_change(t).unwrap();
            assert!((found - simple).abs() < 3.0, "{celsius} °C: {found} against {simple}");
            let heat = liquid_water_enthalpy_change(t).unwrap();
            assert!((heat / (75.3 * (t.0 - t0)) - 1.0).abs() < 3e-3);
        }
    }

    /// Gibbs–Helmholtz: d(G/T)/d(1/T) = H, here on the 1 bar branch, with H counted from G(298.15 K) + 298.15 S°.
    #[test]
    fn gibbs_and_enthalpy_belong_together() {
        let step = 0.01;
        for celsius in [20.0, 70.0] {
            let t = Kelvin::from_celsius(celsius);
            let over_t = |t: f64| liquid_water_gibbs_change(Kelvin(t)).unwrap() / t;
            let slope = (over_t(t.0 + step) - over_t(t.0 - step)) / (1.0 / (t.0 + step) - 1.0 / (t.0 - step));
            let enthalpy = liquid_water_enthalpy_change(t).unwrap() + T_STANDARD.0 * STANDARD_ENTROPY;
            assert!((slope - enthalpy).abs() < 1.0, "{slope} against {enthalpy}");
        }
    }

    #[test]
    fn outside_the_range_is_an_error_with_a_name() {
        let cold = liquid_water_gibbs_change(Kelvin(270.0));
        assert!(matches!(cold, Err(RangeError::Outside { value: 270.0, .. })));
        assert!(density(Kelvin(640.0)).is_err());
        assert!(density(Kelvin(f64::NAN)).is_err());
        let text = density(Kelvin(640.0)).unwrap_err().to_string();
        assert!(text.contains("640") && text.contains("623.15"), "{text}");
    }
}
