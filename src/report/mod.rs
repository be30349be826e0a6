//! Findings → one document model → one writer a format. Nothing here knows how a number was made.

mod compose;
pub mod document;
mod fonts;
mod house;
pub mod json;
pub mod pdf;
mod sections;
pub mod terminal;

use chrono::NaiveDate;

use crate::equilibrium::Liquor;
use crate::library::Species;
use crate::scenario::Scenario;
use crate::screens::{Finding, Setting};

pub use compose::compose;
pub use house::House;

/// What a report is about.
pub struct Subject<'r, 'c, 'l> {
    pub scenario: &'r Scenario,
    pub setting: &'r Setting<'c, 'l>,
    pub findings: &'r [Finding],
    pub house: &'r House,
    /// The scenario's date, or today.
    pub date: NaiveDate,
}

impl Subject<'_, '_, '_> {
    /// SHA-256 of the scenario file's text, hexadecimal.
    pub fn scenario_sha256(&self) -> String {
        use sha2::{Digest, Sha256};
        Sha256::digest(self.scenario.source.text.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect()
    }
}

/// Least saturation index that is reported.
const LEAST_SATURATION: f64 = -1.0;

/// Solids with their saturation index (log₁₀ per formula) in the liquor, most oversaturated first; those above −1.
pub fn saturated_solids<'l>(liquor: &Liquor<'l>) -> Vec<(&'l Species, f64)> {
    let mut list: Vec<_> = liquor
        .library
        .species()
        .iter()
        .filter(|s| s.is_condensed() && s.text != "H2O")
        .filter_map(|s| liquor.ln_activity(s).map(|ln| (s, ln / std::f64::consts::LN_10)))
        .filter(|(_, index)| *index > LEAST_SATURATION)
        .collect();
    list.sort_by(|a, b| b.1.total_cmp(&a.1));
    list
}
