//! `halfcell audit`: the library (and overlays) checked.

use std::process::ExitCode;

use clap::Args;
use serde_json::json;

use super::output::{self, Failure};
use crate::audit::{self, Check, Outcome, Rule};
use crate::library::Library;

#[derive(Debug, Args)]
pub struct Audit {
    /// List what differs on purpose too, with the reason
    #[arg(long)]
    explained: bool,
    /// Print the outcome as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &Audit, library: &Library) -> Result<ExitCode, Failure> {
    let checks = audit::run(library).map_err(Failure::computation)?;
    let failed = checks.iter().filter(|c| c.outcome == Outcome::Failed).count();
    if args.json {
        output::print_json(&json(&checks))?;
    } else {
        output::print(&table(args, library, &checks))?;
    }
    Ok(ExitCode::from(if failed == 0 { 0 } else { 2 }))
}

/// Passed, explained, failed.
fn counts(checks: &[Check], rule: Rule) -> [usize; 3] {
    let count = |want: fn(&Outcome) -> bool| checks.iter().filter(|c| c.rule == rule && want(&c.outcome)).count();
    [count(|o| *o == Outcome::Passed), count(|o| matches!(o, Outcome::Explained(_))), count(|o| *o == Outcome::Failed)]
}

fn table(args: &Audit, library: &Library, checks: &[Check]) -> String {
    let mut out = format!("{} species, {} checks\n\n", library.species().len(), checks.len());
    out.push_str(&format!("{:<36}{:>8}{:>11}{:>8}\n", "rule", "passed", "explained", "failed"));
    for rule in Rule::ALL {
        let [passed, explained, failed] = counts(checks, rule);
        out.push_str(&format!("{:<36}{passed:>8}{explained:>11}{failed:>8}\n", rule.words()));
    }
    for check in checks {
        match &check.outcome {
            Outcome::Failed => {
                out.push_str(&format!("\nfailed: {}: {}: {}", check.rule.words(), check.subject, check.detail));
            }
            Outcome::Explained(why) if args.explained => {
                out.push_str(&format!(
                    "\nexplained: {}: {}: {}; {why}",
                    check.rule.words(),
                    check.subject,
                    check.detail
                ));
            }
            _ => {}
        }
    }
    out
}

fn json(checks: &[Check]) -> serde_json::Value {
    let rules: Vec<_> = Rule::ALL
        .iter()
        .map(|rule| {
            let [passed, explained, failed] = counts(checks, *rule);
            json!({ "rule": rule.words(), "passed": passed, "explained": explained, "failed": failed })
        })
        .collect();
    let open: Vec<_> = checks
        .iter()
        .filter_map(|c| match &c.outcome {
            Outcome::Passed => None,
            Outcome::Explained(why) => {
                Some(json!({ "rule": c.rule.words(), "subject": c.subject, "detail": c.detail, "explained": why }))
            }
            Outcome::Failed => {
                Some(json!({ "rule": c.rule.words(), "subject": c.subject, "detail": c.detail, "failed": true }))
            }
        })
        .collect();
    json!({ "rules": rules, "open": open })
}
