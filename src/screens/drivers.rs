//! What in the liquor can take electrons (or give them): the couples against which solids and gases are screened.

use crate::case::Case;
use crate::chemistry::Element;
use crate::equilibrium::states::{self, Basis, StateForm};
use crate::equilibrium::{Closer, Couple, Liquor, couples};
use crate::library::SpeciesId;
use crate::library::tables::{InertClass, InertRecord};
use crate::quantity::Estimate;
use crate::thermo::equation::Equation;

/// Where a driver comes from.
#[derive(Debug, Clone, PartialEq)]
pub enum Origin {
    /// Listed as an oxidant in the scenario, under this name.
    Named(String),
    /// Dissolved in the liquor or imposed as a gas.
    Liquor,
    /// Hydrogen ion or water itself.
    Acid,
    /// Read by an electrode.
    Measured,
}

/// An electron source or sink at a definite potential.
#[derive(Debug, Clone)]
pub struct Driver<'l> {
    /// `Fe^3+/Fe^2+`, `H^+/H2`, `measured potential`.
    pub label: String,
    pub pretty: String,
    pub origin: Origin,
    /// V against SHE.
    pub potential: Estimate,
    /// The couple, unless the potential was measured.
    pub couple: Option<Couple>,
    /// Reduction half-reaction per atom of the element that changes; none for a measured potential.
    pub half: Option<Equation>,
    /// True when the reduced side is the metal itself: what it does to another metal is cementation.
    pub deposits_metal: bool,
    /// Practice that holds the couple back against anything.
    pub held_back: Option<&'l InertRecord>,
}

impl<'l> Driver<'l> {
    /// Practice that holds the couple back against this reductant.
    pub fn held_back_against(&self, liquor: &Liquor<'l>, reductant: &str) -> Option<&'l InertRecord> {
        let couple = self.couple.as_ref()?;
        self.held_back.or_else(|| couples::held_back(liquor, couple, Some(reductant)))
    }

    /// True when the liquor holds the reduced side, so the couple can give electrons.
    pub fn can_reduce(&self) -> bool {
        self.couple.as_ref().is_none_or(|c| c.reduced.basis == Basis::Liquor)
    }

    /// Assumptions behind the potential, as sentences.
    pub fn assumptions(&self, liquor: &Liquor) -> Option<String> {
        let couple = self.couple.as_ref()?;
        match couple.reduced.basis {
            Basis::Assumed(total) => Some(format!(
                "{} is not in the liquor as given; it is taken at {total:.1e} mol/kg (a tenth of the oxidant used), a decade either way counted in the uncertainty.",
                liquor.library.get(couple.reduced.leading).pretty()
            )),
            _ => None,
        }
    }
}

/// All drivers of a case, highest potential first; the measured potential, where there is one, stands first.
pub fn drivers<'l>(case: &Case<'l>, liquor: &Liquor<'l>) -> Vec<Driver<'l>> {
    let mut list = Vec::new();
    for element in elements(liquor) {
        let mut used: Vec<String> = Vec::new();
        for couple in ranked(liquor, element) {
            let oxidised = couple.oxidised.constituent.to_string();
            if couple.oxidised.basis != Basis::Liquor || used.contains(&oxidised) {
                continue;
            }
            used.push(oxidised);
            let driver = driver(case, liquor, couple);
            let inert = driver.held_back.is_some_and(|r| r.class == InertClass::Inert);
            if !inert || matches!(driver.origin, Origin::Named(_)) {
                list.push(driver);
            }
        }
    }
    list.extend(solid_oxidants(case, liquor));
    list.sort_by(|a, b| b.potential.value.total_cmp(&a.potential.value));
    if let Some((volts, electrode)) = &case.measured {
        list.insert(0, measured(*volts, electrode));
    }
    list
}

fn elements(liquor: &Liquor) -> Vec<Element> {
    let mut list: Vec<Element> = liquor.constituents().filter_map(|c| c.element()).collect();
    list.extend([Element::from_symbol("H")].into_iter().flatten());
    list.sort();
    list.dedup();
    list
}

/// Couples of an element, those that practice sees run first, each group by potential; the usual product of an oxidant
/// goes before its other products.
fn ranked(liquor: &Liquor, element: Element) -> Vec<Couple> {
    let mut list = couples::couples_of(liquor, element);
    list.sort_by(|a, b| rank(liquor, b).total_cmp(&rank(liquor, a)));
    list
}

fn rank(liquor: &Liquor, couple: &Couple) -> f64 {
    let held = if couples::held_back(liquor, couple, None).is_some() { -1e3 } else { 0.0 };
    let usual = if is_usual(liquor, couple) { 1e2 } else { 0.0 };
    couple.potential.value + held + usual
}

/// Whether `kinetics.toml` names this reduction as the usual one at the liquor's pH.
fn is_usual(liquor: &Liquor, couple: &Couple) -> bool {
    let holds = |formula: &str, form: &StateForm| {
        liquor.library.records(formula).iter().any(|s| s.constituents.iter().any(|(c, _)| *c == form.constituent))
    };
    liquor.library.kinetics.usual_product.iter().any(|record| {
        record.ph_below.is_none_or(|ph| liquor.ph() < ph)
            && record.ph_above.is_none_or(|ph| liquor.ph() >= ph)
            && holds(&record.oxidised, &couple.oxidised)
            && holds(&record.reduced, &couple.reduced)
    })
}

fn driver<'l>(case: &Case<'l>, liquor: &Liquor<'l>, couple: Couple) -> Driver<'l> {
    let library = liquor.library;
    let named = case
        .oxidants
        .iter()
        .find(|o| library.get(o.species).constituents.iter().any(|(c, _)| *c == couple.oxidised.constituent));
    let symbol = couple.oxidised.constituent.element().map_or("", |e| e.symbol());
    let origin = match (named, symbol) {
        (_, "H") => Origin::Acid,
        (Some(oxidant), _) => Origin::Named(oxidant.name.clone()),
        (None, _) => Origin::Liquor,
    };
    let oxidised = named.map_or_else(|| plain_form(liquor, &couple.oxidised), |o| o.species);
    let reduced = plain_form(liquor, &couple.reduced);
    let (ox, red) = (library.get(oxidised), library.get(reduced));
    let deposits_metal = couple.reduced.constituent.element().is_some_and(Element::is_metal)
        && couple.reduced.oxidation() == 0.0
        && couple.reduced.basis == Basis::Condensed;
    let half = half_reaction(liquor, &couple);
    Driver {
        label: format!("{}/{}", ox.text, red.text),
        pretty: format!("{}/{}", ox.formula.pretty(), red.formula.pretty()),
        origin,
        potential: couple.potential,
        half: Some(half),
        deposits_metal,
        held_back: couples::held_back(liquor, &couple, None),
        couple: Some(couple),
    }
}

/// The reduction of one atom of the couple's element, between the forms that lead in the liquor.
pub fn half_reaction(liquor: &Liquor, couple: &Couple) -> Equation {
    let per_atom = |form: &StateForm| {
        let id = states::named_form(liquor, form);
        let species = liquor.library.get(id);
        let count: f64 = species.constituents.iter().filter(|(c, _)| *c == form.constituent).map(|(_, n)| n).sum();
        (id, 1.0 / count)
    };
    let (oxidised, n) = per_atom(&couple.oxidised);
    let (reduced, m) = per_atom(&couple.reduced);
    Closer::new(liquor).close(&[(oxidised, -n), (reduced, m)])
}

/// The plain ion by which the trade names a state (`Fe^3+` rather than the complex that leads), else the leading form.
pub fn plain_form(liquor: &Liquor, form: &StateForm) -> SpeciesId {
    states::plain_ion(liquor, form).unwrap_or(form.leading)
}

/// Oxides put in as oxidants or present as minerals that can take electrons well above the hydrogen potential.
fn solid_oxidants<'l>(case: &Case<'l>, liquor: &Liquor<'l>) -> Vec<Driver<'l>> {
    /// V above E(H⁺/H₂) at the liquor's pH from which a solid counts as an oxidant (MnO₂, PbO₂, NiOOH; not hematite).
    const THRESHOLD: f64 = 0.9;
    let hydrogen = -liquor.temperature().rt() / crate::quantity::FARADAY * std::f64::consts::LN_10 * liquor.ph();
    let solids = case.solids.iter().map(|s| s.material.species());
    let named = case.oxidants.iter().map(|o| o.species);
    let mut list: Vec<Driver> = Vec::new();
    for id in solids.chain(named) {
        let species = liquor.library.get(id);
        if !species.is_condensed() {
            continue;
        }
        for (constituent, _) in
            species.constituents.iter().filter(|(c, _)| c.oxidation() > 0.0 && c.element().is_some())
        {
            let Some(oxidised) = states::condensed(liquor, constituent).into_iter().find(|f| f.leading == id) else {
                continue;
            };
            let Some(element) = constituent.element() else { continue };
            let lower =
                states::states_of(liquor, element).into_iter().filter(|s| s.oxidation() < constituent.oxidation());
            let best = lower
                .filter_map(|s| states::in_liquor(liquor, &s, couples::ASSUMED_LEAST * 1e3))
                .map(|reduced| couples::couple(liquor, oxidised.clone(), reduced))
                .max_by(|a, b| a.potential.value.total_cmp(&b.potential.value));
            let known = |label: &str| list.iter().any(|d: &Driver| d.label == label);
            if let Some(couple) = best.filter(|c| c.potential.value > hydrogen + THRESHOLD) {
                let driver = driver(case, liquor, couple);
                if !known(&driver.label) {
                    list.push(driver);
                }
            }
        }
    }
    list
}

fn measured<'l>(volts: Estimate, electrode: &str) -> Driver<'l> {
    Driver {
        label: "measured potential".into(),
        pretty: format!("measured potential ({electrode})"),
        origin: Origin::Measured,
        potential: volts,
        couple: None,
        half: None,
        deposits_metal: false,
        held_back: None,
    }
}
