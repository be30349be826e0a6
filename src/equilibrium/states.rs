//! Oxidation states of an element in a given liquor: the form each takes there and its potential.

use crate::chemistry::{Constituent, Element};
use crate::library::record::State;
use crate::library::{Species, SpeciesId};

use super::liquor::Liquor;

/// What fixes the potential of a state.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Basis {
    /// The liquor holds it.
    Liquor,
    /// Not in the liquor; taken at this total, mol/kg.
    Assumed(f64),
    /// A pure solid or liquid, activity one.
    Condensed,
    /// A gas at this pressure, bar.
    Gas(f64),
}

/// One oxidation state of an element (or one unit such as cyanide) and the form that it takes.
#[derive(Debug, Clone)]
pub struct StateForm {
    pub constituent: Constituent,
    /// Potential per atom, units of RT.
    pub potential: f64,
    /// The most abundant species, or the solid or gas itself.
    pub leading: SpeciesId,
    pub basis: Basis,
}

impl StateForm {
    /// Oxidation number of the element.
    pub fn oxidation(&self) -> f64 {
        self.constituent.oxidation()
    }
}

/// States of `element` that the library knows, lowest first.
pub fn states_of(liquor: &Liquor, element: Element) -> Vec<Constituent> {
    let mut states: Vec<Constituent> =
        liquor.library.constituents().filter(|c| c.element() == Some(element)).cloned().collect();
    states.sort_by(|a, b| a.oxidation().total_cmp(&b.oxidation()));
    states
}

/// The state as the liquor holds it.
pub fn present(liquor: &Liquor, constituent: &Constituent) -> Option<StateForm> {
    let potential = liquor.potential(constituent)?;
    let holds = |id: &SpeciesId| liquor.library.get(*id).constituents.iter().any(|(c, _)| c == constituent);
    let leading = match solvent_form(liquor, constituent) {
        Some(id) => id,
        None => liquor.dissolved.iter().map(|d| d.species).find(holds)?,
    };
    Some(StateForm { constituent: constituent.clone(), potential, leading, basis: Basis::Liquor })
}

/// H⁺ stands for the solvent's hydrogen in acid, water for it in alkali and for its oxygen.
fn solvent_form(liquor: &Liquor, constituent: &Constituent) -> Option<SpeciesId> {
    if !super::liquor::is_solvent(constituent) {
        return None;
    }
    let acid_hydrogen = constituent.oxidation() > 0.0 && liquor.ph() < 8.0;
    let (text, state) = if acid_hydrogen { ("H^+", State::Aqueous) } else { ("H2O", State::Liquid) };
    liquor.library.in_state(text, state).map(|s| s.id)
}

/// Count of `constituent` in a species and ln of its activity at zero potential of that constituent; `None` when the
/// liquor lacks another constituent of the species.
fn reach(liquor: &Liquor, species: &Species, constituent: &Constituent) -> Option<(f64, f64)> {
    let mut count = 0.0;
    let mut rest = -liquor.reduced_gibbs(species.id);
    for (other, n) in &species.constituents {
        if other == constituent {
            count += n;
        } else {
            rest += n * liquor.potential(other)?;
        }
    }
    (count > 0.0).then_some((count, rest))
}

/// The state dissolved at `total` mol/kg, whatever complexes and hydroxo species the liquor makes of it.
pub fn dissolved_at(liquor: &Liquor, constituent: &Constituent, total: f64) -> Option<StateForm> {
    let forms: Vec<(SpeciesId, f64, f64)> = liquor
        .library
        .holding(constituent)
        .filter(|s| s.state == State::Aqueous)
        .filter_map(|s| reach(liquor, s, constituent).map(|(n, k)| (s.id, n, k - liquor.ln_gamma(s.id))))
        .collect();
    let amount = |x: f64, (_, n, k): &(SpeciesId, f64, f64)| n * (k + n * x).exp();
    // Below this potential no single form exceeds the total; ln Σ is convex and rising, so Newton from here stays sound.
    let mut x = forms.iter().map(|(_, n, k)| ((total / n).ln() - k) / n).min_by(f64::total_cmp)?;
    for _ in 0..100 {
        let sum: f64 = forms.iter().map(|f| amount(x, f)).sum();
        let slope: f64 = forms.iter().map(|f| f.1 * amount(x, f)).sum::<f64>() / sum;
        let step = (total / sum).ln() / slope;
        x += step;
        if step.abs() < 1e-13 {
            break;
        }
    }
    let leading = forms.iter().max_by(|a, b| amount(x, a).total_cmp(&amount(x, b)))?.0;
    Some(StateForm { constituent: constituent.clone(), potential: x, leading, basis: Basis::Assumed(total) })
}

/// Every solid or liquid that holds the state, its other constituents as the liquor has them; most stable first.
pub fn condensed(liquor: &Liquor, constituent: &Constituent) -> Vec<StateForm> {
    let mut forms: Vec<StateForm> = liquor
        .library
        .holding(constituent)
        .filter(|s| s.is_condensed() && s.text != "H2O")
        .filter_map(|s| {
            let (count, rest) = reach(liquor, s, constituent)?;
            Some(StateForm {
                constituent: constituent.clone(),
                potential: -rest / count,
                leading: s.id,
                basis: Basis::Condensed,
            })
        })
        .collect();
    forms.sort_by(|a, b| a.potential.total_cmp(&b.potential));
    forms
}

/// The solids that a state forms by itself: a metal's with ligands only, a non-metal's without metals. Mixed compounds of
/// several metals are products of a reaction between them, not the fate of one state.
pub fn own_condensed(liquor: &Liquor, constituent: &Constituent) -> Vec<StateForm> {
    let metal = constituent.element().is_some_and(Element::is_metal);
    let allowed = |form: &StateForm| {
        let others = liquor.library.get(form.leading).constituents.iter().filter_map(|(c, _)| c.element());
        let foreign = others.filter(|e| Some(*e) != constituent.element() && e.is_metal()).count();
        foreign == 0 && (metal || constituent.element().is_some())
    };
    condensed(liquor, constituent).into_iter().filter(allowed).collect()
}

/// The state as a gas at `bar`, the most stable of the gases that hold it.
pub fn gaseous(liquor: &Liquor, constituent: &Constituent, bar: f64) -> Option<StateForm> {
    liquor
        .library
        .holding(constituent)
        .filter(|s| s.state == State::Gas)
        .filter_map(|s| {
            let (count, rest) = reach(liquor, s, constituent)?;
            Some(StateForm {
                constituent: constituent.clone(),
                potential: (bar.ln() - rest) / count,
                leading: s.id,
                basis: Basis::Gas(bar),
            })
        })
        .min_by(|a, b| a.potential.total_cmp(&b.potential))
}

/// The form a state takes in the liquor: as held, or else dissolved at `assumed` mol/kg or as the solid that would then
/// have formed.
pub fn in_liquor(liquor: &Liquor, constituent: &Constituent, assumed: f64) -> Option<StateForm> {
    if let Some(form) = present(liquor, constituent) {
        return Some(form);
    }
    let solid = own_condensed(liquor, constituent).into_iter().next();
    let solute = dissolved_at(liquor, constituent, assumed);
    match (solid, solute) {
        (Some(a), Some(b)) => Some(if a.potential < b.potential { a } else { b }),
        (a, b) => a.or(b).or_else(|| gaseous(liquor, constituent, 1.0)),
    }
}

/// Share of the leading form from which the plain ion is named instead: readers expect Cu²⁺ where it is of the same order as
/// its complexes, and CuCl₂⁻ where it is not.
const PLAIN_ENOUGH: f64 = 0.1;

/// The species by which a state is called in equations: the plain ion where it matters, else the leading form.
pub fn named_form(liquor: &Liquor, form: &StateForm) -> SpeciesId {
    let Some(plain) = plain_ion(liquor, form) else { return form.leading };
    let ln_amount = |id: SpeciesId| {
        let species = liquor.library.get(id);
        reach(liquor, species, &form.constituent).map(|(n, k)| k - liquor.ln_gamma(id) + n * form.potential)
    };
    match (ln_amount(plain), ln_amount(form.leading)) {
        (Some(own), Some(leading)) if own - leading >= PLAIN_ENOUGH.ln() => plain,
        _ => form.leading,
    }
}

/// The plain ion by which the trade names a dissolved state (`Fe^3+`), when the library has one.
pub fn plain_ion(liquor: &Liquor, form: &StateForm) -> Option<SpeciesId> {
    if !matches!(form.basis, Basis::Liquor | Basis::Assumed(_)) {
        return None;
    }
    let plain = |species: &&Species| species.constituents.len() == 1 && species.formula.composition.len() == 1;
    let dissolved = liquor.library.holding(&form.constituent).filter(|s| s.state == State::Aqueous);
    dissolved.filter(plain).map(|s| s.id).next()
}
