//! Ion product of water.

use crate::quantity::Kelvin;

use super::{MOLAR_MASS, RangeError, check_range};

/// Polynomial in 1/T of pKw in the ideal gas, IAPWS R11-07.
const GAS: [f64; 4] = [6.141_500e-1, 4.825_133e4, -6.770_793e4, 1.010_210e7];
/// Water molecules around an ion, IAPWS R11-07.
const COORDINATION: f64 = 6.0;

/// log10 of the ion product of water, molality scale, at a temperature and a density in kg/m³.
///
/// IAPWS R11-07 (Bandura and Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15): pKw = pKw(gas) + 2 log10 M −
/// 2n [log10(1 + Q) − Q/(1 + Q) ρ (β₀ + β₁/T + β₂ρ)], Q = ρ exp(α₀ + α₁/T + α₂ρ^(2/3)/T²), with ρ in g/cm³ and M in kg/mol.
/// Range 273.15 … 1073.15 K, to 1250 kg/m³. The revision R11-19 moves pKw by at most 0.003 to 200 °C and by −0.05 at 300 °C.
///
/// # Errors
/// [`RangeError::Outside`] beyond that range.
pub fn log10_ion_product(t: Kelvin, density: f64) -> Result<f64, RangeError> {
    check_range("temperature for the ion product of water in K", t.0, 273.15, 1073.15)?;
    check_range("density of water in kg/m³", density, 0.0, 1250.0)?;
    let rho = density / 1000.0;
    let t = t.0;
    let association = -0.864_671 + 8_659.19 / t - 22_786.2 / (t * t) * rho.powf(2.0 / 3.0);
    let q = rho * association.exp();
    let interaction = rho * (0.642_044 - 56.8534 / t - 0.375_754 * rho);
    let solvation = 2.0 * COORDINATION * ((1.0 + q).log10() - q / (1.0 + q) * interaction);
    let gas = GAS[0] + GAS[1] / t + GAS[2] / (t * t) + GAS[3] / (t * t * t);
    Ok(solvation - gas - 2.0 * MOLAR_MASS.log10())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::thermo::water::density;

    /// IAPWS R11-07, table of values: T in K, density in g/cm³, pKw (from memory; the first also in the documentation of `iapws`
    /// 1.5.5, whose code holds the coefficients of the revision R11-19).
    const RELEASE: [[f64; 3]; 5] = [
        [300.0, 1.0, 13.906_565],
        [600.0, 0.07, 21.048_874],
        [600.0, 0.7, 11.203_153],
        [800.0, 0.2, 15.089_765],
        [800.0, 1.2, 6.438_330],
    ];

    #[test]
    fn agrees_with_the_table_of_the_release() {
        for [kelvin, rho, expected] in RELEASE {
            let found = -log10_ion_product(Kelvin(kelvin), rho * 1000.0).unwrap();
            assert!((found - expected).abs() < 1e-6, "{kelvin} K: {found}");
        }
    }

    /// pKw 13.995 at 25 °C (Marshall and Franck, J. Phys. Chem. Ref. Data 10 (1981) 295).
    #[test]
    fn is_fourteen_at_25_celsius() {
        let t = Kelvin(298.15);
        let found = -log10_ion_product(t, density(t).unwrap()).unwrap();
        assert!((found - 13.995).abs() < 0.002, "{found}");
    }

    #[test]
    fn outside_the_range_is_an_error() {
        assert!(log10_ion_product(Kelvin(1100.0), 100.0).is_err());
        assert!(log10_ion_product(Kelvin(300.0), 1300.0).is_err());
    }
}
