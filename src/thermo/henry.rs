//! Solubility of gases in water from Henry's constant.

use crate::quantity::Kelvin;

use super::water::{self, RangeError, check_range};

/// Critical temperature of water, K.
const CRITICAL_TEMPERATURE: f64 = 647.096;

/// Henry's constant of one gas in water, IAPWS G7-04.
struct Curve {
    gas: &'static str,
    a: f64,
    b: f64,
    c: f64,
    /// Temperatures of the measurements behind the fit, K.
    from: f64,
    to: f64,
}

/// The gases of the guideline that a plant meets.
const CURVES: [Curve; 7] = [
    curve("H2", [-4.732_84, 6.089_54, 6.060_66], 273.15, 636.09),
    curve("N2", [-9.675_78, 4.721_62, 11.705_85], 278.12, 636.46),
    curve("O2", [-9.448_33, 4.438_22, 11.420_05], 274.15, 616.52),
    curve("CO", [-10.528_62, 5.132_59, 12.014_21], 278.15, 588.67),
    curve("CO2", [-8.554_45, 4.011_95, 9.523_45], 274.19, 642.66),
    curve("H2S", [-4.514_99, 5.235_38, 4.421_26], 273.15, 533.09),
    curve("CH4", [-10.447_08, 4.664_91, 12.129_86], 275.46, 633.11),
];

const fn curve(gas: &'static str, [a, b, c]: [f64; 3], from: f64, to: f64) -> Curve {
    Curve { gas, a, b, c, from, to }
}

fn find(gas: &str) -> Result<&'static Curve, RangeError> {
    let found = CURVES.iter().find(|curve| curve.gas == gas);
    found.ok_or_else(|| RangeError::NoSolubilityCurve { gas: gas.to_owned() })
}

/// Temperatures between which the solubility of `gas` (`O2`, `CO2` …) was measured and its curve holds.
///
/// # Errors
/// [`RangeError::NoSolubilityCurve`] for a gas without a curve here.
pub fn range(gas: &str) -> Result<(Kelvin, Kelvin), RangeError> {
    let curve = find(gas)?;
    Ok((Kelvin(curve.from), Kelvin(curve.to)))
}

/// Natural logarithm of Henry's constant kH in bar: fugacity of the gas over its mole fraction in water, dilute, at the vapour
/// pressure of water.
///
/// IAPWS G7-04 (Fernández-Prini et al., J. Phys. Chem. Ref. Data 32 (2003) 903): ln(kH/p) = A/Tr + B (1 − Tr)^0.355 / Tr +
/// C Tr^−0.41 exp(1 − Tr), with Tr = T/Tc and p the vapour pressure of water, here by IAPWS R7-97 (the guideline's own
/// equation for p differs by 0.01 %). Gases H2, N2, O2, CO, CO2, H2S, CH4, each in the range of [`range`].
///
/// # Errors
/// [`RangeError`] for another gas or outside the range of its measurements.
pub fn ln_henry_constant(gas: &str, t: Kelvin) -> Result<f64, RangeError> {
    let curve = find(gas)?;
    let quantity = format!("temperature for the solubility of {gas} in K");
    check_range(&quantity, t.0, curve.from, curve.to)?;
    let reduced = t.0 / CRITICAL_TEMPERATURE;
    let tau = 1.0 - reduced;
    let ratio = curve.a / reduced + curve.b * tau.powf(0.355) / reduced + curve.c * reduced.powf(-0.41) * tau.exp();
    Ok(ratio + water::saturation_pressure(t)?.ln())
}

/// Natural logarithm of the solubility of a gas in water, mol kg⁻¹ bar⁻¹: its molality over its fugacity, dilute.
///
/// −ln(kH M) with [`ln_henry_constant`] and the molar mass M of water. What the gas does further in water (hydrolysis,
/// dissociation) is not in it, nor the effect of total pressure on the dissolved gas.
///
/// # Errors
/// [`RangeError`] for another gas or outside the range of its measurements.
pub fn ln_solubility_molality(gas: &str, t: Kelvin) -> Result<f64, RangeError> {
    Ok(-ln_henry_constant(gas, t)? - water::MOLAR_MASS.ln())
}

#[cfg(test)]
mod tests {
    use super::*;

    /// IAPWS G7-04, table of values for checking programs: ln(kH/GPa) at 300, 400, 500 and 600 K (from memory, recalculated
    /// to all digits with `iapws` 1.5.5).
    const GUIDELINE: [(&str, [f64; 4]); 7] = [
        ("H2", [1.9702, 1.8464, 1.0513, -0.1848]),
        ("N2", [2.1716, 2.3509, 1.4842, 0.1647]),
        ("O2", [1.5024, 1.8832, 1.1630, -0.0276]),
        ("CO", [1.7652, 1.9939, 1.1250, -0.2382]),
        ("CO2", [-1.7508, -0.5450, -0.6524, -1.3489]),
        ("H2S", [-2.8784, -1.7083, -1.6074, -2.1319]),
        ("CH4", [1.4034, 1.7946, 1.0342, -0.2209]),
    ];

    #[test]
    fn agrees_with_the_table_of_the_guideline() {
        for (gas, expected) in GUIDELINE {
            for (kelvin, expected) in [300.0, 400.0, 500.0, 600.0].into_iter().zip(expected) {
                let (from, to) = range(gas).unwrap();
                if !(from.0..=to.0).contains(&kelvin) {
                    assert!(ln_henry_constant(gas, Kelvin(kelvin)).is_err());
                    continue;
                }
                let found = ln_henry_constant(gas, Kelvin(kelvin)).unwrap() - 1e4_f64.ln();
                assert!((found - expected).abs() < 2e-4, "{gas} at {kelvin} K: {found}");
            }
        }
    }

    /// mol/(kg bar) at 25 °C: IUPAC solubility evaluations as tabulated in the input of Sander, Atmos. Chem. Phys. 15 (2015)
    /// 4399; CO2 another row of it; H2 value from memory.
    const AT_25_CELSIUS: [(&str, f64); 7] = [
        ("O2", 1.265e-3),
        ("N2", 6.524e-4),
        ("CO", 9.790e-4),
        ("H2S", 1.017e-1),
        ("CH4", 1.409e-3),
        ("CO2", 3.365e-2),
        ("H2", 7.823e-4),
    ];

    #[test]
    fn solubility_at_25_celsius_agrees_with_other_evaluations() {
        for (gas, expected) in AT_25_CELSIUS {
            let found = ln_solubility_molality(gas, Kelvin(298.15)).unwrap().exp();
            assert!((found / expected - 1.0).abs() < 0.015, "{gas}: {found}");
        }
    }

    /// Oxygen is least soluble near 90 … 100 °C (Tromans, Ind. Eng. Chem. Res. 39 (2000) 805).
    #[test]
    fn oxygen_is_least_soluble_near_100_celsius() {
        let at = |celsius| ln_solubility_molality("O2", Kelvin::from_celsius(celsius)).unwrap();
        assert!(at(95.0) < at(60.0) && at(95.0) < at(140.0));
    }

    #[test]
    fn unknown_gas_and_range_are_errors() {
        assert!(matches!(ln_solubility_molality("Cl2", Kelvin(300.0)), Err(RangeError::NoSolubilityCurve { .. })));
        assert!(ln_solubility_molality("H2S", Kelvin(560.0)).is_err());
    }
}
