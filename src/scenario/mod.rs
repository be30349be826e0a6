//! TOML text → [`Scenario`]: checked, in SI, every value with its place in the file. It knows nothing of chemistry.

mod diagnostics;
mod limits;
mod liquor;
mod piece;
mod quantity_text;
mod read;
mod syntax;
mod table;
#[cfg(test)]
mod tests;
mod units;

use std::ops::Range;

use chrono::NaiveDate;

use crate::quantity::{Estimate, Kelvin};

pub use diagnostics::{Diagnostic, Diagnostics, Source, nearest};
use piece::{Fault, Piece};
use quantity_text::Reading;
use units::Dimension;

/// A value and the bytes of the source that it was read from.
#[derive(Debug, Clone, PartialEq)]
pub struct Placed<T> {
    pub value: T,
    pub span: Range<usize>,
}

/// What a user wrote: one liquor, what is put in it, what is wanted of it.
#[derive(Debug, Clone)]
pub struct Scenario {
    pub source: Source,
    pub title: String,
    pub reference: Option<String>,
    pub revision: Option<String>,
    pub prepared_by: Option<String>,
    pub date: Option<NaiveDate>,
    pub liquor: LiquorSpec,
    pub oxidants: Vec<OxidantSpec>,
    /// Metals and minerals in the order of the file.
    pub solids: Vec<SolidSpec>,
    pub contacts: Vec<ContactSpec>,
}

/// `[liquor]`
#[derive(Debug, Clone)]
pub struct LiquorSpec {
    pub ph: Placed<Estimate>,
    /// K
    pub temperature: Placed<Estimate>,
    /// m³
    pub volume: Option<Placed<Estimate>>,
    /// kg of ore per m³ of liquor
    pub pulp_density: Option<Placed<Estimate>>,
    pub potential: Option<Placed<MeasuredPotential>>,
    pub dissolved: Vec<(Placed<String>, Placed<Concentration>)>,
    /// bar
    pub gas: Vec<(Placed<String>, Placed<Estimate>)>,
}

/// A potential read against a reference electrode.
#[derive(Debug, Clone, PartialEq)]
pub struct MeasuredPotential {
    /// V against the electrode named.
    pub volts: Estimate,
    /// Text after `vs`; `SHE` when there is none.
    pub electrode: Placed<String>,
}

/// What a concentration counts and per what.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ConcentrationBasis {
    /// mol/m³ of liquor
    AmountPerVolume,
    /// mol/kg of water
    Molality,
    /// kg/m³ of liquor
    MassPerVolume,
    /// kg/kg of liquor
    MassFraction,
}

/// A concentration in the SI unit of its basis.
#[derive(Debug, Clone, PartialEq)]
pub struct Concentration {
    pub amount: Estimate,
    pub basis: ConcentrationBasis,
}

/// `[[oxidant]]`
#[derive(Debug, Clone)]
pub struct OxidantSpec {
    pub name: Placed<String>,
    pub species: Placed<String>,
    pub amount: Placed<Concentration>,
}

/// Which section a solid stands in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SolidKind {
    Metal,
    Mineral,
}

/// What is asked of a solid.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Duty {
    Dissolve,
    Resist,
}

/// How much of a solid there is.
#[derive(Debug, Clone, PartialEq)]
pub enum SolidAmount {
    /// kg per m³ of liquor
    PerLiquor(Estimate),
    /// kg per kg of ore; [`LiquorSpec::pulp_density`] gives it a meaning
    PerOre(Estimate),
}

/// `[[metal]]` or `[[mineral]]`
#[derive(Debug, Clone)]
pub struct SolidSpec {
    pub kind: SolidKind,
    pub name: Placed<String>,
    pub material: Placed<String>,
    pub duty: Placed<Duty>,
    pub amount: Option<Placed<SolidAmount>>,
    /// m²
    pub area: Option<Placed<Estimate>>,
}

/// `[[contact]]`
#[derive(Debug, Clone)]
pub struct ContactSpec {
    pub name: Placed<String>,
    pub metals: Vec<Placed<String>>,
}

impl Scenario {
    /// Reads and checks a scenario; `name` is what messages call the file.
    ///
    /// # Errors
    /// [`Diagnostics`] with every mistake at its place.
    pub fn parse(name: &str, text: &str) -> Result<Self, Diagnostics> {
        read::scenario(Source { name: name.to_owned(), text: text.to_owned() })
    }
}

/// A temperature in words (`60 degC`), as commands take it.
///
/// # Errors
/// A sentence that says what was expected.
pub fn temperature(text: &str) -> Result<Kelvin, String> {
    let reading = in_words(text, &[Dimension::Temperature], limits::temperature)?;
    Ok(Kelvin(reading.estimate.value))
}

/// A concentration in words (`1 mol/L`), as commands take it.
///
/// # Errors
/// A sentence that says what was expected.
pub fn concentration(text: &str) -> Result<Concentration, String> {
    let reading = in_words(text, CONCENTRATIONS, limits::concentration)?;
    Ok(Concentration { amount: reading.estimate, basis: basis(reading.dimension) })
}

fn in_words(text: &str, expected: &[Dimension], limit: fn(&Reading) -> Result<(), Fault>) -> Result<Reading, String> {
    let reading = quantity_text::read(Piece::whole(text), expected);
    reading.and_then(|reading| limit(&reading).map(|()| reading)).map_err(|fault| fault.sentence())
}

const CONCENTRATIONS: &[Dimension] =
    &[Dimension::AmountPerVolume, Dimension::Molality, Dimension::MassPerVolume, Dimension::MassFraction];

fn basis(dimension: Dimension) -> ConcentrationBasis {
    match dimension {
        Dimension::AmountPerVolume => ConcentrationBasis::AmountPerVolume,
        Dimension::Molality => ConcentrationBasis::Molality,
        Dimension::MassPerVolume => ConcentrationBasis::MassPerVolume,
        _ => ConcentrationBasis::MassFraction,
    }
}
