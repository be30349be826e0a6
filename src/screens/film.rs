//! Surface films: what is more stable than the dissolved metal, what practice relies on, and what breaks it here.

use crate::case::{Material, Solid};
use crate::equilibrium::Liquor;
use crate::equilibrium::liquor::is_solvent;
use crate::library::Species;
use crate::library::tables::{AlloyRecord, FilmBreaker, FilmRecord};

use super::attack::Products;
use super::{Setting, dissolution, text};

/// A film to be reckoned with on a metal.
pub struct Film<'a> {
    /// A solid that is more stable here than the dissolved product.
    stable: Option<&'a Species>,
    record: Option<&'a FilmRecord>,
    /// What breaks it and is in the liquor.
    pub broken_by: Vec<&'a FilmBreaker>,
    /// The alloy's own record says that practice relies on a film.
    alloy: bool,
    in_range: bool,
    /// What breaks it stands above the level at which practice gives the film up.
    lost: bool,
}

/// The film of a metal at potential `e` (V against SHE), if one is to be reckoned with.
pub fn film<'a>(setting: &'a Setting, solid: &Solid, e: f64) -> Option<Film<'a>> {
    let liquor = &setting.liquor;
    let Material::Metal { record: alloy, element } = solid.material else { return None };
    let stable = dissolution::leading_path(liquor, solid, e, Products::All)
        .and_then(|p| p.films().next().map(|f| liquor.library.get(f.leading)))
        .filter(|s| s.id != element);
    let alloy_film = alloy.is_some_and(|a| a.film);
    let symbol = film_element(alloy, liquor.library.get(element));
    let record = liquor.library.kinetics.film.iter().find(|f| f.metal == symbol);
    let in_range = record
        .is_some_and(|r| r.ph_from.is_none_or(|ph| liquor.ph() >= ph) && r.ph_to.is_none_or(|ph| liquor.ph() <= ph));
    let relied_on = in_range && record.is_some_and(|r| r.protective);
    if stable.is_none() && !alloy_film && !relied_on {
        return None;
    }
    let present = |b: &&FilmBreaker| above(liquor, b, b.above_mol_kg.unwrap_or(0.0));
    let broken_by = record.map_or_else(Vec::new, |r| r.broken_by.iter().filter(present).collect());
    let resistance = alloy.and_then(|a| a.pren).unwrap_or(0.0);
    let lost = broken_by.iter().any(|b| {
        let holds = b.holds_from_pren.is_some_and(|bound| resistance >= bound);
        !holds && b.act_above_mol_kg.is_some_and(|threshold| above(liquor, b, threshold))
    });
    Some(Film { stable, record, broken_by, alloy: alloy_film, in_range: in_range || record.is_none(), lost })
}

/// Element whose oxide makes the film: chromium from about 10.5 % in an alloy (the usual bound of stainless steels), else
/// the base.
fn film_element(alloy: Option<&AlloyRecord>, element: &Species) -> String {
    match alloy {
        Some(a) if a.composition_wt_percent.get("Cr").is_some_and(|cr| *cr >= 10.5) => "Cr".into(),
        Some(a) => a.base.clone(),
        None => element.text.clone(),
    }
}

/// Whether what breaks a film is in the liquor above a total, mol/kg.
fn above(liquor: &Liquor, breaker: &FilmBreaker, threshold: f64) -> bool {
    let Some(species) = breaker.species.as_deref().and_then(|s| liquor.library.dissolved(s).ok()) else { return false };
    species.constituents.iter().filter(|(c, _)| !is_solvent(c)).any(|(c, _)| liquor.total(c) > threshold)
}

impl Film<'_> {
    /// Practice relies on this film at this pH and at this level of what breaks it.
    pub fn holds(&self) -> bool {
        self.in_range && !self.lost && (self.record.is_some_and(|r| r.protective) || self.alloy)
    }

    pub fn name(&self, liquor: &Liquor) -> String {
        let recorded = self.record.filter(|_| self.alloy || self.stable.is_none());
        match (recorded, self.stable) {
            (Some(record), _) => liquor.library.find(&record.film).map_or(record.film.clone(), |s| s.formula.pretty()),
            (None, Some(species)) => species.pretty(),
            (None, None) => "oxide".into(),
        }
    }

    /// What practice says of it, as the end of a sentence.
    pub fn words(&self) -> &'static str {
        match (self.holds(), self.broken_by.is_empty()) {
            (true, true) => "practice relies on that film",
            (true, false) => "practice relies on that film, and something here can break it",
            (false, _) if self.lost => "practice does not rely on it at this level of what breaks it",
            (false, _) => "practice does not rely on it here",
        }
    }

    /// Reasons as sentences.
    pub fn reasons(&self) -> Vec<String> {
        let mut reasons = Vec::new();
        match self.stable {
            Some(species) if !self.alloy => {
                reasons.push(format!("{} is more stable here than the dissolved product: a film can form.", species.pretty()));
            }
            None if !self.alloy => reasons.push(
                "The dissolved product is the more stable one here, so the film that practice relies on holds by slowness only.".into(),
            ),
            _ => {}
        }
        if let Some(record) = self.record {
            reasons.extend(record.note.as_deref().map(text::sentence));
            for breaker in &record.broken_by {
                let here = if self.broken_by.iter().any(|b| b.what == breaker.what) { " Present here." } else { "" };
                reasons.push(format!("Film broken by {}: {}{here}", breaker.what, text::sentence(&breaker.text)));
            }
        }
        reasons
    }

    /// Source key of the record behind it.
    pub fn source(&self) -> Option<String> {
        self.record.map(|r| r.source.clone())
    }
}
