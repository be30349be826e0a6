//! Arguments → calls. The only place that prints, opens files or sets an exit status.

mod check;
mod couple;
mod liquor;
mod output;
mod reaction;
mod screen;
mod show;

use std::process::ExitCode;

use clap::{Args, Parser, Subcommand};

use crate::library::Library;
use output::Failure;
pub use screen::DEMONSTRATION;

/// Hydrometallurgy and corrosion risk screening: one scenario file in, one dated report out.
///
/// A screening result permits nothing: local codes and licensed practice decide.
#[derive(Debug, Parser)]
#[command(name = "halfcell", version, about, arg_required_else_help = true)]
struct Arguments {
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
    match dispatch(&arguments.command) {
        Ok(code) => code,
        Err(failure) => failure.report(),
    }
}

fn dispatch(command: &Command) -> Result<ExitCode, Failure> {
    let library = Library::embedded().map_err(Failure::computation)?;
    match command {
        Command::Screen(args) => screen::run(args, &library),
        Command::Check(args) => check::run(args, &library),
        Command::Reaction(args) => reaction::run(args, &library),
        Command::Couple(args) => couple::run(args, &library),
        Command::Liquor(args) => liquor::run(args, &library),
        Command::Show(args) => show::run(args, &library),
    }
}
