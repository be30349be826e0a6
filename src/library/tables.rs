//! The records of `materials/` that are not species: gases, alloys, minerals, kinetics, electrodes, activity, sources.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use super::record::{SpeciesRecord, Status};

/// A public exposure limit.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Limit {
    /// Parts per million by volume.
    pub value: f64,
    /// Who set it and over what time: `NIOSH ceiling, 15 min`.
    pub kind: String,
    /// The same limit as the source prints it by mass, mg/m³ at 25 °C and 1 atm.
    #[serde(default)]
    pub mg_m3: Option<f64>,
}

/// A gas with its public exposure and flammability limits: `[[gas]]` in `gases.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct GasRecord {
    pub formula: String,
    pub name: String,
    pub cas: String,
    #[serde(default)]
    pub short_limit_ppm: Option<Limit>,
    #[serde(default)]
    pub twa_limit_ppm: Option<Limit>,
    #[serde(default)]
    pub idlh_ppm: Option<f64>,
    /// Lower flammable limit in air, % by volume.
    #[serde(default)]
    pub lfl_percent: Option<f64>,
    #[serde(default)]
    pub ufl_percent: Option<f64>,
    #[serde(default)]
    pub density_relative_to_air: Option<f64>,
    pub warning: String,
    pub hazard: Vec<String>,
    /// Species from whose state practice sees the gas form; empty means any.
    #[serde(default)]
    pub formed_from: Vec<String>,
    #[serde(default)]
    pub note: Option<String>,
    pub source: String,
    pub status: Status,
}

/// A construction metal: an alloy by its UNS/EN number, or an element: `[[alloy]]` in `alloys.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct AlloyRecord {
    #[serde(default)]
    pub uns: Option<String>,
    #[serde(default)]
    pub en: Option<String>,
    /// Set instead of `uns` when the record is a pure element.
    #[serde(default)]
    pub element: Option<String>,
    pub name: String,
    /// Symbol of the element that carries the alloy's dissolution.
    pub base: String,
    #[serde(default)]
    pub composition_wt_percent: BTreeMap<String, f64>,
    #[serde(rename = "density_g_cm3", default)]
    pub density_g_cm3: Option<f64>,
    #[serde(default)]
    pub equivalent_weight: Option<f64>,
    #[serde(default)]
    pub pren: Option<f64>,
    /// Practice relies on a passive film.
    #[serde(default)]
    pub film: bool,
    #[serde(default)]
    pub typical_use: Option<String>,
    #[serde(default)]
    pub known_attack: Option<String>,
    /// Range of the practical corrosion potential in flowing seawater, V against SHE.
    #[serde(rename = "seawater_potential_V_SHE", default)]
    pub seawater_potential_v_she: Option<[f64; 2]>,
    /// The same when the film has broken down.
    #[serde(rename = "seawater_potential_active_V_SHE", default)]
    pub seawater_potential_active_v_she: Option<[f64; 2]>,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

/// A named mineral: `[[mineral]]` in `minerals.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct MineralRecord {
    pub name: String,
    #[serde(default)]
    pub synonyms: Vec<String>,
    pub formula: String,
    #[serde(default)]
    pub form: Option<String>,
    #[serde(rename = "density_g_cm3", default)]
    pub density_g_cm3: Option<f64>,
    /// Where a leach meets it.
    #[serde(default)]
    pub occurrence: Option<String>,
    /// Films and slowness that practice knows.
    #[serde(default)]
    pub passivation: Option<String>,
    #[serde(default)]
    pub note: Option<String>,
}

/// A named reagent and what it delivers in water: `[[reagent]]` in `reagents.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ReagentRecord {
    pub name: String,
    #[serde(default)]
    pub synonyms: Vec<String>,
    #[serde(default)]
    pub cas: Option<String>,
    /// Moles of library species per mole of the pure reagent.
    pub delivers: BTreeMap<String, f64>,
    /// g/mol of the pure reagent.
    pub molar_mass_g_mol: f64,
    /// Usual commercial strengths, % by mass.
    #[serde(default)]
    pub strengths_percent: Vec<f64>,
    /// kg/m³ at the first strength.
    #[serde(default)]
    pub density_kg_m3: Option<f64>,
    #[serde(default)]
    pub hazard: Vec<String>,
    #[serde(default)]
    pub note: Option<String>,
    pub source: String,
    pub status: Status,
}

/// What attacks a lining.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct LiningAttack {
    pub what: String,
    #[serde(default)]
    pub species: Option<String>,
    #[serde(default)]
    pub above_mol_kg: Option<f64>,
    #[serde(rename = "temperature_above_C", default)]
    pub temperature_above_c: Option<f64>,
    #[serde(rename = "pH_below", default)]
    pub ph_below: Option<f64>,
    #[serde(rename = "pH_above", default)]
    pub ph_above: Option<f64>,
    pub text: String,
}

/// A lining or non-metal construction material: `[[lining]]` in `linings.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct LiningRecord {
    pub name: String,
    #[serde(default)]
    pub synonyms: Vec<String>,
    /// Usual upper service temperature in mild aqueous duty, °C.
    #[serde(rename = "temperature_limit_C")]
    pub temperature_limit_c: f64,
    pub suited_to: String,
    #[serde(default)]
    pub attacked_by: Vec<LiningAttack>,
    #[serde(default)]
    pub note: Option<String>,
    pub source: String,
    pub status: Status,
}

/// Exchange current density: `[[exchange_current]]` in `electrode_kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ExchangeCurrent {
    pub reaction: String,
    pub surface: String,
    #[serde(default)]
    pub medium: Option<String>,
    #[serde(rename = "log10_i0_A_cm2")]
    pub log10_i0_a_cm2: f64,
    #[serde(default)]
    pub tafel_mv_per_decade: Option<f64>,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

/// Diffusion coefficient at 25 °C: `[[diffusion]]` in `electrode_kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct DiffusionRecord {
    pub species: String,
    #[serde(rename = "D_m2_s")]
    pub d_m2_s: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

#[derive(Debug, Default, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ElectrodeKinetics {
    #[serde(default)]
    pub exchange_current: Vec<ExchangeCurrent>,
    #[serde(default)]
    pub diffusion: Vec<DiffusionRecord>,
}

/// A couple that practice knows as inert or slow: `[[inert]]` in `kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct InertRecord {
    pub oxidised: String,
    /// Reduced species; `*` stands for all.
    pub reduced: Vec<String>,
    /// Reductants against which it is slow; empty means any.
    #[serde(default)]
    pub against: Vec<String>,
    pub class: InertClass,
    /// Species whose presence in the liquor lifts the record (a ligand that makes the couple work).
    #[serde(default)]
    pub unless_held: Vec<String>,
    pub practice: String,
    pub fast_when: String,
    #[serde(rename = "temperature_above_C", default)]
    pub temperature_above_c: Option<f64>,
    #[serde(rename = "pH_below", default)]
    pub ph_below: Option<f64>,
    #[serde(rename = "pH_above", default)]
    pub ph_above: Option<f64>,
    pub source: String,
    pub status: Status,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum InertClass {
    Inert,
    Slow,
}

/// What an oxidant usually becomes where several products are permitted: `[[usual_product]]` in `kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct UsualProduct {
    pub oxidised: String,
    pub reduced: String,
    #[serde(rename = "pH_below", default)]
    pub ph_below: Option<f64>,
    #[serde(rename = "pH_above", default)]
    pub ph_above: Option<f64>,
    pub practice: String,
    pub source: String,
    pub status: Status,
}

/// A couple between constituents that the elements' own states do not span: `[[unit_couple]]` in `kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct UnitCouple {
    /// `S2O8^2- + 2 e^- = 2 SO4^2-`
    pub reaction: String,
    #[serde(default)]
    pub note: Option<String>,
}

/// A solid that dissolves slowly though driven: `[[sluggish]]` in `kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SluggishRecord {
    pub formula: String,
    #[serde(default)]
    pub form: Option<String>,
    pub practice: String,
    pub source: String,
    pub status: Status,
}

/// What breaks a film.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FilmBreaker {
    pub what: String,
    #[serde(default)]
    pub species: Option<String>,
    /// Total of the species' constituent in the liquor, mol/kg, above which it counts.
    #[serde(default)]
    pub above_mol_kg: Option<f64>,
    /// Total above which practice no longer relies on the film at all, mol/kg.
    #[serde(default)]
    pub act_above_mol_kg: Option<f64>,
    /// Pitting resistance equivalent number from which an alloy is not given up even then.
    #[serde(default)]
    pub holds_from_pren: Option<f64>,
    pub text: String,
}

/// A metal whose surface film governs: `[[film]]` in `kinetics.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FilmRecord {
    /// Element symbol.
    pub metal: String,
    pub film: String,
    #[serde(rename = "pH_from", default)]
    pub ph_from: Option<f64>,
    #[serde(rename = "pH_to", default)]
    pub ph_to: Option<f64>,
    /// Practice relies on this film.
    pub protective: bool,
    #[serde(default)]
    pub broken_by: Vec<FilmBreaker>,
    #[serde(default)]
    pub note: Option<String>,
    pub source: String,
    pub status: Status,
}

/// A reference electrode: `[[electrode]]` in `electrodes.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ElectrodeRecord {
    pub name: String,
    #[serde(default)]
    pub synonyms: Vec<String>,
    #[serde(rename = "E_V_SHE_25C")]
    pub e_v_she_25c: f64,
    #[serde(rename = "dE_dT_mV_K", default)]
    pub de_dt_mv_k: Option<f64>,
    #[serde(rename = "u_mV")]
    pub u_mv: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

/// Distance of closest approach of an ion: `[[ion_size]]` in `activity.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct IonSize {
    pub formula: String,
    pub angstrom: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

/// Specific ion interaction coefficient, kg/mol: `[[sit]]` in `activity.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SitCoefficient {
    pub cation: String,
    pub anion: String,
    pub epsilon: f64,
    pub u: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

/// Conventional partial molar volume, V(H⁺) = 0: `[[partial_molar_volume]]` in `activity.toml`.
#[derive(Debug, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PartialMolarVolume {
    pub formula: String,
    pub cm3_mol: f64,
    pub source: String,
    pub status: Status,
    #[serde(default)]
    pub note: Option<String>,
}

#[derive(Debug, Default, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Kinetics {
    #[serde(default)]
    pub inert: Vec<InertRecord>,
    #[serde(default)]
    pub usual_product: Vec<UsualProduct>,
    #[serde(default)]
    pub unit_couple: Vec<UnitCouple>,
    #[serde(default)]
    pub sluggish: Vec<SluggishRecord>,
    #[serde(default)]
    pub film: Vec<FilmRecord>,
}

#[derive(Debug, Default, Clone, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ActivityTables {
    #[serde(default)]
    pub ion_size: Vec<IonSize>,
    #[serde(default)]
    pub sit: Vec<SitCoefficient>,
    #[serde(default)]
    pub partial_molar_volume: Vec<PartialMolarVolume>,
}

/// Everything in `materials/`, as read.
#[derive(Debug, Default, Serialize, Deserialize)]
pub struct Materials {
    pub species: Vec<SpeciesRecord>,
    pub gases: Vec<GasRecord>,
    pub alloys: Vec<AlloyRecord>,
    pub minerals: Vec<MineralRecord>,
    pub reagents: Vec<ReagentRecord>,
    pub linings: Vec<LiningRecord>,
    pub kinetics: Kinetics,
    pub electrode_kinetics: ElectrodeKinetics,
    pub electrodes: Vec<ElectrodeRecord>,
    pub activity: ActivityTables,
    /// Source key → full citation.
    pub sources: BTreeMap<String, String>,
}
