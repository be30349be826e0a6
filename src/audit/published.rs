//! The library against published potentials, constants and ion values.

use crate::chemistry::Medium;
use crate::library::Library;
use crate::library::checks::{Checks, ConstantKind};
use crate::library::record::State;
use crate::quantity::{FARADAY, T_STANDARD};
use crate::thermo::gibbs::GibbsTable;
use crate::thermo::named;
use crate::thermo::water::RangeError;

use super::{Check, Rule};

/// V
const POTENTIAL_TOLERANCE: f64 = 0.010;
/// log₁₀ K
const SOLUBILITY_TOLERANCE: f64 = 0.5;
const COMPLEX_TOLERANCE: f64 = 0.3;
/// kJ/mol and J/(mol K)
const ENERGY_TOLERANCE: f64 = 1.0;
const ENTROPY_TOLERANCE: f64 = 2.0;

/// Standard potentials within 10 mV.
pub fn potentials(library: &Library, published: &Checks) -> Result<Vec<Check>, RangeError> {
    let table = GibbsTable::at(library, T_STANDARD)?;
    let checks = published.potentials.iter().map(|row| {
        let found = named::reaction(&row.reaction, library, Medium::Acid);
        let (holds, detail) = match found {
            Ok(equation) if equation.electrons < 0.0 => {
                let volts = equation.delta_g(&table, library).value / (equation.electrons * FARADAY);
                let detail = format!("{volts:.3} V, published {:.3} V ({})", row.value, row.source);
                ((volts - row.value).abs() <= POTENTIAL_TOLERANCE, detail)
            }
            Ok(_) => (false, "is not written as a reduction".to_owned()),
            Err(e) => (false, e.to_string()),
        };
        Check::new(Rule::Potential, row.reaction.clone(), holds, detail, row.explained.as_ref())
    });
    Ok(checks.collect())
}

/// Solubility products within 0.5, complexes and acids within 0.3 of log K.
pub fn constants(library: &Library, published: &Checks) -> Result<Vec<Check>, RangeError> {
    let table = GibbsTable::at(library, T_STANDARD)?;
    let checks = published.constants.iter().map(|row| {
        let tolerance = match row.kind {
            ConstantKind::Solubility => SOLUBILITY_TOLERANCE,
            ConstantKind::Complex | ConstantKind::Acid => COMPLEX_TOLERANCE,
        };
        let (holds, detail) = match named::reaction(&row.reaction, library, Medium::Acid) {
            Ok(equation) => {
                let log_k = equation.log_k(&table, library).value;
                let detail = format!("{log_k:.2}, published {:.2} ({})", row.value, row.source);
                ((log_k - row.value).abs() <= tolerance, detail)
            }
            Err(e) => (false, e.to_string()),
        };
        Check::new(Rule::Constant, row.reaction.clone(), holds, detail, row.explained.as_ref())
    });
    Ok(checks.collect())
}

/// G and H within 1 kJ/mol, S within 2 J/(mol K).
pub fn ions(library: &Library, published: &Checks) -> Vec<Check> {
    let checks = published.ions.iter().map(|row| {
        let Some(species) = library.in_state(&row.formula, State::Aqueous).or_else(|| library.find(&row.formula).ok())
        else {
            let detail = "is not in the library".to_owned();
            return Check::new(Rule::Ion, row.formula.clone(), false, detail, row.explained.as_ref());
        };
        let energy = |found: Option<f64>, published: Option<f64>| match (found, published) {
            (Some(f), Some(p)) => (f * 1e-3 - p).abs() <= ENERGY_TOLERANCE,
            _ => true,
        };
        let entropy = match (species.entropy, row.s_j_mol_k) {
            (Some(f), Some(p)) => (f.value - p).abs() <= ENTROPY_TOLERANCE,
            _ => true,
        };
        let holds = energy(Some(species.gibbs.value), row.g_kj_mol)
            && energy(species.enthalpy.map(|h| h.value), row.h_kj_mol)
            && entropy;
        let show = |v: Option<f64>| v.map_or_else(|| "—".to_owned(), |v| format!("{v:.2}"));
        let detail = format!(
            "G {:.2}, H {}, S {}; published {}, {}, {} ({})",
            species.gibbs.value * 1e-3,
            show(species.enthalpy.map(|h| h.value * 1e-3)),
            show(species.entropy.map(|s| s.value)),
            show(row.g_kj_mol),
            show(row.h_kj_mol),
            show(row.s_j_mol_k),
            row.source
        );
        Check::new(Rule::Ion, species.label(), holds, detail, row.explained.as_ref())
    });
    checks.collect()
}
