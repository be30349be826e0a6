//! Ions above and below 25 °C by the correspondence principle.
//!
//! Criss and Cobble, J. Am. Chem. Soc. 86 (1964) 5385 and 5390: with the entropy of H⁺(aq) set to −20.92 J/(mol K) at 25 °C
//! instead of zero, the entropies of the ions of one class at T are a straight line over those at 25 °C. The coefficients
//! here are values from memory, tested for consistency among themselves; those above 150 or 200 °C are extrapolated already in
//! the paper. The ion product of water comes out within 0.07 in log K to 300 °C. The acid oxyanions are the weak class:
//! pK₂ of sulfuric acid is 0.2 too high at 100 °C and 0.5 at 200 °C (measured values from memory).

use crate::library::record::IonClass;
use crate::quantity::{Kelvin, T_STANDARD};

use super::water::{RangeError, check_range};

/// Thermochemical calorie, J.
const CALORIE: f64 = 4.184;

/// Temperatures of the tables, °C.
const NODES_CELSIUS: [f64; 6] = [60.0, 100.0, 150.0, 200.0, 250.0, 300.0];

/// One value at each of [`NODES_CELSIUS`].
type Row = [f64; 6];

/// S(T) = a + b S(298.15 K), absolute scale: a in cal/(mol K), b without unit.
struct Line {
    a: Row,
    b: Row,
}

const CATIONS: Line = Line { a: [3.9, 10.3, 16.2, 23.3, 29.9, 36.6], b: [0.955, 0.876, 0.792, 0.711, 0.630, 0.548] };
const ANIONS: Line =
    Line { a: [-5.1, -13.0, -21.3, -30.2, -38.7, -49.2], b: [0.969, 1.000, 0.989, 0.981, 0.978, 0.972] };
const OXYANIONS: Line =
    Line { a: [-14.0, -31.0, -46.4, -67.0, -86.5, -106.0], b: [1.217, 1.476, 1.687, 2.020, 2.320, 2.618] };
const ACID_OXYANIONS: Line =
    Line { a: [-13.5, -30.3, -50.0, -70.0, -90.0, -110.0], b: [1.380, 1.894, 2.381, 2.960, 3.530, 4.100] };

/// Entropy of H⁺(aq) on the absolute scale at 298.15 K, J/(mol K).
const HYDROGEN_ION_ENTROPY: f64 = -5.0 * CALORIE;
/// The same at the temperatures of the tables, cal/(mol K).
const HYDROGEN_ION: Row = [-2.5, 2.0, 6.5, 11.1, 16.1, 20.7];

/// Entropy at 298.15 K on the absolute scale, J/(mol K), from the conventional one (zero for H⁺) and the charge:
/// S(absolute) = S(conventional) − 20.92 z (Criss and Cobble 1964).
pub fn absolute_entropy(conventional: f64, charge: i32) -> f64 {
    conventional + HYDROGEN_ION_ENTROPY * f64::from(charge)
}

/// G(T) − G(298.15 K) of an ion, J/mol, on the absolute entropy scale, along the vapour pressure of water.
///
/// Criss and Cobble (1964): −S (T − 298.15 K) + Cp [(T − 298.15 K) − T ln(T/298.15 K)] with the mean heat capacity from
/// 298.15 K to T Cp = α + β S, α = a / ln(T/298.15 K), β = (b − 1) / ln(T/298.15 K). α and β go through the table by monotone
/// cubics, so that G and its slope are continuous; below 60 °C they keep their values of 60 °C. The absolute scale falls out of
/// any reaction balanced in charge that counts H⁺ by [`hydrogen_ion_gibbs_change`]. Range 273.15 … 573.15 K;
/// `entropy` is [`absolute_entropy`] at 298.15 K, J/(mol K).
///
/// # Errors
/// [`RangeError::Outside`] beyond that range.
pub fn gibbs_change(class: IonClass, entropy: f64, t: Kelvin) -> Result<f64, RangeError> {
    let line = match class {
        IonClass::Cation => &CATIONS,
        IonClass::Anion => &ANIONS,
        IonClass::Oxyanion => &OXYANIONS,
        IonClass::AcidOxyanion => &ACID_OXYANIONS,
    };
    check_temperature(t)?;
    let alpha = interpolate(&per_logarithm(line.a.map(|a| a * CALORIE)), t);
    let beta = interpolate(&per_logarithm(line.b.map(|b| b - 1.0)), t);
    Ok(with_mean_heat_capacity(entropy, alpha + beta * entropy, t))
}

/// G(T) − G(298.15 K) of H⁺(aq), J/mol, on the absolute entropy scale, along the vapour pressure of water.
///
/// As [`gibbs_change`], with the mean heat capacity [S(T) − S(298.15 K)] / ln(T/298.15 K) from the entropies that Criss and
/// Cobble (1964) give for H⁺. Range 273.15 … 573.15 K.
///
/// # Errors
/// [`RangeError::Outside`] beyond that range.
pub fn hydrogen_ion_gibbs_change(t: Kelvin) -> Result<f64, RangeError> {
    check_temperature(t)?;
    let gained = HYDROGEN_ION.map(|s| s * CALORIE - HYDROGEN_ION_ENTROPY);
    let heat_capacity = interpolate(&per_logarithm(gained), t);
    Ok(with_mean_heat_capacity(HYDROGEN_ION_ENTROPY, heat_capacity, t))
}

fn check_temperature(t: Kelvin) -> Result<(), RangeError> {
    check_range("temperature of the correspondence principle in K", t.0, 273.15, 573.15)
}

/// G(T) − G(298.15 K), J/mol, from entropy at 298.15 K and mean heat capacity, J/(mol K).
fn with_mean_heat_capacity(entropy: f64, heat_capacity: f64, t: Kelvin) -> f64 {
    let rise = t.0 - T_STANDARD.0;
    -entropy * rise + heat_capacity * (rise - t.0 * (t.0 / T_STANDARD.0).ln())
}

/// Entropy differences from 298.15 K as mean heat capacities.
fn per_logarithm(differences: Row) -> Row {
    let mut means = differences;
    for (mean, celsius) in means.iter_mut().zip(NODES_CELSIUS) {
        *mean /= (Kelvin::from_celsius(celsius).0 / T_STANDARD.0).ln();
    }
    means
}

/// Value at `t` of the monotone piecewise cubic through `values` at the nodes; constant below the first node.
///
/// Fritsch and Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300: slopes at inner nodes are weighted harmonic means of the
/// neighbouring secants, zero where those change sign. The slope at the first node is zero, to join the constant.
fn interpolate(values: &Row, t: Kelvin) -> f64 {
    let celsius = t.celsius();
    if celsius <= NODES_CELSIUS[0] {
        return values[0];
    }
    let last = NODES_CELSIUS.len() - 2;
    let i = NODES_CELSIUS[1..=last].partition_point(|node| *node <= celsius);
    let width = NODES_CELSIUS[i + 1] - NODES_CELSIUS[i];
    let x = (celsius - NODES_CELSIUS[i]) / width;
    let (left, right) = (slope(values, i) * width, slope(values, i + 1) * width);
    let rise = values[i + 1] - values[i];
    values[i] + x * (left + x * (3.0 * rise - 2.0 * left - right + x * (left + right - 2.0 * rise)))
}

/// Slope of the monotone cubic at a node.
fn slope(values: &Row, node: usize) -> f64 {
    let width = |i: usize| NODES_CELSIUS[i + 1] - NODES_CELSIUS[i];
    let secant = |i: usize| (values[i + 1] - values[i]) / width(i);
    if node == 0 {
        return 0.0;
    }
    if node == NODES_CELSIUS.len() - 1 {
        return secant(node - 1);
    }
    let (before, after) = (secant(node - 1), secant(node));
    if before * after <= 0.0 {
        return 0.0;
    }
    let weight_before = width(node - 1) + 2.0 * width(node);
    let weight_after = 2.0 * width(node - 1) + width(node);
    (weight_before + weight_after) / (weight_before / before + weight_after / after)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::thermo::water;
    use std::f64::consts::LN_10;

    const CLASSES: [IonClass; 4] = [IonClass::Cation, IonClass::Anion, IonClass::Oxyanion, IonClass::AcidOxyanion];

    /// Apparent G(T) in J/mol of an ion from ΔfG° in kJ/mol and S° in J/(mol K), both conventional.
    fn ion(class: IonClass, charge: i32, gibbs: f64, entropy: f64, t: Kelvin) -> f64 {
        gibbs * 1e3 + gibbs_change(class, absolute_entropy(entropy, charge), t).unwrap()
    }

    fn log10(gibbs: f64, t: Kelvin) -> f64 {
        -gibbs / (t.rt() * LN_10)
    }

    /// H2O(l) and OH⁻ of the NBS tables (1982): ΔfG° −237.129 and −157.244 kJ/mol, S°(OH⁻) −10.75 J/(mol K).
    #[test]
    fn ion_product_agrees_with_iapws() {
        for (celsius, tolerance) in [(0.0, 0.03), (60.0, 0.01), (100.0, 0.02), (200.0, 0.06), (300.0, 0.06)] {
            let t = Kelvin::from_celsius(celsius);
            let water = -237.129e3 + water::liquid_water_gibbs_change(t).unwrap();
            let ions = ion(IonClass::Anion, -1, -157.244, -10.75, t) + hydrogen_ion_gibbs_change(t).unwrap();
            let found = log10(ions - water, t);
            let expected = water::log10_ion_product(t, water::density(t).unwrap()).unwrap();
            assert!((found - expected).abs() < tolerance, "{celsius} °C: {found} against {expected}");
        }
    }

    /// HCO3⁻ = H⁺ + CO3²⁻ by Plummer and Busenberg, Geochim. Cosmochim. Acta 46 (1982) 1011, 0 … 90 °C (equation from
    /// memory), against G° and S° of the NBS tables (1982).
    #[test]
    fn second_dissociation_of_carbonic_acid() {
        for celsius in [0.0, 25.0, 60.0, 90.0] {
            let t = Kelvin::from_celsius(celsius);
            let expected =
                -107.8871 - 0.032_528_49 * t.0 + 5151.79 / t.0 + 38.925_61 * t.0.log10() - 563_713.9 / (t.0 * t.0);
            let ions = ion(IonClass::Oxyanion, -2, -527.81, -56.9, t) + hydrogen_ion_gibbs_change(t).unwrap();
            let found = log10(ions - ion(IonClass::AcidOxyanion, -1, -586.77, 91.2, t), t);
            assert!((found - expected).abs() < 0.1, "{celsius} °C: {found} against {expected}");
        }
    }

    /// 0.0021 g of AgCl dissolve in 100 cm³ of water at 100 °C (handbook value from memory); NBS tables (1982) for G°, S°, Cp.
    #[test]
    fn solubility_of_silver_chloride_in_boiling_water() {
        let t = Kelvin::from_celsius(100.0);
        let solid = -109.789e3 + with_mean_heat_capacity(96.2, 50.79, t);
        let ions = ion(IonClass::Cation, 1, 77.107, 72.68, t) + ion(IonClass::Anion, -1, -131.228, 56.5, t);
        let grams_per_litre = 10_f64.powf(0.5 * log10(ions - solid, t)) * 143.32 * 0.958;
        assert!((grams_per_litre - 0.021).abs() < 0.002, "{grams_per_litre}");
    }

    /// S(T) − S(298.15 K) = Cp ln(T/298.15 K); S(Na⁺) 68.09 J/(mol K) conventional at 100 °C from 59.0 at 25 °C, and SO4²⁻
    /// −35.25 at 150 °C from 20.1, by the straight lines of Criss and Cobble.
    #[test]
    fn mean_heat_capacity_leads_back_to_the_entropies_of_the_table() {
        let cases =
            [(IonClass::Cation, 1, 59.0, 100.0, 68.09, 8.37), (IonClass::Oxyanion, -2, 20.1, 150.0, -35.25, 27.20)];
        for (class, charge, conventional, celsius, expected, hydrogen) in cases {
            let t = Kelvin::from_celsius(celsius);
            let entropy = absolute_entropy(conventional, charge);
            let rise = t.0 - T_STANDARD.0;
            let logarithm = (t.0 / T_STANDARD.0).ln();
            let mean = (gibbs_change(class, entropy, t).unwrap() + entropy * rise) / (rise - t.0 * logarithm);
            let found = entropy + mean * logarithm - f64::from(charge) * hydrogen;
            assert!((found - expected).abs() < 0.05, "{found} against {expected}");
        }
    }

    #[test]
    fn ion_at_298_15_kelvin_is_the_origin() {
        for class in CLASSES {
            assert_eq!(gibbs_change(class, 50.0, T_STANDARD), Ok(0.0));
        }
        assert_eq!(hydrogen_ion_gibbs_change(T_STANDARD), Ok(0.0));
    }

    #[test]
    fn gibbs_energy_and_its_slope_have_no_steps() {
        let step = 1e-3;
        for class in CLASSES {
            for celsius in [25.0, 60.0, 100.0, 150.0, 200.0, 250.0] {
                let at = |celsius: f64| gibbs_change(class, 60.0, Kelvin::from_celsius(celsius)).unwrap();
                let before = (at(celsius) - at(celsius - step)) / step;
                let after = (at(celsius + step) - at(celsius)) / step;
                assert!((after - before).abs() < 0.01, "{class:?} at {celsius} °C: {before}, {after}");
            }
        }
    }

    #[test]
    fn interpolation_stays_between_its_nodes() {
        let row = per_logarithm(OXYANIONS.a);
        for (pair, nodes) in row.windows(2).zip(NODES_CELSIUS.windows(2)) {
            for part in [0.0, 0.2, 0.5, 0.8, 1.0] {
                let value = interpolate(&row, Kelvin::from_celsius(nodes[0] + part * (nodes[1] - nodes[0])));
                let (low, high) = (pair[0].min(pair[1]), pair[0].max(pair[1]));
                assert!((low - 1e-9..=high + 1e-9).contains(&value));
            }
        }
    }

    #[test]
    fn range_ends_at_0_and_300_celsius() {
        for celsius in [0.0, 300.0] {
            assert!(gibbs_change(IonClass::Cation, 0.0, Kelvin::from_celsius(celsius)).is_ok());
        }
        for celsius in [-1.0, 301.0] {
            assert!(gibbs_change(IonClass::Cation, 0.0, Kelvin::from_celsius(celsius)).is_err());
            assert!(hydrogen_ion_gibbs_change(Kelvin::from_celsius(celsius)).is_err());
        }
    }
}
