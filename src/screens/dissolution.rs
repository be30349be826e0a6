//! Every oxidant against every solid: does the liquor take it, by which couple, and is a film in the way?

use crate::case::{Material, Solid};
use crate::equilibrium::Liquor;
use crate::equilibrium::couples::ASSUMED_LEAST;
use crate::library::Species;
use crate::library::tables::InertRecord;
use crate::quantity::Estimate;
use crate::scenario::Duty;
use crate::thermo::equation::Equation;

use super::attack::{self, Path, Products, Route};
use super::drivers::{Driver, Origin};
use super::film::{Film, film};
use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};

/// Dissolved concentration that counts as attack of a part, mol/kg (the usual convention of corrosion screening).
const CORROSION_LIMIT: f64 = ASSUMED_LEAST;
/// Concentration that a feed without a stated amount is taken to reach, mol/kg.
const FEED_WITHOUT_AMOUNT: f64 = 0.01;
/// A couple opposed by more than this is left out of the findings unless it is a named oxidant or acid, V.
const NOT_WORTH_A_LINE: f64 = 0.6;

/// Findings of all pairings, solid by solid.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let mut findings = Vec::new();
    for solid in &setting.case.solids {
        let mut own: Vec<Finding> = without_electrons(setting, solid).into_iter().collect();
        own.extend(setting.drivers.iter().filter_map(|d| Pairing::new(setting, solid, d)).map(|p| p.finding()));
        match own.as_mut_slice() {
            [] => own.extend(without_product(setting, solid)),
            some => settle(solid, some),
        }
        findings.extend(own);
    }
    findings
}

/// Weighs the findings of one solid against each other: a weaker couple near balance does not matter beside one that drives;
/// a feed that nothing drives does not meet its duty.
fn settle(solid: &Solid, own: &mut [Finding]) {
    let counts = |f: &&Finding| f.verdict == Verdict::Driven && !f.held_back;
    if own.iter().any(|f| counts(&f)) {
        for finding in own.iter_mut().filter(|f| f.verdict == Verdict::NearBalance) {
            finding.attention = Attention::Note;
        }
    } else if solid.duty == Duty::Dissolve {
        let force = |f: &Finding| f.driving_force.map_or(f64::MIN, |e| e.value);
        if let Some(best) = own.iter_mut().max_by(|a, b| force(a).total_cmp(&force(b))) {
            best.attention = best.attention.min(Attention::Review);
            best.reasons.insert(
                0,
                "Nothing in the liquor drives this feed beyond doubt: its duty is not met as stated.".into(),
            );
        }
    }
}

/// Concentration at which a solid's dissolution is judged, mol/kg of its formula.
pub fn reach_of(solid: &Solid) -> f64 {
    match solid.duty {
        Duty::Resist => CORROSION_LIMIT,
        Duty::Dissolve => solid.amount.unwrap_or(FEED_WITHOUT_AMOUNT),
    }
}

/// The path by which a solid leaves at potential `e`: sulfides to S⁰ in acid, to sulfate in neutral and alkaline liquor, as
/// practice finds; to sulfide when neither is driven.
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

/// A solid of which the library holds no dissolved form: silence would read as resistance, so it is said.
fn without_product(setting: &Setting, solid: &Solid) -> Option<Finding> {
    let liquor = &setting.liquor;
    let e = setting.drivers.first().map_or(0.0, |d| d.potential.value);
    if leading_path(liquor, solid, e, Products::Dissolved).is_some() {
        return None;
    }
    let record = liquor.library.get(solid.material.species());
    let film = film(setting, solid, e);
    let unbroken = film.as_ref().is_some_and(|f| f.holds() && f.broken_by.is_empty());
    let attention = if unbroken { Attention::Note } else { Attention::Review };
    let practice = film.as_ref().map_or(String::new(), |f| format!(" Its film is {}; {}.", f.name(liquor), f.words()));
    let name = text::capital(&solid.name);
    let statement =
        format!("{name}: not assessed, because the library holds no dissolved form of {}.{practice}", record.pretty());
    let question = if solid.duty == Duty::Dissolve { Question::Leaching } else { Question::Dissolution };
    let mut finding = Finding::new(question, &solid.name, None, Verdict::NotAssessed, attention, statement);
    finding.reasons.push("No driving force can be given: resistance rests on practice and on tests alone.".into());
    finding.reasons.extend(film.iter().flat_map(Film::reasons));
    finding.reasons.extend(alloy_reasons(solid));
    finding.sources.extend(film.as_ref().and_then(Film::source));
    finding.cautions.push("general".into());
    Some(finding)
}

/// A compound that dissolves by acid, base or complexing alone.
fn without_electrons(setting: &Setting, solid: &Solid) -> Option<Finding> {
    let liquor = &setting.liquor;
    let Material::Compound { species, .. } = solid.material else { return None };
    let path = attack::without_electrons(liquor, species, reach_of(solid))?;
    let verdict = Verdict::of(attack::affinity(&path, liquor));
    let record = liquor.library.get(species);
    let question = if solid.duty == Duty::Dissolve { Question::Leaching } else { Question::Dissolution };
    let attention = match (solid.duty, verdict) {
        (Duty::Resist, Verdict::Driven) => Attention::Review,
        (_, Verdict::NearBalance) => Attention::Review,
        _ => Attention::Note,
    };
    let name = text::capital(&solid.name);
    let statement = match verdict {
        Verdict::Driven => format!("{name}: dissolves without an oxidant, as {}.", products_text(liquor, &path)),
        Verdict::Opposed => format!(
            "{name}: acid or ligands alone do not take it to {:.1e} mol/kg at pH {:.1}.",
            reach_of(solid),
            liquor.ph()
        ),
        _ => format!("{name}: close to its solubility; acid or ligands alone may or may not take it."),
    };
    let mut finding = Finding::new(question, &solid.name, Some("acid and ligands"), verdict, attention, statement);
    let delta = path.delta_g(liquor, 0.0);
    finding.delta_g = Some(delta.value);
    finding.quantities.insert("standard_uncertainty_kJ_mol".into(), delta.standard_uncertainty * 1e-3);
    finding.products = products(liquor, &path);
    finding.take_equation(&path.half(liquor, species).whole(), liquor);
    finding.reasons.extend(mineral_practice(liquor, record));
    finding.reasons.push(reach_reason(solid));
    finding.cautions.push("general".into());
    Some(finding)
}

/// One oxidant against one solid.
struct Pairing<'a, 'l> {
    setting: &'a Setting<'a, 'l>,
    solid: &'a Solid<'l>,
    driver: &'a Driver<'l>,
    record: &'l Species,
    path: Path,
    force: Estimate,
    verdict: Verdict,
    film: Option<Film<'a>>,
    held_back: Option<&'l InertRecord>,
}

impl<'a, 'l> Pairing<'a, 'l> {
    /// `None` when the pair has nothing to say to each other.
    fn new(setting: &'a Setting<'a, 'l>, solid: &'a Solid<'l>, driver: &'a Driver<'l>) -> Option<Self> {
        let liquor = &setting.liquor;
        let e = driver.potential;
        let record = liquor.library.get(solid.material.species());
        if deposits_itself(record, driver, liquor) {
            return None;
        }
        let path = leading_path(liquor, solid, e.value, Products::Dissolved)?;
        let base = path.driving_force(liquor, e)?;
        if path.electrons < 0.0 && !driver.can_reduce() {
            return None;
        }
        let moved = |s: &super::Varied<'l>| s.force(solid, &driver.label, &path);
        let force = Estimate::new(base.value, setting.input_spread(base.standard_uncertainty, moved, base.value));
        let strongest = setting.drivers.iter().find(|d| d.held_back.is_none()).is_some_and(|d| d.label == driver.label);
        let asked_for = strongest || matches!(driver.origin, Origin::Named(_) | Origin::Measured | Origin::Acid);
        if force.value < -NOT_WORTH_A_LINE && !asked_for {
            return None;
        }
        Some(Self {
            setting,
            solid,
            driver,
            record,
            force,
            verdict: Verdict::of(force),
            film: film(setting, solid, e.value),
            held_back: driver.held_back_against(liquor, &record.text),
            path,
        })
    }

    fn question(&self) -> Question {
        match (self.driver.deposits_metal, self.solid.duty) {
            (true, _) => Question::Cementation,
            (false, Duty::Dissolve) => Question::Leaching,
            (false, Duty::Resist) => Question::Dissolution,
        }
    }

    /// Another potential, read on the liquor itself, governs over this couple.
    fn overruled(&self) -> bool {
        self.setting.case.measured.is_some() && self.driver.origin == Origin::Liquor
    }

    fn attention(&self) -> Attention {
        let protected = self.film.as_ref().is_some_and(Film::holds);
        let broken = self.film.as_ref().is_some_and(|f| !f.broken_by.is_empty());
        let compound = matches!(self.solid.material, Material::Compound { .. });
        let plain = match (self.solid.duty, self.verdict) {
            (_, Verdict::NotAssessed) => Attention::Review,
            (Duty::Resist, Verdict::Driven) if protected && (!broken || self.driver.deposits_metal) => Attention::Note,
            (Duty::Resist, Verdict::Driven) if protected || compound => Attention::Review,
            (Duty::Resist, Verdict::Driven) => Attention::Act,
            (Duty::Resist, Verdict::NearBalance) if protected && !broken => Attention::Note,
            (_, Verdict::NearBalance) => Attention::Review,
            (Duty::Resist, Verdict::Opposed) | (Duty::Dissolve, _) => Attention::Note,
        };
        match (self.held_back, self.verdict) {
            _ if self.overruled() => Attention::Note,
            (Some(_), Verdict::Opposed) => Attention::Note,
            (Some(_), _) => plain.max(Attention::Review),
            (None, _) => plain,
        }
    }

    fn statement(&self) -> String {
        let liquor = &self.setting.liquor;
        let name = text::capital(&self.solid.name);
        let force = text::millivolts(self.force);
        let product = products_text(liquor, &self.path);
        let by = &self.driver.pretty;
        let slow = if self.held_back.is_some() { ", but practice finds this couple too slow to count on" } else { "" };
        let action = match (self.driver.deposits_metal, self.path.electrons < 0.0) {
            (true, _) => {
                let metal = by.split('/').next_back().unwrap_or("a metal");
                format!("driven to throw {metal} out of solution, leaving as {product}")
            }
            (false, true) => format!("driven to be reduced by {by} to {product}"),
            (false, false) => format!("driven by {by} to {product}"),
        };
        match (self.verdict, &self.film) {
            (Verdict::Driven, Some(film)) => {
                let name_of_film = film.name(liquor);
                format!("{name}: {action} ({force}){slow}, unless its film of {name_of_film} holds; {}.", film.words())
            }
            (Verdict::Driven, None) => format!("{name}: {action} ({force}){slow}."),
            (Verdict::Opposed, _) => format!("{name}: opposed with {by} ({force})."),
            (Verdict::NearBalance, _) => {
                format!("{name}: near balance with {by} ({force}); it may go either way{slow}.")
            }
            (Verdict::NotAssessed, _) => format!("{name}: not assessed against {by}."),
        }
    }

    /// Overall reaction in whole numbers; the half-reaction alone under a measured potential.
    fn reaction(&self) -> Equation {
        let oxidation = self.path.half(&self.setting.liquor, self.record.id);
        match &self.driver.half {
            Some(half) if half.electrons.abs() > 1e-9 => {
                oxidation.plus(&half.times(-oxidation.electrons / half.electrons)).whole()
            }
            _ => oxidation.whole(),
        }
    }

    fn reasons(&self) -> Vec<String> {
        let liquor = &self.setting.liquor;
        let mut reasons = Vec::new();
        if self.overruled() {
            reasons.push("A potential was measured: it governs over what this couple computes to.".into());
        }
        reasons.extend(self.driver.assumptions(liquor));
        reasons.push(reach_reason(self.solid));
        reasons.extend(self.other_routes());
        reasons.extend(mineral_practice(liquor, self.record));
        reasons.extend(self.held_back.map(|record| {
            let (practice, fast_when) = (text::sentence(&record.practice), text::sentence(&record.fast_when));
            format!("Held back in practice: {practice} Becomes fast: {fast_when}")
        }));
        reasons.extend(self.film.iter().flat_map(Film::reasons));
        reasons.extend(alloy_reasons(self.solid));
        reasons
    }

    /// What the other routes of sulfur would give.
    fn other_routes(&self) -> Vec<String> {
        let liquor = &self.setting.liquor;
        let e = self.driver.potential;
        attack::paths(liquor, self.record.id, reach_of(self.solid), e.value, Products::Dissolved)
            .into_iter()
            .filter(|p| p.route != self.path.route)
            .filter_map(|p| {
                let force = p.driving_force(liquor, e)?;
                Some(format!("When {}: driving force {}.", p.route.words(), text::millivolts(force)))
            })
            .collect()
    }

    fn cautions(&self) -> Vec<String> {
        let mut keys = vec!["general".to_owned()];
        if self.solid.duty == Duty::Resist {
            keys.push("corrosion".into());
        }
        if self.verdict == Verdict::Driven && self.driver.origin == Origin::Acid {
            keys.push("hydrogen".into());
        }
        if matches!(self.driver.origin, Origin::Named(_)) {
            keys.push("oxidiser".into());
        }
        keys
    }

    fn finding(&self) -> Finding {
        let liquor = &self.setting.liquor;
        let against = Some(self.driver.label.as_str());
        let mut finding =
            Finding::new(self.question(), &self.solid.name, against, self.verdict, self.attention(), self.statement());
        finding.held_back = self.held_back.is_some();
        finding.driving_force = Some(self.force);
        finding.delta_g = Some(self.path.delta_g(liquor, self.driver.potential.value).value);
        finding.products = products(liquor, &self.path);
        finding.take_equation(&self.reaction(), liquor);
        if let Some(potential) = self.path.potential(liquor) {
            finding.quantities.insert("E_dissolution_V".into(), potential.value);
        }
        finding.quantities.insert("E_oxidant_V".into(), self.driver.potential.value);
        finding.quantities.insert("electrons_per_formula".into(), self.path.electrons);
        finding.reasons = self.reasons();
        finding.sources.extend(self.held_back.map(|r| r.source.clone()));
        finding.sources.extend(self.film.as_ref().and_then(Film::source));
        finding.cautions = self.cautions();
        finding
    }
}

/// True when the driver's reduced or oxidised side is the solid itself.
fn deposits_itself(record: &Species, driver: &Driver, liquor: &Liquor) -> bool {
    let Some(couple) = &driver.couple else { return false };
    let element = record.constituents.first().and_then(|(c, _)| c.element());
    let same_element = record.formula.composition.len() == 1 && couple.oxidised.constituent.element() == element;
    let reduced = liquor.library.get(couple.reduced.leading);
    (driver.deposits_metal && (same_element || reduced.text == record.text)) || couple.oxidised.leading == record.id
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

fn mineral_practice(liquor: &Liquor, record: &Species) -> Option<String> {
    let same = |form: &Option<String>| form.is_none() || *form == record.form;
    let found = liquor.library.kinetics.sluggish.iter().find(|s| s.formula == record.text && same(&s.form))?;
    Some(format!("Practice: {}", text::sentence(&found.practice)))
}

fn alloy_reasons(solid: &Solid) -> Vec<String> {
    let Material::Metal { record: Some(alloy), .. } = solid.material else { return Vec::new() };
    let mut reasons = Vec::new();
    if alloy.element.is_none() {
        reasons.push(format!(
            "The alloy is judged by its base element {} and by the record of its film; its other elements may go first.",
            alloy.base
        ));
    }
    if let (Duty::Resist, Some(attack)) = (solid.duty, &alloy.known_attack) {
        reasons.push(format!("Known attack of {}: {}", alloy.name, text::sentence(attack)));
    }
    reasons
}
