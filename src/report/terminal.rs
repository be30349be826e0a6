//! The summary on the terminal: what needs attention, and where the report is.

use std::fmt::Write;

use super::Subject;
use crate::screens::{Attention, Finding};

/// Width that the summary is wrapped to, columns.
const WIDTH: usize = 100;

/// The summary; colour by ANSI sequences when `colour` is set.
pub fn summary(subject: &Subject, colour: bool) -> String {
    let mut out = String::new();
    let scenario = subject.scenario;
    let reference = scenario.reference.as_deref().map(|r| format!(" ({r})")).unwrap_or_default();
    let _ = writeln!(out, "{}{reference}, {}", scenario.title, subject.date);
    let liquor = &subject.setting.liquor;
    let _ = writeln!(
        out,
        "pH {:.2}, {:.0} °C, ionic strength {:.2} mol/kg ({}), {} solids, {} findings",
        liquor.ph(),
        liquor.temperature().celsius(),
        liquor.ionic_strength,
        liquor.activity_model.name(),
        subject.setting.case.solids.len(),
        subject.findings.len()
    );
    for attention in [Attention::Act, Attention::Review] {
        let list: Vec<&Finding> =
            super::sections::leading(subject.findings).into_iter().filter(|f| f.attention == attention).collect();
        let _ = writeln!(out, "\n{} ({})", paint(attention.name().to_uppercase(), attention, colour), list.len());
        for finding in list {
            wrapped(&mut out, &finding.statement);
        }
    }
    let notes = subject.findings.iter().filter(|f| f.attention == Attention::Note).count();
    let _ = writeln!(out, "\n{notes} notes are in the report.");
    wrapped(&mut out, &subject.house.standing);
    out
}

fn paint(text: String, attention: Attention, colour: bool) -> String {
    match (colour, attention) {
        (false, _) => text,
        (true, Attention::Act) => format!("\x1b[1;31m{text}\x1b[0m"),
        (true, _) => format!("\x1b[1;33m{text}\x1b[0m"),
    }
}

/// One paragraph, two columns in, a dash before it.
fn wrapped(out: &mut String, text: &str) {
    let mut line = String::from("  - ");
    for word in text.split_whitespace() {
        if line.chars().count() + 1 + word.chars().count() > WIDTH {
            let _ = writeln!(out, "{}", line.trim_end());
            line = String::from("    ");
        }
        line.push_str(word);
        line.push(' ');
    }
    let _ = writeln!(out, "{}", line.trim_end());
}
