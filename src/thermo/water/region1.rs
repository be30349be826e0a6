//! Compressed and saturated liquid water.

use crate::quantity::Kelvin;

use super::{RangeError, check_range, saturation_pressure};

/// Specific gas constant of water in the formulation, J/(kg K) (IAPWS R7-97(2012), equation 1).
const SPECIFIC_GAS_CONSTANT: f64 = 461.526;

/// Exponents and coefficients (I, J, n) of IAPWS R7-97(2012), table 2.
const TERMS: [(i32, i32, f64); 34] = [
    (0, -2, 1.463_297_121_316_7e-1),
    (0, -1, -8.454_818_716_911_4e-1),
    (0, 0, -3.756_360_367_204e0),
    (0, 1, 3.385_516_916_838_5e0),
    (0, 2, -9.579_196_338_787_2e-1),
    (0, 3, 1.577_203_851_322_8e-1),
    (0, 4, -1.661_641_719_950_1e-2),
    (0, 5, 8.121_462_998_356_8e-4),
    (1, -9, 2.831_908_012_380_4e-4),
    (1, -7, -6.070_630_156_587_4e-4),
    (1, -1, -1.899_006_821_841_9e-2),
    (1, 0, -3.252_974_877_050_5e-2),
    (1, 1, -2.184_171_717_541_4e-2),
    (1, 3, -5.283_835_796_993e-5),
    (2, -3, -4.718_432_107_326_7e-4),
    (2, 0, -3.000_178_079_302_6e-4),
    (2, 1, 4.766_139_390_698_7e-5),
    (2, 3, -4.414_184_533_084_6e-6),
    (2, 17, -7.269_499_629_759_4e-16),
    (3, -4, -3.167_964_484_505_4e-5),
    (3, 0, -2.827_079_798_531_2e-6),
    (3, 6, -8.520_512_812_010_3e-10),
    (4, -5, -2.242_528_190_8e-6),
    (4, -2, -6.517_122_289_560_1e-7),
    (4, 10, -1.434_172_993_792_4e-13),
    (5, -8, -4.051_699_686_011_7e-7),
    (8, -11, -1.273_430_174_164_1e-9),
    (8, -6, -1.742_487_123_063_4e-10),
    (21, -29, -6.876_213_129_553_1e-19),
    (23, -31, 1.447_830_782_852_1e-20),
    (29, -38, 2.633_578_166_279_5e-23),
    (30, -39, -1.194_762_264_007_1e-23),
    (31, -40, 1.822_809_458_140_4e-24),
    (32, -41, -9.353_708_729_245_8e-26),
];

/// Specific properties of liquid water; energy and entropy are zero for the liquid at the triple point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LiquidWater {
    /// Gibbs energy, J/kg.
    pub gibbs_energy: f64,
    /// Enthalpy, J/kg.
    pub enthalpy: f64,
    /// Entropy, J/(kg K).
    pub entropy: f64,
    /// Volume, m³/kg.
    pub volume: f64,
    /// Isobaric heat capacity, J/(kg K).
    pub heat_capacity: f64,
}

/// Properties of liquid water at a temperature and a pressure in bar.
///
/// IAPWS R7-97(2012), region 1, equation 7: g/(RT) = Σ nᵢ (7.1 − π)^Iᵢ (τ − 1.222)^Jᵢ with π = p / 16.53 MPa and
/// τ = 1386 K / T; the other properties are its derivatives (table 3 of the release). Range 273.15 … 623.15 K, from the
/// vapour pressure to 1000 bar.
///
/// # Errors
/// [`RangeError::Outside`] beyond that range; the pressure also when water would be steam.
pub fn liquid(t: Kelvin, pressure_bar: f64) -> Result<LiquidWater, RangeError> {
    check_range("temperature of liquid water in K", t.0, 273.15, 623.15)?;
    let boiling = saturation_pressure(t)?;
    check_range("pressure on liquid water in bar", pressure_bar, boiling, 1000.0)?;
    let reduced_pressure = pressure_bar / 165.3;
    let tau = 1386.0 / t.0;
    let (x, y) = (7.1 - reduced_pressure, tau - 1.222);
    let (mut gamma, mut by_pressure, mut by_tau, mut by_tau_twice) = (0.0, 0.0, 0.0, 0.0);
    for &(i, j, n) in &TERMS {
        let (power_x, power_y) = (x.powi(i), y.powi(j));
        let (i, j) = (f64::from(i), f64::from(j));
        gamma += n * power_x * power_y;
        by_pressure -= n * i * power_x / x * power_y;
        by_tau += n * j * power_x * power_y / y;
        by_tau_twice += n * j * (j - 1.0) * power_x * power_y / (y * y);
    }
    let rt = SPECIFIC_GAS_CONSTANT * t.0;
    Ok(LiquidWater {
        gibbs_energy: rt * gamma,
        enthalpy: rt * tau * by_tau,
        entropy: SPECIFIC_GAS_CONSTANT * (tau * by_tau - gamma),
        volume: rt * reduced_pressure * by_pressure / (pressure_bar * 1e5),
        heat_capacity: -SPECIFIC_GAS_CONSTANT * tau * tau * by_tau_twice,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// IAPWS R7-97(2012), table 5: T in K, p in bar, v in m³/kg, h in kJ/kg, s and cp in kJ/(kg K).
    const RELEASE: [[f64; 6]; 3] = [
        [300.0, 30.0, 0.100_215_168e-2, 0.115_331_273e3, 0.392_294_792, 0.417_301_218e1],
        [300.0, 800.0, 0.971_180_894e-3, 0.184_142_828e3, 0.368_563_852, 0.401_008_987e1],
        [500.0, 30.0, 0.120_241_800e-2, 0.975_542_239e3, 0.258_041_912e1, 0.465_580_682e1],
    ];

    #[test]
    fn agrees_with_the_table_of_the_release() {
        for [kelvin, bar, volume, enthalpy, entropy, heat_capacity] in RELEASE {
            let water = liquid(Kelvin(kelvin), bar).unwrap();
            let pairs = [
                (water.volume, volume),
                (water.enthalpy, enthalpy * 1e3),
                (water.entropy, entropy * 1e3),
                (water.heat_capacity, heat_capacity * 1e3),
            ];
            for (found, expected) in pairs {
                assert!((found / expected - 1.0).abs() < 5e-9, "{kelvin} K, {bar} bar: {found} against {expected}");
            }
            let gibbs_energy = (enthalpy - kelvin * entropy) * 1e3;
            assert!((water.gibbs_energy - gibbs_energy).abs() < 0.01);
        }
    }

    /// The liquid at the triple point has neither internal energy nor entropy (IAPWS R7-97(2012), section 2).
    #[test]
    fn origin_is_the_liquid_at_the_triple_point() {
        let t = Kelvin(273.16);
        let water = liquid(t, saturation_pressure(t).unwrap()).unwrap();
        assert!(water.entropy.abs() < 1e-3);
        assert!(water.enthalpy.abs() < 1.0);
    }

    #[test]
    fn steam_is_not_described() {
        assert!(liquid(Kelvin(400.0), 1.0).is_err());
        assert!(liquid(Kelvin(300.0), 1001.0).is_err());
        assert!(liquid(Kelvin(624.0), 300.0).is_err());
    }
}
