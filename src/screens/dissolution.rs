//! Every oxidant against every solid: does the liquor take it, by which couple, and is a film in the way?

use crate::case::{Material, Solid};
use crate::chemistry::Element;
use crate::equilibrium::Liquor;
use crate::equilibrium::couples::ASSUMED_LEAST;
use crate::equilibrium::liquor::is_solvent;
use crate::library::Species;
use crate::library::tables::{FilmBreaker, FilmRecord};
use crate::quantity::Estimate;
use crate::scenario::Duty;
use crate::thermo::equation::Equation;

use super::attack::{self, Path, Products, Route};
use super::drivers::{Driver, Origin};
use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};

/// Dissolved concentration that counts as attack of a part, mol/kg (the usual convention of corrosion screening).
const CORROSION_LIMIT: f64 = ASSUMED_LEAST;
/// Concentration that a feed without a stated amount is taken to reach, mol/kg.
const FEED_WITHOUT_AMOUNT: f64 = 0.01;
/// A couple opposed by more than this is left out of the findings unless it is a named oxidant, V.
const NOT_WORTH_A_LINE: f64 = 0.6;

/// Findings of all pairings, solid by solid.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let mut findings = Vec::new();
    for solid in &setting.case.solids {
        findings.extend(without_electrons(setting, solid));
        for driver in &setting.drivers {
            findings.extend(pairing(setting, solid, driver));
        }
    }
    findings
}

/// Concentration at which a solid's dissolution is judged, mol/kg of its formula.
pub fn reach_of(solid: &Solid) -> f64 {
    match solid.duty {
        Duty::Resist => CORROSION_LIMIT,
        Duty::Dissolve => solid.amount.unwrap_or(FEED_WITHOUT_AMOUNT),
    }
}

/// The path by which a solid leaves at potential `e`: sulfides to S⁰ in acid, to sulfate in neutral and alkaline liquor,
/// as practice finds; to sulfide when neither is driven.
pub fn leading_path(liquor: &Liquor, solid: &Solid, e: f64, products: Products) -> Option<Path> {
    let all = attack::paths(liquor, solid.material.species(), reach_of(solid), e, products);
    let preferred = if liquor.ph() < 8.0 { Route::ToSulfur } else { Route::ToSulfate };
    let driven = |p: &&Path| p.delta_g(liquor, e).value < 0.0;
    let by = |route: Route| all.iter().find(|p| p.route == route);
    by(Route::Plain)
        .or_else(|| by(preferred).filter(driven))
        .or_else(|| by(Route::ToSulfide).filter(driven))
        .or_else(|| by(preferred))
        .or(all.first())
        .cloned()
}

/// A compound that dissolves by acid, base or complexing alone.
fn without_electrons(setting: &Setting, solid: &Solid) -> Option<Finding> {
    let liquor = &setting.liquor;
    let Material::Compound { species, .. } = solid.material else { return None };
    let path = attack::without_electrons(liquor, species, reach_of(solid))?;
    let gain = attack::affinity(&path, liquor);
    let verdict = Verdict::of(gain);
    let record = liquor.library.get(species);
    let question = if solid.duty == Duty::Dissolve { Question::Leaching } else { Question::Dissolution };
    let attention = attention(solid, verdict, false, false);
    let against = "acid and ligands";
    let statement = match verdict {
        Verdict::Driven => {
            format!("{} dissolves without an oxidant, as {}.", text::capital(&solid.name), products_text(liquor, &path))
        }
        Verdict::Opposed => format!(
            "{} does not dissolve by acid or ligands alone to {:.1e} mol/kg at pH {:.1}.",
            text::capital(&solid.name),
            reach_of(solid),
            liquor.ph()
        ),
        _ => format!(
            "{} is close to its solubility: acid or ligands alone may or may not take it.",
            text::capital(&solid.name)
        ),
    };
    let equation = path.half(liquor, species).whole();
    let mut finding = Finding::new(question, &solid.name, Some(against), verdict, attention, statement);
    let delta = path.delta_g(liquor, 0.0);
    finding.delta_g = Some(delta.value);
    finding.quantities.insert("standard_uncertainty_kJ_mol".into(), delta.standard_uncertainty * 1e-3);
    finding.products = products(liquor, &path);
    fill(&mut finding, liquor, &equation);
    finding.reasons.extend(mineral_practice(liquor, record));
    finding.reasons.push(reach_reason(solid));
    finding.cautions.push("general".into());
    Some(finding)
}

/// One oxidant against one solid.
fn pairing(setting: &Setting, solid: &Solid, driver: &Driver) -> Option<Finding> {
    let liquor = &setting.liquor;
    let e = driver.potential;
    let id = solid.material.species();
    let record = liquor.library.get(id);
    if deposits_itself(record, driver, liquor) {
        return None;
    }
    let path = leading_path(liquor, solid, e.value, Products::Dissolved)?;
    let base = path.driving_force(liquor, e)?;
    if path.electrons < 0.0 && !driver.can_reduce() {
        return None;
    }
    let force = Estimate::new(
        base.value,
        setting.input_spread(base.standard_uncertainty, |s| s.force(solid, &driver.label, &path), base.value),
    );
    let named = matches!(driver.origin, Origin::Named(_) | Origin::Measured);
    if force.value < -NOT_WORTH_A_LINE && !named && driver.origin != Origin::Acid {
        return None;
    }
    let held_back = driver.held_back_against(liquor, &record.text);
    let film = film(setting, solid, e.value);
    let verdict = Verdict::of(force);
    let question = match (driver.deposits_metal, solid.duty) {
        (true, _) => Question::Cementation,
        (false, Duty::Dissolve) => Question::Leaching,
        (false, Duty::Resist) => Question::Dissolution,
    };
    let protected = film.as_ref().is_some_and(|f| f.holds());
    let mut attention = attention(solid, verdict, protected, film.as_ref().is_some_and(|f| !f.broken_by.is_empty()));
    if held_back.is_some() {
        attention = attention.max(if verdict == Verdict::Opposed { Attention::Note } else { Attention::Review });
    }
    let statement = statement(setting, solid, driver, &path, force, verdict, film.as_ref(), held_back.is_some());
    let mut finding = Finding::new(question, &solid.name, Some(&driver.label), verdict, attention, statement);
    finding.driving_force = Some(force);
    finding.delta_g = Some(path.delta_g(liquor, e.value).value);
    finding.products = products(liquor, &path);
    let equation = whole_reaction(&path, liquor, record, driver);
    fill(&mut finding, liquor, &equation);
    if let Some(potential) = path.potential(liquor) {
        finding.quantities.insert("E_dissolution_V".into(), potential.value);
    }
    finding.quantities.insert("E_oxidant_V".into(), e.value);
    finding.quantities.insert("electrons_per_formula".into(), path.electrons);
    finding.reasons.extend(driver.assumptions(liquor));
    finding.reasons.push(reach_reason(solid));
    finding.reasons.extend(route_reasons(setting, solid, driver, &path));
    finding.reasons.extend(mineral_practice(liquor, record));
    if let Some(record) = held_back {
        finding.reasons.push(format!(
            "Held back in practice: {} Becomes fast: {}",
            text::sentence(&record.practice),
            text::sentence(&record.fast_when)
        ));
        finding.sources.push(record.source.clone());
    }
    if let Some(film) = &film {
        finding.reasons.extend(film.reasons());
        finding.sources.extend(film.record.map(|r| r.source.clone()));
    }
    finding.reasons.extend(alloy_reasons(solid));
    finding.cautions = cautions(solid, driver, verdict);
    Some(finding)
}

/// True when the driver's reduced side is the solid itself.
fn deposits_itself(record: &Species, driver: &Driver, liquor: &Liquor) -> bool {
    let Some(couple) = &driver.couple else { return false };
    let same_element = record.formula.composition.len() == 1
        && couple.oxidised.constituent.element() == record.constituents.first().and_then(|(c, _)| c.element());
    let is_own_oxidant = couple.oxidised.leading == record.id;
    (driver.deposits_metal && (same_element || liquor.library.get(couple.reduced.leading).text == record.text))
        || is_own_oxidant
}

fn attention(solid: &Solid, verdict: Verdict, protected: bool, broken: bool) -> Attention {
    match (solid.duty, verdict) {
        (_, Verdict::NotAssessed) => Attention::Review,
        (Duty::Resist, Verdict::Driven) if protected => {
            if broken {
                Attention::Review
            } else {
                Attention::Note
            }
        }
        (Duty::Resist, Verdict::Driven) => Attention::Act,
        (Duty::Resist, Verdict::NearBalance) => {
            if protected && !broken {
                Attention::Note
            } else {
                Attention::Review
            }
        }
        (Duty::Resist, Verdict::Opposed) | (Duty::Dissolve, Verdict::Driven | Verdict::Opposed) => Attention::Note,
        (Duty::Dissolve, Verdict::NearBalance) => Attention::Review,
    }
}

#[allow(clippy::too_many_arguments)]
fn statement(
    setting: &Setting,
    solid: &Solid,
    driver: &Driver,
    path: &Path,
    force: Estimate,
    verdict: Verdict,
    film: Option<&Film>,
    held_back: bool,
) -> String {
    let liquor = &setting.liquor;
    let name = text::capital(&solid.name);
    let millivolts = text::millivolts(force);
    let product = products_text(liquor, path);
    let by = &driver.pretty;
    let action = match (driver.deposits_metal, path.electrons < 0.0) {
        (true, _) => format!(
            "throws {} out of solution and goes to {product}",
            driver.pretty.split('/').next_back().unwrap_or("the metal")
        ),
        (false, true) => format!("is reduced by {by} to {product}"),
        (false, false) => format!("is driven by {by} to {product}"),
    };
    let practice = if held_back { ", but practice finds this couple too slow to count on" } else { "" };
    match verdict {
        Verdict::Driven => match film {
            Some(f) => format!(
                "{name} {action} ({millivolts}) unless its film of {} holds{practice}; {}.",
                f.name(liquor),
                f.words()
            ),
            None => format!("{name} {action} ({millivolts}){practice}."),
        },
        Verdict::Opposed => format!("{name} holds against {by} ({millivolts})."),
        Verdict::NearBalance => {
            format!("{name} against {by} is near balance ({millivolts}): it may go either way{practice}.")
        }
        Verdict::NotAssessed => format!("{name} against {by} is not assessed."),
    }
}

/// Overall reaction of solid and oxidant in whole numbers; the half-reaction alone under a measured potential.
fn whole_reaction(path: &Path, liquor: &Liquor, record: &Species, driver: &Driver) -> Equation {
    let oxidation = path.half(liquor, record.id);
    match &driver.half {
        Some(half) if half.electrons.abs() > 1e-9 => {
            oxidation.plus(&half.times(-oxidation.electrons / half.electrons)).whole()
        }
        _ => oxidation.whole(),
    }
}

fn fill(finding: &mut Finding, liquor: &Liquor, equation: &Equation) {
    let library = liquor.library;
    if equation.electrons == 0.0 {
        finding.log_k = Some(equation.log_k(&liquor.gibbs, liquor.library).value);
    }
    finding.reaction = Some(equation.ascii(library));
    finding.reaction_pretty = Some(equation.pretty(library));
    finding.sources.extend(equation.terms.iter().map(|(id, _)| library.get(*id).source.clone()));
}

fn products(liquor: &Liquor, path: &Path) -> Vec<String> {
    path.products.iter().map(|(form, _)| liquor.library.get(form.leading).label()).collect()
}

fn products_text(liquor: &Liquor, path: &Path) -> String {
    let names: Vec<String> = path.products.iter().map(|(form, _)| liquor.library.get(form.leading).pretty()).collect();
    names.join(", ")
}

fn reach_reason(solid: &Solid) -> String {
    match (solid.duty, solid.amount) {
        (Duty::Resist, _) => format!("Attack is judged at {CORROSION_LIMIT:.0e} mol/kg of dissolved metal."),
        (Duty::Dissolve, Some(m)) => {
            format!("Judged at the concentration that the whole feed would reach, {m:.2e} mol/kg.")
        }
        (Duty::Dissolve, None) => format!("No amount is given; judged at {FEED_WITHOUT_AMOUNT} mol/kg."),
    }
}

/// What the other routes of sulfur would give.
fn route_reasons(setting: &Setting, solid: &Solid, driver: &Driver, taken: &Path) -> Vec<String> {
    let liquor = &setting.liquor;
    attack::paths(liquor, solid.material.species(), reach_of(solid), driver.potential.value, Products::Dissolved)
        .into_iter()
        .filter(|p| p.route != taken.route)
        .filter_map(|p| {
            let force = p.driving_force(liquor, driver.potential)?;
            Some(format!("When {}: driving force {}.", p.route.words(), text::millivolts(force)))
        })
        .collect()
}

fn mineral_practice(liquor: &Liquor, record: &Species) -> Option<String> {
    let found = liquor
        .library
        .kinetics
        .sluggish
        .iter()
        .find(|s| s.formula == record.text && (s.form.is_none() || s.form == record.form))?;
    Some(format!("Practice: {}", text::sentence(&found.practice)))
}

fn alloy_reasons(solid: &Solid) -> Vec<String> {
    let Material::Metal { record: Some(alloy), .. } = solid.material else { return Vec::new() };
    let mut reasons = Vec::new();
    if alloy.element.is_none() {
        reasons.push(format!("The alloy is judged by its base element {} and by the record of its film; its other elements may go first.", alloy.base));
    }
    if let (Duty::Resist, Some(attack)) = (solid.duty, &alloy.known_attack) {
        reasons.push(format!("Known attack of {}: {}", alloy.name, text::sentence(attack)));
    }
    reasons
}

/// A film that is more stable than the dissolved product, or on which practice relies.
pub struct Film<'a> {
    solid: Option<&'a Species>,
    record: Option<&'a FilmRecord>,
    broken_by: Vec<&'a FilmBreaker>,
    /// The alloy's own record says that practice relies on a film.
    alloy: bool,
    in_range: bool,
    /// What breaks it stands above the level at which practice gives it up.
    lost: bool,
}

impl Film<'_> {
    /// Practice relies on this film at this pH, and thermodynamics or the alloy's record bears it out.
    pub fn holds(&self) -> bool {
        self.in_range && !self.lost && (self.record.is_some_and(|r| r.protective) || self.alloy)
    }

    fn name(&self, liquor: &Liquor) -> String {
        match (self.solid, self.record) {
            (_, Some(record)) if self.alloy => {
                liquor.library.find(&record.film).map_or(record.film.clone(), |s| s.formula.pretty())
            }
            (Some(species), _) => species.pretty(),
            (None, Some(record)) => liquor.library.find(&record.film).map_or(record.film.clone(), Species::pretty),
            (None, None) => "oxide".into(),
        }
    }

    fn words(&self) -> &'static str {
        match (self.holds(), self.broken_by.is_empty()) {
            (true, true) => "practice relies on that film",
            (true, false) => "practice relies on that film, and something here can break it",
            (false, _) if self.lost => "practice does not rely on that film at this level of what breaks it",
            (false, _) => "such a film is no protection that practice relies on",
        }
    }

    fn reasons(&self) -> Vec<String> {
        let mut reasons = Vec::new();
        if let Some(species) = self.solid.filter(|_| !self.alloy || self.record.is_none()) {
            reasons
                .push(format!("{} is more stable here than the dissolved product: a film can form.", species.pretty()));
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
}

/// The film of a metal part at potential `e`, if one is to be reckoned with.
pub fn film<'a>(setting: &'a Setting, solid: &Solid, e: f64) -> Option<Film<'a>> {
    let liquor = &setting.liquor;
    let Material::Metal { record: alloy, element } = solid.material else { return None };
    let stable = leading_path(liquor, solid, e, Products::All)
        .and_then(|p| p.films().next().map(|f| liquor.library.get(f.leading)))
        .filter(|s| s.id != element);
    let alloy_film = alloy.is_some_and(|a| a.film);
    let symbol = film_element(solid, alloy.map(|a| a.base.as_str()), liquor.library.get(element));
    let record = liquor.library.kinetics.film.iter().find(|f| f.metal == symbol);
    if stable.is_none() && !alloy_film {
        return None;
    }
    let lost = record.is_some_and(|r| {
        r.broken_by.iter().any(|b| b.act_above_mol_kg.is_some_and(|threshold| above(liquor, b, threshold)))
    });
    let in_range = record
        .is_none_or(|r| r.ph_from.is_none_or(|ph| liquor.ph() >= ph) && r.ph_to.is_none_or(|ph| liquor.ph() <= ph));
    let broken_by = record.map_or_else(Vec::new, |r| r.broken_by.iter().filter(|b| present(liquor, b)).collect());
    Some(Film { solid: stable, record, broken_by, alloy: alloy_film, in_range, lost })
}

/// Element whose oxide makes the film: chromium from about 10.5 % in an alloy (the usual bound of stainless steels), else
/// the base.
fn film_element(solid: &Solid, base: Option<&str>, element: &Species) -> String {
    let chromium = match solid.material {
        Material::Metal { record: Some(alloy), .. } => alloy.composition_wt_percent.get("Cr").copied().unwrap_or(0.0),
        _ => 0.0,
    };
    if chromium >= 10.5 { "Cr".into() } else { base.map_or_else(|| element.text.clone(), str::to_owned) }
}

/// Whether what breaks a film is in the liquor above its threshold.
fn present(liquor: &Liquor, breaker: &FilmBreaker) -> bool {
    above(liquor, breaker, breaker.above_mol_kg.unwrap_or(0.0))
}

fn above(liquor: &Liquor, breaker: &FilmBreaker, threshold: f64) -> bool {
    let Some(species) = breaker.species.as_deref().and_then(|s| liquor.library.dissolved(s).ok()) else { return false };
    species.constituents.iter().filter(|(c, _)| !is_solvent(c)).any(|(c, _)| liquor.total(c) > threshold)
}

fn cautions(solid: &Solid, driver: &Driver, verdict: Verdict) -> Vec<String> {
    let mut keys = vec!["general".to_owned()];
    if solid.duty == Duty::Resist {
        keys.push("corrosion".into());
    }
    if verdict == Verdict::Driven && driver.origin == Origin::Acid {
        keys.push("hydrogen".into());
    }
    if matches!(driver.origin, Origin::Named(_)) {
        keys.push("oxidiser".into());
    }
    keys
}

/// Symbol of the element whose dissolution is judged, for tables.
pub fn element_of(record: &Species) -> Option<Element> {
    record.constituents.iter().find_map(|(c, _)| c.element())
}
