//! `halfcell screen`: the main job.

use std::io::IsTerminal;
use std::path::PathBuf;
use std::process::ExitCode;

use clap::{Args, ValueEnum};

use super::output::{self, Failure};
use crate::case::Case;
use crate::library::Library;
use crate::report::{self, House, Subject, json, pdf, terminal};
use crate::scenario::Scenario;
use crate::screens::{self, Attention, Finding, Setting};

/// The demonstration that runs when no scenario is named.
pub const DEMONSTRATION: &str = include_str!("../../templates/scenarios/chloride-strip.toml");
const DEMONSTRATION_NAME: &str = "chloride-strip.toml (demonstration)";

#[derive(Debug, Args)]
pub struct Screen {
    /// Scenario file (`-`: standard input); left out: the embedded demonstration
    scenario: Option<String>,
    /// Folder for the report files
    #[arg(long, value_name = "DIR", default_value = "reports")]
    out: PathBuf,
    /// Report files to write
    #[arg(long, value_name = "FORMATS", value_delimiter = ',', default_value = "pdf,json")]
    write: Vec<Format>,
    /// Print the JSON report to standard output and write no files
    #[arg(long)]
    json: bool,
    /// Exit with status 1 when a finding asks for this much attention
    #[arg(long, value_name = "ATTENTION")]
    stop_on: Option<StopOn>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    Pdf,
    Json,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum StopOn {
    Act,
    Review,
}

pub fn run(args: &Screen, library: &Library) -> Result<ExitCode, Failure> {
    let (name, text) = match &args.scenario {
        Some(path) => (path.as_str(), output::read_text(path)?),
        None => (DEMONSTRATION_NAME, DEMONSTRATION.to_owned()),
    };
    let scenario = Scenario::parse(name, &text).map_err(Failure::Scenario)?;
    let case = Case::resolve(&scenario, library).map_err(Failure::Scenario)?;
    let setting = Setting::new(&case).map_err(Failure::computation)?;
    let findings = screens::run(&setting);
    let house = House::embedded().map_err(Failure::computation)?;
    let date = scenario.date.unwrap_or_else(|| chrono::Local::now().date_naive());
    let subject = Subject { scenario: &scenario, setting: &setting, findings: &findings, house: &house, date };
    if args.json {
        output::print_json(&json::report(&subject))?;
    } else {
        let written = write_files(args, &subject)?;
        let colour = output::colour_on(&std::io::stdout());
        let mut summary = terminal::summary(&subject, colour);
        for path in written {
            summary.push_str(&format!("Report: {}\n", path.display()));
        }
        if args.scenario.is_none() && std::io::stdout().is_terminal() {
            summary.push_str("This was the demonstration; name a scenario file to screen your own.\n");
        }
        output::print(&summary)?;
    }
    Ok(status(args.stop_on, &findings))
}

fn write_files(args: &Screen, subject: &Subject) -> Result<Vec<PathBuf>, Failure> {
    std::fs::create_dir_all(&args.out).map_err(|e| Failure::input(format!("{}: {e}", args.out.display())))?;
    let stem = file_stem(subject.scenario);
    let mut written = Vec::new();
    for format in [Format::Pdf, Format::Json] {
        if !args.write.contains(&format) {
            continue;
        }
        let (extension, bytes) = match format {
            Format::Pdf => ("pdf", pdf::write(&report::compose(subject)).map_err(Failure::computation)?),
            Format::Json => ("json", format!("{:#}\n", json::report(subject)).into_bytes()),
        };
        let path = args.out.join(format!("{stem}.{extension}"));
        output::write_whole(&path, &bytes)?;
        written.push(path);
    }
    Ok(written)
}

/// Reference (or title) and revision as a file name.
fn file_stem(scenario: &Scenario) -> String {
    let words = [scenario.reference.as_deref().unwrap_or(&scenario.title), scenario.revision.as_deref().unwrap_or("")];
    let mut stem = String::new();
    for c in words.join("-").chars() {
        match c {
            c if c.is_alphanumeric() || c == '_' => stem.push(c),
            _ if stem.ends_with('-') => {}
            _ => stem.push('-'),
        }
    }
    let stem = stem.trim_matches('-').chars().take(80).collect::<String>();
    if stem.is_empty() { "report".into() } else { stem }
}

fn status(stop_on: Option<StopOn>, findings: &[Finding]) -> ExitCode {
    let bound = match stop_on {
        None => return ExitCode::SUCCESS,
        Some(StopOn::Act) => Attention::Act,
        Some(StopOn::Review) => Attention::Review,
    };
    ExitCode::from(u8::from(findings.iter().any(|f| f.attention <= bound)))
}
