//! A piece of a quantity in words that keeps its place, and what is wrong with it.

use std::ops::Range;

/// Part of a text and the byte of that text at which it begins.
#[derive(Debug, Clone, Copy)]
pub struct Piece<'t> {
    pub text: &'t str,
    pub start: usize,
}

impl<'t> Piece<'t> {
    pub fn whole(text: &'t str) -> Self {
        Self { text, start: 0 }.trim()
    }

    pub fn trim(self) -> Self {
        let left = self.text.trim_start();
        Self { text: left.trim_end(), start: self.start + self.text.len() - left.len() }
    }

    /// Before and after a byte, which lies between characters.
    pub fn split_at(self, byte: usize) -> (Self, Self) {
        let (before, after) = self.text.split_at(byte);
        (Self { text: before, start: self.start }.trim(), Self { text: after, start: self.start + byte }.trim())
    }

    /// Before and after the first of a mark.
    pub fn split_once(self, mark: &str) -> Option<(Self, Self)> {
        let at = self.text.find(mark)?;
        let (before, _) = self.split_at(at);
        let (_, after) = self.split_at(at + mark.len());
        Some((before, after))
    }

    pub fn fault(self, message: impl Into<String>, label: &'static str) -> Fault {
        Fault { part: Some(self.start..self.start + self.text.len()), message: message.into(), label, help: None }
    }
}

/// What is wrong with a quantity in words.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Fault {
    /// Bytes of the quantity's text; `None` is the whole of it.
    pub part: Option<Range<usize>>,
    pub message: String,
    /// Words beside the underlined part.
    pub label: &'static str,
    pub help: Option<String>,
}

impl Fault {
    /// A fault of the quantity as a whole.
    pub fn of_all(message: impl Into<String>, label: &'static str) -> Self {
        Self { part: None, message: message.into(), label, help: None }
    }

    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// The fault as one sentence, for a place that has no file to point into.
    pub fn sentence(&self) -> String {
        match &self.help {
            Some(help) => format!("{}; {help}", self.message),
            None => self.message.clone(),
        }
    }
}
