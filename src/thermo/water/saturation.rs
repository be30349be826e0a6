//! Vapour pressure of water.

use crate::quantity::Kelvin;

use super::{RangeError, check_range};

/// Coefficients n1 … n10 of IAPWS R7-97(2012), table 34.
const N: [f64; 10] = [
    0.116_705_214_527_67e4,
    -0.724_213_167_032_06e6,
    -0.170_738_469_400_92e2,
    0.120_208_247_024_70e5,
    -0.323_255_503_223_33e7,
    0.149_151_086_135_30e2,
    -0.482_326_573_615_91e4,
    0.405_113_405_420_57e6,
    -0.238_555_575_678_49,
    0.650_175_348_447_98e3,
];

/// Saturation pressure of water, bar.
///
/// IAPWS R7-97(2012), region 4, equation 30: p/MPa = [2C / (−B + √(B² − 4AC))]⁴ with A, B, C quadratic in
/// ϑ = T + n9 / (T − n10). Range 273.15 … 647.096 K (the critical point).
///
/// # Errors
/// [`RangeError::Outside`] beyond that range.
pub fn saturation_pressure(t: Kelvin) -> Result<f64, RangeError> {
    check_range("temperature of boiling water in K", t.0, 273.15, 647.096)?;
    let theta = t.0 + N[8] / (t.0 - N[9]);
    let a = theta * theta + N[0] * theta + N[1];
    let b = N[2] * theta * theta + N[3] * theta + N[4];
    let c = N[5] * theta * theta + N[6] * theta + N[7];
    let root = (b * b - 4.0 * a * c).sqrt();
    let megapascals = (2.0 * c / (root - b)).powi(4);
    Ok(megapascals * 10.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// IAPWS R7-97(2012), table 35: saturation pressure in MPa.
    #[test]
    fn agrees_with_the_table_of_the_release() {
        for (kelvin, megapascals) in [(300.0, 0.353_658_941e-2), (500.0, 0.263_889_776e1), (600.0, 0.123_443_146e2)] {
            let found: f64 = saturation_pressure(Kelvin(kelvin)).unwrap() / 10.0;
            assert!((found / megapascals - 1.0).abs() < 1e-8, "{kelvin} K: {found}");
        }
    }

    #[test]
    fn water_boils_near_100_celsius_at_one_atmosphere() {
        let bar = saturation_pressure(Kelvin(373.124)).unwrap();
        assert!((bar - crate::quantity::ATMOSPHERE_BAR).abs() < 1e-4, "{bar}");
    }

    #[test]
    fn has_no_value_above_the_critical_point_or_below_freezing() {
        assert!(saturation_pressure(Kelvin(647.2)).is_err());
        assert!(saturation_pressure(Kelvin(273.0)).is_err());
    }
}
