//! Which hazardous gases can form: from the liquor as mixed, by an oxidant, by a metal or another reductant, or by acid on a
//! solid; each against public limits.

mod routes;

use crate::library::Species;
use crate::library::record::State;
use crate::library::tables::GasRecord;
use crate::quantity::Estimate;

use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};
use routes::{Release, Route};

/// bar per ppm of the atmosphere.
const BAR_PER_PPM: f64 = 1.013_25e-6;
/// Share of the lowest limit from which a gas is worth a line.
const WORTH_A_LINE: f64 = 0.1;
/// Most routes reported for one gas.
const MOST_ROUTES: usize = 3;

/// Findings for every gas of `gases.toml` that comes within reach of a limit.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let library = setting.liquor.library;
    let mut findings = Vec::new();
    for record in &library.gases {
        let Some(species) = library.in_state(&record.formula, State::Gas) else { continue };
        let mut releases = routes::releases(setting, record, species);
        releases.sort_by(|a, b| rank(b).total_cmp(&rank(a)));
        let own = releases.into_iter().filter_map(|r| finding(setting, record, species, r));
        findings.extend(own.take(MOST_ROUTES));
    }
    findings
}

/// Pressure, with routes that practice finds slow last.
fn rank(release: &Release) -> f64 {
    release.ln_pressure.value.min(0.0) + if release.held_back.is_some() { -1e3 } else { 0.0 }
}

fn finding(setting: &Setting, record: &GasRecord, gas: &Species, release: Release) -> Option<Finding> {
    let limits = Limits::of(record);
    let lowest = limits.lowest()?;
    let p = release.ln_pressure.value.exp();
    let nothing_to_give = release.ceiling.as_ref().is_some_and(|(moles, _)| *moles <= 1e-12);
    if p < WORTH_A_LINE * lowest * BAR_PER_PPM || nothing_to_give {
        return None;
    }
    let over = |ppm: f64| {
        let ratio = release.ln_pressure.value - (ppm * BAR_PER_PPM).ln();
        Estimate::new(ratio, release.ln_pressure.standard_uncertainty)
    };
    let attention = attention(&release, Verdict::of(over(limits.act_level())), p > lowest * BAR_PER_PPM);
    let who = format!("{} ({})", text::capital(&record.name), gas.formula.pretty());
    let (route, pressure) = (route_words(&release.route), text::pressure(p));
    let statement = match &release.held_back {
        Some(_) => {
            format!(
                "{who} is permitted {route} ({pressure} at equilibrium), but practice finds it slow or forestalled."
            )
        }
        None => format!("{who} can form {route}: {pressure} at equilibrium, {}.", limits.words()),
    };
    let against = against(&release.route);
    let mut finding =
        Finding::new(Question::Gas, &gas.text, Some(&against), Verdict::of(over(lowest)), attention, statement);
    finding.held_back = release.held_back.is_some();
    finding.quantities.insert("partial_pressure_bar".into(), p.min(1e6));
    finding.quantities.insert("standard_uncertainty_ln_p".into(), release.ln_pressure.standard_uncertainty);
    finding.quantities.insert("lowest_limit_ppm".into(), lowest);
    finding.quantities.extend(record.idlh_ppm.map(|v| ("idlh_ppm".to_owned(), v)));
    finding.quantities.extend(record.lfl_percent.map(|v| ("lower_flammable_limit_percent".to_owned(), v)));
    if let Some((moles, limited_by)) = &release.ceiling {
        ceiling(&mut finding, moles * setting.case.water_per_volume, gas, limited_by);
    }
    finding.reasons.extend(release.held_back);
    finding.reasons.extend(release.reasons);
    finding.reasons.push(text::sentence(&record.warning));
    if let Some(equation) = &release.equation {
        finding.take_equation(equation, &setting.liquor);
    }
    finding.products = vec![gas.label()];
    finding.sources.extend([gas.source.clone(), record.source.clone()]);
    finding.cautions = vec!["general".into(), "gas".into()];
    finding.cautions.extend(record.hazard.iter().map(|h| format!("gas-{h}")));
    Some(finding)
}

/// `act` beyond doubt above what is immediately dangerous or flammable. Hydrogen from equipment comes slowly: `review`.
fn attention(release: &Release, over_act_level: Verdict, over_lowest: bool) -> Attention {
    let from_part = matches!(release.route, Route::ReducedBySolid { part: true, .. });
    match (release.held_back.is_some(), over_act_level) {
        (true, _) => Attention::Review,
        (false, Verdict::Driven) if !from_part => Attention::Act,
        (false, _) if over_lowest => Attention::Review,
        (false, _) => Attention::Note,
    }
}

/// The stoichiometric ceiling, mol per m³ of liquor.
fn ceiling(finding: &mut Finding, per_volume: f64, gas: &Species, limited_by: &str) {
    /// Nm³/mol of an ideal gas at 0 °C and 1 atm.
    const NORMAL_VOLUME: f64 = 0.022_414;
    let mass = per_volume * gas.formula.molar_mass() * 1e-3;
    let volume = per_volume * NORMAL_VOLUME;
    finding.quantities.insert("ceiling_mol_per_m3".into(), per_volume);
    finding.quantities.insert("ceiling_kg_per_m3".into(), mass);
    finding.quantities.insert("ceiling_Nm3_per_m3".into(), volume);
    finding.reasons.push(format!("At most {mass:.2} kg/m³ of liquor ({volume:.1} Nm³), limited by {limited_by}."));
}

fn against(route: &Route) -> String {
    match route {
        Route::AsMixed => "the liquor as mixed".into(),
        Route::Oxidised { by, .. } | Route::ReducedBySolid { by, .. } | Route::ReducedInLiquor { by, .. } => by.clone(),
        Route::FromSolid { solid } => format!("acid on {solid}"),
    }
}

fn route_words(route: &Route) -> String {
    match route {
        Route::AsMixed => "from the liquor as mixed".into(),
        Route::Oxidised { pretty, measured: true, .. } => format!("at the {pretty}"),
        Route::Oxidised { pretty, .. } => format!("by {pretty}"),
        Route::ReducedBySolid { by, .. } => format!("where the liquor meets {by}"),
        Route::ReducedInLiquor { pretty, .. } => format!("by reduction with {pretty} in the liquor"),
        Route::FromSolid { solid } => format!("where the liquor meets {solid}"),
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
        let twa = self.twa.filter(|_| self.short.is_none());
        parts.extend(twa.map(|v| format!("shift limit {}", text::ppm(v))));
        parts.extend(self.idlh.map(|v| format!("IDLH {}", text::ppm(v))));
        parts.extend(self.flammable.map(|v| format!("flammable from {}", text::ppm(v))));
        parts.join(", ")
    }
}
