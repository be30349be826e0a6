//! Which hazardous gases can form: from the liquor as mixed, by an oxidant, by a metal or sulfide that gives electrons, or by
//! acid on a solid.

use crate::case::{Material, Solid};
use crate::chemistry::{Constituent, Element};
use crate::equilibrium::couples;
use crate::equilibrium::liquor::is_solvent;
use crate::equilibrium::states::{self as forms, Basis, StateForm};
use crate::equilibrium::{Closer, Liquor};
use crate::library::Species;
use crate::library::record::State;
use crate::library::tables::{GasRecord, InertClass};
use crate::quantity::{Estimate, FARADAY};
use crate::scenario::Duty;
use crate::thermo::equation::Equation;

use super::attack::Products;
use super::dissolution;
use super::drivers::{Driver, Origin};
use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};

/// bar per ppm of the atmosphere.
const BAR_PER_PPM: f64 = 1.013_25e-6;
/// Least standard uncertainty of ln p: equilibrium over a real liquor is not known better (our own judgement).
const LEAST_SPREAD: f64 = 0.3;
/// Share of the lowest limit from which a gas is worth a line.
const WORTH_A_LINE: f64 = 0.1;

/// By which route a gas forms.
#[derive(Debug, Clone)]
enum Route {
    /// Acid–base or halogen hydrolysis: the liquor holds it.
    AsMixed,
    /// A couple of the liquor oxidises its source.
    Oxidised { by: String, pretty: String, origin: Origin },
    /// A solid of the scenario reduces its source.
    Reduced { by: String },
    /// Acid dissolves a solid that holds it.
    FromSolid { solid: String },
}

/// A gas by one route.
struct Release {
    route: Route,
    /// Equilibrium pressure, ln(bar).
    ln_pressure: Estimate,
    equation: Option<Equation>,
    /// Most that the reagents named can give, mol per kg of water, and what limits it.
    ceiling: Option<(f64, String)>,
    /// Practice that holds the route back.
    held_back: Option<String>,
    reasons: Vec<String>,
    sources: Vec<String>,
}

/// Findings for every gas of `gases.toml` that comes within reach of a limit.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let library = setting.liquor.library;
    let mut findings = Vec::new();
    for record in &library.gases {
        let Some(species) = library.in_state(&record.formula, State::Gas) else { continue };
        let mut releases = releases(setting, record, species);
        releases.sort_by(|a, b| rank(b).total_cmp(&rank(a)));
        findings.extend(releases.into_iter().filter_map(|r| finding(setting, record, species, r)).take(3));
    }
    findings
}

/// Pressure, with routes that practice finds slow last.
fn rank(release: &Release) -> f64 {
    release.ln_pressure.value.min(0.0) + if release.held_back.is_some() { -1e3 } else { 0.0 }
}

fn releases(setting: &Setting, record: &GasRecord, gas: &Species) -> Vec<Release> {
    let mut list: Vec<Release> = Vec::new();
    list.extend(as_mixed(setting, gas));
    let held = !list.is_empty();
    for (element, count, oxidation) in key_elements(gas) {
        for state in forms::states_of(&setting.liquor, element) {
            if !forms_from(setting, record, &state) {
                continue;
            }
            let source = Source { gas, element, count, oxidation, state };
            list.extend(source.oxidised(setting));
            // What the liquor holds already is not made by a reductant in any amount that matters.
            list.extend(source.reduced(setting).filter(|_| !held));
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

/// Elements of a gas that come in several states, with their count and summed oxidation number; the solvent's H and O only
/// when nothing else is there.
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

fn spread_of(setting: &Setting, gas: &Species, own: f64) -> f64 {
    let rt = setting.liquor.temperature().rt();
    (setting.liquor.gibbs.of(gas.id).standard_uncertainty / rt).hypot(own).max(LEAST_SPREAD)
}

fn as_mixed(setting: &Setting, gas: &Species) -> Option<Release> {
    let liquor = &setting.liquor;
    let ln = liquor.ln_activity(gas)?;
    let imposed = liquor.recipe.gases.iter().any(|(id, _)| *id == gas.id);
    if imposed {
        return None;
    }
    let moved = setting.input_spread(spread_of(setting, gas, 0.0), |v| v.liquor.ln_activity(gas), ln);
    let limiting = gas
        .constituents
        .iter()
        .filter(|(c, _)| !is_solvent(c))
        .map(|(c, n)| (liquor.total(c) / n, c.roman()))
        .min_by(|a, b| a.0.total_cmp(&b.0));
    let held = gas.constituents.iter().find(|(c, _)| !is_solvent(c)).map(|(c, _)| c);
    let source = held.and_then(|c| forms::present(liquor, c)).map(|f| f.leading);
    let equation = source.filter(|id| liquor.library.get(*id).text != gas.text).map(|id| {
        let count: f64 =
            liquor.library.get(id).constituents.iter().filter(|(c, _)| Some(c) == held).map(|(_, n)| n).sum();
        let wanted: f64 = gas.constituents.iter().filter(|(c, _)| Some(c) == held).map(|(_, n)| n).sum();
        Closer::new(liquor).close(&[(id, -wanted / count), (gas.id, 1.0)]).whole()
    });
    Some(Release {
        route: Route::AsMixed,
        ln_pressure: Estimate::new(ln, moved),
        equation: equation.filter(|e| e.electrons == 0.0),
        ceiling: limiting,
        held_back: None,
        reasons: Vec::new(),
        sources: vec![gas.source.clone()],
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

impl Source<'_> {
    /// Electrons that one molecule of gas gives up when it forms (negative: takes up).
    fn electrons(&self) -> f64 {
        self.oxidation - self.count * self.state.oxidation()
    }

    /// ln p in equilibrium with the source at potential `e`.
    fn ln_pressure(&self, liquor: &Liquor, source: f64, e: f64) -> Option<f64> {
        let rt = liquor.temperature().rt();
        let electron = (liquor.gibbs.electron() - FARADAY * e) / rt;
        let mut others = 0.0;
        for (constituent, n) in self.gas.constituents.iter().filter(|(c, _)| c.element() != Some(self.element)) {
            others += n * liquor.potential(constituent)?;
        }
        let total = self.count * source + others - liquor.reduced_gibbs(self.gas.id) - self.electrons() * electron;
        Some(total)
    }

    fn form(&self, liquor: &Liquor) -> Option<StateForm> {
        (liquor.potential(&self.state).is_some()).then(|| forms::present(liquor, &self.state)).flatten()
    }

    /// The gas half-reaction from the source's leading form.
    fn half(&self, liquor: &Liquor, form: &StateForm) -> Equation {
        let species = liquor.library.get(form.leading);
        let held: f64 = species.constituents.iter().filter(|(c, _)| *c == self.state).map(|(_, n)| n).sum();
        Closer::new(liquor).close(&[(form.leading, -self.count / held.max(1e-9)), (self.gas.id, 1.0)])
    }

    /// The strongest couple of the liquor that practice lets oxidise the source, if the gas is more oxidised than it.
    fn oxidised(&self, setting: &Setting) -> Option<Release> {
        let liquor = &setting.liquor;
        let n = self.electrons();
        let form = self.form(liquor)?;
        if n < 1e-9 || is_solvent(&self.state) && self.element.symbol() != "O" {
            return None;
        }
        let plain = liquor.library.get(super::drivers::plain_form(liquor, &form)).text.clone();
        let usable = |d: &&Driver| {
            let same_state = d.couple.as_ref().is_some_and(|c| c.oxidised.constituent == self.state);
            !d.deposits_metal && !same_state && d.held_back_against(liquor, &plain).is_none()
        };
        let driver = setting.drivers.iter().find(usable)?;
        let ln = self.ln_pressure(liquor, form.potential, driver.potential.value)?;
        let thermal = liquor.temperature().rt() / FARADAY;
        let own = n * driver.potential.standard_uncertainty / thermal;
        let spread = setting.input_spread(
            spread_of(setting, self.gas, own),
            |v| {
                let e = v.drivers.iter().find(|d| d.label == driver.label)?.potential.value;
                self.ln_pressure(&v.liquor, v.liquor.potential(&self.state)?, e)
            },
            ln,
        );
        let half = self.half(liquor, &form);
        let equation = driver.half.as_ref().map(|red| half.plus(&red.times(-half.electrons / red.electrons)).whole());
        let from_oxidant = driver
            .couple
            .as_ref()
            .map(|c| (liquor.total(&c.oxidised.constituent) * c.electrons / n, c.oxidised.constituent.roman()));
        let from_source =
            (!is_solvent(&self.state)).then(|| (liquor.total(&self.state) / self.count, self.state.roman()));
        let ceiling = [from_oxidant.filter(|(m, _)| *m > 0.0), from_source]
            .into_iter()
            .flatten()
            .min_by(|a, b| a.0.total_cmp(&b.0));
        let to_limit = format!(
            "{} stands at 1 bar over this liquor at {:.2} V.",
            self.gas.pretty(),
            driver.potential.value - thermal * ln / n
        );
        Some(Release {
            route: Route::Oxidised {
                by: driver.label.clone(),
                pretty: driver.pretty.clone(),
                origin: driver.origin.clone(),
            },
            ln_pressure: Estimate::new(ln, spread),
            equation,
            ceiling,
            held_back: None,
            reasons: driver.assumptions(liquor).into_iter().chain([to_limit]).collect(),
            sources: vec![self.gas.source.clone()],
        })
    }

    /// The solid of the scenario that reduces the source furthest, if the gas is more reduced than it.
    fn reduced(&self, setting: &Setting) -> Option<Release> {
        let liquor = &setting.liquor;
        let n = -self.electrons();
        if n < 1e-9 {
            return None;
        }
        let potential = liquor.potential(&self.state)?;
        let (solid, e, per_formula) = setting
            .case
            .solids
            .iter()
            .filter_map(|solid| reductant(setting, solid).map(|(e, n)| (solid, e, n)))
            .min_by(|a, b| a.1.value.total_cmp(&b.1.value))?;
        let ln = self.ln_pressure(liquor, potential, e.value)?;
        let form = forms::present(liquor, &self.state)?;
        let reduced_state =
            self.gas.constituents.iter().find(|(c, _)| c.element() == Some(self.element)).map(|(c, _)| c)?;
        let product = forms::gaseous(liquor, reduced_state, 1.0).unwrap_or_else(|| StateForm {
            constituent: reduced_state.clone(),
            potential: 0.0,
            leading: self.gas.id,
            basis: Basis::Gas(1.0),
        });
        let couple = couples::couple(liquor, form.clone(), product);
        let record = liquor.library.get(solid.material.species());
        let held_back = couples::held_back(liquor, &couple, None)
            .or_else(|| couples::held_back(liquor, &couple, Some(&record.text)));
        if held_back.is_some_and(|r| r.class == InertClass::Inert) {
            return None;
        }
        let held_back = held_back.map(|r| text::sentence(&r.practice));
        let spread = spread_of(setting, self.gas, n * e.standard_uncertainty * FARADAY / liquor.temperature().rt());
        let ceiling = solid.amount.map(|m| (m * per_formula / n, solid.name.clone()));
        let path = dissolution::leading_path(liquor, solid, e.value + 1e-6, Products::Dissolved)?;
        let oxidation = path.half(liquor, record.id);
        let half = self.half(liquor, &form);
        let equation = (half.electrons.abs() > 1e-9 && oxidation.electrons.abs() > 1e-9)
            .then(|| half.plus(&oxidation.times(-half.electrons / oxidation.electrons)).whole());
        Some(Release {
            route: Route::Reduced { by: solid.name.clone() },
            ln_pressure: Estimate::new(ln, spread),
            equation,
            ceiling,
            held_back,
            reasons: Vec::new(),
            sources: vec![self.gas.source.clone(), record.source.clone()],
        })
    }
}

/// Potential at which a solid gives electrons, V, and how many per formula; not for parts whose film practice relies on.
fn reductant(setting: &Setting, solid: &Solid) -> Option<(Estimate, f64)> {
    let liquor = &setting.liquor;
    let hydrogen = setting.drivers.iter().find(|d| d.origin == Origin::Acid)?.potential.value;
    let path = dissolution::leading_path(liquor, solid, hydrogen, Products::Dissolved)?;
    let protected =
        dissolution::film(setting, solid, hydrogen).is_some_and(|f| f.holds() && solid.duty == Duty::Resist);
    (path.electrons > 0.0 && !protected).then(|| path.potential(liquor).map(|e| (e, path.electrons))).flatten()
}

/// Acid on carbonates, sulfides and the like: gas from a constituent that the solid holds in the gas's own state.
fn from_solids(setting: &Setting, gas: &Species) -> Vec<Release> {
    let liquor = &setting.liquor;
    let mut list = Vec::new();
    for solid in &setting.case.solids {
        let Material::Compound { species, .. } = solid.material else { continue };
        let record = liquor.library.get(species);
        let [(shared, per_gas)] = gas.constituents.iter().filter(|(c, _)| !is_solvent(c)).collect::<Vec<_>>()[..]
        else {
            continue;
        };
        let Some((_, per_solid)) = record.constituents.iter().find(|(c, _)| c == shared) else { continue };
        if shared.element().is_some_and(|e| matches!(e.symbol(), "Cl" | "Br" | "I")) {
            continue;
        }
        let moles = solid.amount.unwrap_or(1e-3);
        let mut rest = liquor.reduced_gibbs(species);
        let mut known = true;
        for (constituent, n) in record.constituents.iter().filter(|(c, _)| c != shared) {
            let held = if is_solvent(constituent) {
                liquor.potential(constituent)
            } else {
                forms::dissolved_at(liquor, constituent, n * moles + liquor.total(constituent)).map(|f| f.potential)
            };
            match held {
                Some(potential) => rest -= n * potential,
                None => known = false,
            }
        }
        let mut others = 0.0;
        for (constituent, n) in gas.constituents.iter().filter(|(c, _)| c != shared) {
            others += n * liquor.potential(constituent).unwrap_or(0.0);
        }
        if !known {
            continue;
        }
        let ln = rest / per_solid * per_gas + others - liquor.reduced_gibbs(gas.id);
        let equation = Closer::new(liquor).close(&[(species, -per_gas / per_solid), (gas.id, 1.0)]).whole();
        let data = liquor.gibbs.of(species).standard_uncertainty / liquor.temperature().rt() / per_solid * per_gas;
        list.push(Release {
            route: Route::FromSolid { solid: solid.name.clone() },
            ln_pressure: Estimate::new(ln, spread_of(setting, gas, data)),
            equation: (equation.electrons == 0.0).then_some(equation),
            ceiling: solid.amount.map(|m| (m * per_solid / per_gas, solid.name.clone())),
            held_back: oxidant_keeps_sulfur(setting, shared),
            reasons: Vec::new(),
            sources: vec![gas.source.clone(), record.source.clone()],
        });
    }
    list
}

/// Whether an oxidant of the liquor turns sulfide into sulfur before it can leave as gas.
fn oxidant_keeps_sulfur(setting: &Setting, constituent: &Constituent) -> Option<String> {
    let sulfide = constituent.element().is_some_and(|e| e.symbol() == "S") && constituent.oxidation() < 0.0;
    let strong = setting
        .drivers
        .iter()
        .find(|d| d.held_back.is_none() && d.origin != Origin::Acid && d.potential.value > 0.45)?;
    sulfide.then(|| {
        format!("While {} is there it takes sulfide to sulfur or sulfate; without it the gas comes.", strong.pretty)
    })
}

fn finding(setting: &Setting, record: &GasRecord, gas: &Species, release: Release) -> Option<Finding> {
    let limits = Limits::of(record);
    let lowest = limits.lowest()?;
    let p = release.ln_pressure.value.exp();
    if p < WORTH_A_LINE * lowest * BAR_PER_PPM || release.ceiling.as_ref().is_some_and(|(m, _)| *m <= 1e-12) {
        return None;
    }
    let over = |ppm: f64| {
        Estimate::new(release.ln_pressure.value - (ppm * BAR_PER_PPM).ln(), release.ln_pressure.standard_uncertainty)
    };
    let act_level = limits.act_level();
    let attention = match (release.held_back.is_some(), Verdict::of(over(act_level))) {
        (true, _) => Attention::Review,
        (false, Verdict::Driven) => Attention::Act,
        (false, _) if p > lowest * BAR_PER_PPM => Attention::Review,
        (false, _) => Attention::Note,
    };
    let verdict = Verdict::of(over(lowest));
    let who = format!("{} ({})", text::capital(&record.name), gas.formula.pretty());
    let route = route_words(&release.route);
    let pressure = text::pressure(p);
    let statement = match &release.held_back {
        Some(_) => format!(
            "{who} is permitted {route} ({pressure} at equilibrium) but practice finds that route slow or forestalled."
        ),
        None => format!("{who} can form {route}: {pressure} at equilibrium, {}.", limits.words()),
    };
    let against = match &release.route {
        Route::AsMixed => "the liquor as mixed".to_owned(),
        Route::Oxidised { by, .. } => by.clone(),
        Route::Reduced { by } => by.clone(),
        Route::FromSolid { solid } => format!("acid on {solid}"),
    };
    let mut finding = Finding::new(Question::Gas, &gas.text, Some(&against), verdict, attention, statement);
    finding.quantities.insert("partial_pressure_bar".into(), p.min(1e6));
    finding.quantities.insert("standard_uncertainty_ln_p".into(), release.ln_pressure.standard_uncertainty);
    finding.quantities.insert("lowest_limit_ppm".into(), lowest);
    finding.quantities.extend(record.idlh_ppm.map(|v| ("idlh_ppm".to_owned(), v)));
    finding.quantities.extend(record.lfl_percent.map(|v| ("lower_flammable_limit_percent".to_owned(), v)));
    if let Some((moles, limited_by)) = &release.ceiling {
        let per_volume = moles * setting.case.water_per_volume;
        finding.quantities.insert("ceiling_mol_per_m3".into(), per_volume);
        finding.quantities.insert("ceiling_kg_per_m3".into(), per_volume * gas.formula.molar_mass() * 1e-3);
        finding.quantities.insert("ceiling_Nm3_per_m3".into(), per_volume * 0.022_414);
        finding.reasons.push(format!(
            "At most {:.2} kg/m³ of liquor ({:.1} Nm³), limited by {limited_by}.",
            per_volume * gas.formula.molar_mass() * 1e-3,
            per_volume * 0.022_414
        ));
    }
    finding.reasons.extend(release.held_back.clone());
    finding.reasons.extend(release.reasons);
    finding.reasons.push(text::sentence(&record.warning));
    if let Some(equation) = &release.equation {
        let library = setting.liquor.library;
        finding.reaction = Some(equation.ascii(library));
        finding.reaction_pretty = Some(equation.pretty(library));
        finding.log_k = (equation.electrons == 0.0).then(|| equation.log_k(&setting.liquor.gibbs, setting.liquor.library).value);
        finding.sources.extend(equation.terms.iter().map(|(id, _)| library.get(*id).source.clone()));
    }
    finding.products = vec![gas.label()];
    finding.sources.extend(release.sources);
    finding.sources.push(record.source.clone());
    finding.cautions = vec!["general".into(), "gas".into()];
    finding.cautions.extend(record.hazard.iter().map(|h| format!("gas-{h}")));
    Some(finding)
}

fn route_words(route: &Route) -> String {
    match route {
        Route::AsMixed => "from the liquor as mixed".into(),
        Route::Oxidised { pretty, origin: Origin::Measured, .. } => format!("at the {pretty}"),
        Route::Oxidised { pretty, .. } => format!("by {pretty}"),
        Route::Reduced { by } => format!("where the liquor meets {by}"),
        Route::FromSolid { solid } => format!("where acid meets {solid}"),
    }
}

/// The public limits of one gas, ppm.
struct Limits {
    short: Option<f64>,
    twa: Option<f64>,
    idlh: Option<f64>,
    flammable: Option<f64>,
}

impl Limits {
    fn of(record: &GasRecord) -> Self {
        Self {
            short: record.short_limit_ppm.as_ref().map(|l| l.value),
            twa: record.twa_limit_ppm.as_ref().map(|l| l.value),
            idlh: record.idlh_ppm,
            flammable: record.lfl_percent.map(|percent| percent * 1e4),
        }
    }

    fn lowest(&self) -> Option<f64> {
        [self.short, self.twa, self.idlh, self.flammable].into_iter().flatten().min_by(f64::total_cmp)
    }

    /// Level beyond which a reader must act: immediately dangerous or flammable; without either, ten times the lowest limit.
    fn act_level(&self) -> f64 {
        let severe = [self.idlh, self.flammable].into_iter().flatten().min_by(f64::total_cmp);
        severe.or(self.lowest().map(|l| 10.0 * l)).unwrap_or(f64::INFINITY)
    }

    fn words(&self) -> String {
        let mut parts = Vec::new();
        parts.extend(self.short.map(|v| format!("short-term limit {}", text::ppm(v))));
        parts.extend(
            self.short.is_none().then_some(self.twa).flatten().map(|v| format!("shift limit {}", text::ppm(v))),
        );
        parts.extend(self.idlh.map(|v| format!("IDLH {}", text::ppm(v))));
        parts.extend(self.flammable.map(|v| format!("flammable from {}", text::ppm(v))));
        parts.join(", ")
    }
}
