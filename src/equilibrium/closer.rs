//! Closes equations exactly in every constituent, hydrogen, oxygen and charge.
//!
//! A caller names the species that matter with their coefficients; ligands set free or taken up appear as the form in which
//! the liquor holds them, then water, hydrogen ions and electrons close the balance.

use std::collections::HashMap;

use crate::chemistry::Constituent;
use crate::library::record::State;
use crate::library::{Species, SpeciesId};
use crate::thermo::equation::{Equation, add};

use super::liquor::{Liquor, is_solvent};

/// Closes an equation around the species named.
pub struct Closer<'a, 'l> {
    liquor: &'a Liquor<'l>,
}

impl<'a, 'l> Closer<'a, 'l> {
    pub fn new(liquor: &'a Liquor<'l>) -> Self {
        Self { liquor }
    }

    /// The equation in which `named` species take part. Give one half-reaction at a time: within it only one element may
    /// change its state.
    pub fn close(&self, named: &[(SpeciesId, f64)]) -> Equation {
        let library = self.liquor.library;
        let mut terms: Vec<(SpeciesId, f64)> = named.iter().filter(|(_, n)| n.abs() > 1e-12).copied().collect();
        let mut open: HashMap<Constituent, f64> = HashMap::new();
        for (id, n) in &terms {
            for (constituent, count) in &library.get(*id).constituents {
                *open.entry(constituent.clone()).or_default() += n * count;
            }
        }
        let mut by_element: HashMap<String, f64> = HashMap::new();
        for (constituent, n) in &open {
            *by_element.entry(constituent.element_name()).or_default() += n;
        }
        let mut makeup: Vec<(&Constituent, f64)> =
            open.iter().filter(|(c, _)| !is_solvent(c)).map(|(c, n)| (c, *n)).collect();
        // Of several states of one element the ligand is one that the liquor holds, and the lowest of those: chloride, not
        // the chlorine that is reduced; sulfate, not the sulfide that dissolves.
        let absent = |c: &Constituent| self.liquor.potential(c).is_none();
        makeup.sort_by(|a, b| {
            let order = absent(a.0).cmp(&absent(b.0)).then(a.0.oxidation().total_cmp(&b.0.oxidation()));
            order.then_with(|| a.0.cmp(b.0))
        });
        for (constituent, _) in makeup {
            let surplus = by_element.remove(&constituent.element_name()).unwrap_or_default();
            if surplus.abs() > 1e-9
                && let Some((id, count)) = self.free_form(constituent)
            {
                add(&mut terms, id, -surplus / count);
            }
        }
        self.solvent(terms)
    }

    /// Most abundant form of a constituent that holds nothing else but the solvent's elements.
    fn free_form(&self, constituent: &Constituent) -> Option<(SpeciesId, f64)> {
        let alone = |species: &Species| -> Option<f64> {
            let mut count = None;
            for (c, n) in &species.constituents {
                match (c == constituent, is_solvent(c)) {
                    (true, _) => count = Some(*n),
                    (false, true) => {}
                    (false, false) => return None,
                }
            }
            count
        };
        let library = self.liquor.library;
        let held = self.liquor.dissolved.iter().map(|d| library.get(d.species));
        let known = library.holding(constituent).filter(|s| s.state == State::Aqueous);
        held.chain(known).find_map(|s| alone(s).map(|n| (s.id, n)))
    }

    /// Closes oxygen with water, hydrogen with H⁺ (OH⁻ above pH 8), charge with electrons.
    fn solvent(&self, mut terms: Vec<(SpeciesId, f64)>) -> Equation {
        let library = self.liquor.library;
        let basic = self.liquor.ph() > 8.0;
        let water = library.in_state("H2O", State::Liquid).map(|s| s.id);
        let carrier = library.in_state(if basic { "OH^-" } else { "H^+" }, State::Aqueous).map(|s| s.id);
        let count = |terms: &[(SpeciesId, f64)], symbol: &str| -> f64 {
            terms.iter().map(|(id, n)| n * library.get(*id).formula.atoms(symbol)).sum()
        };
        let (hydrogen, oxygen) = (count(&terms, "H"), count(&terms, "O"));
        // Water and its ion close hydrogen and oxygen together.
        let (water_count, ion_count) = if basic {
            let ion = hydrogen - 2.0 * oxygen;
            (oxygen - hydrogen, ion)
        } else {
            (-oxygen, 2.0 * oxygen - hydrogen)
        };
        if let (Some(water), Some(carrier)) = (water, carrier) {
            add(&mut terms, water, water_count);
            add(&mut terms, carrier, ion_count);
        }
        terms.retain(|(_, n)| n.abs() > 1e-9);
        let charge: f64 = terms.iter().map(|(id, n)| n * f64::from(library.get(*id).formula.charge)).sum();
        let electrons = if charge.abs() < 1e-9 { 0.0 } else { charge };
        Equation { terms, electrons }
    }
}
