//! The JSON report: the contract for other programs. Field names change only with `FORMAT`.

use serde_json::{Map, Value, json};

use crate::equilibrium::{Liquor, couples};
use crate::library::Library;
use crate::screens::Finding;
use crate::screens::drivers::{half_reaction, plain_form};

use super::Subject;

/// Number of the report format.
pub const FORMAT: u32 = 1;
/// Share of the most abundant species below which a species is left out of the report.
const LEAST_SHARE: f64 = 1e-12;

/// The whole report.
pub fn report(subject: &Subject) -> Value {
    let scenario = subject.scenario;
    json!({
        "format": FORMAT,
        "program": {
            "name": env!("CARGO_PKG_NAME"),
            "version": env!("CARGO_PKG_VERSION"),
            "library_sha256": Library::sha256(),
            "overlays": subject.setting.liquor.library.changes.iter().map(|c| json!({
                "file": c.file, "record": c.record, "overrides": c.overrides,
            })).collect::<Vec<_>>(),
        },
        "scenario": {
            "title": scenario.title,
            "reference": scenario.reference,
            "revision": scenario.revision,
            "prepared_by": scenario.prepared_by,
            "date": subject.date.to_string(),
            "sha256": subject.scenario_sha256(),
        },
        "liquor": liquor(&subject.setting.liquor, subject.setting.case.measured.as_ref().map(|(e, _)| e.value)),
        "findings": subject.findings.iter().map(finding).collect::<Vec<_>>(),
        "standing": subject.house.standing,
    })
}

/// The computed liquor.
pub fn liquor(liquor: &Liquor, measured: Option<f64>) -> Value {
    let library = liquor.library;
    let most = liquor.dissolved.first().map_or(0.0, |d| d.molality);
    let species: Vec<Value> = liquor
        .dissolved
        .iter()
        .filter(|d| d.molality > LEAST_SHARE * most)
        .map(|d| {
            let record = library.get(d.species);
            json!({ "species": record.text, "name": record.name, "molality": d.molality, "activity": d.ln_activity.exp() })
        })
        .collect();
    json!({
        "temperature_K": liquor.temperature().0,
        "pH": liquor.ph(),
        "ionic_strength_mol_kg": liquor.ionic_strength,
        "activity_model": liquor.activity_model.name(),
        "activity_model_in_range": liquor.ionic_strength <= liquor.activity_model.upper_limit(),
        "water_activity": liquor.ln_water_activity.exp(),
        "open_charge_mol_kg": liquor.open_charge,
        "worst_balance_error": liquor.worst_balance,
        "potential_V": measured,
        "species": species,
        "couples": couple_list(liquor),
        "gases": gases(liquor),
        "saturation": saturation(liquor),
    })
}

fn couple_list(liquor: &Liquor) -> Vec<Value> {
    all_couples(liquor)
        .into_iter()
        .map(|couple| {
            let library = liquor.library;
            let name = |form| library.get(plain_form(liquor, form)).text.clone();
            json!({
                "couple": format!("{}/{}", name(&couple.oxidised), name(&couple.reduced)),
                "reaction": half_reaction(liquor, &couple).whole().ascii(library),
                "E_V": couple.potential.value,
                "standard_uncertainty_V": couple.potential.standard_uncertainty,
                "inert": couples::held_back(liquor, &couple, None).is_some(),
            })
        })
        .collect()
}

/// Couples of every element of the liquor, highest potential first.
pub fn all_couples(liquor: &Liquor) -> Vec<couples::Couple> {
    let mut elements: Vec<_> = liquor.constituents().filter_map(|c| c.element()).collect();
    elements.extend(crate::chemistry::Element::from_symbol("H"));
    elements.sort();
    elements.dedup();
    let mut list: Vec<_> = elements.into_iter().flat_map(|e| couples::couples_of(liquor, e)).collect();
    list.sort_by(|a, b| b.potential.value.total_cmp(&a.potential.value));
    list
}

fn gases(liquor: &Liquor) -> Vec<Value> {
    use crate::library::record::State;
    let mut list: Vec<(f64, Value)> = liquor
        .library
        .species()
        .iter()
        .filter(|s| s.state == State::Gas)
        .filter_map(|s| {
            let bar = liquor.ln_activity(s)?.exp();
            (bar > 1e-15).then(|| (bar, json!({ "gas": s.text, "partial_pressure_bar": bar })))
        })
        .collect();
    list.sort_by(|a, b| b.0.total_cmp(&a.0));
    list.into_iter().map(|(_, value)| value).collect()
}

/// Solids by saturation index, log₁₀ of ion product over solubility product per formula; those above −2.
fn saturation(liquor: &Liquor) -> Vec<Value> {
    super::saturated_solids(liquor)
        .into_iter()
        .map(|(species, index)| json!({ "solid": species.label(), "saturation_index": index }))
        .collect()
}

fn finding(finding: &Finding) -> Value {
    let mut map = Map::new();
    let mut put = |key: &str, value: Value| {
        if !value.is_null() {
            map.insert(key.to_owned(), value);
        }
    };
    put("id", json!(finding.id));
    put("question", json!(finding.question));
    put("subject", json!(finding.subject));
    put("against", json!(finding.against));
    put("verdict", json!(finding.verdict));
    put("attention", json!(finding.attention));
    put("statement", json!(finding.statement));
    put("driving_force_mV", json!(finding.driving_force.map(|e| e.value * 1e3)));
    put("standard_uncertainty_mV", json!(finding.driving_force.map(|e| e.standard_uncertainty * 1e3)));
    put("delta_G_kJ_mol", json!(finding.delta_g.map(|g| g * 1e-3)));
    put("log_K", json!(finding.log_k));
    put("reaction", json!(finding.reaction));
    put("products", json!(finding.products));
    put("quantities", json!(finding.quantities));
    put("reasons", json!(finding.reasons));
    put("sources", json!(finding.sources));
    put("cautions", json!(finding.cautions));
    Value::Object(map)
}
