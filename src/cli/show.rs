//! `halfcell show`: library records with their sources.

use std::process::ExitCode;

use clap::{Args, ValueEnum};
use serde_json::{Value, json};

use super::AtTemperature;
use super::output::{self, Failure};
use crate::chemistry::Element;
use crate::library::record::{State, Status};
use crate::library::{self, Library, Species};
use crate::quantity::T_STANDARD;
use crate::scenario;
use crate::thermo::gibbs::GibbsTable;

#[derive(Debug, Args)]
pub struct Show {
    /// A formula (`Cu^2+`), a mineral, alloy (`UNS S31603`), reagent, lining, gas, CAS number, or part of a name
    query: Option<String>,
    /// Only records that hold this element
    #[arg(long, value_name = "SYMBOL")]
    element: Option<String>,
    /// Only records in this state
    #[arg(long, value_name = "STATE")]
    state: Option<StateFilter>,
    #[command(flatten)]
    at: AtTemperature,
    /// Print the records as JSON
    #[arg(long)]
    json: bool,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum StateFilter {
    Dissolved,
    Solid,
    Liquid,
    Gas,
}

impl StateFilter {
    fn holds(self, state: State) -> bool {
        match self {
            Self::Dissolved => state == State::Aqueous,
            Self::Solid => matches!(state, State::Crystal | State::Amorphous),
            Self::Liquid => state == State::Liquid,
            Self::Gas => state == State::Gas,
        }
    }
}

pub fn run(args: &Show, library: &Library) -> Result<ExitCode, Failure> {
    let t = scenario::temperature(&args.at.temperature).map_err(Failure::input)?;
    let element = match &args.element {
        Some(symbol) => Some(
            Element::from_symbol(symbol.trim())
                .ok_or_else(|| Failure::input(format!("`{symbol}` is not the symbol of an element")))?,
        ),
        None => None,
    };
    if args.query.is_none() && element.is_none() {
        return Err(Failure::input("name a record, or an element with --element"));
    }
    let wanted = |s: &&Species| {
        element.is_none_or(|e| s.formula.composition.contains_key(&e)) && args.state.is_none_or(|f| f.holds(s.state))
    };
    let query = args.query.as_deref().map(str::trim);
    let found: Vec<&Species> = match query {
        Some(query) => species(query, library).into_iter().filter(wanted).collect(),
        None => library.species().iter().filter(wanted).collect(),
    };
    let others = query.map(|q| other_records(q, library)).unwrap_or_default();
    if found.is_empty() && others.is_empty() {
        return Err(Failure::input(nothing(query.unwrap_or(""), library)));
    }
    let table = GibbsTable::at(library, t).map_err(Failure::input)?;
    if args.json {
        let mut value = json!({ "records": found.iter().map(|s| record(s, library, &table)).collect::<Vec<_>>() });
        for (key, other) in others {
            value[key] = other;
        }
        output::print_json(&value)?;
        return Ok(ExitCode::SUCCESS);
    }
    let mut out = String::new();
    for (key, other) in &others {
        out.push_str(&format!("{key}\n"));
        for (field, value) in other.as_object().into_iter().flatten().filter(|(_, v)| !is_empty(v)) {
            out.push_str(&format!("  {field:<34}{}\n", in_words(value)));
        }
    }
    match found.as_slice() {
        few if few.len() <= 4 => few.iter().for_each(|s| out.push_str(&plain(s, library, &table))),
        many => out.push_str(&listing(many, &table)),
    }
    output::print(&out)?;
    Ok(ExitCode::SUCCESS)
}

fn is_empty(value: &Value) -> bool {
    value.is_null() || value.as_array().is_some_and(Vec::is_empty) || value.as_object().is_some_and(|o| o.is_empty())
}

/// A field of a record on one line, without the marks of the file format.
fn in_words(value: &Value) -> String {
    match value {
        Value::String(text) => text.clone(),
        Value::Array(items) => items.iter().map(in_words).collect::<Vec<_>>().join("; "),
        Value::Object(fields) => match fields.get("text") {
            Some(text) => in_words(text),
            None => fields.iter().map(|(k, v)| format!("{k} {v}")).collect::<Vec<_>>().join(", "),
        },
        other => other.to_string(),
    }
}

/// Records of the other tables that a name, synonym, number or CAS number finds.
fn other_records(query: &str, library: &Library) -> Vec<(&'static str, Value)> {
    let same = |text: &str| text.eq_ignore_ascii_case(query);
    let gas = library.gases.iter().find(|g| g.formula == query || same(&g.name) || g.cas == query).map(|g| json!(g));
    let reagent = library
        .reagents
        .iter()
        .find(|r| same(&r.name) || r.synonyms.iter().any(|s| same(s)) || r.cas.as_deref() == Some(query))
        .map(|r| json!(r));
    let lining = library.linings.iter().find(|l| same(&l.name) || l.synonyms.iter().any(|s| same(s))).map(|l| json!(l));
    let mineral = library.mineral(query).map(|m| json!(m));
    let alloy = library.alloy(query).map(|a| json!(a));
    [("mineral", mineral), ("alloy", alloy), ("reagent", reagent), ("lining", lining), ("gas", gas)]
        .into_iter()
        .filter_map(|(k, v)| v.map(|v| (k, v)))
        .collect()
}

/// Records of a formula; of a mineral by name; else those whose name contains the query.
fn species<'l>(query: &str, library: &'l Library) -> Vec<&'l Species> {
    let direct = library.records(query);
    if !direct.is_empty() {
        return direct;
    }
    if let Some(mineral) = library.mineral(query) {
        let same = |s: &&Species| mineral.form.is_none() || s.form == mineral.form;
        return library.records(&mineral.formula).into_iter().filter(same).collect();
    }
    let wanted = query.to_lowercase();
    if wanted.chars().count() < 3 {
        return Vec::new();
    }
    let holds = |text: &str| text.to_lowercase().contains(&wanted);
    library.species().iter().filter(|s| holds(&s.name) || s.form.as_deref().is_some_and(holds)).collect()
}

/// The message when nothing is found, with the nearest names of all tables.
fn nothing(query: &str, library: &Library) -> String {
    let words = library
        .species()
        .iter()
        .flat_map(|s| [s.text.as_str(), s.name.as_str()])
        .chain(library.minerals.iter().map(|m| m.name.as_str()))
        .chain(library.alloys.iter().flat_map(|a| a.uns.as_deref()))
        .chain(library.alloys.iter().map(|a| a.name.as_str()))
        .chain(library.reagents.iter().map(|r| r.name.as_str()))
        .chain(library.linings.iter().map(|l| l.name.as_str()))
        .chain(library.gases.iter().map(|g| g.name.as_str()));
    let nearest = library::nearest(query, words, 5);
    let hint = if nearest.is_empty() { String::new() } else { format!("; nearest: {}", nearest.join(", ")) };
    format!("nothing in the library answers to `{query}`{hint}")
}

fn state_name(state: State) -> &'static str {
    match state {
        State::Aqueous => "aq",
        State::Crystal => "cr",
        State::Amorphous => "am",
        State::Liquid => "l",
        State::Gas => "g",
    }
}

fn status_name(status: Status) -> &'static str {
    match status {
        Status::Published => "published",
        Status::Derived => "derived",
        Status::Memory => "memory",
    }
}

fn record(s: &Species, library: &Library, table: &GibbsTable) -> Value {
    json!({
        "formula": s.text,
        "state": state_name(s.state),
        "name": s.name,
        "form": s.form,
        "G_kJ_mol": s.gibbs.value * 1e-3,
        "uncertainty_kJ_mol": s.gibbs.standard_uncertainty * 1e-3,
        "H_kJ_mol": s.enthalpy.map(|h| h.value * 1e-3),
        "S_J_mol_K": s.entropy.map(|e| e.value),
        "temperature_K": table.temperature.0,
        "G_at_temperature_kJ_mol": table.of(s.id).value * 1e-3,
        "G_at_temperature_uncertainty_kJ_mol": table.of(s.id).standard_uncertainty * 1e-3,
        "temperature_model": s.temperature.name(),
        "constituents": s.constituents.iter().map(|(c, n)| json!({ "of": c.to_string(), "count": n })).collect::<Vec<_>>(),
        "source": s.source,
        "citation": library.sources.get(&s.source),
        "status": status_name(s.status),
        "note": s.note,
        "rejected": s.rejected,
    })
}

/// One line a record.
fn listing(many: &[&Species], table: &GibbsTable) -> String {
    let mut out = format!(
        "{:<34}{:<6}{:>12}{:>9}{:>12}  {:<18}{}\n",
        "species", "state", "ΔfG°, kJ", "u", "G at T", "source", "name"
    );
    for s in many {
        out.push_str(&format!(
            "{:<34}{:<6}{:>12.2}{:>9.2}{:>12.2}  {:<18}{}\n",
            s.label(),
            state_name(s.state),
            s.gibbs.value * 1e-3,
            s.gibbs.standard_uncertainty * 1e-3,
            table.of(s.id).value * 1e-3,
            s.source,
            s.name
        ));
    }
    out
}

fn plain(s: &Species, library: &Library, table: &GibbsTable) -> String {
    let mut out = format!("{}  {} ({})\n", s.label(), s.name, state_name(s.state));
    let kilojoules =
        |e: crate::quantity::Estimate| format!("{:>10.2} ± {:.2}", e.value * 1e-3, e.standard_uncertainty * 1e-3);
    out.push_str(&format!("  ΔfG°  {} kJ/mol at 25 °C\n", kilojoules(s.gibbs)));
    if table.temperature != T_STANDARD {
        out.push_str(&format!("  G     {} kJ/mol at {} (apparent)\n", kilojoules(table.of(s.id)), table.temperature));
    }
    if let Some(h) = s.enthalpy {
        out.push_str(&format!("  ΔfH°  {:>10.2} kJ/mol\n", h.value * 1e-3));
    }
    if let Some(entropy) = s.entropy {
        out.push_str(&format!("  S°    {:>10.2} J/(mol K)\n", entropy.value));
    }
    out.push_str(&format!("  temperature by {}\n", s.temperature.name()));
    let citation = library.sources.get(&s.source).map_or("", String::as_str);
    out.push_str(&format!("  {} [{}] {citation}\n", status_name(s.status), s.source));
    if let Some(note) = &s.note {
        out.push_str(&format!("  note: {note}\n"));
    }
    for other in &s.rejected {
        let g = other.g_kj_mol.map(|g| format!("ΔfG° {g} kJ/mol")).into_iter();
        let values: Vec<String> = g.chain(other.log_k.map(|k| format!("log K {k}"))).collect();
        out.push_str(&format!("  not taken: {} [{}]: {}\n", values.join(", "), other.source, other.why));
    }
    out
}
