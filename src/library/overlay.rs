//! The user's own records, laid over the embedded library: they add, or override what has the same name.

use std::collections::BTreeMap;

use serde::Deserialize;

use super::record::SpeciesRecord;
use super::tables::{
    AlloyRecord, DiffusionRecord, ElectrodeRecord, ExchangeCurrent, FilmRecord, GasRecord, InertRecord, LiningRecord,
    Materials, MineralRecord, ReagentRecord, SluggishRecord, UsualProduct,
};

/// One overlay file: any of the tables of `materials/`, and `[sources]`.
#[derive(Debug, Default, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Overlay {
    /// The file's name, for messages and the report.
    #[serde(skip)]
    pub name: String,
    #[serde(default)]
    species: Vec<SpeciesRecord>,
    #[serde(default)]
    gas: Vec<GasRecord>,
    #[serde(default)]
    alloy: Vec<AlloyRecord>,
    #[serde(default)]
    mineral: Vec<MineralRecord>,
    #[serde(default)]
    reagent: Vec<ReagentRecord>,
    #[serde(default)]
    lining: Vec<LiningRecord>,
    #[serde(default)]
    electrode: Vec<ElectrodeRecord>,
    #[serde(default)]
    inert: Vec<InertRecord>,
    #[serde(default)]
    usual_product: Vec<UsualProduct>,
    #[serde(default)]
    sluggish: Vec<SluggishRecord>,
    #[serde(default)]
    film: Vec<FilmRecord>,
    #[serde(default)]
    exchange_current: Vec<ExchangeCurrent>,
    #[serde(default)]
    diffusion: Vec<DiffusionRecord>,
    #[serde(default)]
    sources: BTreeMap<String, String>,
}

/// What an overlay did to the library.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Change {
    /// The overlay file.
    pub file: String,
    /// `species Cu^2+ (aq)`, `alloy UNS S31603`, …
    pub record: String,
    pub overrides: bool,
}

impl Overlay {
    /// Reads an overlay file's text.
    ///
    /// # Errors
    /// The parser's message with line and column when the text is not TOML or a field does not fit.
    pub fn parse(name: &str, text: &str) -> Result<Self, String> {
        let mut overlay: Self = toml::from_str(text).map_err(|e| format!("{name}: {e}"))?;
        overlay.name = name.to_owned();
        Ok(overlay)
    }

    /// Lays the file's records over `materials`; tells what was added and what overridden.
    pub(super) fn lay_over(&self, materials: &mut Materials) -> Vec<Change> {
        let mut changes = Vec::new();
        let mut note = |record: String, overrides: bool| {
            changes.push(Change { file: self.name.clone(), record, overrides });
        };
        merge(
            &mut materials.species,
            &self.species,
            |s| format!("species {} ({:?}{})", s.formula, s.state, form(&s.form)),
            &mut note,
        );
        merge(&mut materials.gases, &self.gas, |g| format!("gas {}", g.formula), &mut note);
        merge(&mut materials.alloys, &self.alloy, alloy_name, &mut note);
        merge(&mut materials.minerals, &self.mineral, |m| format!("mineral {}", m.name), &mut note);
        merge(&mut materials.reagents, &self.reagent, |r| format!("reagent {}", r.name), &mut note);
        merge(&mut materials.linings, &self.lining, |l| format!("lining {}", l.name), &mut note);
        merge(&mut materials.electrodes, &self.electrode, |e| format!("electrode {}", e.name), &mut note);
        let kinetics = &mut materials.kinetics;
        merge(&mut kinetics.film, &self.film, |f| format!("film on {}", f.metal), &mut note);
        merge(
            &mut kinetics.sluggish,
            &self.sluggish,
            |s| format!("sluggish solid {}{}", s.formula, form(&s.form)),
            &mut note,
        );
        merge(
            &mut kinetics.usual_product,
            &self.usual_product,
            |u| format!("usual product of {}", u.oxidised),
            &mut note,
        );
        merge(
            &mut kinetics.inert,
            &self.inert,
            |i| format!("inert couple {}/{} {:?}", i.oxidised, i.reduced.join(","), i.against),
            &mut note,
        );
        let electrode = &mut materials.electrode_kinetics;
        merge(
            &mut electrode.exchange_current,
            &self.exchange_current,
            |e| format!("exchange current {} on {}", e.reaction, e.surface),
            &mut note,
        );
        merge(
            &mut electrode.diffusion,
            &self.diffusion,
            |d| format!("diffusion coefficient of {}", d.species),
            &mut note,
        );
        for (key, citation) in &self.sources {
            let before = materials.sources.insert(key.clone(), citation.clone());
            note(format!("source {key}"), before.is_some());
        }
        changes
    }
}

fn form(form: &Option<String>) -> String {
    form.as_ref().map(|f| format!(", {f}")).unwrap_or_default()
}

fn alloy_name(alloy: &AlloyRecord) -> String {
    let name = alloy.uns.as_ref().or(alloy.en.as_ref()).or(alloy.element.as_ref()).unwrap_or(&alloy.name);
    format!("alloy {name}")
}

/// Replaces records of the same name, appends the others.
fn merge<T: Clone>(into: &mut Vec<T>, from: &[T], name: impl Fn(&T) -> String, note: &mut impl FnMut(String, bool)) {
    for record in from {
        let wanted = name(record);
        match into.iter_mut().find(|known| name(known) == wanted) {
            Some(known) => {
                *known = record.clone();
                note(wanted, true);
            }
            None => {
                into.push(record.clone());
                note(wanted, false);
            }
        }
    }
}
