//! The ways in which a gas can form over a liquor, each with its equilibrium pressure and its stoichiometric ceiling.

use crate::case::{Material, Solid};
use crate::chemistry::{Constituent, Element};
use crate::equilibrium::liquor::is_solvent;
use crate::equilibrium::states::{self as forms, Basis, StateForm};
use crate::equilibrium::{Closer, Couple, Liquor, couples};
use crate::library::tables::{GasRecord, InertClass, InertRecord};
use crate::library::{Species, SpeciesId};
use crate::quantity::{Estimate, FARADAY};
use crate::scenario::Duty;
use crate::screens::attack::Products;
use crate::screens::drivers::{Driver, Origin, half_reaction, plain_form};
use crate::screens::film::{Film, film};
use crate::screens::{Setting, dissolution, text};
use crate::thermo::equation::Equation;

/// Least standard uncertainty of ln p: equilibrium over a real liquor is not known better (our own judgement).
const LEAST_SPREAD: f64 = 0.3;

/// By which route a gas forms.
#[derive(Debug, Clone, PartialEq)]
pub enum Route {
    /// Acid–base or halogen hydrolysis: the liquor holds it.
    AsMixed,
    /// A couple of the liquor oxidises its source.
    Oxidised { by: String, pretty: String, measured: bool },
    /// A solid of the scenario reduces its source; `part` when it is equipment.
    ReducedBySolid { by: String, part: bool },
    /// A couple of the liquor reduces its source.
    ReducedInLiquor { by: String, pretty: String },
    /// Acid dissolves a solid that holds it.
    FromSolid { solid: String },
}

/// A gas by one route.
pub struct Release {
    pub route: Route,
    /// Equilibrium pressure, ln(bar).
    pub ln_pressure: Estimate,
    pub equation: Option<Equation>,
    /// Most that the reagents named can give, mol per kg of water, and what limits it.
    pub ceiling: Option<(f64, String)>,
    /// Practice that holds the route back.
    pub held_back: Option<String>,
    pub reasons: Vec<String>,
}

/// All routes of one gas.
pub fn releases(setting: &Setting, record: &GasRecord, gas: &Species) -> Vec<Release> {
    let mut list: Vec<Release> = as_mixed(setting, gas).into_iter().collect();
    let held = !list.is_empty();
    for (element, count, oxidation) in key_elements(gas) {
        for state in forms::states_of(&setting.liquor, element) {
            if !forms_from(setting, record, &state) {
                continue;
            }
            let source = Source { gas, element, count, oxidation, state };
            list.extend(source.oxidised(setting, held));
            // What the liquor holds already is not made by a reductant in any amount that matters.
            if !held {
                list.extend(source.reduced_by_solid(setting));
                list.extend(source.reduced_in_liquor(setting));
            }
        }
    }
    list.extend(from_solids(setting, gas));
    list
}

/// Whether practice sees the gas form from this state.
fn forms_from(setting: &Setting, record: &GasRecord, state: &Constituent) -> bool {
    let holds = |formula: &String| {
        let known = setting.liquor.library.records(formula);
        known.iter().any(|s| s.constituents.iter().any(|(c, _)| c == state))
    };
    record.formed_from.is_empty() || record.formed_from.iter().any(holds)
}

/// Elements of a gas that come in several states, with their count and summed oxidation number; none for a gas that holds a
/// unit such as cyanide.
fn key_elements(gas: &Species) -> Vec<(Element, f64, f64)> {
    let mut list: Vec<(Element, f64, f64)> = Vec::new();
    for (constituent, n) in gas.constituents.iter().filter(|(c, _)| !is_solvent(c)) {
        let Some(element) = constituent.element() else { return Vec::new() };
        match list.iter_mut().find(|(e, _, _)| *e == element) {
            Some((_, count, sum)) => {
                *count += n;
                *sum += n * constituent.oxidation();
            }
            None => list.push((element, *n, n * constituent.oxidation())),
        }
    }
    list
}

/// Standard uncertainty of ln p: the gas against what it comes from (shared errors cancel), and `own`.
fn spread(setting: &Setting, gas: &Species, from: &[(SpeciesId, f64)], own: f64) -> f64 {
    let liquor = &setting.liquor;
    let terms: Vec<_> = from.iter().map(|(id, n)| (*id, -n)).chain([(gas.id, 1.0)]).collect();
    (liquor.gibbs.spread(liquor.library, &terms) / liquor.temperature().rt()).hypot(own).max(LEAST_SPREAD)
}

/// Count of a constituent in a species.
fn count_of(species: &Species, constituent: &Constituent) -> f64 {
    species.constituents.iter().filter(|(c, _)| c == constituent).map(|(_, n)| n).sum()
}

fn as_mixed(setting: &Setting, gas: &Species) -> Option<Release> {
    let liquor = &setting.liquor;
    let ln = liquor.ln_activity(gas)?;
    if liquor.recipe.gases.iter().any(|(id, _)| *id == gas.id) {
        return None;
    }
    let held: Vec<&(Constituent, f64)> = gas.constituents.iter().filter(|(c, _)| !is_solvent(c)).collect();
    let from: Vec<(SpeciesId, f64)> = held
        .iter()
        .filter_map(|(c, n)| {
            forms::present(liquor, c).map(|f| (f.leading, n / count_of(liquor.library.get(f.leading), c)))
        })
        .collect();
    let moved = setting.input_spread(spread(setting, gas, &from, 0.0), |v| v.liquor.ln_activity(gas), ln);
    let limiting = held.iter().map(|(c, n)| (liquor.total(c) / n, c.roman())).min_by(|a, b| a.0.total_cmp(&b.0));
    let named = from.first().filter(|(id, _)| liquor.library.get(*id).text != gas.text);
    let equation = named.map(|(id, n)| Closer::new(liquor).close(&[(*id, -n), (gas.id, 1.0)]).whole());
    Some(Release {
        route: Route::AsMixed,
        ln_pressure: Estimate::new(ln, moved),
        equation: equation.filter(|e| e.electrons == 0.0),
        ceiling: limiting,
        held_back: None,
        reasons: Vec::new(),
    })
}

/// One element of a gas and the state in the liquor that it could come from.
struct Source<'a> {
    gas: &'a Species,
    element: Element,
    count: f64,
    /// Summed oxidation number of the element in the gas.
    oxidation: f64,
    state: Constituent,
}

/// Something that gives electrons at a definite potential.
struct Giver {
    potential: Estimate,
    /// Its oxidation half-reaction.
    half: Equation,
    name: String,
}

impl Source<'_> {
    /// Electrons that one molecule of gas gives up when it forms (negative: takes up).
    fn electrons(&self) -> f64 {
        self.oxidation - self.count * self.state.oxidation()
    }

    /// ln p in equilibrium with the source at potential `e`.
    fn ln_pressure(&self, liquor: &Liquor, e: f64) -> Option<f64> {
        let electron = (liquor.gibbs.electron() - FARADAY * e) / liquor.temperature().rt();
        let mut sum = self.count * liquor.potential(&self.state)?;
        for (constituent, n) in self.gas.constituents.iter().filter(|(c, _)| c.element() != Some(self.element)) {
            sum += n * liquor.potential(constituent)?;
        }
        Some(sum - liquor.reduced_gibbs(self.gas.id) - self.electrons() * electron)
    }

    /// Molecules of the source's leading form in one of gas.
    fn consumed(&self, liquor: &Liquor, form: &StateForm) -> (SpeciesId, f64) {
        let held = count_of(liquor.library.get(form.leading), &self.state);
        (form.leading, self.count / held.max(1e-9))
    }

    /// The gas half-reaction from the source's leading form.
    fn half(&self, liquor: &Liquor, form: &StateForm) -> Equation {
        let (leading, n) = self.consumed(liquor, form);
        Closer::new(liquor).close(&[(leading, -n), (self.gas.id, 1.0)])
    }

    /// The strongest couple of the liquor that practice lets oxidise the source, if the gas is more oxidised than it.
    fn oxidised(&self, setting: &Setting, held: bool) -> Option<Release> {
        let liquor = &setting.liquor;
        let n = self.electrons();
        liquor.potential(&self.state)?;
        if n < 1e-9 || is_solvent(&self.state) && self.element.symbol() != "O" {
            return None;
        }
        let form = forms::present(liquor, &self.state)?;
        let plain = liquor.library.get(plain_form(liquor, &form)).text.as_str();
        // Where the gas is in hydrolysis equilibrium already, its own couple adds nothing.
        let own = |d: &Driver| {
            let state = d.couple.as_ref().map(|c| &c.oxidised.constituent);
            state == Some(&self.state) || held && state.is_some_and(|s| count_of(self.gas, s) > 0.0)
        };
        let usable = |d: &&Driver| !d.deposits_metal && !own(d) && d.held_back_against(liquor, plain).is_none();
        let driver = setting.drivers.iter().find(usable)?;
        let ln = self.ln_pressure(liquor, driver.potential.value)?;
        let thermal = liquor.temperature().rt() / FARADAY;
        let from = [self.consumed(liquor, &form)];
        let doubt = spread(setting, self.gas, &from, n * driver.potential.standard_uncertainty / thermal);
        let moved = |v: &crate::screens::Varied| {
            let e = v.drivers.iter().find(|d| d.label == driver.label)?.potential.value;
            self.ln_pressure(&v.liquor, e)
        };
        let half = self.half(liquor, &form);
        let equation = driver.half.as_ref().map(|red| half.plus(&red.times(-half.electrons / red.electrons)).whole());
        let from_oxidant = driver
            .couple
            .as_ref()
            .map(|c| (liquor.total(&c.oxidised.constituent) * c.electrons / n, c.oxidised.constituent.roman()));
        let from_source =
            (!is_solvent(&self.state)).then(|| (liquor.total(&self.state) / self.count, self.state.roman()));
        let ceiling = from_oxidant.filter(|(m, _)| *m > 0.0).into_iter().chain(from_source);
        let at_one_bar = driver.potential.value - thermal * ln / n;
        let to_limit = format!("{} stands at 1 bar over this liquor at {at_one_bar:.2} V.", self.gas.pretty());
        Some(Release {
            route: Route::Oxidised {
                by: driver.label.clone(),
                pretty: driver.pretty.clone(),
                measured: driver.origin == Origin::Measured,
            },
            ln_pressure: Estimate::new(ln, setting.input_spread(doubt, moved, ln)),
            equation,
            ceiling: ceiling.min_by(|a, b| a.0.total_cmp(&b.0)),
            held_back: None,
            reasons: driver.assumptions(liquor).into_iter().chain([to_limit]).collect(),
        })
    }

    /// The solid of the scenario that reduces the source furthest, if the gas is more reduced than it.
    fn reduced_by_solid(&self, setting: &Setting) -> Option<Release> {
        let liquor = &setting.liquor;
        let solids = setting.case.solids.iter();
        let (solid, giver, per_formula) = solids
            .filter_map(|solid| giving_solid(setting, solid).map(|(giver, n)| (solid, giver, n)))
            .min_by(|a, b| a.1.potential.value.total_cmp(&b.1.potential.value))?;
        let text = liquor.library.get(solid.material.species()).text.as_str();
        let ceiling = solid.amount.map(|m| (m * per_formula / -self.electrons(), solid.name.clone()));
        let route = Route::ReducedBySolid { by: solid.name.clone(), part: solid.duty == Duty::Resist };
        self.reduced(setting, giver, Some(text), route, ceiling)
    }

    /// The couple of the liquor that reduces the source furthest.
    fn reduced_in_liquor(&self, setting: &Setting) -> Option<Release> {
        let liquor = &setting.liquor;
        let (couple, giver) = giving_couples(liquor)
            .into_iter()
            .filter(|(c, _)| c.oxidised.constituent != self.state)
            .min_by(|a, b| a.1.potential.value.total_cmp(&b.1.potential.value))?;
        let reduced = &couple.reduced.constituent;
        let ceiling = Some((liquor.total(reduced) * couple.electrons / -self.electrons(), reduced.roman()));
        let plain = liquor.library.get(plain_form(liquor, &couple.reduced));
        let route = Route::ReducedInLiquor { by: plain.text.clone(), pretty: plain.formula.pretty() };
        self.reduced(setting, giver, Some(&plain.text), route, ceiling)
    }

    fn reduced(
        &self,
        setting: &Setting,
        giver: Giver,
        against: Option<&str>,
        route: Route,
        ceiling: Option<(f64, String)>,
    ) -> Option<Release> {
        let liquor = &setting.liquor;
        let n = -self.electrons();
        liquor.potential(&self.state)?;
        if n < 1e-9 {
            return None;
        }
        let form = forms::present(liquor, &self.state)?;
        let slow = self.held_back(liquor, &form, against);
        if slow.is_some_and(|r| r.class == InertClass::Inert) {
            return None;
        }
        let ln = self.ln_pressure(liquor, giver.potential.value)?;
        let thermal = liquor.temperature().rt() / FARADAY;
        let from = [self.consumed(liquor, &form)];
        let doubt = spread(setting, self.gas, &from, n * giver.potential.standard_uncertainty / thermal);
        let half = self.half(liquor, &form);
        let both = half.electrons.abs() > 1e-9 && giver.half.electrons.abs() > 1e-9;
        let equation = both.then(|| half.plus(&giver.half.times(-half.electrons / giver.half.electrons)).whole());
        let source = (!is_solvent(&self.state)).then(|| (liquor.total(&self.state) / self.count, self.state.roman()));
        Some(Release {
            route,
            ln_pressure: Estimate::new(ln, doubt),
            equation,
            ceiling: ceiling.into_iter().chain(source).min_by(|a, b| a.0.total_cmp(&b.0)),
            held_back: slow.map(|r| text::sentence(&r.practice)),
            reasons: vec![format!("Electrons come from {}.", giver.name)],
        })
    }

    /// Practice that holds the reduction of the source to the gas back.
    fn held_back<'l>(&self, liquor: &Liquor<'l>, form: &StateForm, against: Option<&str>) -> Option<&'l InertRecord> {
        let (product, _) = self.gas.constituents.iter().find(|(c, _)| c.element() == Some(self.element))?;
        let reduced =
            StateForm { constituent: product.clone(), potential: 0.0, leading: self.gas.id, basis: Basis::Gas(1.0) };
        let couple = couples::couple(liquor, form.clone(), reduced);
        couples::held_back(liquor, &couple, None).or_else(|| couples::held_back(liquor, &couple, against))
    }
}

/// What a solid gives electrons at, and how many per formula; not for parts whose film practice relies on.
fn giving_solid(setting: &Setting, solid: &Solid) -> Option<(Giver, f64)> {
    let liquor = &setting.liquor;
    let hydrogen = setting.drivers.iter().find(|d| d.origin == Origin::Acid)?.potential.value;
    let path = dissolution::leading_path(liquor, solid, hydrogen, Products::Dissolved)?;
    let film = film(setting, solid, hydrogen);
    let protected = solid.duty == Duty::Resist && film.as_ref().is_some_and(Film::holds);
    if path.electrons <= 0.0 || protected {
        return None;
    }
    let giver = Giver {
        potential: path.potential(liquor)?,
        half: path.half(liquor, solid.material.species()),
        name: solid.name.clone(),
    };
    Some((giver, path.electrons))
}

/// Couples whose reduced side the liquor holds, as sources of electrons; water itself is left out.
fn giving_couples(liquor: &Liquor) -> Vec<(Couple, Giver)> {
    let mut elements: Vec<Element> = liquor.constituents().filter_map(Constituent::element).collect();
    elements.sort();
    elements.dedup();
    elements
        .into_iter()
        .flat_map(|element| couples::couples_of(liquor, element))
        .filter(|c| c.reduced.basis == Basis::Liquor && !is_solvent(&c.reduced.constituent))
        .filter(|c| !couples::never_reached(liquor, &c.oxidised.constituent))
        .map(|c| {
            let name = liquor.library.get(plain_form(liquor, &c.reduced)).pretty();
            let giver = Giver { potential: c.potential, half: half_reaction(liquor, &c).times(-1.0), name };
            (c, giver)
        })
        .collect()
}

/// Acid on carbonates, sulfides and the like: gas from a constituent that the solid holds in the gas's own state.
fn from_solids(setting: &Setting, gas: &Species) -> Vec<Release> {
    setting.case.solids.iter().filter_map(|solid| from_solid(setting, gas, solid)).collect()
}

fn from_solid(setting: &Setting, gas: &Species, solid: &Solid) -> Option<Release> {
    let liquor = &setting.liquor;
    let Material::Compound { species, .. } = solid.material else { return None };
    let record = liquor.library.get(species);
    let held: Vec<_> = gas.constituents.iter().filter(|(c, _)| !is_solvent(c)).collect();
    let [(shared, per_gas)] = held[..] else { return None };
    let per_solid = count_of(record, shared);
    let halide = shared.element().is_some_and(|e| matches!(e.symbol(), "Cl" | "Br" | "I"));
    if per_solid == 0.0 || halide {
        return None;
    }
    let moles = solid.amount.unwrap_or(1e-3);
    // Potential of the shared constituent over the solid, the rest of it dissolved in full.
    let mut rest = liquor.reduced_gibbs(species);
    for (constituent, n) in record.constituents.iter().filter(|(c, _)| c != shared) {
        rest -= n * if is_solvent(constituent) {
            liquor.potential(constituent)?
        } else {
            forms::dissolved_at(liquor, constituent, n * moles + liquor.total(constituent))?.potential
        };
    }
    // Once all of the solid is dissolved the pressure rises no further.
    let all = forms::dissolved_at(liquor, shared, per_solid * moles + liquor.total(shared))?.potential;
    let potential = (rest / per_solid).min(all);
    let mut ln = per_gas * potential - liquor.reduced_gibbs(gas.id);
    for (constituent, n) in gas.constituents.iter().filter(|(c, _)| c != shared) {
        ln += n * liquor.potential(constituent)?;
    }
    let from = [(species, per_gas / per_solid)];
    let equation = Closer::new(liquor).close(&[(species, -per_gas / per_solid), (gas.id, 1.0)]).whole();
    Some(Release {
        route: Route::FromSolid { solid: solid.name.clone() },
        ln_pressure: Estimate::new(ln, spread(setting, gas, &from, 0.0)),
        equation: (equation.electrons == 0.0).then_some(equation),
        ceiling: solid.amount.map(|m| (m * per_solid / per_gas, solid.name.clone())),
        held_back: oxidant_keeps_sulfur(setting, shared),
        reasons: Vec::new(),
    })
}

/// Whether an oxidant of the liquor turns sulfide into sulfur before it can leave as gas: it must stand well above E(S/H₂S).
fn oxidant_keeps_sulfur(setting: &Setting, constituent: &Constituent) -> Option<String> {
    /// V above E(S/H₂S) in acid, 0.14 V at pH 0, at which practice finds sulfur rather than hydrogen sulfide.
    const WELL_ABOVE: f64 = 0.45;
    let sulfide = constituent.element().is_some_and(|e| e.symbol() == "S") && constituent.oxidation() < 0.0;
    let strong = |d: &&Driver| d.held_back.is_none() && d.origin != Origin::Acid && d.potential.value > WELL_ABOVE;
    let oxidant = setting.drivers.iter().find(strong)?;
    sulfide.then(|| {
        format!("While {} is there it takes sulfide to sulfur or sulfate; without it the gas comes.", oxidant.pretty)
    })
}
