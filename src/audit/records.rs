//! Rules on single species records.

use std::collections::{BTreeMap, BTreeSet, HashMap};

use crate::chemistry::Element;
use crate::equilibrium::liquor::is_solvent;
use crate::library::record::{SpeciesRecord, State, Tabulated};
use crate::library::{Library, Species};
use crate::quantity::T_STANDARD;

use super::{Check, Rule};

/// J/mol that a trio of printed numbers may miss by rounding alone (the tables print calories turned into joules).
const CLOSURE_ROUNDING: f64 = 1_000.0;

fn pairs(library: &Library) -> impl Iterator<Item = (&Species, &SpeciesRecord)> {
    library.species().iter().zip(&library.records)
}

/// Entropy per atom of the elements in their reference states, J/(mol K).
fn element_entropies(library: &Library) -> HashMap<Element, f64> {
    pairs(library)
        .filter(|(s, r)| s.state != State::Aqueous && s.formula.composition.len() == 1 && is_reference(r))
        .filter_map(|(s, r)| {
            let element = *s.formula.composition.keys().next()?;
            Some((element, r.s_j_mol_k?.value / s.formula.atoms(element.symbol())))
        })
        .collect()
}

fn is_reference(record: &SpeciesRecord) -> bool {
    let zero = |t: Option<Tabulated>| t.is_some_and(|t| t.value == 0.0);
    zero(record.g_kj_mol) && zero(record.h_kj_mol)
}

/// G − (H − T ΔfS) within rounding and the numbers' own uncertainty, where all three are tabulated.
pub fn closure(library: &Library) -> Vec<Check> {
    let elements = element_entropies(library);
    let hydrogen = Element::from_symbol("H").and_then(|h| elements.get(&h)).copied().unwrap_or(0.0);
    pairs(library)
        .filter_map(|(species, record)| {
            let (g, h, s) = (record.g_kj_mol?, record.h_kj_mol?, record.s_j_mol_k?);
            let mut reactants = -f64::from(species.formula.charge) * hydrogen;
            for element in species.formula.composition.keys() {
                reactants += elements.get(element)? * species.formula.atoms(element.symbol());
            }
            let miss = (g.value - h.value) * 1e3 + T_STANDARD.0 * (s.value - reactants);
            let doubt = 1e3 * g.u.hypot(h.u).hypot(s.u * T_STANDARD.0 * 1e-3);
            let holds = miss.abs() <= CLOSURE_ROUNDING.max(2.0 * doubt);
            let detail = format!("misses by {:.2} kJ/mol", miss * 1e-3);
            Some(Check::new(Rule::Closure, species.label(), holds, detail, record.explained.as_ref()))
        })
        .collect()
}

/// Every number has an uncertainty above zero (exact zeros of reference states apart) and below absurdity.
pub fn uncertainty(library: &Library) -> Vec<Check> {
    /// kJ/mol above which a Gibbs energy says nothing.
    const ABSURD: f64 = 50.0;
    pairs(library)
        .map(|(species, record)| {
            let energy = |t: Option<Tabulated>| t.is_none_or(|t| t.value == 0.0 || (t.u > 0.0 && t.u < ABSURD));
            let entropy = record.s_j_mol_k.is_none_or(|t| t.value == 0.0 || t.u > 0.0);
            let constant = record.formation.as_ref().is_none_or(|f| f.u > 0.0);
            let holds = energy(record.g_kj_mol) && energy(record.h_kj_mol) && entropy && constant;
            let detail = "a number has no standard uncertainty, or an absurd one".to_owned();
            Check::new(Rule::Uncertainty, species.label(), holds, detail, record.explained.as_ref())
        })
        .collect()
}

/// Every source key used anywhere has a citation.
pub fn sources(library: &Library) -> Vec<Check> {
    let mut used: BTreeMap<&str, BTreeSet<String>> = BTreeMap::new();
    let mut cite = |key: &'_ str, by: String| {
        let key = library.sources.get_key_value(key).map_or("", |(k, _)| k.as_str());
        used.entry(key).or_default().insert(by);
    };
    for (species, record) in pairs(library) {
        cite(&record.source, species.label());
        record.curve.iter().for_each(|c| cite(&c.source, species.label()));
        record.rejected.iter().for_each(|r| cite(&r.source, species.label()));
    }
    library.gases.iter().for_each(|g| cite(&g.source, format!("gas {}", g.formula)));
    library.alloys.iter().for_each(|a| cite(&a.source, format!("alloy {}", a.name)));
    library.reagents.iter().for_each(|r| cite(&r.source, format!("reagent {}", r.name)));
    library.linings.iter().for_each(|l| cite(&l.source, format!("lining {}", l.name)));
    library.electrodes.iter().for_each(|e| cite(&e.source, format!("electrode {}", e.name)));
    library.kinetics.inert.iter().for_each(|i| cite(&i.source, format!("inert {}", i.oxidised)));
    library.kinetics.film.iter().for_each(|f| cite(&f.source, format!("film on {}", f.metal)));
    library.kinetics.sluggish.iter().for_each(|s| cite(&s.source, format!("sluggish {}", s.formula)));
    library.kinetics.usual_product.iter().for_each(|u| cite(&u.source, format!("usual product of {}", u.oxidised)));
    library.activity.ion_size.iter().for_each(|i| cite(&i.source, format!("ion size of {}", i.formula)));
    library.activity.sit.iter().for_each(|s| cite(&s.source, format!("SIT {}/{}", s.cation, s.anion)));
    let electrode = &library.electrode_kinetics;
    electrode.exchange_current.iter().for_each(|e| cite(&e.source, format!("exchange current {}", e.reaction)));
    electrode.diffusion.iter().for_each(|d| cite(&d.source, format!("diffusion of {}", d.species)));
    used.into_iter()
        .flat_map(|(key, by)| {
            by.into_iter().map(move |subject| {
                let detail = "its source key has no citation".to_owned();
                Check::new(Rule::Source, subject, !key.is_empty(), detail, None)
            })
        })
        .collect()
}

/// No two records of one formula, state and form; no dissolved species written twice with different water.
pub fn duplicates(library: &Library) -> Vec<Check> {
    let mut exact: BTreeMap<(String, State, Option<String>), usize> = BTreeMap::new();
    let mut anhydrous: BTreeMap<Anhydrous, Vec<&str>> = BTreeMap::new();
    for species in library.species() {
        *exact.entry((species.text.clone(), species.state, species.form.clone())).or_default() += 1;
        if species.state == State::Aqueous {
            anhydrous.entry(without_water(species)).or_default().push(&species.text);
        }
    }
    pairs(library)
        .map(|(species, record)| {
            let twice = exact[&(species.text.clone(), species.state, species.form.clone())] > 1;
            let near: Vec<&str> = if species.state == State::Aqueous {
                anhydrous[&without_water(species)].iter().copied().filter(|t| *t != species.text).collect()
            } else {
                Vec::new()
            };
            let detail = match near.as_slice() {
                [] => "stands more than once".to_owned(),
                others => format!("is {} with other water", others.join(", ")),
            };
            let holds = !twice && near.is_empty();
            Check::new(Rule::Duplicate, species.label(), holds, detail, record.explained.as_ref())
        })
        .collect()
}

/// What two writings of one dissolved species share: composition with water taken out (as far as pairs of hydrogen go), the
/// states of what is not water, and the charge.
type Anhydrous = (Vec<(Element, i64)>, i64, i32);

fn without_water(species: &Species) -> Anhydrous {
    let (hydrogen, oxygen) = (species.formula.atoms("H"), species.formula.atoms("O"));
    let water = (hydrogen / 2.0).floor().min(oxygen);
    let thousandths = |n: f64| (n * 1000.0).round() as i64;
    let composition = species
        .formula
        .composition
        .keys()
        .map(|element| {
            let own = match element.symbol() {
                "H" => hydrogen - 2.0 * water,
                "O" => oxygen - water,
                symbol => species.formula.atoms(symbol),
            };
            (*element, thousandths(own))
        })
        .filter(|(_, n)| *n != 0)
        .collect();
    let own_states = species.constituents.iter().filter(|(c, _)| !is_solvent(c));
    let states = own_states.map(|(c, n)| thousandths((c.oxidation().powi(2) + 1.0) * n)).sum();
    (composition, states, species.formula.charge)
}

/// Every solid has somewhere to go: each of its elements and units has a dissolved species, and its parts sum to no charge.
pub fn dissolution(library: &Library) -> Vec<Check> {
    let in_water = library.species().iter().filter(|s| s.state == State::Aqueous);
    let dissolved: BTreeSet<String> =
        in_water.flat_map(|s| s.constituents.iter().map(|(c, _)| c.element_name())).collect();
    pairs(library)
        .filter(|(s, _)| matches!(s.state, State::Crystal | State::Amorphous))
        .map(|(species, record)| {
            let charge: f64 = species.constituents.iter().map(|(c, n)| c.oxidation() * n).sum();
            let lost: Vec<String> = species
                .constituents
                .iter()
                .map(|(c, _)| c.element_name())
                .filter(|element| !dissolved.contains(element))
                .collect();
            let holds = lost.is_empty() && charge.abs() < 1e-2;
            let detail = match lost.as_slice() {
                [] => format!("its parts sum to a charge of {charge:.3}"),
                list => format!("nothing dissolved holds {}", list.join(", ")),
            };
            Check::new(Rule::Dissolution, species.label(), holds, detail, record.explained.as_ref())
        })
        .collect()
}
