//! The records of `materials/` as they are written, before any chemistry is done with them.
//!
//! The build script reads the same definitions, so a record that does not fit stops the build with its file and line.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

/// Where a number stands on the way from a publication to here.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Status {
    /// Read in the publication named, or in a table that reproduces it.
    Published,
    /// Calculated from published numbers; the note says how.
    Derived,
    /// Remembered; the source is a pointer to check.
    Memory,
}

/// A tabulated value and its standard uncertainty, in the unit that the field name gives.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Tabulated {
    pub value: f64,
    pub u: f64,
}

/// Aggregate state.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum State {
    /// Dissolved in water, molality scale.
    #[serde(rename = "aq")]
    Aqueous,
    /// Crystalline.
    #[serde(rename = "cr")]
    Crystal,
    /// Amorphous or freshly precipitated.
    #[serde(rename = "am")]
    Amorphous,
    /// Liquid, including water.
    #[serde(rename = "l")]
    Liquid,
    /// Ideal gas at 1 bar.
    #[serde(rename = "g")]
    Gas,
}

/// Ion classes of the correspondence principle (Criss and Cobble 1964).
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum IonClass {
    Cation,
    Anion,
    Oxyanion,
    AcidOxyanion,
}

/// A species tied to others by a measured equilibrium: G°(species) follows from log K and the partners' G°.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Formation {
    /// `Fe^3+ + SO4^2- = FeSO4^+`; the record's own species once, on either side.
    pub reaction: String,
    #[serde(rename = "log_K")]
    pub log_k: f64,
    /// Standard uncertainty of log K.
    pub u: f64,
    /// Enthalpy of the reaction, kJ/mol.
    #[serde(rename = "H_kJ_mol", default)]
    pub h_kj_mol: Option<f64>,
}

/// log10 K(T) = a + b/T + c ln T + d T + e T², T in K, for the reaction named.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Curve {
    pub reaction: String,
    pub a: f64,
    #[serde(default)]
    pub b: f64,
    #[serde(default)]
    pub c: f64,
    #[serde(default)]
    pub d: f64,
    #[serde(default)]
    pub e: f64,
    /// Range in which the source states the fit, K.
    #[serde(rename = "from_K")]
    pub from_k: f64,
    #[serde(rename = "to_K")]
    pub to_k: f64,
    pub source: String,
    pub status: Status,
}

/// Heat capacity Cp = a + b·10⁻³ T + c·10⁵ T⁻², J/(mol K), T in K.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct HeatCapacity {
    pub a: f64,
    #[serde(default)]
    pub b: f64,
    #[serde(default)]
    pub c: f64,
}

/// A change of form on heating, after which the heat capacity is another.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Transition {
    #[serde(rename = "T_K")]
    pub t_k: f64,
    #[serde(rename = "H_kJ_mol")]
    pub h_kj_mol: f64,
    /// Heat capacity of the new form, J/(mol K).
    #[serde(rename = "Cp_J_mol_K")]
    pub cp_j_mol_k: f64,
    /// `monoclinic`, `liquid`, …
    pub to: String,
}

/// A value that was considered and not taken.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Rejected {
    #[serde(rename = "G_kJ_mol", default)]
    pub g_kj_mol: Option<f64>,
    #[serde(rename = "log_K", default)]
    pub log_k: Option<f64>,
    pub source: String,
    pub why: String,
}

/// One chemical species: `[[species]]` in `materials/species/*.toml`. Values at 298.15 K, 1 bar, molality scale.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SpeciesRecord {
    pub formula: String,
    pub state: State,
    pub name: String,
    /// Crystal form or mineral name that tells apart records of one formula: `rutile`, `anatase`.
    #[serde(default)]
    pub form: Option<String>,
    #[serde(rename = "G_kJ_mol", default)]
    pub g_kj_mol: Option<Tabulated>,
    #[serde(rename = "H_kJ_mol", default)]
    pub h_kj_mol: Option<Tabulated>,
    #[serde(rename = "S_J_mol_K", default)]
    pub s_j_mol_k: Option<Tabulated>,
    #[serde(rename = "Cp_J_mol_K", default)]
    pub cp_j_mol_k: Option<f64>,
    #[serde(default)]
    pub heat_capacity: Option<HeatCapacity>,
    #[serde(default)]
    pub transitions: Vec<Transition>,
    #[serde(default)]
    pub formation: Option<Formation>,
    #[serde(default)]
    pub curve: Option<Curve>,
    #[serde(default)]
    pub ion_class: Option<IonClass>,
    /// Constituents when the rules of oxidation numbers do not settle them: `{ "Fe+2" = 1, "Fe+3" = 2, "O-2" = 4 }`.
    #[serde(default)]
    pub parts: BTreeMap<String, f64>,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
    /// Why a rule of the audit does not hold for this record, on purpose.
    #[serde(default)]
    pub explained: Option<String>,
    #[serde(default)]
    pub rejected: Vec<Rejected>,
}

#[derive(Debug, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SpeciesFile {
    pub species: Vec<SpeciesRecord>,
}
