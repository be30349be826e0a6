//! `halfcell reaction`: balances a reaction and gives its energies.

use std::process::ExitCode;

use clap::Args;
use serde_json::json;

use super::AtTemperature;
use super::output::{self, Failure};
use crate::chemistry::Medium;
use crate::library::{Library, Species, TemperatureModel};
use crate::scenario;
use crate::thermo::equation::Equation;
use crate::thermo::named;

#[derive(Debug, Args)]
pub struct Reaction {
    /// Such as "CuFeS2 + Fe^3+ -> Cu^2+ + Fe^2+ + S"; states as (aq) (s) (l) (g) where a bare formula is not meant
    reaction: String,
    #[command(flatten)]
    at: AtTemperature,
    /// Balance with OH^- instead of H^+
    #[arg(long)]
    base: bool,
    /// Print the result as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &Reaction, library: &Library) -> Result<ExitCode, Failure> {
    let t = scenario::temperature(&args.at.temperature).map_err(Failure::input)?;
    let mut medium = if args.base { Medium::Base } else { Medium::Acid };
    if args.reaction.contains("OH^-") || args.reaction.contains("OH⁻") || args.reaction.contains("OH-") {
        medium = Medium::Base;
    }
    let equation = named::reaction(&args.reaction, library, medium).map_err(Failure::input)?;
    let values = named::values(&equation, library, t).map_err(Failure::computation)?;
    let electrons = named::electrons_moved(&equation, library);
    let text = equation.ascii(library);
    if args.json {
        output::print_json(&json!({
            "reaction": text,
            "electrons": electrons,
            "temperature_K": t.0,
            "delta_G_kJ_mol": values.delta_g.value * 1e-3,
            "delta_G_standard_uncertainty_kJ_mol": values.delta_g.standard_uncertainty * 1e-3,
            "delta_H_kJ_mol": values.delta_h * 1e-3,
            "log_K": values.log_k.value,
            "log_K_standard_uncertainty": values.log_k.standard_uncertainty,
            "E_V": values.potential.map(|e| e.value),
        }))?;
        return Ok(ExitCode::SUCCESS);
    }
    let mut out = format!("{text}\n  at {t}\n");
    out.push_str(&format!(
        "  ΔG°    {:>10.2} ± {:.2} kJ/mol\n",
        values.delta_g.value * 1e-3,
        values.delta_g.standard_uncertainty * 1e-3
    ));
    let unmeasured = without_enthalpy(&equation, library);
    let doubt = if unmeasured.is_empty() { "" } else { ", rough: no enthalpy is known for " };
    out.push_str(&format!("  ΔH°    {:>10.2} kJ/mol{doubt}{}\n", values.delta_h * 1e-3, unmeasured.join(", ")));
    out.push_str(&format!("  log K  {:>10.2} ± {:.2}\n", values.log_k.value, values.log_k.standard_uncertainty));
    if let Some(e) = values.potential {
        out.push_str(&format!("  E°     {:>10.4} ± {:.4} V, {electrons} electrons\n", e.value, e.standard_uncertainty));
    }
    out.push_str(&sources(&equation, library));
    output::print(&out)?;
    Ok(ExitCode::SUCCESS)
}

/// Species of the equation whose temperature model assumes an enthalpy.
fn without_enthalpy(equation: &Equation, library: &Library) -> Vec<String> {
    let species = equation.terms.iter().map(|(id, _)| library.get(*id));
    let assumed =
        |s: &&Species| matches!(s.temperature, TemperatureModel::ConstantGibbs | TemperatureModel::ConstantLogK { .. });
    species.filter(assumed).map(Species::label).collect()
}

/// One line for each species: its Gibbs energy, source and temperature model.
pub fn sources(equation: &Equation, library: &Library) -> String {
    let mut out = String::new();
    for (id, _) in &equation.terms {
        let species = library.get(*id);
        out.push_str(&format!(
            "  {:<20} ΔfG° {:>10.2} kJ/mol  {}, {}\n",
            species.label(),
            species.gibbs.value * 1e-3,
            species.source,
            species.temperature.name()
        ));
    }
    out
}
