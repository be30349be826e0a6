//! Rules on the tables beside the species: alloys, gases, minerals, reagents, kinetics.

use crate::library::Library;
use crate::library::tables::{GasRecord, Limit};

use super::{Check, Rule};

/// % by mass that a composition may miss 100 by (nominal mid-range compositions).
const COMPOSITION_TOLERANCE: f64 = 1.0;
/// L/mol of an ideal gas at 25 °C and 1 atm: mg/m³ = ppm · M / 24.45.
const MOLAR_VOLUME_25C: f64 = 24.45;
/// Share by which ppm and mg/m³ may differ: limits are printed to one or two figures.
const LIMIT_TOLERANCE: f64 = 0.15;

/// Every alloy's composition sums to 100 %.
pub fn compositions(library: &Library) -> Vec<Check> {
    library
        .alloys
        .iter()
        .filter(|a| a.element.is_none())
        .map(|alloy| {
            let sum: f64 = alloy.composition_wt_percent.values().sum();
            let holds = (sum - 100.0).abs() <= COMPOSITION_TOLERANCE;
            Check::new(Rule::Composition, alloy.name.clone(), holds, format!("sums to {sum:.2} %"), None)
        })
        .collect()
}

/// Limits agree in ppm and mg/m³; the short limit does not exceed what is immediately dangerous; flammable limits in order.
pub fn limits(library: &Library) -> Vec<Check> {
    library
        .gases
        .iter()
        .map(|gas| {
            let faults: Vec<String> = [
                limit_fault(gas, gas.short_limit_ppm.as_ref()),
                limit_fault(gas, gas.twa_limit_ppm.as_ref()),
                order_fault(gas),
            ]
            .into_iter()
            .flatten()
            .collect();
            Check::new(Rule::Limit, gas.formula.clone(), faults.is_empty(), faults.join("; "), None)
        })
        .collect()
}

fn limit_fault(gas: &GasRecord, limit: Option<&Limit>) -> Option<String> {
    let limit = limit?;
    if limit.value <= 0.0 {
        return Some(format!("limit {} ppm is not above zero", limit.value));
    }
    let mass = crate::chemistry::Formula::parse(&gas.formula).ok()?.molar_mass();
    let expected = limit.value * mass / MOLAR_VOLUME_25C;
    let printed = limit.mg_m3?;
    // Limits of one figure are rounded by up to a half.
    let rounding = 0.5 * 10f64.powf(printed.log10().floor());
    let misses = (printed - expected).abs() > LIMIT_TOLERANCE * expected && (printed - expected).abs() > rounding;
    misses.then(|| format!("{} ppm is {expected:.3} mg/m³, not {printed}", limit.value))
}

fn order_fault(gas: &GasRecord) -> Option<String> {
    let short = gas.short_limit_ppm.as_ref().map_or(0.0, |l| l.value);
    match (gas.idlh_ppm, gas.lfl_percent, gas.ufl_percent) {
        (Some(idlh), _, _) if short > idlh => Some(format!("short limit {short} ppm above IDLH {idlh} ppm")),
        (_, Some(low), Some(high)) if low >= high => Some(format!("flammable from {low} to {high} %")),
        _ => None,
    }
}

/// Minerals, kinetic records, reagents, linings and activity tables name species that exist.
pub fn references(library: &Library) -> Vec<Check> {
    let exists = |formula: &str| formula == "*" || !library.records(formula).is_empty();
    let mut checks = Vec::new();
    let mut check = |subject: String, missing: Vec<&str>| {
        let holds = missing.is_empty();
        checks.push(Check::new(Rule::Reference, subject, holds, format!("names {}", missing.join(", ")), None));
    };
    for mineral in &library.minerals {
        let same =
            |s: &&crate::library::Species| s.is_condensed() && (mineral.form.is_none() || s.form == mineral.form);
        let found = library.records(&mineral.formula).iter().any(same);
        check(format!("mineral {}", mineral.name), if found { Vec::new() } else { vec![mineral.formula.as_str()] });
    }
    for reagent in &library.reagents {
        let missing = reagent.delivers.keys().map(String::as_str).filter(|s| !exists(s)).collect();
        check(format!("reagent {}", reagent.name), missing);
    }
    for alloy in &library.alloys {
        let missing = Some(alloy.base.as_str()).filter(|b| !exists(b)).into_iter().collect();
        check(format!("alloy {}", alloy.name), missing);
    }
    for lining in &library.linings {
        let missing = lining.attacked_by.iter().filter_map(|a| a.species.as_deref()).filter(|s| !exists(s)).collect();
        check(format!("lining {}", lining.name), missing);
    }
    for film in &library.kinetics.film {
        let breakers = film.broken_by.iter().filter_map(|b| b.species.as_deref());
        let missing = breakers.filter(|s| !exists(s)).collect();
        check(format!("film on {}", film.metal), missing);
    }
    for product in &library.kinetics.usual_product {
        let missing =
            [product.oxidised.as_str(), product.reduced.as_str()].into_iter().filter(|s| !exists(s)).collect();
        check(format!("usual product of {}", product.oxidised), missing);
    }
    for diffusion in &library.electrode_kinetics.diffusion {
        let missing = Some(diffusion.species.as_str()).filter(|s| !exists(s)).into_iter().collect();
        check(format!("diffusion of {}", diffusion.species), missing);
    }
    checks
}

/// What a reagent delivers weighs what the reagent weighs, and carries no net charge.
pub fn reagents(library: &Library) -> Vec<Check> {
    /// Share by which the masses may differ: water of reaction and protons taken from water are allowed for below.
    const TOLERANCE: f64 = 0.01;
    library
        .reagents
        .iter()
        .map(|reagent| {
            let mass_of = |formula: &str| library.records(formula).first().map_or(0.0, |s| s.formula.molar_mass());
            let delivered: f64 = reagent.delivers.iter().map(|(formula, n)| n * mass_of(formula)).sum();
            let water = 18.015;
            // Oxides and anhydrides take up water, hydrates give it off: whole waters, or the half that an oxide of one takes.
            let waters = ((delivered - reagent.molar_mass_g_mol) / water * 2.0).round() / 2.0;
            let miss = delivered - waters * water - reagent.molar_mass_g_mol;
            let charge_of =
                |formula: &str| library.records(formula).first().map_or(0.0, |s| f64::from(s.formula.charge));
            let charge: f64 = reagent.delivers.iter().map(|(formula, n)| n * charge_of(formula)).sum();
            let holds = miss.abs() <= TOLERANCE * reagent.molar_mass_g_mol.max(20.0) && charge.abs() < 1e-9;
            let mass = reagent.molar_mass_g_mol;
            let detail = format!("delivers {delivered:.2} g and a charge of {charge} per {mass:.2} g of reagent");
            Check::new(Rule::Reagent, reagent.name.clone(), holds, detail, None)
        })
        .collect()
}
