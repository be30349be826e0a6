//! G°(T) of every species of the library, each by the model that its record carries.

use std::collections::BTreeMap;

use crate::library::record::{Curve, HeatCapacity, Transition};
use crate::library::{Library, Species, SpeciesId, TemperatureModel};
use crate::quantity::{Estimate, Kelvin, T_STANDARD};

use super::criss_cobble;
use super::henry;
use super::water::{self, RangeError};

/// Range in which at least the water and ion models hold, K.
pub const RANGE: (Kelvin, Kelvin) = (Kelvin(273.15), Kelvin(573.15));

/// Apparent Gibbs energies at one temperature: G(T) = ΔfG°(298.15 K) + [G°(T) − G°(298.15 K)], J/mol.
///
/// The elements change with T like everything else, so differences over a balanced reaction are true ΔG°(T).
#[derive(Debug, Clone)]
pub struct GibbsTable {
    pub temperature: Kelvin,
    values: Vec<Estimate>,
    /// Standard uncertainty of each record's own part, J/mol.
    own: Vec<f64>,
    electron: f64,
}

impl GibbsTable {
    /// Evaluates all species at `t`.
    ///
    /// # Errors
    /// [`RangeError`] when `t` is outside 0 … 300 °C.
    pub fn at(library: &Library, t: Kelvin) -> Result<Self, RangeError> {
        water::check_range("temperature in K", t.0, RANGE.0.0, RANGE.1.0)?;
        let mut values = vec![Estimate::default(); library.species().len()];
        let mut own = vec![0.0; library.species().len()];
        for id in library.evaluation_order() {
            let species = library.get(*id);
            let change = change(species, library, &values, t)?;
            let model = model_uncertainty(&species.temperature, t);
            let spread = species.gibbs.standard_uncertainty.hypot(model);
            own[id.index()] = species.own_uncertainty.hypot(model);
            values[id.index()] = Estimate::new(species.gibbs.value + change, spread);
        }
        let of = |text: &str, state| library.in_state(text, state).map_or(0.0, |s| values[s.id.index()].value);
        let hydrogen = of("H2", crate::library::record::State::Gas);
        let proton = of("H^+", crate::library::record::State::Aqueous);
        Ok(Self { temperature: t, values, own, electron: 0.5 * hydrogen - proton })
    }

    /// Apparent Gibbs energy, J/mol.
    pub fn of(&self, id: SpeciesId) -> Estimate {
        self.values[id.index()]
    }

    /// Standard uncertainty of Σ n G over `terms`, J/mol: what species share by being tied to the same partners cancels.
    pub fn spread(&self, library: &Library, terms: &[(SpeciesId, f64)]) -> f64 {
        let mut roots: BTreeMap<SpeciesId, f64> = BTreeMap::new();
        for (id, n) in terms {
            expand(library, *id, *n, &mut roots);
        }
        roots.iter().map(|(id, n)| (n * self.own[id.index()]).powi(2)).sum::<f64>().sqrt()
    }

    /// Energy of the electron that keeps E(H⁺/H₂) = 0 at every temperature, J/mol.
    pub fn electron(&self) -> f64 {
        self.electron
    }
}

/// Adds a species' own error and those of all that it is tied to. Ties form no circle: the library resolved them in order.
fn expand(library: &Library, id: SpeciesId, n: f64, roots: &mut BTreeMap<SpeciesId, f64>) {
    *roots.entry(id).or_default() += n;
    for (partner, count) in &library.get(id).tied_to {
        expand(library, *partner, n * count, roots);
    }
}

/// G°(T) − G°(298.15 K), J/mol.
fn change(species: &Species, library: &Library, values: &[Estimate], t: Kelvin) -> Result<f64, RangeError> {
    let t0 = T_STANDARD.0;
    let entropy = species.entropy.map_or(0.0, |s| s.value);
    Ok(match &species.temperature {
        TemperatureModel::Water => water::liquid_water_gibbs_change(t)?,
        TemperatureModel::HydrogenIon => criss_cobble::hydrogen_ion_gibbs_change(t)?,
        TemperatureModel::CorrespondencePrinciple(class) => {
            let absolute = criss_cobble::absolute_entropy(entropy, species.formula.charge);
            criss_cobble::gibbs_change(*class, absolute, t)?
        }
        TemperatureModel::HeatCapacity { capacity, transitions } => {
            heat_capacity_change(*capacity, transitions, entropy, t)
        }
        TemperatureModel::EntropyOnly => -entropy * (t.0 - t0),
        TemperatureModel::ConstantGibbs => 0.0,
        TemperatureModel::GasSolubility { gas } => {
            let dissolution = |t: Kelvin| ln_solubility(&species.text, t).map(|ln| -t.rt() * ln);
            let gas_change = values[gas.index()].value - library.get(*gas).gibbs.value;
            gas_change + dissolution(t)? - dissolution(T_STANDARD)?
        }
        TemperatureModel::MeasuredCurve { curve, own, partners } => {
            let energy = |t: Kelvin| -t.rt() * std::f64::consts::LN_10 * curve_log_k(curve, t) / own;
            partner_change(partners, library, values) + energy(t) - energy(T_STANDARD)
        }
        TemperatureModel::ReactionEnthalpy { joules_per_mole, partners } => {
            let reaction = species.gibbs.value - partner_sum(partners, library);
            let reaction_entropy = (joules_per_mole - reaction) / t0;
            partner_change(partners, library, values) - reaction_entropy * (t.0 - t0)
        }
        TemperatureModel::ConstantLogK { partners } => {
            let reaction = species.gibbs.value - partner_sum(partners, library);
            partner_change(partners, library, values) + reaction * (t.0 / t0 - 1.0)
        }
    })
}

/// ln of a gas's solubility, mol/(kg bar). The guideline starts a few kelvin above freezing and ends at 260 °C for H2S: beyond,
/// it goes on with the enthalpy that it has at its end.
fn ln_solubility(gas: &str, t: Kelvin) -> Result<f64, RangeError> {
    let (from, to) = henry::range(gas)?;
    let end = Kelvin(t.0.clamp(from.0, to.0));
    let at_end = henry::ln_solubility_molality(gas, end)?;
    if end == t {
        return Ok(at_end);
    }
    let inside = Kelvin(if t.0 < from.0 { from.0 + 1.0 } else { to.0 - 1.0 });
    let slope = (henry::ln_solubility_molality(gas, inside)? - at_end) / (1.0 / inside.0 - 1.0 / end.0);
    Ok(at_end + slope * (1.0 / t.0 - 1.0 / end.0))
}

/// log₁₀ K of a measured curve; beyond its range it goes on with the enthalpy that it has at its end (van 't Hoff), and its
/// uncertainty grows with the distance.
fn curve_log_k(curve: &Curve, t: Kelvin) -> f64 {
    let fit = |t: f64| curve.a + curve.b / t + curve.c * t.ln() + curve.d * t + curve.e * t * t;
    let end = t.0.clamp(curve.from_k, curve.to_k);
    let per_reciprocal = curve.b - curve.c * end - curve.d * end * end - 2.0 * curve.e * end.powi(3);
    fit(end) + per_reciprocal * (1.0 / t.0 - 1.0 / end)
}

fn partner_sum(partners: &[(SpeciesId, f64)], library: &Library) -> f64 {
    partners.iter().map(|(id, count)| count * library.get(*id).gibbs.value).sum()
}

fn partner_change(partners: &[(SpeciesId, f64)], library: &Library, values: &[Estimate]) -> f64 {
    partners.iter().map(|(id, count)| count * (values[id.index()].value - library.get(*id).gibbs.value)).sum()
}

/// G°(T) − G°(298.15 K) of a species that its heat capacity carries, J/mol; zero for one that it does not. Unlike
/// [`GibbsTable`] it is not held to the range of water.
pub fn heat_change(species: &Species, t: Kelvin) -> f64 {
    match &species.temperature {
        TemperatureModel::HeatCapacity { capacity, transitions } => {
            heat_capacity_change(*capacity, transitions, species.entropy.map_or(0.0, |s| s.value), t)
        }
        _ => 0.0,
    }
}

/// ∫ of heat capacity and entropy from 298.15 K to T with changes of form on the way, J/mol.
fn heat_capacity_change(capacity: HeatCapacity, transitions: &[Transition], entropy: f64, t: Kelvin) -> f64 {
    let (mut enthalpy, mut entropy_gain) = (0.0, 0.0);
    let mut from = T_STANDARD.0;
    let mut current = capacity;
    for step in transitions.iter().filter(|step| step.t_k < t.0) {
        let (h, s) = integrals(current, from, step.t_k);
        enthalpy += h + step.h_kj_mol * 1e3;
        entropy_gain += s + step.h_kj_mol * 1e3 / step.t_k;
        current = HeatCapacity { a: step.cp_j_mol_k, b: 0.0, c: 0.0 };
        from = step.t_k;
    }
    let (h, s) = integrals(current, from, t.0);
    (enthalpy + h) - t.0 * (entropy_gain + s) - entropy * (t.0 - T_STANDARD.0)
}

/// (∫Cp dT, ∫Cp/T dT) for Cp = a + b·10⁻³ T + c·10⁵ T⁻².
fn integrals(cp: HeatCapacity, from: f64, to: f64) -> (f64, f64) {
    let (b, c) = (cp.b * 1e-3, cp.c * 1e5);
    let enthalpy = cp.a * (to - from) + 0.5 * b * (to * to - from * from) - c * (1.0 / to - 1.0 / from);
    let entropy = cp.a * (to / from).ln() + b * (to - from) - 0.5 * c * (to.powi(-2) - from.powi(-2));
    (enthalpy, entropy)
}

/// Standard uncertainty that a temperature model adds at T, J/mol.
///
/// Our own judgement, no source: slopes per kelvin from how far each model misses where measurements exist (bisulfate,
/// carbonate and water by the correspondence principle; complexes by a constant enthalpy).
fn model_uncertainty(model: &TemperatureModel, t: Kelvin) -> f64 {
    let away = (t.0 - T_STANDARD.0).abs();
    match model {
        TemperatureModel::Water | TemperatureModel::HydrogenIon => 0.0,
        TemperatureModel::HeatCapacity { .. } | TemperatureModel::GasSolubility { .. } => 1.0 * away,
        TemperatureModel::MeasuredCurve { curve, .. } => {
            let beyond = (t.0 - curve.to_k).max(curve.from_k - t.0).max(0.0);
            2.0 * away + 20.0 * beyond
        }
        TemperatureModel::CorrespondencePrinciple(_) | TemperatureModel::ReactionEnthalpy { .. } => 8.0 * away,
        TemperatureModel::ConstantLogK { .. } => 50.0 * away,
        TemperatureModel::EntropyOnly => 150.0 * away * away / (2.0 * T_STANDARD.0),
        TemperatureModel::ConstantGibbs => 100.0 * away,
    }
}
