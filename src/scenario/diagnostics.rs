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
        list.sort_by_key(|d| d.span.start);
        Self { source: source.clone(), list }
    }

    pub fn list(&self) -> &[Diagnostic] {
        &self.list
    }

    /// Line of a mistake, counted from 1.
    pub fn line(&self, diagnostic: &Diagnostic) -> usize {
        let end = floor(&self.source.text, diagnostic.span.start);
        self.source.text[..end].matches('\n').count() + 1
    }

    /// The messages as text, with ANSI colours when `colour` is set.
    pub fn render(&self, colour: bool) -> String {
        let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
        let mut out = String::new();
        for diagnostic in &self.list {
            let text = &self.source.text;
            let start = floor(text, diagnostic.span.start);
            let end = floor(text, diagnostic.span.end).max(start);
            let snippet = Snippet::source(text.as_str())
                .path(self.source.name.as_str())
                .annotation(AnnotationKind::Primary.span(start..end).label(diagnostic.label.as_str()));
            let mut group: Group = Level::ERROR.primary_title(diagnostic.message.as_str()).element(snippet);
            if let Some(help) = &diagnostic.help {
                group = group.element(Level::HELP.message(help.as_str()));
            }
            out.push_str(&renderer.render(&[group]));
            out.push_str("\n\n");
        }
        let count = self.list.len();
        out.push_str(&format!("{}: {count} {}", self.source.name, if count == 1 { "mistake" } else { "mistakes" }));
        out
    }
}

/// The nearest place at or before `at` that lies between characters.
fn floor(text: &str, at: usize) -> usize {
    let mut at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

/// The candidate most like `word`, when one is like enough to be meant.
pub fn nearest<'a>(word: &str, candidates: &[&'a str]) -> Option<&'a str> {
    candidates
        .iter()
        .map(|candidate| (strsim::jaro_winkler(&word.to_lowercase(), &candidate.to_lowercase()), *candidate))
        .filter(|(likeness, _)| *likeness > 0.7)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, candidate)| candidate)
}
