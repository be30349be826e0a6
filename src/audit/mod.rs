//! The library checked against itself and against published values: what passes, what differs on purpose, what fails.
//!
//! A rule is a function from the library to [`Check`]s. A check that does not hold is explained only when the record (or the
//! row of the check table) says why.

mod published;
mod records;
mod tables;
mod temperature;

use crate::library::{Library, LibraryError};
use crate::thermo::water::RangeError;

/// What is checked.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Rule {
    /// G = H − TS against the entropies of the elements.
    Closure,
    /// A number without its uncertainty, or with one that cannot be.
    Uncertainty,
    /// A source key that no citation stands behind.
    Source,
    /// One species written twice.
    Duplicate,
    /// A solid's dissolution closes in every element and in charge.
    Dissolution,
    /// G(T) finite, and smooth from degree to degree.
    Temperature,
    /// Standard potentials against published tables.
    Potential,
    /// log K against published tables.
    Constant,
    /// Ions and solutes against published tables.
    Ion,
    /// Heat content of solids and gases against published tables.
    Heat,
    /// Alloys sum to 100 %.
    Composition,
    /// Exposure limits agree in ppm and mg/m³, and stand in order.
    Limit,
    /// Names in one table exist in the other.
    Reference,
    /// A reagent's molar mass agrees with what it delivers, which carries no net charge.
    Reagent,
}

impl Rule {
    pub const ALL: [Self; 14] = [
        Self::Closure,
        Self::Uncertainty,
        Self::Source,
        Self::Duplicate,
        Self::Dissolution,
        Self::Temperature,
        Self::Potential,
        Self::Constant,
        Self::Ion,
        Self::Heat,
        Self::Composition,
        Self::Limit,
        Self::Reference,
        Self::Reagent,
    ];

    pub fn words(self) -> &'static str {
        match self {
            Self::Closure => "G = H − TS closes",
            Self::Uncertainty => "uncertainty is given",
            Self::Source => "source is cited",
            Self::Duplicate => "no species twice",
            Self::Dissolution => "solids' reactions balance",
            Self::Temperature => "G(T) finite and smooth, 0–300 °C",
            Self::Potential => "standard potentials",
            Self::Constant => "log K, log β, pKa",
            Self::Ion => "ions and solutes",
            Self::Heat => "G(T) of solids and gases",
            Self::Composition => "alloys sum to 100 %",
            Self::Limit => "limits agree and stand in order",
            Self::Reference => "names exist",
            Self::Reagent => "reagents' mass and charge",
        }
    }
}

/// How a check came out.
#[derive(Debug, Clone, PartialEq)]
pub enum Outcome {
    Passed,
    /// It does not hold, and the record says why.
    Explained(String),
    Failed,
}

/// One rule on one subject.
#[derive(Debug, Clone, PartialEq)]
pub struct Check {
    pub rule: Rule,
    pub subject: String,
    pub outcome: Outcome,
    /// What was found, against what.
    pub detail: String,
}

impl Check {
    /// Passed when `holds`; else explained when there is an explanation, else failed.
    fn new(rule: Rule, subject: impl Into<String>, holds: bool, detail: String, explained: Option<&String>) -> Self {
        let outcome = match (holds, explained) {
            (true, _) => Outcome::Passed,
            (false, Some(why)) => Outcome::Explained(why.clone()),
            (false, None) => Outcome::Failed,
        };
        Self { rule, subject: subject.into(), outcome, detail }
    }
}

/// Why the audit itself could not be done.
#[derive(Debug, thiserror::Error)]
pub enum AuditError {
    #[error(transparent)]
    Library(#[from] LibraryError),
    #[error(transparent)]
    Range(#[from] RangeError),
}

/// All checks, in the order of [`Rule::ALL`].
///
/// # Errors
/// [`AuditError`] when the check tables cannot be read.
pub fn run(library: &Library) -> Result<Vec<Check>, AuditError> {
    let published = Library::checks()?;
    let mut checks = records::closure(library);
    checks.extend(records::uncertainty(library));
    checks.extend(records::sources(library));
    checks.extend(records::duplicates(library));
    checks.extend(records::dissolution(library));
    checks.extend(temperature::smooth(library)?);
    checks.extend(published::potentials(library, &published)?);
    checks.extend(published::constants(library, &published)?);
    checks.extend(published::ions(library, &published));
    checks.extend(temperature::heat(library, &published)?);
    checks.extend(tables::compositions(library));
    checks.extend(tables::limits(library));
    checks.extend(tables::references(library));
    checks.extend(tables::reagents(library));
    checks.sort_by_key(|c| c.rule);
    Ok(checks)
}
