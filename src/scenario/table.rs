//! One TOML table under reading: takes keys out one by one and reports what is wrong with each at its place.

use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use crate::quantity::Estimate;

use super::diagnostics::{Diagnostic, nearest, suggestion};
use super::piece::{Fault, Piece};
use super::quantity_text::{self, Reading};
use super::units::{self, Dimension};
use super::{CONCENTRATIONS, Concentration, Placed, basis, limits};

/// A key or section that the design knows and this version does not compute.
pub struct Later {
    pub key: &'static str,
    /// Why it is refused and what to give instead.
    pub why: &'static str,
}

/// What to do with it.
pub const REMOVE: &str = "remove it; nothing in it would be computed";

/// The words that may stand in one kind of table.
pub struct Words {
    /// As messages call the table: `[liquor]`.
    pub table: &'static str,
    pub keys: &'static [&'static str],
    pub later: &'static [Later],
}

/// The text of the file and the mistakes found in it so far.
pub struct Reader<'s> {
    text: &'s str,
    pub problems: Vec<Diagnostic>,
}

impl<'s> Reader<'s> {
    pub fn new(text: &'s str) -> Self {
        Self { text, problems: Vec::new() }
    }

    pub fn report(&mut self, problem: Diagnostic) {
        self.problems.push(problem);
    }

    /// Reports what should stand in the file and does not, below its last line.
    pub fn report_at_end(&mut self, message: String, label: &str) {
        let end = self.text.trim_end().len();
        self.report(Diagnostic::new(end..end, message, label));
    }

    /// Reports a fault in a text that stands at `span`, underlining the faulty part alone where that can be placed.
    pub fn fault(&mut self, key: &str, span: &Range<usize>, text: &str, fault: Fault) {
        let place = match (fault.part, self.inside(span, text)) {
            (Some(part), Some(start)) if !part.is_empty() => start + part.start..start + part.end,
            _ => span.clone(),
        };
        // A limit names its quantity itself: `pH 41 is outside …`.
        let message = match fault.message.strip_prefix(key) {
            Some(rest) if rest.starts_with(' ') => fault.message,
            _ => format!("`{key}`: {}", fault.message),
        };
        let mut problem = Diagnostic::new(place, message, fault.label);
        problem.help = fault.help;
        self.report(problem);
    }

    /// Where the text of a string begins in the file, unless escapes make the two differ.
    pub fn inside(&self, span: &Range<usize>, text: &str) -> Option<usize> {
        let raw = self.text.get(span.clone())?;
        let body = raw.get(1..raw.len().checked_sub(1)?)?;
        (body == text).then_some(span.start + 1)
    }

    /// A text of one line in quotes, blanks at its ends dropped.
    pub fn text_of(&mut self, key: &str, value: &Spanned<DeValue>) -> Option<Placed<String>> {
        let span = value.span();
        let DeValue::String(text) = value.get_ref() else {
            self.report(
                Diagnostic::new(span, format!("`{key}` is a text in quotes"), "not a text")
                    .with_help(format!("write {key} = \"…\"")),
            );
            return None;
        };
        let text = text.trim();
        if text.is_empty() {
            self.report(Diagnostic::new(span, format!("`{key}` is empty"), "write a text here"));
            return None;
        }
        if text.contains(char::is_control) {
            let message = format!("`{key}` holds a line break or another control character");
            self.report(Diagnostic::new(span, message, "one line of plain text belongs here"));
            return None;
        }
        Some(Placed { value: text.to_owned(), span })
    }

    /// A quantity in quotes, or a bare number where no unit is asked for.
    pub fn quantity_of(
        &mut self,
        key: &str,
        value: &Spanned<DeValue>,
        expected: &[Dimension],
        limit: fn(&Reading) -> Result<(), Fault>,
    ) -> Option<Placed<Reading>> {
        let span = value.span();
        let text = match value.get_ref() {
            DeValue::String(text) => text.to_string(),
            DeValue::Integer(number) => number.to_string(),
            DeValue::Float(number) => number.to_string(),
            _ => {
                let problem = Diagnostic::new(span, format!("`{key}` is a quantity in quotes"), "not a quantity");
                self.report(problem.with_help(units::wanted(expected)));
                return None;
            }
        };
        let read = quantity_text::read(Piece::whole(&text), expected);
        match read.and_then(|reading| limit(&reading).map(|()| reading)) {
            Ok(reading) => Some(Placed { value: reading, span }),
            Err(fault) => {
                self.fault(key, &span, &text, fault);
                None
            }
        }
    }

    /// A concentration above zero.
    pub fn concentration_of(&mut self, key: &str, value: &Spanned<DeValue>) -> Option<Placed<Concentration>> {
        let read = self.quantity_of(key, value, CONCENTRATIONS, limits::concentration)?;
        let value = Concentration { amount: read.value.estimate, basis: basis(read.value.dimension) };
        Some(Placed { value, span: read.span })
    }

    /// A value that must be a table.
    pub fn table_of<'t>(&mut self, name: &str, value: &'t Spanned<DeValue<'t>>) -> Option<&'t DeTable<'t>> {
        if let DeValue::Table(table) = value.get_ref() {
            return Some(table);
        }
        self.report(Diagnostic::new(value.span(), format!("{name} is one table"), "not a table"));
        None
    }
}

type Entry<'t> = (Placed<String>, &'t Spanned<DeValue<'t>>);

/// The entries of a table in the order of the file.
pub fn entries<'t>(table: &'t DeTable<'t>) -> Vec<Entry<'t>> {
    let mut entries: Vec<_> = table
        .iter()
        .map(|(key, value)| (Placed { value: key.get_ref().to_string(), span: key.span() }, value))
        .collect();
    entries.sort_by_key(|(key, _)| key.span.start);
    entries
}

/// A table whose keys are known.
pub struct Table<'t> {
    name: &'static str,
    span: Range<usize>,
    entries: Vec<Entry<'t>>,
}

impl<'t> Table<'t> {
    /// Reports every key that does not belong. A misspelt key is then read as the one that was meant, so that a
    /// mistake in its value is reported at once and the key is not also called missing.
    pub fn open(words: &Words, span: Range<usize>, table: &'t DeTable<'t>, reader: &mut Reader) -> Self {
        let (mut known, unknown): (Vec<_>, Vec<_>) =
            entries(table).into_iter().partition(|(key, _)| words.keys.contains(&key.value.as_str()));
        for (mut key, value) in unknown {
            if let Some(refused) = words.later.iter().find(|later| later.key == key.value) {
                let message = format!("`{}` is not computed by this version", key.value);
                let problem = Diagnostic::new(key.span, message, refused.why);
                reader.report(problem.with_help(REMOVE));
                continue;
            }
            let message = format!("`{}` is not a key of {}", key.value, words.table);
            reader.report(
                Diagnostic::new(key.span.clone(), message, "unknown key")
                    .with_help(suggestion(&key.value, words.keys, "keys")),
            );
            let Some(meant) = nearest(&key.value, words.keys) else {
                continue;
            };
            if !known.iter().any(|(other, _)| other.value == meant) {
                key.value = meant.to_owned();
                known.push((key, value));
            }
        }
        Self { name: words.table, span, entries: known }
    }

    /// A value, when the key is there.
    pub fn optional(&mut self, key: &str) -> Option<&'t Spanned<DeValue<'t>>> {
        let place = self.entries.iter().position(|(entry, _)| entry.value == key)?;
        Some(self.entries.remove(place).1)
    }

    /// A value that must be there.
    pub fn required(&mut self, key: &str, reader: &mut Reader) -> Option<&'t Spanned<DeValue<'t>>> {
        let value = self.optional(key);
        if value.is_none() {
            let message = format!("{} needs `{key}`", self.name);
            reader.report(Diagnostic::new(self.span.clone(), message, format!("`{key}` is missing")));
        }
        value
    }

    pub fn optional_text(&mut self, key: &str, reader: &mut Reader) -> Option<Placed<String>> {
        let value = self.optional(key)?;
        reader.text_of(key, value)
    }

    pub fn required_text(&mut self, key: &str, reader: &mut Reader) -> Option<Placed<String>> {
        let value = self.required(key, reader)?;
        reader.text_of(key, value)
    }

    /// A quantity above zero, when the key is there.
    pub fn optional_positive(
        &mut self,
        key: &str,
        dimension: Dimension,
        reader: &mut Reader,
    ) -> Option<Placed<Estimate>> {
        let value = self.optional(key)?;
        reader.quantity_of(key, value, &[dimension], limits::positive).map(estimate)
    }
}

/// The value of a reading and its doubt.
pub fn estimate(read: Placed<Reading>) -> Placed<Estimate> {
    Placed { value: read.value.estimate, span: read.span }
}
