//! Text that is not TOML: what the parser says, in the words of someone who writes a scenario.

use std::ops::Range;

use toml::de::Error;

use super::diagnostics::{Diagnostic, line_of};

/// Beginnings of the parser's messages after which the rest of the table is still read as it was meant.
const CONFINED: &[&str] = &[
    "string values must be quoted",
    "invalid unquoted key",
    "unexpected key or value",
    "missing escaped value",
    "invalid date",
    "invalid float",
];

/// Whether the mistakes leave the structure of the file standing, so that its contents can be checked as well.
pub fn is_confined(errors: &[Error]) -> bool {
    errors.iter().all(|error| CONFINED.iter().any(|known| error.message().starts_with(known)))
}

/// One diagnostic for each line that cannot be read; the parser may report several characters of it.
pub fn diagnostics(text: &str, errors: &[Error]) -> Vec<Diagnostic> {
    let mut list: Vec<Diagnostic> = errors.iter().map(|error| diagnostic(text, error)).collect();
    list.sort_by_key(|problem| problem.span.start);
    list.dedup_by_key(|problem| line_of(text, problem.span.start));
    list
}

fn diagnostic(text: &str, error: &Error) -> Diagnostic {
    let span = error.span().unwrap_or(0..0);
    let said = error.message().replace('\n', ", ");
    let line = line_at(text, &span);
    let problem = Diagnostic::new(span.clone(), format!("not valid TOML: {said}"), "here");
    let typographic = line.contains(['“', '”', '„', '‘', '’']);
    let help = if line.trim_start().starts_with("//") {
        "a comment begins with #"
    } else if said.starts_with("string values must be quoted") && typographic {
        "use straight quotes: \"…\""
    } else if said.starts_with("string values must be quoted") {
        "texts and quantities stand in quotes, such as \"45 degC\""
    } else if said.starts_with("invalid unquoted key") {
        "a species on the left of `=` stands in quotes, such as \"Fe^3+\""
    } else if said.starts_with("duplicate key") {
        "write it once; repeated sections have double brackets, such as [[metal]]"
    } else if said.starts_with("unexpected key or value") && line.contains(',') {
        "write a decimal point, and one entry to a line"
    } else if said.starts_with("invalid basic string") || said.starts_with("invalid literal string") {
        "close the quotes on the same line"
    } else if said.starts_with("key with no value") {
        "an entry is written key = \"value\""
    } else if said.starts_with("invalid date") || said.starts_with("invalid float") && line.contains("date") {
        "a date is written 2026-11-30"
    } else {
        return problem;
    };
    problem.with_help(help)
}

/// The line in which a span begins.
fn line_at<'t>(text: &'t str, span: &Range<usize>) -> &'t str {
    text.lines().nth(line_of(text, span.start) - 1).unwrap_or_default()
}
