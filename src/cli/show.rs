//! `halfcell show`: library records with their sources.

use std::process::ExitCode;

use clap::Args;
use serde_json::{Value, json};

use super::output::{self, Failure};
use crate::library::record::{State, Status};
use crate::library::{Library, Species};

#[derive(Debug, Args)]
pub struct Show {
    /// A formula (`Cu^2+`), a mineral, an alloy (`UNS S31603`), a gas, or part of a name
    query: String,
    /// Print the records as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &Show, library: &Library) -> Result<ExitCode, Failure> {
    let query = args.query.trim();
    let species = species(query, library);
    let alloy = library.alloy(query).map(|a| json!(a));
    let gas = library.gases.iter().find(|g| g.formula == query || g.name.eq_ignore_ascii_case(query)).map(|g| json!(g));
    let mineral = library.mineral(query).map(|m| json!(m));
    let others: Vec<(&str, Value)> = [("mineral", mineral), ("alloy", alloy), ("gas", gas)]
        .into_iter()
        .filter_map(|(k, v)| v.map(|v| (k, v)))
        .collect();
    if species.is_empty() && others.is_empty() {
        return Err(Failure::input(match library.find(query) {
            Err(e) => e.to_string(),
            Ok(_) => format!("`{query}` is not in the library"),
        }));
    }
    if args.json {
        let mut value = json!({ "records": species.iter().map(|s| record(s, library)).collect::<Vec<_>>() });
        for (key, other) in others {
            value[key] = other;
        }
        output::print_json(&value)?;
        return Ok(ExitCode::SUCCESS);
    }
    let mut out = String::new();
    for (key, other) in &others {
        out.push_str(&format!("{key}\n"));
        for (field, value) in other.as_object().into_iter().flatten().filter(|(_, v)| !v.is_null()) {
            let text = value.as_str().map_or_else(|| value.to_string(), str::to_owned);
            out.push_str(&format!("  {field:<34}{text}\n"));
        }
    }
    for one in species {
        out.push_str(&plain(one, library));
    }
    output::print(&out)?;
    Ok(ExitCode::SUCCESS)
}

/// Records of a formula; of a mineral by name; else those whose name contains the query.
fn species<'l>(query: &str, library: &'l Library) -> Vec<&'l Species> {
    let direct = library.records(query);
    if !direct.is_empty() {
        return direct;
    }
    if let Some(mineral) = library.mineral(query) {
        return library.records(&mineral.formula);
    }
    let wanted = query.to_lowercase();
    if wanted.len() < 3 {
        return Vec::new();
    }
    library.species().iter().filter(|s| s.name.to_lowercase().contains(&wanted)).collect()
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

fn record(s: &Species, library: &Library) -> Value {
    json!({
        "formula": s.text,
        "state": state_name(s.state),
        "name": s.name,
        "form": s.form,
        "G_kJ_mol": s.gibbs.value * 1e-3,
        "uncertainty_kJ_mol": s.gibbs.standard_uncertainty * 1e-3,
        "H_kJ_mol": s.enthalpy.map(|h| h.value * 1e-3),
        "S_J_mol_K": s.entropy.map(|e| e.value),
        "temperature_model": s.temperature.name(),
        "constituents": s.constituents.iter().map(|(c, n)| json!({ "of": c.to_string(), "count": n })).collect::<Vec<_>>(),
        "source": s.source,
        "citation": library.sources.get(&s.source),
        "status": status_name(s.status),
        "note": s.note,
    })
}

fn plain(s: &Species, library: &Library) -> String {
    let mut out = format!("{}  {} ({})\n", s.label(), s.name, state_name(s.state));
    out.push_str(&format!(
        "  ΔfG°  {:>10.2} ± {:.2} kJ/mol\n",
        s.gibbs.value * 1e-3,
        s.gibbs.standard_uncertainty * 1e-3
    ));
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
    out
}
