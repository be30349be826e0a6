//! Balanced equations between species of the library: their energies, and how they are written.

use crate::library::{Library, SpeciesId};
use crate::quantity::Estimate;

use super::gibbs::GibbsTable;

/// A balanced equation; negative coefficients are used up, positive ones made.
#[derive(Debug, Clone, PartialEq)]
pub struct Equation {
    pub terms: Vec<(SpeciesId, f64)>,
    /// Electrons made (positive) or used up (negative).
    pub electrons: f64,
}

impl Equation {
    /// Largest coefficient error that is taken for rounding when whole numbers are sought.
    const ROUNDING: f64 = 1e-6;

    /// The equation in the smallest whole numbers (multipliers to 5000; otherwise as it is).
    pub fn whole(&self) -> Self {
        let all = || self.terms.iter().map(|(_, n)| *n).chain(std::iter::once(self.electrons));
        let is_whole =
            |factor: f64| all().all(|n| (n * factor - (n * factor).round()).abs() < Self::ROUNDING * factor.max(1.0));
        let factor = (1..=5000).map(f64::from).find(|f| is_whole(*f)).unwrap_or(1.0);
        let scaled: Vec<i64> = all().map(|n| (n * factor).round() as i64).collect();
        let shared = scaled.iter().fold(0, |a, b| gcd(a, b.abs())).max(1) as f64;
        self.times(factor / shared)
    }

    pub fn times(&self, factor: f64) -> Self {
        Self { terms: self.terms.iter().map(|(id, n)| (*id, n * factor)).collect(), electrons: self.electrons * factor }
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
    pub fn delta_g(&self, gibbs: &GibbsTable, library: &Library) -> Estimate {
        let value: f64 = self.terms.iter().map(|(id, n)| n * gibbs.of(*id).value).sum();
        Estimate::new(value + self.electrons * gibbs.electron(), gibbs.spread(library, &self.terms))
    }

    /// log₁₀ K at the table's temperature.
    pub fn log_k(&self, gibbs: &GibbsTable, library: &Library) -> Estimate {
        self.delta_g(gibbs, library).scaled(-1.0 / (gibbs.temperature.rt() * std::f64::consts::LN_10))
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

/// Adds a term, joining it with one of the same species.
pub fn add(terms: &mut Vec<(SpeciesId, f64)>, id: SpeciesId, n: f64) {
    match terms.iter_mut().find(|(known, _)| *known == id) {
        Some((_, count)) => *count += n,
        None => terms.push((id, n)),
    }
}
