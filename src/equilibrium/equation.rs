//! Whole equations between species of the library, closed exactly in every constituent, hydrogen, oxygen and charge.
//!
//! A caller names the species that matter with their coefficients; ligands set free or taken up appear as the form in which
//! the liquor holds them, then water, hydrogen ions and electrons close the balance.

use std::collections::HashMap;

use crate::chemistry::Constituent;
use crate::library::record::State;
use crate::library::{Library, Species, SpeciesId};
use crate::quantity::Estimate;
use crate::thermo::gibbs::GibbsTable;

use super::liquor::{Liquor, is_solvent};

/// A balanced equation; negative coefficients are used up, positive ones made.
#[derive(Debug, Clone, PartialEq)]
pub struct Equation {
    pub terms: Vec<(SpeciesId, f64)>,
    /// Electrons made (positive) or used up (negative).
    pub electrons: f64,
}

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
        let mut makeup: Vec<(&Constituent, f64)> = open.iter().filter(|(c, _)| !is_solvent(c)).map(|(c, n)| (c, *n)).collect();
        // Of several states of one element the ligand is one that the liquor holds, and the lowest of those: chloride, not
        // the chlorine that is reduced; sulfate, not the sulfide that dissolves.
        let absent = |c: &Constituent| self.liquor.potential(c).is_none();
        makeup.sort_by(|a, b| {
            let order = absent(a.0).cmp(&absent(b.0)).then(a.0.oxidation().total_cmp(&b.0.oxidation()));
            order.then_with(|| a.0.cmp(b.0))
        });
        for (constituent, _) in makeup {
            let surplus = by_element.remove(&constituent.element_name()).unwrap_or_default();
            if surplus.abs() > 1e-9 {
                if let Some((id, count)) = self.free_form(constituent) {
                    add(&mut terms, id, -surplus / count);
                }
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

fn add(terms: &mut Vec<(SpeciesId, f64)>, id: SpeciesId, n: f64) {
    match terms.iter_mut().find(|(known, _)| *known == id) {
        Some((_, count)) => *count += n,
        None => terms.push((id, n)),
    }
}

impl Equation {
    /// Largest coefficient error that is taken for rounding when whole numbers are sought.
    const ROUNDING: f64 = 1e-6;

    /// The equation in the smallest whole numbers (multipliers to 5000; otherwise as it is).
    pub fn whole(&self) -> Self {
        let all = || self.terms.iter().map(|(_, n)| *n).chain(std::iter::once(self.electrons));
        let is_whole = |factor: f64| all().all(|n| (n * factor - (n * factor).round()).abs() < Self::ROUNDING * factor.max(1.0));
        let factor = (1..=5000).map(f64::from).find(|f| is_whole(*f)).unwrap_or(1.0);
        let scaled: Vec<i64> = all().map(|n| (n * factor).round() as i64).collect();
        let shared = scaled.iter().fold(0, |a, b| gcd(a, b.abs())).max(1) as f64;
        self.times(factor / shared)
    }

    pub fn times(&self, factor: f64) -> Self {
        Self {
            terms: self.terms.iter().map(|(id, n)| (*id, n * factor)).collect(),
            electrons: self.electrons * factor,
        }
    }

    /// Sum of two equations, what cancels left out.
    pub fn plus(&self, other: &Self) -> Self {
        let mut terms = self.terms.clone();
        for (id, n) in &other.terms {
            add(&mut terms, *id, *n);
        }
        terms.retain(|(_, n)| n.abs() > 1e-9);
        let electrons = self.electrons + other.electrons;
        Self { terms, electrons: if electrons.abs() < 1e-9 { 0.0 } else { electrons } }
    }

    /// ΔG° at the table's temperature, J per mole of the equation as written; the electron keeps E(H⁺/H₂) = 0.
    pub fn delta_g(&self, gibbs: &GibbsTable) -> Estimate {
        let value: f64 = self.terms.iter().map(|(id, n)| n * gibbs.of(*id).value).sum();
        let variance: f64 = self.terms.iter().map(|(id, n)| (n * gibbs.of(*id).standard_uncertainty).powi(2)).sum();
        Estimate::new(value + self.electrons * gibbs.electron(), variance.sqrt())
    }

    /// log₁₀ K at the table's temperature.
    pub fn log_k(&self, gibbs: &GibbsTable) -> Estimate {
        self.delta_g(gibbs).scaled(-1.0 / (gibbs.temperature.rt() * std::f64::consts::LN_10))
    }

    /// `2 Fe^3+ + Cu = 2 Fe^2+ + Cu^2+`
    pub fn ascii(&self, library: &Library) -> String {
        self.write(" = ", "e^-", |id| library.get(id).label())
    }

    /// `2 Fe³⁺ + Cu → 2 Fe²⁺ + Cu²⁺`
    pub fn pretty(&self, library: &Library) -> String {
        self.write(" → ", "e⁻", |id| library.get(id).pretty())
    }

    fn write(&self, arrow: &str, electron: &str, name: impl Fn(SpeciesId) -> String) -> String {
        let side = |sign: f64| {
            let mut words: Vec<String> = self
                .terms
                .iter()
                .filter(|(_, n)| n * sign > 0.0)
                .map(|(id, n)| format!("{}{}", coefficient(n * sign), name(*id)))
                .collect();
            if self.electrons * sign > 0.0 {
                words.push(format!("{}{electron}", coefficient(self.electrons * sign)));
            }
            words.join(" + ")
        };
        format!("{}{arrow}{}", side(-1.0), side(1.0))
    }
}

fn coefficient(n: f64) -> String {
    if (n - 1.0).abs() < 1e-6 {
        String::new()
    } else if (n - n.round()).abs() < 1e-4 {
        format!("{} ", n.round())
    } else {
        format!("{n:.3} ")
    }
}

fn gcd(a: i64, b: i64) -> i64 {
    if b == 0 { a } else { gcd(b, a % b) }
}
