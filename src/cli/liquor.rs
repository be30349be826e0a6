//! `halfcell liquor`: the computed liquor.

use std::fmt::Write;
use std::process::ExitCode;

use clap::Args;

use super::output::{self, Failure};
use crate::case::Case;
use crate::equilibrium::{Liquor, couples};
use crate::library::Library;
use crate::report::{json, saturated_solids};
use crate::scenario::Scenario;
use crate::screens::drivers::plain_form;

#[derive(Debug, Args)]
pub struct LiquorArgs {
    /// Scenario file (`-`: standard input)
    scenario: String,
    /// Print the liquor as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &LiquorArgs, library: &Library) -> Result<ExitCode, Failure> {
    let text = output::read_text(&args.scenario)?;
    let scenario = Scenario::parse(&args.scenario, &text).map_err(Failure::Scenario)?;
    let case = Case::resolve(&scenario, library).map_err(Failure::Scenario)?;
    let liquor = Liquor::mix(library, case.recipe.clone()).map_err(Failure::computation)?;
    let measured = case.measured.as_ref().map(|(e, _)| e.value);
    if args.json {
        output::print_json(&json::liquor(&liquor, measured))?;
    } else {
        output::print(&table(&liquor, measured))?;
    }
    Ok(ExitCode::SUCCESS)
}

fn table(liquor: &Liquor, measured: Option<f64>) -> String {
    let library = liquor.library;
    let mut out = String::new();
    let _ = writeln!(
        out,
        "{}, pH {:.2}, ionic strength {:.3} mol/kg, activity by {}, water activity {:.4}",
        liquor.temperature(),
        liquor.ph(),
        liquor.ionic_strength,
        liquor.activity_model.name(),
        liquor.ln_water_activity.exp()
    );
    if let Some(volts) = measured {
        let _ = writeln!(out, "measured potential {volts:.3} V against SHE");
    }
    let _ = writeln!(out, "\n{:<24}{:>14}{:>14}", "species", "mol/kg", "activity");
    for one in liquor.dissolved.iter().filter(|d| d.molality > 1e-12) {
        let _ = writeln!(
            out,
            "{:<24}{:>14.4e}{:>14.4e}",
            library.get(one.species).label(),
            one.molality,
            one.ln_activity.exp()
        );
    }
    let _ = writeln!(out, "\n{:<32}{:>10}{:>10}", "couple", "E, V", "u, mV");
    for couple in json::all_couples(liquor) {
        let name = |form| library.get(plain_form(liquor, form)).text.clone();
        let held = if couples::held_back(liquor, &couple, None).is_some() { "  slow or inert" } else { "" };
        let label = format!("{}/{}", name(&couple.oxidised), name(&couple.reduced));
        let _ = writeln!(
            out,
            "{label:<32}{:>10.3}{:>10.0}{held}",
            couple.potential.value,
            couple.potential.standard_uncertainty * 1e3
        );
    }
    let solids = saturated_solids(liquor);
    if !solids.is_empty() {
        let _ = writeln!(out, "\n{:<32}{:>18}", "solid", "saturation index");
        for (species, index) in solids {
            let _ = writeln!(out, "{:<32}{index:>18.2}", species.label());
        }
    }
    out
}
