//! `materials/` as one value: species closed and tied together, and the tables that the screens read.
//!
//! Loaded once from the bytes that the build script packed, then passed by reference. It knows nothing of scenarios.

pub mod checks;
mod overlay;
pub mod record;
mod resolve;
mod species;
pub mod tables;

use std::collections::{BTreeMap, HashMap};

use thiserror::Error;

use crate::chemistry::{Constituent, Formula};
use checks::Checks;
pub use overlay::{Change, Overlay};
use record::SpeciesRecord;
use record::State;
pub use species::{Species, SpeciesId, TemperatureModel};
use tables::{
    ActivityTables, AlloyRecord, ElectrodeKinetics, ElectrodeRecord, GasRecord, Kinetics, LiningRecord, Materials,
    MineralRecord, ReagentRecord,
};

const PACKED: &[u8] = include_bytes!(concat!(env!("OUT_DIR"), "/materials.bin"));
const PACKED_CHECKS: &[u8] = include_bytes!(concat!(env!("OUT_DIR"), "/checks.bin"));

/// What can be wrong with the records.
#[derive(Debug, Error)]
pub enum LibraryError {
    #[error("the embedded library cannot be read: {0}")]
    Packed(String),
    #[error("record `{record}`: {problem}")]
    Record { record: String, problem: String },
    #[error("records that define each other in a circle, or by a species that is missing: {0}")]
    Unresolved(String),
}

/// A name that the library does not hold, with the nearest that it does.
#[derive(Debug, Error, PartialEq)]
#[error("`{name}` is not in the library{}", near(.nearest))]
pub struct NotFound {
    pub name: String,
    pub nearest: Vec<String>,
}

fn near(nearest: &[String]) -> String {
    if nearest.is_empty() { String::new() } else { format!("; nearest: {}", nearest.join(", ")) }
}

/// All records, indexed.
pub struct Library {
    species: Vec<Species>,
    by_text: HashMap<String, Vec<SpeciesId>>,
    /// Species that hold each constituent, by its text.
    by_constituent: HashMap<Constituent, Vec<SpeciesId>>,
    /// Order in which G°(T) can be computed, partners first.
    evaluation_order: Vec<SpeciesId>,
    /// The records as written, in the order of [`Library::species`].
    pub records: Vec<SpeciesRecord>,
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
    /// What the user's own files added or overrode.
    pub changes: Vec<Change>,
}

impl Library {
    /// The library embedded in the program.
    ///
    /// # Errors
    /// [`LibraryError`] names the record that does not hold together.
    pub fn embedded() -> Result<Self, LibraryError> {
        Self::with_overlays(&[])
    }

    /// The embedded library with the user's own files laid over it, in their order.
    ///
    /// # Errors
    /// [`LibraryError`] names the record that does not hold together.
    pub fn with_overlays(overlays: &[Overlay]) -> Result<Self, LibraryError> {
        let mut materials: Materials = postcard::from_bytes(PACKED).map_err(|e| LibraryError::Packed(e.to_string()))?;
        let changes = overlays.iter().flat_map(|o| o.lay_over(&mut materials)).collect();
        let mut library = Self::from_materials(materials)?;
        library.changes = changes;
        Ok(library)
    }

    /// The published values that the audit holds the library against.
    ///
    /// # Errors
    /// [`LibraryError::Packed`] when the embedded tables cannot be read.
    pub fn checks() -> Result<Checks, LibraryError> {
        postcard::from_bytes(PACKED_CHECKS).map_err(|e| LibraryError::Packed(e.to_string()))
    }

    /// Builds the library from records.
    ///
    /// # Errors
    /// [`LibraryError`] names the record that does not hold together.
    pub fn from_materials(materials: Materials) -> Result<Self, LibraryError> {
        let (species, evaluation_order) = resolve::species(&materials.species)?;
        let mut by_text: HashMap<String, Vec<SpeciesId>> = HashMap::new();
        let mut by_constituent: HashMap<Constituent, Vec<SpeciesId>> = HashMap::new();
        for one in &species {
            by_text.entry(one.text.clone()).or_default().push(one.id);
            for (constituent, _) in &one.constituents {
                by_constituent.entry(constituent.clone()).or_default().push(one.id);
            }
        }
        Ok(Self {
            species,
            by_text,
            by_constituent,
            evaluation_order,
            records: materials.species,
            gases: materials.gases,
            alloys: materials.alloys,
            minerals: materials.minerals,
            reagents: materials.reagents,
            linings: materials.linings,
            kinetics: materials.kinetics,
            electrode_kinetics: materials.electrode_kinetics,
            electrodes: materials.electrodes,
            activity: materials.activity,
            sources: materials.sources,
            changes: Vec::new(),
        })
    }

    /// SHA-256 of the packed records, hexadecimal: says which library made a report.
    pub fn sha256() -> String {
        use sha2::{Digest, Sha256};
        Sha256::digest(PACKED).iter().map(|byte| format!("{byte:02x}")).collect()
    }

    pub fn species(&self) -> &[Species] {
        &self.species
    }

    pub fn get(&self, id: SpeciesId) -> &Species {
        &self.species[id.0]
    }

    pub(crate) fn evaluation_order(&self) -> &[SpeciesId] {
        &self.evaluation_order
    }

    /// Species that contain the constituent.
    pub fn holding(&self, constituent: &Constituent) -> impl Iterator<Item = &Species> {
        self.by_constituent.get(constituent).into_iter().flatten().map(|id| self.get(*id))
    }

    /// Every constituent of the library.
    pub fn constituents(&self) -> impl Iterator<Item = &Constituent> {
        self.by_constituent.keys()
    }

    /// All records of one formula, however it is written (`Fe³⁺`, `Fe^3+`).
    pub fn records(&self, formula: &str) -> Vec<&Species> {
        let known = self.by_text.get(formula);
        let rewritten = || Formula::parse(formula).ok().and_then(|f| self.by_text.get(&f.canonical()));
        known.or_else(rewritten).into_iter().flatten().map(|id| self.get(*id)).collect()
    }

    /// The record of a formula in a given state.
    pub fn in_state(&self, formula: &str, state: State) -> Option<&Species> {
        self.records(formula).into_iter().find(|s| s.state == state)
    }

    /// The record that a bare formula means: ions are dissolved; `H2O` is liquid; of neutral ones the solid, then the
    /// gas if it is an element, then the dissolved form, then the gas.
    ///
    /// # Errors
    /// [`NotFound`] with the nearest formulae.
    pub fn find(&self, formula: &str) -> Result<&Species, NotFound> {
        let found = self.records(formula);
        let rank = |s: &&Species| match s.state {
            State::Crystal => 0,
            State::Liquid => 1,
            State::Gas if s.formula.composition.len() == 1 => 2,
            State::Aqueous => 3,
            State::Amorphous => 4,
            State::Gas => 5,
        };
        let stable = |s: &&Species| (s.gibbs.value * 1e-3).round() as i64;
        found.into_iter().min_by_key(|s| (rank(s), stable(s))).ok_or_else(|| self.not_found(formula))
    }

    /// The dissolved form of a formula.
    ///
    /// # Errors
    /// [`NotFound`] with the nearest dissolved species.
    pub fn dissolved(&self, formula: &str) -> Result<&Species, NotFound> {
        self.in_state(formula, State::Aqueous).ok_or_else(|| self.not_found(formula))
    }

    /// The alloy or pure metal of a name, UNS or EN number, or element symbol.
    pub fn alloy(&self, name: &str) -> Option<&AlloyRecord> {
        let wanted = name.trim();
        let same = |field: &Option<String>| field.as_deref().is_some_and(|f| f.eq_ignore_ascii_case(wanted));
        self.alloys.iter().find(|a| {
            same(&a.uns) || same(&a.en) || a.element.as_deref() == Some(wanted) || a.name.eq_ignore_ascii_case(wanted)
        })
    }

    /// The mineral of a name or synonym.
    pub fn mineral(&self, name: &str) -> Option<&MineralRecord> {
        let wanted = name.trim();
        self.minerals
            .iter()
            .find(|m| m.name.eq_ignore_ascii_case(wanted) || m.synonyms.iter().any(|s| s.eq_ignore_ascii_case(wanted)))
    }

    /// The reference electrode of a name or synonym.
    ///
    /// # Errors
    /// [`NotFound`] with the nearest electrode names.
    pub fn electrode(&self, name: &str) -> Result<&ElectrodeRecord, NotFound> {
        let squeeze = |text: &str| text.to_lowercase().replace([' ', ',', '.', '(', ')'], "");
        let wanted = squeeze(name);
        self.electrodes
            .iter()
            .find(|e| squeeze(&e.name) == wanted || e.synonyms.iter().any(|s| squeeze(s) == wanted))
            .ok_or_else(|| NotFound {
                name: name.to_owned(),
                nearest: nearest(name, self.electrodes.iter().map(|e| e.name.as_str()), 3),
            })
    }

    /// Public limits of a gas.
    pub fn gas(&self, formula: &str) -> Option<&GasRecord> {
        self.gases.iter().find(|g| g.formula == formula)
    }

    fn not_found(&self, formula: &str) -> NotFound {
        NotFound { name: formula.to_owned(), nearest: nearest(formula, self.by_text.keys().map(String::as_str), 4) }
    }
}

/// The `count` words most like `name`, best first; ties in alphabetical order.
pub fn nearest<'a>(name: &str, words: impl Iterator<Item = &'a str>, count: usize) -> Vec<String> {
    let mut scored: Vec<(i64, &str)> = words
        .map(|word| ((strsim::jaro_winkler(name, word) * 1e6) as i64, word))
        .filter(|(score, _)| *score > 650_000)
        .collect();
    scored.sort_by(|a, b| b.0.cmp(&a.0).then(a.1.cmp(b.1)));
    scored.into_iter().take(count).map(|(_, word)| word.to_owned()).collect()
}
