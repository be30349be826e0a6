//! The units that a scenario may use, each with its way to SI. The one place where units are converted.

use crate::quantity::ATMOSPHERE_BAR;

use super::diagnostics::nearest;
use super::piece::{Fault, Piece};

/// What kind of quantity is expected; each has its SI unit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dimension {
    /// No unit (pH).
    Number,
    /// K
    Temperature,
    /// m³
    Volume,
    /// m²
    Area,
    /// V
    Potential,
    /// bar
    Pressure,
    /// mol/m³
    AmountPerVolume,
    /// mol/kg of water
    Molality,
    /// kg/m³
    MassPerVolume,
    /// kg/kg
    MassFraction,
}

impl Dimension {
    fn noun(self) -> &'static str {
        match self {
            Self::Number => "plain number",
            Self::Temperature => "temperature",
            Self::Volume => "volume",
            Self::Area => "area",
            Self::Potential => "potential",
            Self::Pressure => "pressure",
            Self::AmountPerVolume => "amount per volume",
            Self::Molality => "amount per mass of water",
            Self::MassPerVolume => "mass per volume",
            Self::MassFraction => "share by mass",
        }
    }

    /// The units that a message offers.
    fn usual_units(self) -> &'static str {
        match self {
            Self::Number => "none",
            Self::Temperature => "degC, K, degF",
            Self::Volume => "m3, L, mL",
            Self::Area => "m2, dm2, cm2, mm2",
            Self::Potential => "V, mV",
            Self::Pressure => "bar, mbar, atm, kPa, Pa, MPa",
            Self::AmountPerVolume => "mol/L, mmol/L, umol/L, mol/m3",
            Self::Molality => "mol/kg, mmol/kg",
            Self::MassPerVolume => "g/L, mg/L, ug/L, kg/m3, g/m3",
            Self::MassFraction => "%, g/t, kg/t, ppm, ppb",
        }
    }
}

/// A unit; SI = value · factor + offset.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Unit {
    pub name: &'static str,
    pub dimension: Dimension,
    pub factor: f64,
    pub offset: f64,
}

impl Unit {
    const fn new(name: &'static str, dimension: Dimension, factor: f64) -> Self {
        Self { name, dimension, factor, offset: 0.0 }
    }

    pub fn to_si(self, value: f64) -> f64 {
        value * self.factor + self.offset
    }
}

/// Label of a unit that is in no table.
pub const UNKNOWN: &str = "unknown unit";

/// A number without a unit.
pub const NO_UNIT: Unit = Unit::new("", Dimension::Number, 1.0);

/// Names as [`plain`] leaves them. SI Brochure (BIPM, 9th edition, 2019); °F = 9/5 °C + 32.
pub const UNITS: &[Unit] = &[
    Unit::new("K", Dimension::Temperature, 1.0),
    Unit { offset: 273.15, ..Unit::new("degC", Dimension::Temperature, 1.0) },
    Unit { offset: 273.15 - 32.0 / 1.8, ..Unit::new("degF", Dimension::Temperature, 1.0 / 1.8) },
    Unit::new("m3", Dimension::Volume, 1.0),
    Unit::new("dm3", Dimension::Volume, 1e-3),
    Unit::new("cm3", Dimension::Volume, 1e-6),
    Unit::new("L", Dimension::Volume, 1e-3),
    Unit::new("mL", Dimension::Volume, 1e-6),
    Unit::new("m2", Dimension::Area, 1.0),
    Unit::new("dm2", Dimension::Area, 1e-2),
    Unit::new("cm2", Dimension::Area, 1e-4),
    Unit::new("mm2", Dimension::Area, 1e-6),
    Unit::new("V", Dimension::Potential, 1.0),
    Unit::new("mV", Dimension::Potential, 1e-3),
    Unit::new("bar", Dimension::Pressure, 1.0),
    Unit::new("mbar", Dimension::Pressure, 1e-3),
    Unit::new("atm", Dimension::Pressure, ATMOSPHERE_BAR),
    Unit::new("Pa", Dimension::Pressure, 1e-5),
    Unit::new("kPa", Dimension::Pressure, 1e-2),
    Unit::new("MPa", Dimension::Pressure, 10.0),
    Unit::new("mol/L", Dimension::AmountPerVolume, 1e3),
    Unit::new("mmol/L", Dimension::AmountPerVolume, 1.0),
    Unit::new("umol/L", Dimension::AmountPerVolume, 1e-3),
    Unit::new("mol/dm3", Dimension::AmountPerVolume, 1e3),
    Unit::new("mol/m3", Dimension::AmountPerVolume, 1.0),
    Unit::new("kmol/m3", Dimension::AmountPerVolume, 1e3),
    Unit::new("M", Dimension::AmountPerVolume, 1e3),
    Unit::new("mM", Dimension::AmountPerVolume, 1.0),
    Unit::new("uM", Dimension::AmountPerVolume, 1e-3),
    Unit::new("mol/kg", Dimension::Molality, 1.0),
    Unit::new("mmol/kg", Dimension::Molality, 1e-3),
    Unit::new("kg/L", Dimension::MassPerVolume, 1e3),
    Unit::new("g/L", Dimension::MassPerVolume, 1.0),
    Unit::new("mg/L", Dimension::MassPerVolume, 1e-3),
    Unit::new("ug/L", Dimension::MassPerVolume, 1e-6),
    Unit::new("g/mL", Dimension::MassPerVolume, 1e3),
    Unit::new("g/dm3", Dimension::MassPerVolume, 1.0),
    Unit::new("t/m3", Dimension::MassPerVolume, 1e3),
    Unit::new("kg/m3", Dimension::MassPerVolume, 1.0),
    Unit::new("g/m3", Dimension::MassPerVolume, 1e-3),
    Unit::new("mg/m3", Dimension::MassPerVolume, 1e-6),
    Unit::new("%", Dimension::MassFraction, 1e-2),
    Unit::new("wt%", Dimension::MassFraction, 1e-2),
    Unit::new("ppm", Dimension::MassFraction, 1e-6),
    Unit::new("ppb", Dimension::MassFraction, 1e-9),
    Unit::new("kg/kg", Dimension::MassFraction, 1.0),
    Unit::new("g/kg", Dimension::MassFraction, 1e-3),
    Unit::new("mg/kg", Dimension::MassFraction, 1e-6),
    Unit::new("kg/t", Dimension::MassFraction, 1e-3),
    Unit::new("g/t", Dimension::MassFraction, 1e-6),
    Unit::new("mg/t", Dimension::MassFraction, 1e-9),
];

/// Spellings that engineers write and the program does not guess at, with what to write instead.
const FOREIGN: &[(&str, &str)] = &[
    ("C", "write `degC`"),
    ("c", "write `degC`"),
    ("celsius", "write `degC`"),
    ("Celsius", "write `degC`"),
    ("deg", "write `degC` or `degF`"),
    ("°", "write `degC` or `degF`"),
    ("F", "write `degF`"),
    ("psi", "write kPa: 1 psi is 6.895 kPa"),
    ("mmHg", "write kPa: 1 mmHg is 0.1333 kPa"),
    ("torr", "write kPa: 1 torr is 0.1333 kPa"),
    ("barg", "write bar, absolute"),
    ("bara", "write `bar`; it is taken as absolute"),
    ("m", "a lower-case m is no unit here: write `mol/kg` for molality"),
    ("N", "write mol/L: a normality depends on the reaction"),
    ("gpl", "write `g/L`"),
    ("g", "give an amount per volume of liquor (kg/m3) or per ore (kg/t)"),
    ("kg", "give an amount per volume of liquor (kg/m3) or per ore (kg/t)"),
    ("t", "give an amount per volume of liquor (kg/m3) or per ore (kg/t)"),
    ("mol", "give an amount per volume of liquor (mol/L)"),
    ("%w/v", "write g/L: 1 % w/v is 10 g/L"),
    ("vol%", "write the partial pressure (bar), or g/L for a solute"),
    ("%v/v", "write the partial pressure (bar), or g/L for a solute"),
    ("ppt", "`ppt` has two meanings: write g/kg for parts per thousand"),
    ("oz/t", "write g/t: a troy ounce is 31.1 g, and the ton has three meanings"),
];

/// The unit that a piece of text names, of one of the dimensions expected.
///
/// # Errors
/// [`Fault`] says which units belong there, and which was perhaps meant.
pub fn find(piece: Piece, expected: &[Dimension]) -> Result<Unit, Fault> {
    let name = plain(piece.text);
    if let [Dimension::Number] = expected {
        return match name.as_str() {
            "" => Ok(NO_UNIT),
            _ => {
                Err(piece
                    .fault(format!("`{}`: a plain number belongs here, without a unit", piece.text), "not expected"))
            }
        };
    }
    match UNITS.iter().find(|unit| unit.name == name) {
        Some(unit) if expected.contains(&unit.dimension) => Ok(*unit),
        Some(unit) => {
            let message = format!("`{}` is a unit of {}", piece.text, unit.dimension.noun());
            Err(piece.fault(message, "wrong unit").with_help(wanted(expected)))
        }
        None => {
            Err(piece.fault(format!("`{}` is not a known unit", piece.text), UNKNOWN).with_help(meant(&name, expected)))
        }
    }
}

/// What to write instead of an unknown unit.
fn meant(name: &str, expected: &[Dimension]) -> String {
    if let Some((_, help)) = FOREIGN.iter().find(|(foreign, _)| *foreign == name) {
        return (*help).to_owned();
    }
    let known: Vec<&str> =
        UNITS.iter().filter(|unit| expected.contains(&unit.dimension)).map(|unit| unit.name).collect();
    match nearest(name, &known) {
        Some(unit) => format!("did you mean `{unit}`?"),
        None => wanted(expected),
    }
}

/// What belongs here: `a temperature belongs here: degC, K, degF`.
pub fn wanted(expected: &[Dimension]) -> String {
    let noun = match expected {
        [one] => one.noun().to_owned(),
        [one, other] => format!("{} or {}", one.noun(), other.noun()),
        _ => "concentration".to_owned(),
    };
    let article = if noun.starts_with('a') { "an" } else { "a" };
    let units: Vec<&str> = expected.iter().map(|dimension| dimension.usual_units()).collect();
    format!("{article} {noun} belongs here: {}", units.join(", "))
}

/// A unit as written, in the spelling of [`UNITS`]: no spaces, ASCII, litre with a capital.
fn plain(text: &str) -> String {
    let squeezed: String = text
        .chars()
        .filter(|letter| !letter.is_whitespace() && *letter != '^')
        .map(|letter| match letter {
            '²' => '2',
            '³' => '3',
            // Micro sign and Greek mu.
            'µ' | 'μ' => 'u',
            other => other,
        })
        .collect();
    let squeezed = squeezed.replace("°C", "degC").replace("°F", "degF").replace('℃', "degC");
    match squeezed.as_str() {
        "l" => "L".to_owned(),
        "ml" => "mL".to_owned(),
        "%w/w" | "w%" | "%wt" => "wt%".to_owned(),
        other => match other.strip_suffix("/l") {
            Some(amount) => format!("{amount}/L"),
            None => other.replace("/ml", "/mL"),
        },
    }
}
