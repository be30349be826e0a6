//! Published values that the audit holds the library against: `materials/checks/*.toml`.

use serde::{Deserialize, Serialize};

use super::record::{State, Status};

/// What an equilibrium constant belongs to; each kind has its own tolerance.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum ConstantKind {
    Solubility,
    Complex,
    Acid,
}

/// A standard potential, V at 25 °C, for a reduction written out.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PotentialCheck {
    pub reaction: String,
    pub value: f64,
    pub source: String,
    pub status: Status,
    /// Why the library differs on purpose.
    #[serde(default)]
    pub explained: Option<String>,
}

/// log₁₀ K of a reaction at 25 °C.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ConstantCheck {
    pub reaction: String,
    pub value: f64,
    pub kind: ConstantKind,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub explained: Option<String>,
}

/// Values of a dissolved species at 25 °C.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct IonCheck {
    pub formula: String,
    #[serde(rename = "G_kJ_mol", default)]
    pub g_kj_mol: Option<f64>,
    #[serde(rename = "H_kJ_mol", default)]
    pub h_kj_mol: Option<f64>,
    #[serde(rename = "S_J_mol_K", default)]
    pub s_j_mol_k: Option<f64>,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub explained: Option<String>,
}

/// Apparent change of G° of a solid or gas from 25 °C to a temperature.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct HeatCheck {
    pub formula: String,
    pub state: State,
    #[serde(default)]
    pub form: Option<String>,
    #[serde(rename = "T_K")]
    pub t_k: f64,
    #[serde(rename = "dG_kJ_mol")]
    pub dg_kj_mol: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub explained: Option<String>,
}

/// All check tables.
#[derive(Debug, Default, Serialize, Deserialize)]
pub struct Checks {
    pub potentials: Vec<PotentialCheck>,
    pub constants: Vec<ConstantCheck>,
    pub ions: Vec<IonCheck>,
    pub heat: Vec<HeatCheck>,
}
