//! `halfcell check`: reads and validates only.

use std::process::ExitCode;

use clap::Args;
use serde_json::json;

use super::output::{self, Failure};
use crate::case::Case;
use crate::library::Library;
use crate::scenario::Scenario;

#[derive(Debug, Args)]
pub struct Check {
    /// Scenario file (`-`: standard input)
    scenario: String,
    /// Print the outcome as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &Check, library: &Library) -> Result<ExitCode, Failure> {
    let text = output::read_text(&args.scenario)?;
    let checked = Scenario::parse(&args.scenario, &text).and_then(|s| Case::resolve(&s, library).map(|c| (s, c)));
    match checked {
        Ok((scenario, case)) if args.json => {
            output::print_json(&json!({
                "valid": true, "title": scenario.title, "solids": case.solids.len(), "oxidants": case.oxidants.len(),
                "dissolved": scenario.liquor.dissolved.len(), "problems": [],
            }))?;
            Ok(ExitCode::SUCCESS)
        }
        Ok((scenario, case)) => {
            output::print(&format!(
                "{}: reads well: \"{}\", {} solids, {} oxidants, {} dissolved species",
                args.scenario,
                scenario.title,
                case.solids.len(),
                case.oxidants.len(),
                scenario.liquor.dissolved.len()
            ))?;
            Ok(ExitCode::SUCCESS)
        }
        Err(diagnostics) if args.json => {
            let problems: Vec<_> = diagnostics
                .list()
                .iter()
                .map(|d| json!({ "line": diagnostics.line(d), "message": d.message, "help": d.help }))
                .collect();
            output::print_json(&json!({ "valid": false, "problems": problems }))?;
            Ok(ExitCode::from(2))
        }
        Err(diagnostics) => Err(Failure::Scenario(diagnostics)),
    }
}
