//! Every couple's Nernst potential in a liquor whose oxidation states are kept apart.

use crate::chemistry::Element;
use crate::library::SpeciesId;
use crate::library::tables::{InertClass, InertRecord};
use crate::quantity::{Estimate, FARADAY};

use super::liquor::Liquor;
use super::states::{self, Basis, StateForm};

/// Share of the oxidised total that an absent reduced partner is taken to have reached, and the other way round: a tenth
/// of the reagent used.
pub const ASSUMED_SHARE: f64 = 0.1;
/// Least total of an absent partner, mol/kg.
pub const ASSUMED_LEAST: f64 = 1e-6;

/// A couple with its potential in the liquor.
#[derive(Debug, Clone)]
pub struct Couple {
    pub oxidised: StateForm,
    pub reduced: StateForm,
    /// Electrons per atom of the element that changes.
    pub electrons: f64,
    /// V against SHE.
    pub potential: Estimate,
}

/// Potential of a couple of two states of one element, V against SHE:
/// E = (μ(oxidised) − μ(reduced))/(nF) + μ(e⁻)/F per atom, with the electron that keeps E(H⁺/H₂) = 0.
pub fn couple(liquor: &Liquor, oxidised: StateForm, reduced: StateForm) -> Couple {
    let electrons = oxidised.oxidation() - reduced.oxidation();
    let thermal = liquor.temperature().rt() / FARADAY;
    let value = thermal * (oxidised.potential - reduced.potential) / electrons + liquor.gibbs.electron() / FARADAY;
    let spread = spread_of(liquor, &[(&oxidised, 1.0), (&reduced, -1.0)], &[]);
    let potential = Estimate::new(value, thermal * spread / electrons);
    Couple { oxidised, reduced, electrons, potential }
}

/// Standard uncertainty of Σ n μ over forms of elements, per atom, units of RT: data and temperature models (what the forms
/// share cancels), activity model, and the decade either way (rectangular) of an assumed total. `solids` enter per formula.
pub fn spread_of(liquor: &Liquor, forms: &[(&StateForm, f64)], solids: &[(SpeciesId, f64)]) -> f64 {
    let per_atom = |form: &StateForm| {
        let held = liquor.library.get(form.leading).constituents.iter().filter(|(c, _)| *c == form.constituent);
        held.map(|(_, n)| n).sum::<f64>().max(1.0)
    };
    let own = forms.iter().map(|(form, n)| (form.leading, n / per_atom(form)));
    let terms: Vec<_> = own.chain(solids.iter().copied()).collect();
    let data = liquor.gibbs.spread(liquor.library, &terms) / liquor.temperature().rt();
    let local = forms.iter().map(|(form, n)| (n / per_atom(form) * local_spread(liquor, form)).powi(2)).sum::<f64>();
    data.hypot(local.sqrt())
}

/// What a form's uncertainty owes to the activity model and to an assumed total, units of RT per molecule.
fn local_spread(liquor: &Liquor, form: &StateForm) -> f64 {
    let charge = liquor.library.get(form.leading).formula.charge;
    let activity = liquor.activity_model.ln_gamma_uncertainty(charge, liquor.ionic_strength);
    match form.basis {
        Basis::Liquor => activity,
        Basis::Assumed(_) => activity.hypot(std::f64::consts::LN_10 / 3f64.sqrt()),
        Basis::Condensed | Basis::Gas(_) => 0.0,
    }
}

/// All couples of `element` with at least one state in the liquor, highest potential first.
pub fn couples_of(liquor: &Liquor, element: Element) -> Vec<Couple> {
    let states = states::states_of(liquor, element);
    let held: Vec<f64> = states.iter().map(|s| liquor.total(s)).collect();
    let present: Vec<bool> = states.iter().map(|s| liquor.potential(s).is_some()).collect();
    let form = |i: usize, partner: usize| {
        // Hydrogen leaves as gas at 1 bar, the convention of the trade for E(H⁺/H₂).
        if element.symbol() == "H" && states[i].oxidation() == 0.0 {
            return states::gaseous(liquor, &states[i], 1.0);
        }
        let assumed = (ASSUMED_SHARE * held[partner]).max(ASSUMED_LEAST);
        states::in_liquor(liquor, &states[i], assumed)
    };
    let mut couples = Vec::new();
    for low in 0..states.len() {
        for high in low + 1..states.len() {
            if !(present[low] || present[high]) {
                continue;
            }
            if let (Some(oxidised), Some(reduced)) = (form(high, low), form(low, high)) {
                couples.push(couple(liquor, oxidised, reduced));
            }
        }
    }
    couples.sort_by(|a, b| b.potential.value.total_cmp(&a.potential.value));
    couples
}

/// True for states that practice does not see form or react in liquors at all (perchlorate, dinitrogen): they are no
/// product to reckon with unless the liquor holds them already.
pub fn never_reached(liquor: &Liquor, constituent: &crate::chemistry::Constituent) -> bool {
    let library = liquor.library;
    library.kinetics.inert.iter().any(|record| {
        record.class == InertClass::Inert
            && record.against.is_empty()
            && record.ph_below.is_none()
            && record.ph_above.is_none()
            && record.temperature_above_c.is_none_or(|t| liquor.temperature().celsius() <= t)
            && record.reduced.iter().any(|r| r == "*")
            && library.records(&record.oxidised).iter().any(|s| s.constituents.iter().any(|(c, _)| c == constituent))
            && !super::liquor::is_solvent(constituent)
    })
}

/// The kinetic record that holds a couple back at the liquor's conditions, if any. `against` names the reductant.
pub fn held_back<'l>(liquor: &Liquor<'l>, couple: &Couple, against: Option<&str>) -> Option<&'l InertRecord> {
    let library = liquor.library;
    let celsius = liquor.temperature().celsius();
    let holds_state = |formula: &str, form: &StateForm| {
        formula == "*"
            || library.records(formula).iter().any(|s| s.constituents.iter().any(|(c, _)| *c == form.constituent))
    };
    library.kinetics.inert.iter().find(|record| {
        let escaped = record.temperature_above_c.is_some_and(|t| celsius > t)
            || record.ph_below.is_some_and(|ph| liquor.ph() < ph)
            || record.ph_above.is_some_and(|ph| liquor.ph() > ph)
            || record.unless_held.iter().any(|formula| holds(liquor, formula));
        let special = match against {
            Some(name) => record.against.is_empty() || record.against.iter().any(|a| a == name),
            None => record.against.is_empty(),
        };
        !escaped
            && special
            && holds_state(&record.oxidised, &couple.oxidised)
            && record.reduced.iter().any(|r| holds_state(r, &couple.reduced))
    })
}

/// Whether the liquor holds what a formula brings, apart from the solvent's elements.
fn holds(liquor: &Liquor, formula: &str) -> bool {
    let records = liquor.library.records(formula);
    records.iter().any(|s| {
        let mut own = s.constituents.iter().filter(|(c, _)| !super::liquor::is_solvent(c)).peekable();
        own.peek().is_some() && own.all(|(c, _)| liquor.total(c) > 0.0)
    })
}
