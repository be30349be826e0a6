//! Standard potentials, equilibrium constants, water and activity coefficients against published values, source beside each.

use halfcell::chemistry::Medium;
use halfcell::equilibrium::{Liquor, Recipe};
use halfcell::library::Library;
use halfcell::quantity::{Kelvin, T_STANDARD};
use halfcell::thermo::{named, water};

fn library() -> Library {
    Library::embedded().expect("the embedded library")
}

/// E° of a reduction written out, V at 25 °C.
fn standard_potential(library: &Library, half_reaction: &str) -> f64 {
    let equation = named::reaction(half_reaction, library, Medium::Acid).expect(half_reaction);
    assert!(equation.electrons < 0.0, "{half_reaction} takes up electrons");
    let values = named::values(&equation, library, T_STANDARD).expect(half_reaction);
    values.potential.expect(half_reaction).value
}

fn log_k(library: &Library, reaction: &str, t: Kelvin) -> f64 {
    let equation = named::reaction(reaction, library, Medium::Acid).expect(reaction);
    named::values(&equation, library, t).expect(reaction).log_k.value
}

fn assert_potentials(table: &[(&str, f64)]) {
    let library = library();
    let wrong: Vec<String> = table
        .iter()
        .filter_map(|(half, published)| {
            let found = standard_potential(&library, half);
            ((found - published).abs() > 0.010).then(|| format!("{half}: {found:.4} V, published {published} V"))
        })
        .collect();
    assert!(wrong.is_empty(), "more than 10 mV off:\n{}", wrong.join("\n"));
}

/// Table of standard electrode potentials of the CRC Handbook of Chemistry and Physics, as reprinted in OpenStax Chemistry, appendix L.
const CRC: &[(&str, f64)] = &[
    ("Ag^+ + e^- = Ag(cr)", 0.7996),
    ("AgCl(cr) + e^- = Ag(cr) + Cl^-", 0.22233),
    ("Ag(NH3)2^+ + e^- = Ag(cr) + 2 NH3(aq)", 0.373),
    ("Cl2(g) + 2 e^- = 2 Cl^-", 1.35827),
    ("ClO^- + H2O(l) + 2 e^- = Cl^- + 2 OH^-", 0.89),
    ("Co^2+ + 2 e^- = Co(cr)", -0.28),
    ("Cu^2+ + 2 e^- = Cu(cr)", 0.34),
    ("Cu^2+ + e^- = Cu^+", 0.153),
    ("Cu^+ + e^- = Cu(cr)", 0.521),
    ("Fe^3+ + e^- = Fe^2+", 0.771),
    ("H2O(l) + e^- = 1/2 H2(g) + OH^-", -0.8277),
    ("O2(g) + 2 H^+ + 2 e^- = H2O2(aq)", 0.695),
    ("O2(g) + 4 H^+ + 4 e^- = 2 H2O(l)", 1.229),
    ("O2(g) + 2 H2O(l) + 4 e^- = 4 OH^-", 0.401),
    ("Hg^2+ + 2 e^- = Hg(l)", 0.851),
    ("Hg2Cl2(cr) + 2 e^- = 2 Hg(l) + 2 Cl^-", 0.26808),
    ("I2(cr) + 2 e^- = 2 I^-", 0.5355),
    ("K^+ + e^- = K(cr)", -2.931),
    ("Li^+ + e^- = Li(cr)", -3.04),
    ("Na^+ + e^- = Na(cr)", -2.71),
    ("Mn^2+ + 2 e^- = Mn(cr)", -1.185),
    ("MnO2(cr) + 4 H^+ + 2 e^- = Mn^2+ + 2 H2O(l)", 1.23),
    ("MnO4^- + 8 H^+ + 5 e^- = Mn^2+ + 4 H2O(l)", 1.507),
    ("NO3^- + 4 H^+ + 3 e^- = NO(g) + 2 H2O(l)", 0.957),
    ("NO3^- + 3 H^+ + 2 e^- = HNO2(aq) + H2O(l)", 0.92),
    ("Pb^2+ + 2 e^- = Pb(cr)", -0.1262),
    ("PbSO4(cr) + 2 e^- = Pb(cr) + SO4^2-", -0.3505),
    ("PbO2(cr) + SO4^2- + 4 H^+ + 2 e^- = PbSO4(cr) + 2 H2O(l)", 1.69),
    ("S(cr) + 2 H^+ + 2 e^- = H2S(aq)", 0.142),
    ("Sn^2+ + 2 e^- = Sn(cr)", -0.1375),
    ("Zn^2+ + 2 e^- = Zn(cr)", -0.7618),
];

/// Bratsch, J. Phys. Chem. Ref. Data 18 (1989) 1, as reprinted in Harris, Quantitative Chemical Analysis, 8th ed., appendix H.
const BRATSCH: &[(&str, f64)] = &[
    ("Al^3+ + 3 e^- = Al(cr)", -1.677),
    ("As(cr) + 3 H^+ + 3 e^- = AsH3(g)", -0.238),
    ("H3AsO3(aq) + 3 H^+ + 3 e^- = As(cr) + 3 H2O(l)", 0.2475),
    ("H3AsO4(aq) + 2 H^+ + 2 e^- = H3AsO3(aq) + H2O(l)", 0.575),
    ("Ba^2+ + 2 e^- = Ba(cr)", -2.906),
    ("Br2(l) + 2 e^- = 2 Br^-", 1.078),
    ("Br2(aq) + 2 e^- = 2 Br^-", 1.098),
    ("BrO3^- + 6 H^+ + 5 e^- = 1/2 Br2(l) + 3 H2O(l)", 1.513),
    ("Ca^2+ + 2 e^- = Ca(cr)", -2.868),
    ("Cd^2+ + 2 e^- = Cd(cr)", -0.402),
];

/// Lingane, J. Electroanal. Chem. 4 (1962) 332 (AuCl2^-); Bodländer, Ber. Bunsenges. Phys. Chem. 36 (1903) 3933 (Au(CN)2^-);
/// both as the IUPAC Stability Constants compilation 4.62 gives them.
const PRIMARY: &[(&str, f64)] =
    &[("AuCl2^- + e^- = Au(cr) + 2 Cl^-", 1.154), ("Au(CN)2^- + e^- = Au(cr) + 2 CN^-", -0.611)];

/// CRC Handbook and Bratsch (1989) class tables, value from memory.
const MEMORY: &[(&str, f64)] = &[
    ("AuCl4^- + 3 e^- = Au(cr) + 4 Cl^-", 1.002),
    ("Cl2(aq) + 2 e^- = 2 Cl^-", 1.396),
    ("CuCl(cr) + e^- = Cu(cr) + Cl^-", 0.121),
    ("Cu^2+ + Cl^- + e^- = CuCl(cr)", 0.559),
    ("MnO4^- + 4 H^+ + 3 e^- = MnO2(cr) + 2 H2O(l)", 1.692),
    ("MnO4^- + e^- = MnO4^2-", 0.558),
    ("N2(g) + 8 H^+ + 6 e^- = 2 NH4^+", 0.275),
    ("SO2(aq) + 4 H^+ + 4 e^- = S(cr) + 2 H2O(l)", 0.449),
    ("SnO2(cr) + 4 H^+ + 4 e^- = Sn(cr) + 2 H2O(l)", -0.117),
    ("PbCl2(cr) + 2 e^- = Pb(cr) + 2 Cl^-", -0.2675),
    ("Ag2O(cr) + H2O(l) + 2 e^- = 2 Ag(cr) + 2 OH^-", 0.342),
    ("HgO(cr) + H2O(l) + 2 e^- = Hg(l) + 2 OH^-", 0.0977),
];

/// Standard and formal electrode potentials, appendix of Skoog, West, Holler and Crouch, Fundamentals of Analytical Chemistry.
const SKOOG: &[(&str, f64)] = &[
    ("CuI(cr) + e^- = Cu(cr) + I^-", -0.185),
    ("I3^- + 2 e^- = 3 I^-", 0.536),
    ("PbO2(cr) + 4 H^+ + 2 e^- = Pb^2+ + 2 H2O(l)", 1.455),
];

#[test]
fn standard_potentials_crc() {
    assert_potentials(CRC);
}

#[test]
fn standard_potentials_bratsch() {
    assert_potentials(BRATSCH);
}

#[test]
fn standard_potentials_primary() {
    assert_potentials(PRIMARY);
}

#[test]
fn standard_potentials_memory() {
    assert_potentials(MEMORY);
}

#[test]
fn standard_potentials_skoog() {
    assert_potentials(SKOOG);
}

/// Whole-reaction constants, log10 K at 25 °C, with the source of each and the spread that its sources leave.
const CONSTANTS: &[(&str, f64, f64)] = &[
    // C Davies, A Jones, Trans. Faraday Soc. 51 (1955) 812 (IUPAC compilation 4.62)
    ("AgCl(cr) = Ag^+ + Cl^-", -9.75, 0.05),
    // B Owen, S Brinkley, J. Am. Chem. Soc. 60 (1938) 2233 (IUPAC compilation 4.62)
    ("AgI(cr) = Ag^+ + I^-", -16.08, 0.05),
    // C Paige, W Kornicker, O Hileman, Geochim. Cosmochim. Acta 56 (1992) 1165 (IUPAC compilation 4.62)
    ("PbSO4(cr) = Pb^2+ + SO4^2-", -7.76, 0.1),
    // J Lozar et al., Thermochim. Acta 79 (1984) 171 (IUPAC compilation 4.62)
    ("PbCl2(cr) = Pb^2+ + 2 Cl^-", -4.77, 0.1),
    // K J Powell et al. (IUPAC), Pure Appl. Chem. 79 (2007) 895
    ("Cu(OH)2(cr) + 2 H^+ = Cu^2+ + 2 H2O(l)", 8.67, 0.1),
    // K J Powell et al. (IUPAC), Pure Appl. Chem. 81 (2009) 2425
    ("PbO(cr) + 2 H^+ = Pb^2+ + H2O(l)", 12.62, 0.2),
    // P L Brown, C Ekberg, Hydrolysis of Metal Ions, Wiley 2016
    ("FeOOH(cr) + 3 H^+ = Fe^3+ + 2 H2O(l)", 0.33, 0.5),
    ("Fe(OH)3(am) + 3 H^+ = Fe^3+ + 3 H2O(l)", 3.50, 0.5),
    ("Mn(OH)2(am) + 2 H^+ = Mn^2+ + 2 H2O(l)", 15.19, 0.3),
    // D Baron, C Palmer, Geochim. Cosmochim. Acta 60 (1996) 185
    ("KFe3(SO4)2(OH)6(cr) + 6 H^+ = K^+ + 3 Fe^3+ + 2 SO4^2- + 6 H2O(l)", -11.0, 0.6),
    // D Dyrssen, Marine Chem. 28 (1989) 241
    ("HgS(cr) + H^+ = Hg^2+ + HS^-", -39.8, 0.5),
    // M Schoonen, H Barnes, Geochim. Cosmochim. Acta 52 (1988) 649
    ("PbS(cr) + H^+ = Pb^2+ + HS^-", -14.67, 0.5),
    // Protonation constants, IUPAC and critical compilations, value from memory
    ("NH4^+ = NH3(aq) + H^+", -9.245, 0.03),
    ("HCN(aq) = H^+ + CN^-", -9.21, 0.05),
    ("H2S(aq) = H^+ + HS^-", -6.99, 0.05),
    ("HSO4^- = H^+ + SO4^2-", -1.99, 0.03),
    ("HClO(aq) = H^+ + ClO^-", -7.53, 0.05),
    ("HF(aq) = H^+ + F^-", -3.17, 0.03),
    ("CO2(aq) + H2O(l) = HCO3^- + H^+", -6.352, 0.03),
    ("HCO3^- = H^+ + CO3^2-", -10.329, 0.03),
    // Chlorine hydrolysis, Wang and Margerum, Inorg. Chem. 33 (1994) 1050, value from memory
    ("Cl2(aq) + H2O(l) = HClO(aq) + Cl^- + H^+", -3.29, 0.15),
];

#[test]
fn equilibrium_constants() {
    let library = library();
    let wrong: Vec<String> = CONSTANTS
        .iter()
        .filter_map(|(reaction, published, spread)| {
            let found = log_k(&library, reaction, T_STANDARD);
            ((found - published).abs() > *spread).then(|| format!("{reaction}: {found:.2}, published {published}"))
        })
        .collect();
    assert!(wrong.is_empty(), "off by more than the sources leave:\n{}", wrong.join("\n"));
}

/// IAPWS R11-07, ion product along the liquid at 1 bar or saturation; the bound is the design's.
#[test]
fn ion_product_of_water_over_temperature() {
    let library = library();
    for celsius in [25.0, 100.0, 200.0, 300.0] {
        let t = Kelvin::from_celsius(celsius);
        let density = water::density(t).expect("density");
        let published = water::log10_ion_product(t, density).expect("R11-07");
        let found = log_k(&library, "H2O(l) = H^+ + OH^-", t);
        assert!((found - published).abs() < 0.15, "{celsius} °C: {found:.3} against {published:.3}");
    }
}

/// Second dissociation of sulfuric acid, Dickson, Wesolowski, Palmer and Mesmer, J. Phys. Chem. 94 (1990) 7978, value from
/// memory.
#[test]
fn bisulfate_weakens_with_temperature() {
    let library = library();
    for (celsius, published) in [(25.0, -1.98), (100.0, -3.0), (200.0, -4.5)] {
        let found = log_k(&library, "HSO4^- = H^+ + SO4^2-", Kelvin::from_celsius(celsius));
        assert!((found - published).abs() < 0.15, "{celsius} °C: {found:.2} against {published}");
    }
}

/// A liquor of one fully dissociated salt at pH 7 (or its acid's own pH); mean activity coefficient of the two ions.
fn mean_activity_coefficient(library: &Library, cation: (&str, f64), anion: (&str, f64), molality: f64) -> f64 {
    let mut totals = std::collections::BTreeMap::new();
    for (text, count) in [cation, anion] {
        let species = library.dissolved(text).expect(text);
        let (constituent, _) = species.constituents.first().expect(text).clone();
        totals.insert(constituent, count * molality);
    }
    let recipe = Recipe { temperature: T_STANDARD, ph: 6.0, totals, gases: Vec::new() };
    let liquor = Liquor::mix(library, recipe).expect("a simple salt");
    let ln = |text: &str| liquor.ln_gamma(library.dissolved(text).expect(text).id);
    ((cation.1 * ln(cation.0) + anion.1 * ln(anion.0)) / (cation.1 + anion.1)).exp()
}

/// Robinson and Stokes, Electrolyte Solutions, 2nd ed. (1959), appendix 8.10, mean molal activity coefficients at 25 °C,
/// value from memory; the bound is what a one-parameter equation can give at these strengths.
#[test]
fn mean_activity_coefficients_at_low_ionic_strength() {
    let library = library();
    for (cation, anion, molality, published) in [
        (("Na^+", 1.0), ("Cl^-", 1.0), 0.01, 0.903),
        (("Na^+", 1.0), ("Cl^-", 1.0), 0.1, 0.778),
        (("K^+", 1.0), ("Cl^-", 1.0), 0.01, 0.902),
        (("K^+", 1.0), ("Cl^-", 1.0), 0.1, 0.770),
        (("Na^+", 1.0), ("NO3^-", 1.0), 0.1, 0.762),
        (("Na^+", 1.0), ("Br^-", 1.0), 0.1, 0.782),
        (("K^+", 1.0), ("NO3^-", 1.0), 0.01, 0.898),
        (("Na^+", 1.0), ("ClO4^-", 1.0), 0.1, 0.775),
        (("Ca^2+", 1.0), ("Cl^-", 2.0), 0.01, 0.732),
        (("Ca^2+", 1.0), ("Cl^-", 2.0), 0.1, 0.518),
        (("Mg^2+", 1.0), ("Cl^-", 2.0), 0.1, 0.529),
        (("K^+", 1.0), ("Br^-", 1.0), 0.1, 0.772),
    ] {
        let found = mean_activity_coefficient(&library, cation, anion, molality);
        let relative = found / published - 1.0;
        assert!(relative.abs() < 0.05, "{}{} {molality} mol/kg: {found:.3} against {published}", cation.0, anion.0);
    }
}
