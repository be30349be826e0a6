//! One TOML table under reading: takes keys out one by one, reports what is wrong with each and what is left over.

use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use crate::quantity::Estimate;

use super::diagnostics::{Diagnostic, nearest};
use super::units::{self, Dimension};
use super::{Concentration, Placed, basis};

/// A key that the design knows and this version does not compute.
pub struct Later {
    pub key: &'static str,
    pub why: &'static str,
}

/// A table with its place and the name that messages use.
pub struct Table<'t> {
    pub name: &'static str,
    pub span: Range<usize>,
    entries: Vec<(Placed<String>, &'t Spanned<DeValue<'t>>)>,
}

impl<'t> Table<'t> {
    pub fn new(name: &'static str, span: Range<usize>, table: &'t DeTable<'t>) -> Self {
        let mut entries: Vec<_> = table
            .iter()
            .map(|(key, value)| (Placed { value: key.get_ref().to_string(), span: key.span() }, value))
            .collect();
        entries.sort_by_key(|(key, _)| key.span.start);
        Self { name, span, entries }
    }

    /// All entries in the order of the file.
    pub fn entries(self) -> Vec<(Placed<String>, &'t Spanned<DeValue<'t>>)> {
        self.entries
    }

    fn take(&mut self, key: &str) -> Option<&'t Spanned<DeValue<'t>>> {
        let place = self.entries.iter().position(|(k, _)| k.value == key)?;
        Some(self.entries.remove(place).1)
    }

    fn missing(&self, key: &str, problems: &mut Vec<Diagnostic>) {
        let line =
            Diagnostic::new(self.span.clone(), format!("{} needs `{key}`", self.name), format!("`{key}` is missing"));
        problems.push(line);
    }

    /// A value, when the key is there.
    pub fn value(&mut self, key: &str) -> Option<&'t Spanned<DeValue<'t>>> {
        self.take(key)
    }

    /// A text, when the key is there.
    pub fn text(&mut self, key: &str, problems: &mut Vec<Diagnostic>) -> Option<Placed<String>> {
        let value = self.take(key)?;
        text_of(key, value, problems)
    }

    /// A text that must be there and not be empty.
    pub fn required_text(&mut self, key: &str, problems: &mut Vec<Diagnostic>) -> Option<Placed<String>> {
        if !self.entries.iter().any(|(k, _)| k.value == key) {
            self.missing(key, problems);
            return None;
        }
        let text = self.text(key, problems)?;
        if text.value.trim().is_empty() {
            problems.push(Diagnostic::new(text.span, format!("`{key}` is empty"), "write a text here"));
            return None;
        }
        Some(text)
    }

    /// A quantity, when the key is there.
    pub fn quantity(
        &mut self,
        key: &str,
        expected: &[Dimension],
        problems: &mut Vec<Diagnostic>,
    ) -> Option<Placed<(Estimate, Dimension)>> {
        let value = self.take(key)?;
        quantity_of(key, value, expected, problems)
    }

    /// A quantity that must be there.
    pub fn required_quantity(
        &mut self,
        key: &str,
        expected: &[Dimension],
        problems: &mut Vec<Diagnostic>,
    ) -> Option<Placed<(Estimate, Dimension)>> {
        if !self.entries.iter().any(|(k, _)| k.value == key) {
            self.missing(key, problems);
            return None;
        }
        self.quantity(key, expected, problems)
    }

    /// Refuses what later versions bring and reports every key that is left.
    pub fn finish(self, known: &[&str], later: &[Later], problems: &mut Vec<Diagnostic>) {
        for (key, _) in self.entries {
            if let Some(refused) = later.iter().find(|l| l.key == key.value) {
                let message = format!("`{}` is not computed by this version", key.value);
                problems.push(
                    Diagnostic::new(key.span, message, refused.why).with_help("remove it: nothing in it would be used"),
                );
                continue;
            }
            let message = format!("`{}` is not a key of {}", key.value, self.name);
            let mut problem = Diagnostic::new(key.span, message, "unknown key");
            problem.help =
                Some(nearest(&key.value, known).map_or_else(
                    || format!("keys here: {}", known.join(", ")),
                    |word| format!("did you mean `{word}`?"),
                ));
            problems.push(problem);
        }
    }
}

/// A TOML string with its place.
pub fn text_of(key: &str, value: &Spanned<DeValue>, problems: &mut Vec<Diagnostic>) -> Option<Placed<String>> {
    match value.get_ref() {
        DeValue::String(text) => Some(Placed { value: text.to_string(), span: value.span() }),
        _ => {
            problems.push(Diagnostic::new(value.span(), format!("`{key}` is a text in quotes"), "not a text"));
            None
        }
    }
}

/// A quantity in quotes, or a bare number where no unit is asked for.
pub fn quantity_of(
    key: &str,
    value: &Spanned<DeValue>,
    expected: &[Dimension],
    problems: &mut Vec<Diagnostic>,
) -> Option<Placed<(Estimate, Dimension)>> {
    let span = value.span();
    let text = match value.get_ref() {
        DeValue::String(text) => text.to_string(),
        DeValue::Integer(number) => number.to_string(),
        DeValue::Float(number) => number.to_string(),
        _ => {
            problems.push(Diagnostic::new(
                span,
                format!("`{key}` is a quantity such as \"1.5 g/L\""),
                "not a quantity",
            ));
            return None;
        }
    };
    match units::quantity(&text, expected) {
        Ok((estimate, dimension)) => Some(Placed { value: (estimate, dimension), span }),
        Err(fault) => {
            let mut problem = Diagnostic::new(span, format!("`{key}`: {}", fault.message), "cannot be read");
            problem.help = fault.help;
            problems.push(problem);
            None
        }
    }
}

/// A positive concentration.
pub fn concentration_of(
    key: &str,
    value: &Spanned<DeValue>,
    problems: &mut Vec<Diagnostic>,
) -> Option<Placed<Concentration>> {
    let read = quantity_of(key, value, super::CONCENTRATIONS, problems)?;
    let (amount, dimension) = read.value;
    positive(key, amount.value, &read.span, problems)?;
    let basis = basis(dimension);
    if basis == super::ConcentrationBasis::MassFraction && amount.value >= 1.0 {
        problems.push(Diagnostic::new(
            read.span,
            format!("`{key}`: the solute cannot be the whole solution"),
            "100 % or more",
        ));
        return None;
    }
    Some(Placed { value: Concentration { amount, basis }, span: read.span })
}

/// Reports a value that is not above zero.
pub fn positive(key: &str, value: f64, span: &Range<usize>, problems: &mut Vec<Diagnostic>) -> Option<()> {
    if value > 0.0 {
        return Some(());
    }
    let problem = Diagnostic::new(span.clone(), format!("`{key}` must be above zero"), "zero or negative");
    problems.push(problem.with_help("leave out what is not there"));
    None
}
