//! Mistakes in a scenario file, shown as a compiler would: place, underlined text, what was expected.

use std::ops::Range;

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

/// The text of a scenario file and the name by which messages call it.
#[derive(Debug, Clone)]
pub struct Source {
    pub name: String,
    pub text: String,
}

/// One mistake at one place.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// Bytes of the source.
    pub span: Range<usize>,
    pub message: String,
    /// Words beside the underlined text.
    pub label: String,
    pub help: Option<String>,
}

impl Diagnostic {
    pub fn new(span: Range<usize>, message: impl Into<String>, label: impl Into<String>) -> Self {
        Self { span, message: message.into(), label: label.into(), help: None }
    }

    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}

/// All mistakes of one file.
#[derive(Debug, Clone)]
pub struct Diagnostics {
    source: Source,
    list: Vec<Diagnostic>,
}

impl Diagnostics {
    /// In the order of the file.
    pub fn new(source: &Source, mut list: Vec<Diagnostic>) -> Self {
        list.sort_by_key(|diagnostic| diagnostic.span.start);
        Self { source: source.clone(), list }
    }

    pub fn list(&self) -> &[Diagnostic] {
        &self.list
    }

    /// Line of a mistake, counted from 1.
    pub fn line(&self, diagnostic: &Diagnostic) -> usize {
        line_of(&self.source.text, diagnostic.span.start)
    }

    /// The messages as text, with ANSI colours when `colour` is set.
    pub fn render(&self, colour: bool) -> String {
        let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
        let mut out = String::new();
        for diagnostic in &self.list {
            out.push_str(&renderer.render(&[self.group(diagnostic)]));
            out.push_str("\n\n");
        }
        let count = self.list.len();
        let noun = if count == 1 { "mistake" } else { "mistakes" };
        out.push_str(&format!("{}: {count} {noun}", self.source.name));
        out
    }

    fn group<'d>(&'d self, diagnostic: &'d Diagnostic) -> Group<'d> {
        let text = self.source.text.as_str();
        let start = floor(text, diagnostic.span.start);
        let end = floor(text, diagnostic.span.end).max(start);
        let annotation = AnnotationKind::Primary.span(start..end).label(diagnostic.label.as_str());
        let snippet = Snippet::source(text).path(self.source.name.as_str()).annotation(annotation);
        let group = Level::ERROR.primary_title(diagnostic.message.as_str()).element(snippet);
        match &diagnostic.help {
            Some(help) => group.element(Level::HELP.message(help.as_str())),
            None => group,
        }
    }
}

/// Line on which a byte of the text stands, counted from 1.
pub fn line_of(text: &str, byte: usize) -> usize {
    text[..floor(text, byte)].matches('\n').count() + 1
}

/// The nearest place at or before `byte` that lies between characters.
fn floor(text: &str, byte: usize) -> usize {
    let mut byte = byte.min(text.len());
    while !text.is_char_boundary(byte) {
        byte -= 1;
    }
    byte
}

/// The candidate most like `word`, when one is like enough to be meant.
///
/// Likeness is that of Jaro and Winkler, letter case aside; the threshold lets through two slips in a word of eight
/// letters and a shortened word, and no unrelated one. A word that holds a candidate of four letters or more, such as
/// `wetted_area` or `ore_amount`, is like it too.
pub fn nearest<'c>(word: &str, candidates: &[&'c str]) -> Option<&'c str> {
    let word = word.to_lowercase();
    let likeness = |candidate: &str| {
        let candidate = candidate.to_lowercase();
        let is_part = candidate.len() >= 4 && word.contains(&candidate);
        strsim::jaro_winkler(&word, &candidate).max(if is_part { 0.85 } else { 0.0 })
    };
    candidates
        .iter()
        .map(|candidate| (likeness(candidate), *candidate))
        .filter(|(likeness, _)| *likeness >= 0.8)
        .max_by(|one, other| one.0.total_cmp(&other.0))
        .map(|(_, candidate)| candidate)
}

/// What to say of an unknown word: the one that was meant, or all that are known here.
pub fn suggestion(word: &str, known: &[&str], plural: &str) -> String {
    match nearest(word, known) {
        Some(meant) => format!("did you mean `{meant}`?"),
        None => format!("{plural} here: {}", known.join(", ")),
    }
}
