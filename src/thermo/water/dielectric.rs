//! Static dielectric constant of water and the Debye–Hückel coefficients that follow from it.

use std::f64::consts::{LN_10, PI};

use crate::quantity::Kelvin;

use super::{RangeError, check_range, density};

/// (N, i, j) of the terms N (ρ/ρc)^i (Tc/T)^j in the Harris–Alder factor, IAPWS R8-97.
const TERMS: [(f64, i32, f64); 11] = [
    (0.978_224_486_826, 1, 0.25),
    (-0.957_771_379_375, 1, 1.0),
    (0.237_511_794_148, 1, 2.5),
    (0.714_692_244_396, 2, 1.5),
    (-0.298_217_036_956, 3, 1.5),
    (-0.108_863_472_196, 3, 2.5),
    (0.949_327_488_264e-1, 4, 2.0),
    (-0.980_469_816_509e-2, 5, 2.0),
    (0.165_167_634_970e-4, 6, 5.0),
    (0.937_359_795_772e-4, 7, 0.5),
    (-0.123_179_218_720e-9, 10, 10.0),
];

/// Coefficient of the twelfth term of the Harris–Alder factor, IAPWS R8-97.
const TWELFTH: f64 = 0.196_096_504_426e-2;

const CRITICAL_TEMPERATURE: f64 = 647.096;
/// kg/m³.
const CRITICAL_DENSITY: f64 = 322.0;

/// Constants as IAPWS R8-97 has them; its coefficients were fitted with these, not with later CODATA values.
mod release {
    pub const BOLTZMANN: f64 = 1.380_658e-23;
    pub const AVOGADRO: f64 = 6.022_136_7e23;
    /// Permittivity of free space, C² / (J m).
    pub const VACUUM_PERMITTIVITY: f64 = 8.854_187_817e-12;
    /// Mean molecular polarizability, C² m² / J.
    pub const POLARIZABILITY: f64 = 1.636e-40;
    /// Molecular dipole moment, C m.
    pub const DIPOLE_MOMENT: f64 = 6.138e-30;
    /// kg/mol.
    pub const MOLAR_MASS: f64 = 0.018_015_268;
}

/// Static dielectric constant (relative permittivity) of water at a temperature and a density in kg/m³.
///
/// IAPWS R8-97 (Fernández et al., J. Phys. Chem. Ref. Data 26 (1997) 1125): the Kirkwood equation
/// ε = [1 + A + 5B + √(9 + 2A + 18B + A² + 10AB + 9B²)] / (4 − 4B), with A = N μ² ρ g / (M ε₀ k T), B = N α ρ / (3 M ε₀)
/// and the Harris–Alder factor g a function of temperature and density. Range 238 … 873.15 K, to 1000 MPa (here: to
/// 1250 kg/m³).
///
/// # Errors
/// [`RangeError::Outside`] beyond that range.
pub fn dielectric_constant(t: Kelvin, density: f64) -> Result<f64, RangeError> {
    check_range("temperature for the dielectric constant in K", t.0, 238.0, 873.15)?;
    check_range("density of water in kg/m³", density, 0.0, 1250.0)?;
    let delta = density / CRITICAL_DENSITY;
    let tau = CRITICAL_TEMPERATURE / t.0;
    let series: f64 = TERMS.iter().map(|&(n, i, j)| n * delta.powi(i) * tau.powf(j)).sum();
    let factor = 1.0 + series + TWELFTH * delta * (t.0 / 228.0 - 1.0).powf(-1.2);

    let molecules = release::AVOGADRO * density / release::MOLAR_MASS;
    let a =
        molecules * release::DIPOLE_MOMENT.powi(2) * factor / (release::VACUUM_PERMITTIVITY * release::BOLTZMANN * t.0);
    let b = molecules * release::POLARIZABILITY / (3.0 * release::VACUUM_PERMITTIVITY);
    let root = (9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b).sqrt();
    Ok((1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b))
}

/// Elementary charge, C (SI 2019, exact).
const ELEMENTARY_CHARGE: f64 = 1.602_176_634e-19;
/// Boltzmann constant, J/K (SI 2019, exact).
const BOLTZMANN: f64 = 1.380_649e-23;
/// Avogadro constant, 1/mol (SI 2019, exact).
const AVOGADRO: f64 = 6.022_140_76e23;
/// Vacuum electric permittivity, F/m (CODATA 2018).
const VACUUM_PERMITTIVITY: f64 = 8.854_187_812_8e-12;

/// Debye–Hückel limiting slope A for log10 γ on the molality scale, kg^½ mol^−½, of liquid water at the larger of 1 bar and
/// its vapour pressure.
///
/// Debye and Hückel, Physik. Z. 24 (1923) 185: A = √(2π N ρ) ℓ^(3/2) / ln 10, with the Bjerrum length
/// ℓ = e² / (4π ε₀ ε k T); ρ by IAPWS R7-97, ε by IAPWS R8-97, constants by CODATA 2018.
///
/// # Errors
/// [`RangeError`] outside 273.15 … 623.15 K.
pub fn debye_hueckel_a(t: Kelvin) -> Result<f64, RangeError> {
    let density = density(t)?;
    let length = bjerrum_length(t, density)?;
    Ok((2.0 * PI * AVOGADRO * density).sqrt() * length.powf(1.5) / LN_10)
}

/// Debye–Hückel coefficient B of the ion size, kg^½ mol^−½ Å⁻¹, of liquid water at the larger of 1 bar and its vapour
/// pressure.
///
/// Debye and Hückel (1923): B = √(8π N ρ ℓ), with the Bjerrum length ℓ as for [`debye_hueckel_a`]; B √I is the reciprocal
/// thickness of the ionic atmosphere.
///
/// # Errors
/// [`RangeError`] outside 273.15 … 623.15 K.
pub fn debye_hueckel_b(t: Kelvin) -> Result<f64, RangeError> {
    let density = density(t)?;
    let length = bjerrum_length(t, density)?;
    let per_metre = (8.0 * PI * AVOGADRO * density * length).sqrt();
    Ok(per_metre * 1e-10)
}

/// Distance at which two elementary charges in water have the energy kT, m.
fn bjerrum_length(t: Kelvin, density: f64) -> Result<f64, RangeError> {
    let permittivity = 4.0 * PI * VACUUM_PERMITTIVITY * dielectric_constant(t, density)?;
    Ok(ELEMENTARY_CHARGE.powi(2) / (permittivity * BOLTZMANN * t.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// T in K, density in kg/m³, ε. First two rows: IAPWS R8-97, values for checking programs (as printed in the
    /// documentation of `iapws` 1.5.5). Others: ε of the table of the release (from memory, recalculated to all digits with
    /// `iapws` 1.5.5) at 0.101325, 10 and 1000 MPa for 300 K and 100 MPa for 650 K, densities by IAPWS-95 from there.
    const RELEASE: [[f64; 3]; 6] = [
        [298.15, 999.242_866, 78.590_725_0],
        [873.15, 26.056_955_8, 1.126_209_70],
        [300.0, 996.556_935_3, 77.747_35],
        [300.0, 1_000.955_029_9, 78.112_69],
        [300.0, 1_237.516_574_1, 103.696_32],
        [650.0, 726.211_741_8, 17.717_33],
    ];

    #[test]
    fn dielectric_constant_agrees_with_the_release() {
        for [kelvin, density, expected] in RELEASE {
            let found = dielectric_constant(Kelvin(kelvin), density).unwrap();
            assert!((found - expected).abs() < 6e-6, "{kelvin} K: {found}");
        }
    }

    /// 78.4 at 25 °C and 55.5 at 100 °C (Fernández et al. 1997).
    #[test]
    fn dielectric_constant_of_liquid_water() {
        for (celsius, expected) in [(25.0, 78.41), (100.0, 55.53)] {
            let t = Kelvin::from_celsius(celsius);
            let found = dielectric_constant(t, density(t).unwrap()).unwrap();
            assert!((found - expected).abs() < 0.01, "{celsius} °C: {found}");
        }
    }

    #[test]
    fn a_vacuum_has_dielectric_constant_one() {
        assert_eq!(dielectric_constant(Kelvin(400.0), 0.0), Ok(1.0));
    }

    /// °C, A, B: Freeze and Cherry, Groundwater (1979), appendix IV (older dielectric constants, per volume).
    const FREEZE_AND_CHERRY: [[f64; 3]; 4] =
        [[0.0, 0.4883, 0.3241], [10.0, 0.4960, 0.3258], [25.0, 0.5085, 0.3281], [30.0, 0.5130, 0.3290]];

    #[test]
    fn debye_hueckel_coefficients_agree_with_older_tables() {
        for [celsius, a, b] in FREEZE_AND_CHERRY {
            let t = Kelvin::from_celsius(celsius);
            assert!((debye_hueckel_a(t).unwrap() / a - 1.0).abs() < 6e-3);
            assert!((debye_hueckel_b(t).unwrap() / b - 1.0).abs() < 2e-3);
        }
    }

    /// Osmotic slopes A ln 10 / 3 of Bradley and Pitzer, J. Phys. Chem. 83 (1979) 1599 (values from memory).
    #[test]
    fn debye_hueckel_slope_agrees_with_bradley_and_pitzer() {
        for (celsius, osmotic) in [(25.0, 0.3915), (100.0, 0.4603)] {
            let found = debye_hueckel_a(Kelvin::from_celsius(celsius)).unwrap() * LN_10 / 3.0;
            assert!((found / osmotic - 1.0).abs() < 2e-3, "{celsius} °C: {found}");
        }
    }

    #[test]
    fn debye_hueckel_coefficients_end_with_the_liquid() {
        assert!(debye_hueckel_a(Kelvin(630.0)).is_err());
        assert!(debye_hueckel_b(Kelvin(260.0)).is_err());
        assert!(dielectric_constant(Kelvin(300.0), -1.0).is_err());
    }
}
