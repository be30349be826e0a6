//! Arguments → calls. The only place that prints, opens files or sets an exit status.

mod audit;
mod check;
mod couple;
mod liquor;
mod output;
mod reaction;
mod screen;
mod show;

use std::process::ExitCode;

use clap::{Args, Parser, Subcommand};

use crate::library::{Library, Overlay};
use output::Failure;
pub use screen::DEMONSTRATION;

/// Hydrometallurgy and corrosion risk screening: one scenario file in, one dated report out.
///
/// A screening result permits nothing: local codes and licensed practice decide.
#[derive(Debug, Parser)]
#[command(name = "halfcell", version, about, arg_required_else_help = true)]
struct Arguments {
    /// Your own records (TOML), laid over the library; repeatable
    #[arg(long, global = true, value_name = "FILE")]
    materials: Vec<String>,
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Screen a scenario and write its report (with no scenario: the embedded demonstration)
    Screen(screen::Screen),
    /// Read and validate a scenario, compute nothing
    Check(check::Check),
    /// Balance a reaction and give ΔG, ΔH, log K and E
    Reaction(reaction::Reaction),
    /// Half-reaction, standard potential and potential of a couple
    Couple(couple::CoupleArgs),
    /// The computed liquor: species, activities, couples
    Liquor(liquor::LiquorArgs),
    /// Library records with their sources
    Show(show::Show),
    /// Check the library (and overlays) against itself and against published values
    Audit(audit::Audit),
}

/// Conditions that several commands take.
#[derive(Debug, Args)]
struct AtTemperature {
    /// Temperature with its unit
    #[arg(long, value_name = "T", default_value = "25 degC")]
    temperature: String,
}

/// Runs the program: 0 done, 1 done and `--stop-on` was met, 2 the input is wrong, 3 the computation could not be done.
pub fn run() -> ExitCode {
    let arguments = Arguments::parse();
    match dispatch(&arguments) {
        Ok(code) => code,
        Err(failure) => failure.report(),
    }
}

fn dispatch(arguments: &Arguments) -> Result<ExitCode, Failure> {
    let library = library(arguments)?;
    match &arguments.command {
        Command::Screen(args) => screen::run(args, &library),
        Command::Check(args) => check::run(args, &library),
        Command::Reaction(args) => reaction::run(args, &library),
        Command::Couple(args) => couple::run(args, &library),
        Command::Liquor(args) => liquor::run(args, &library),
        Command::Show(args) => show::run(args, &library),
        Command::Audit(args) => audit::run(args, &library),
    }
}

/// The embedded library with the overlays named; overlays must pass the audit that the library itself passes.
fn library(arguments: &Arguments) -> Result<Library, Failure> {
    if arguments.materials.is_empty() {
        return Library::embedded().map_err(Failure::computation);
    }
    let mut overlays = Vec::new();
    for path in &arguments.materials {
        overlays.push(Overlay::parse(path, &output::read_text(path)?).map_err(Failure::input)?);
    }
    let library = Library::with_overlays(&overlays).map_err(Failure::input)?;
    if !matches!(arguments.command, Command::Audit(_)) {
        let checks = crate::audit::run(&library).map_err(Failure::computation)?;
        if let Some(failed) = checks.iter().find(|c| c.outcome == crate::audit::Outcome::Failed) {
            let (rule, subject, detail) = (failed.rule.words(), &failed.subject, &failed.detail);
            return Err(Failure::input(format!("the materials fail the audit: {rule}: {subject}: {detail}")));
        }
    }
    Ok(library)
}
