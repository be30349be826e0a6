//! From records to species: parse, close G/H/S, and hang complexes on the species that define them.

use std::collections::HashMap;

use num_rational::Ratio;

use crate::chemistry::{self, Element, Formula, ReactionText, StateSuffix, Term};
use crate::quantity::{Estimate, GAS_CONSTANT, T_STANDARD};

use super::record::{IonClass, SpeciesRecord, State};
use super::{LibraryError, Species, SpeciesId, TemperatureModel};

type Index = HashMap<(String, State), Vec<SpeciesId>>;

/// Gases whose solubility the IAPWS guideline G7-04 carries over temperature.
const SOLUBILITY_CURVES: [&str; 7] = ["H2", "O2", "N2", "CO", "CO2", "H2S", "CH4"];

/// Parses all records and computes G° of those defined by an equilibrium.
///
/// # Errors
/// [`LibraryError`] names the record that cannot be parsed, balanced or tied to its partners.
pub(super) fn species(records: &[SpeciesRecord]) -> Result<(Vec<Species>, Vec<SpeciesId>), LibraryError> {
    let formulas = records
        .iter()
        .map(|r| Formula::parse(&r.formula).map_err(|e| fault(r, e.to_string())))
        .collect::<Result<Vec<_>, _>>()?;
    let mut index: Index = HashMap::new();
    for (i, (record, formula)) in records.iter().zip(&formulas).enumerate() {
        index.entry((formula.canonical(), record.state)).or_default().push(SpeciesId(i));
    }
    let elements = element_entropies(records, &formulas);
    let mut all = Vec::with_capacity(records.len());
    for (i, (record, formula)) in records.iter().zip(formulas).enumerate() {
        all.push(one(SpeciesId(i), record, formula, &index, &elements)?);
    }
    let order = tie(&mut all, records, &index)?;
    Ok((all, order))
}

fn fault(record: &SpeciesRecord, problem: String) -> LibraryError {
    LibraryError::Record { record: format!("{} ({:?})", record.formula, record.state), problem }
}

/// Entropy per atom of each element in its reference state, J/(mol K).
fn element_entropies(records: &[SpeciesRecord], formulas: &[Formula]) -> HashMap<Element, f64> {
    let mut table = HashMap::new();
    for (record, formula) in records.iter().zip(formulas) {
        let reference = record.g_kj_mol.is_some_and(|g| g.value == 0.0)
            && record.h_kj_mol.is_some_and(|h| h.value == 0.0)
            && record.state != State::Aqueous;
        if let (true, 1, Some(s), Some((element, count))) =
            (reference, formula.composition.len(), record.s_j_mol_k, formula.composition.iter().next())
        {
            table.insert(*element, s.value / to_f64(*count));
        }
    }
    table
}

/// Σ S°(elements) for the formation of a species, with the hydrogen that an ion's charge brings; J/(mol K).
fn reactant_entropy(formula: &Formula, elements: &HashMap<Element, f64>) -> Option<f64> {
    let mut sum = 0.0;
    for (element, count) in &formula.composition {
        sum += elements.get(element)? * to_f64(*count);
    }
    let hydrogen = elements.get(&Element::from_symbol("H")?)?;
    Some(sum - f64::from(formula.charge) * hydrogen)
}

pub(super) fn to_f64(ratio: chemistry::Count) -> f64 {
    *ratio.numer() as f64 / *ratio.denom() as f64
}

fn one(
    id: SpeciesId,
    record: &SpeciesRecord,
    formula: Formula,
    index: &Index,
    elements: &HashMap<Element, f64>,
) -> Result<Species, LibraryError> {
    let scale = |t: super::record::Tabulated| Estimate::new(t.value * 1e3, t.u * 1e3);
    let plain = |t: super::record::Tabulated| Estimate::new(t.value, t.u);
    let reactants = reactant_entropy(&formula, elements);
    let (mut g, mut h, mut s) = (record.g_kj_mol.map(scale), record.h_kj_mol.map(scale), record.s_j_mol_k.map(plain));
    let t = T_STANDARD.0;
    if let Some(sum) = reactants {
        match (g, h, s) {
            (Some(g), Some(h), None) => s = Some(Estimate::new(sum + (h.value - g.value) / t, spread(h, g) / t)),
            (Some(g), None, Some(s)) => h = Some(Estimate::new(g.value + t * (s.value - sum), g.standard_uncertainty)),
            (None, Some(h), Some(s)) => g = Some(Estimate::new(h.value - t * (s.value - sum), h.standard_uncertainty)),
            _ => {}
        }
    }
    if g.is_none() && record.formation.is_none() {
        return Err(fault(record, "neither G, nor H with S, nor a formation reaction is given".into()));
    }
    let is_element = formula.charge == 0 && formula.composition.len() == 1;
    let constituents =
        chemistry::constituents(&formula, is_element && g.is_some_and(|g| g.value == 0.0), &record.parts)
            .map_err(|e| fault(record, e.to_string()))?;
    let temperature = model(record, &formula, s.is_some(), index)?;
    Ok(Species {
        id,
        text: formula.canonical(),
        formula,
        state: record.state,
        form: record.form.clone(),
        name: record.name.clone(),
        gibbs: g.unwrap_or_default(),
        tied_to: Vec::new(),
        own_uncertainty: g.unwrap_or_default().standard_uncertainty,
        enthalpy: h,
        entropy: s,
        temperature,
        constituents,
        source: record.source.clone(),
        status: record.status,
        note: record.note.clone(),
        rejected: record.rejected.clone(),
    })
}

fn spread(a: Estimate, b: Estimate) -> f64 {
    a.standard_uncertainty.hypot(b.standard_uncertainty)
}

fn model(
    record: &SpeciesRecord,
    formula: &Formula,
    has_entropy: bool,
    index: &Index,
) -> Result<TemperatureModel, LibraryError> {
    let text = formula.canonical();
    let dissolved = record.state == State::Aqueous;
    if text == "H2O" && record.state == State::Liquid {
        return Ok(TemperatureModel::Water);
    }
    if text == "H^+" && dissolved {
        return Ok(TemperatureModel::HydrogenIon);
    }
    if let Some(curve) = &record.curve {
        let partners = partners(record, formula, &curve.reaction, index)?;
        let own = own_coefficient(&curve.reaction, &text, record.state);
        return Ok(TemperatureModel::MeasuredCurve { curve: curve.clone(), own, partners });
    }
    if dissolved
        && SOLUBILITY_CURVES.contains(&text.as_str())
        && let Some(gas) = index.get(&(text.clone(), State::Gas)).and_then(|ids| ids.first())
    {
        return Ok(TemperatureModel::GasSolubility { gas: *gas });
    }
    if has_entropy && dissolved && formula.charge != 0 {
        return Ok(TemperatureModel::CorrespondencePrinciple(
            record.ion_class.unwrap_or_else(|| ion_class(formula, &text)),
        ));
    }
    let capacity =
        record.heat_capacity.or(record.cp_j_mol_k.map(|a| super::record::HeatCapacity { a, b: 0.0, c: 0.0 }));
    match (capacity, has_entropy, &record.formation) {
        (Some(capacity), true, _) => {
            Ok(TemperatureModel::HeatCapacity { capacity, transitions: record.transitions.clone() })
        }
        (None, true, _) => Ok(TemperatureModel::EntropyOnly),
        (_, false, Some(formation)) => {
            let partners = partners(record, formula, &formation.reaction, index)?;
            Ok(match formation.h_kj_mol {
                Some(h) => {
                    let own = own_coefficient(&formation.reaction, &text, record.state);
                    TemperatureModel::ReactionEnthalpy { joules_per_mole: h * 1e3 / own, partners }
                }
                None => TemperatureModel::ConstantLogK { partners },
            })
        }
        (_, false, None) => Ok(TemperatureModel::ConstantGibbs),
    }
}

/// Class of an ion for the correspondence principle, from its composition.
fn ion_class(formula: &Formula, text: &str) -> IonClass {
    let has = |symbol: &str| Element::from_symbol(symbol).is_some_and(|e| formula.composition.contains_key(&e));
    match (formula.charge > 0, has("O"), has("H")) {
        (true, _, _) => IonClass::Cation,
        (false, false, _) => IonClass::Anion,
        (false, true, false) => IonClass::Oxyanion,
        (false, true, true) if text == "OH^-" => IonClass::Anion,
        (false, true, true) => IonClass::AcidOxyanion,
    }
}

/// Species of a reaction other than the record's own, with coefficients such that
/// own = Σ coefficient · partner + reaction / [`own_coefficient`].
fn partners(
    record: &SpeciesRecord,
    own: &Formula,
    reaction: &str,
    index: &Index,
) -> Result<Vec<(SpeciesId, f64)>, LibraryError> {
    let parsed = ReactionText::parse(reaction).map_err(|e| fault(record, e.to_string()))?;
    let own_text = own.canonical();
    let mut own_count = 0.0;
    let mut others = Vec::new();
    let sides = [(&parsed.left, -1.0), (&parsed.right, 1.0)];
    for (terms, sign) in sides {
        for term in terms {
            let count = sign * term.coefficient.map_or(1.0, to_f64);
            let text = term.formula.canonical();
            if text == own_text && state_fits(term, record.state) {
                own_count += count;
            } else {
                others.push((partner(record, term, &text, index)?, count));
            }
        }
    }
    check_balance(record, &parsed)?;
    if own_count == 0.0 {
        return Err(fault(record, format!("`{reaction}` does not contain the record's own species")));
    }
    Ok(others.into_iter().map(|(id, count)| (id, -count / own_count)).collect())
}

/// Coefficient of the record's own species in its reaction, positive when the reaction makes it.
pub(super) fn own_coefficient(reaction: &str, own_text: &str, state: State) -> f64 {
    ReactionText::parse(reaction).map_or(1.0, |parsed| {
        let count = |terms: &[Term]| -> f64 {
            terms
                .iter()
                .filter(|t| t.formula.canonical() == own_text && state_fits(t, state))
                .map(|t| t.coefficient.map_or(1.0, to_f64))
                .sum()
        };
        count(&parsed.right) - count(&parsed.left)
    })
}

fn state_fits(term: &Term, state: State) -> bool {
    match term.state {
        None => true,
        Some(suffix) => states_of(suffix).contains(&state),
    }
}

fn states_of(suffix: StateSuffix) -> &'static [State] {
    match suffix {
        StateSuffix::Aqueous => &[State::Aqueous],
        StateSuffix::Crystal => &[State::Crystal],
        StateSuffix::Amorphous => &[State::Amorphous],
        StateSuffix::Solid => &[State::Crystal, State::Amorphous],
        StateSuffix::Liquid => &[State::Liquid],
        StateSuffix::Gas => &[State::Gas],
    }
}

fn partner(record: &SpeciesRecord, term: &Term, text: &str, index: &Index) -> Result<SpeciesId, LibraryError> {
    const BARE: [State; 5] = [State::Liquid, State::Crystal, State::Aqueous, State::Amorphous, State::Gas];
    let states = match term.state {
        Some(suffix) => states_of(suffix),
        None if term.formula.charge != 0 => &[State::Aqueous],
        None => &BARE,
    };
    states
        .iter()
        .find_map(|state| index.get(&(text.to_owned(), *state)).and_then(|ids| ids.first()).copied())
        .ok_or_else(|| fault(record, format!("its reaction names `{text}`, which is not in the library")))
}

fn check_balance(record: &SpeciesRecord, reaction: &ReactionText) -> Result<(), LibraryError> {
    let mut atoms: HashMap<Element, chemistry::Count> = HashMap::new();
    let mut charge = Ratio::from_integer(0);
    for (terms, sign) in [(&reaction.left, -1), (&reaction.right, 1)] {
        for term in terms {
            let count = term.coefficient.unwrap_or_else(|| Ratio::from_integer(1)) * Ratio::from_integer(sign);
            charge += count * Ratio::from_integer(i128::from(term.formula.charge));
            for (element, n) in &term.formula.composition {
                *atoms.entry(*element).or_insert_with(|| Ratio::from_integer(0)) += count * *n;
            }
        }
    }
    let zero = Ratio::from_integer(0);
    match atoms.iter().find(|(_, n)| **n != zero) {
        Some((element, _)) => Err(fault(record, format!("its reaction does not balance in {}", element.symbol()))),
        None if charge != zero => Err(fault(record, "its reaction does not balance in charge".into())),
        None => Ok(()),
    }
}

/// What the G° of a record waits for, and what it is computed from.
struct Tie {
    /// Partners of the formation reaction, when that is what defines G°.
    formation: Vec<(SpeciesId, f64)>,
    waits_for: Vec<SpeciesId>,
}

/// Computes G° (and H° where an enthalpy is known) of species defined by an equilibrium, partners first.
fn tie(all: &mut [Species], records: &[SpeciesRecord], index: &Index) -> Result<Vec<SpeciesId>, LibraryError> {
    let ties = all
        .iter()
        .zip(records)
        .map(|(species, record)| tie_of(species, record, index))
        .collect::<Result<Vec<_>, _>>()?;
    let mut order = Vec::with_capacity(all.len());
    let mut done = vec![false; all.len()];
    while order.len() < all.len() {
        let before = order.len();
        for i in 0..all.len() {
            if !done[i] && ties[i].waits_for.iter().all(|id| done[id.0]) {
                close(i, all, &records[i], &ties[i].formation);
                done[i] = true;
                order.push(SpeciesId(i));
            }
        }
        if order.len() == before {
            let stuck: Vec<&str> = (0..all.len()).filter(|i| !done[*i]).map(|i| all[i].text.as_str()).collect();
            return Err(LibraryError::Unresolved(stuck.join(", ")));
        }
    }
    Ok(order)
}

fn tie_of(species: &Species, record: &SpeciesRecord, index: &Index) -> Result<Tie, LibraryError> {
    let formation = match &record.formation {
        Some(formation) if record.g_kj_mol.is_none() => partners(record, &species.formula, &formation.reaction, index)?,
        _ => Vec::new(),
    };
    let mut waits_for: Vec<SpeciesId> = formation.iter().map(|(id, _)| *id).collect();
    match &species.temperature {
        TemperatureModel::GasSolubility { gas } => waits_for.push(*gas),
        TemperatureModel::MeasuredCurve { partners, .. }
        | TemperatureModel::ReactionEnthalpy { partners, .. }
        | TemperatureModel::ConstantLogK { partners } => waits_for.extend(partners.iter().map(|(id, _)| *id)),
        _ => {}
    }
    Ok(Tie { formation, waits_for })
}

fn close(i: usize, all: &mut [Species], record: &SpeciesRecord, partners: &[(SpeciesId, f64)]) {
    let (Some(formation), false) = (&record.formation, partners.is_empty()) else {
        return;
    };
    let own = own_coefficient(&formation.reaction, &all[i].text, record.state);
    let per_log = GAS_CONSTANT * T_STANDARD.0 * std::f64::consts::LN_10;
    let mut value = -per_log * formation.log_k / own;
    let mut variance = (per_log * formation.u / own).powi(2);
    for (id, count) in partners {
        value += count * all[id.0].gibbs.value;
        variance += (count * all[id.0].gibbs.standard_uncertainty).powi(2);
    }
    all[i].gibbs = Estimate::new(value, variance.sqrt());
    all[i].tied_to = partners.to_vec();
    all[i].own_uncertainty = (per_log * formation.u / own).abs();
    let enthalpies: Option<f64> = partners.iter().map(|(id, count)| all[id.0].enthalpy.map(|h| h.value * count)).sum();
    if let (Some(h), Some(sum)) = (formation.h_kj_mol, enthalpies) {
        all[i].enthalpy = Some(Estimate::new(sum + h * 1e3 / own, 2e3_f64.max(variance.sqrt())));
    }
}
