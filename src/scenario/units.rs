//! Quantities in words: a number, an optional spread, a unit; converted to SI in one place.

use crate::quantity::{ATMOSPHERE_BAR, Estimate};

use super::diagnostics::nearest;

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

/// Unit, dimension, factor and offset: SI = value · factor + offset.
const UNITS: &[(&str, Dimension, f64, f64)] = &[
    ("K", Dimension::Temperature, 1.0, 0.0),
    ("degC", Dimension::Temperature, 1.0, 273.15),
    ("°C", Dimension::Temperature, 1.0, 273.15),
    ("degF", Dimension::Temperature, 5.0 / 9.0, 255.372_222_222_222_2),
    ("°F", Dimension::Temperature, 5.0 / 9.0, 255.372_222_222_222_2),
    ("m3", Dimension::Volume, 1.0, 0.0),
    ("m³", Dimension::Volume, 1.0, 0.0),
    ("L", Dimension::Volume, 1e-3, 0.0),
    ("mL", Dimension::Volume, 1e-6, 0.0),
    ("m2", Dimension::Area, 1.0, 0.0),
    ("m²", Dimension::Area, 1.0, 0.0),
    ("dm2", Dimension::Area, 1e-2, 0.0),
    ("cm2", Dimension::Area, 1e-4, 0.0),
    ("cm²", Dimension::Area, 1e-4, 0.0),
    ("mm2", Dimension::Area, 1e-6, 0.0),
    ("V", Dimension::Potential, 1.0, 0.0),
    ("mV", Dimension::Potential, 1e-3, 0.0),
    ("bar", Dimension::Pressure, 1.0, 0.0),
    ("mbar", Dimension::Pressure, 1e-3, 0.0),
    ("atm", Dimension::Pressure, ATMOSPHERE_BAR, 0.0),
    ("Pa", Dimension::Pressure, 1e-5, 0.0),
    ("kPa", Dimension::Pressure, 1e-2, 0.0),
    ("MPa", Dimension::Pressure, 10.0, 0.0),
    ("mol/L", Dimension::AmountPerVolume, 1e3, 0.0),
    ("mmol/L", Dimension::AmountPerVolume, 1.0, 0.0),
    ("umol/L", Dimension::AmountPerVolume, 1e-3, 0.0),
    ("µmol/L", Dimension::AmountPerVolume, 1e-3, 0.0),
    ("mol/m3", Dimension::AmountPerVolume, 1.0, 0.0),
    ("mol/kg", Dimension::Molality, 1.0, 0.0),
    ("mmol/kg", Dimension::Molality, 1e-3, 0.0),
    ("g/L", Dimension::MassPerVolume, 1.0, 0.0),
    ("mg/L", Dimension::MassPerVolume, 1e-3, 0.0),
    ("ug/L", Dimension::MassPerVolume, 1e-6, 0.0),
    ("µg/L", Dimension::MassPerVolume, 1e-6, 0.0),
    ("kg/m3", Dimension::MassPerVolume, 1.0, 0.0),
    ("kg/m³", Dimension::MassPerVolume, 1.0, 0.0),
    ("g/m3", Dimension::MassPerVolume, 1e-3, 0.0),
    ("%", Dimension::MassFraction, 1e-2, 0.0),
    ("ppm", Dimension::MassFraction, 1e-6, 0.0),
    ("ppb", Dimension::MassFraction, 1e-9, 0.0),
    ("g/t", Dimension::MassFraction, 1e-6, 0.0),
    ("kg/t", Dimension::MassFraction, 1e-3, 0.0),
    ("kg/kg", Dimension::MassFraction, 1.0, 0.0),
];

/// What is wrong with a quantity in words.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Fault {
    pub message: String,
    pub help: Option<String>,
}

impl Fault {
    fn new(message: impl Into<String>) -> Self {
        Self { message: message.into(), help: None }
    }

    fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}

/// Reads a quantity that may have one of several dimensions.
///
/// `±` (or `+-`) is read as two standard uncertainties; `a..b` as a rectangular distribution between its ends.
///
/// # Errors
/// [`Fault`] says which units belong there, or what is wrong with the number.
pub fn quantity(text: &str, expected: &[Dimension]) -> Result<(Estimate, Dimension), Fault> {
    let text = text.trim().replace('−', "-").replace("+-", "±").replace("+/-", "±");
    let (main, spread) = match text.split_once('±') {
        Some((main, spread)) => (main.trim(), Some(spread.trim())),
        None => (text.as_str(), None),
    };
    if let Some((low, high)) = main.split_once("..") {
        if spread.is_some() {
            return Err(Fault::new("a range `a..b` takes no further `±`"));
        }
        return range(low.trim(), high.trim(), expected);
    }
    let (value, unit_text) = number(main)?;
    // In `1.2 ± 0.2 g/L` the unit follows the spread; in `1.69 V ± 5 mV` each has its own.
    let (spread_value, spread_unit) = match spread {
        None => (0.0, ""),
        Some(spread) => number(spread)?,
    };
    let unit_text = if unit_text.is_empty() { spread_unit } else { unit_text };
    let unit = unit(unit_text, expected)?;
    let si = value * unit.factor + unit.offset;
    let half = match (spread_unit, expected.contains(&Dimension::MassFraction) && unit_text == "%") {
        ("", _) => spread_value * unit.factor,
        ("%", false) => spread_value / 100.0 * (value * unit.factor).abs(),
        (other, _) => spread_value * self::unit(other, &[unit.dimension])?.factor,
    };
    if half < 0.0 {
        return Err(Fault::new("a spread after `±` is positive"));
    }
    Ok((Estimate::new(si, half / 2.0), unit.dimension))
}

fn range(low: &str, high: &str, expected: &[Dimension]) -> Result<(Estimate, Dimension), Fault> {
    let (from, from_unit) = number(low)?;
    let (to, to_unit) = number(high)?;
    let upper = unit(to_unit, expected)?;
    let lower = if from_unit.is_empty() { upper } else { unit(from_unit, &[upper.dimension])? };
    let (from, to) = (from * lower.factor + lower.offset, to * upper.factor + upper.offset);
    if from > to {
        return Err(Fault::new("the range runs downwards").help("write the lower end first"));
    }
    Ok((Estimate::new((from + to) / 2.0, (to - from) / 12f64.sqrt()), upper.dimension))
}

#[derive(Clone, Copy)]
struct Unit {
    dimension: Dimension,
    factor: f64,
    offset: f64,
}

fn unit(text: &str, expected: &[Dimension]) -> Result<Unit, Fault> {
    let plain = text.trim();
    let known: Vec<&str> =
        UNITS.iter().filter(|u| expected.contains(&u.1)).map(|u| u.0).filter(|u| u.is_ascii() || *u == "°C").collect();
    if plain.is_empty() {
        return match expected {
            [Dimension::Number] => Ok(Unit { dimension: Dimension::Number, factor: 1.0, offset: 0.0 }),
            _ => Err(Fault::new("a unit is missing").help(format!("units here: {}", known.join(", ")))),
        };
    }
    if let [Dimension::Number] = expected {
        return Err(Fault::new(format!("`{plain}`: a plain number belongs here, without a unit")));
    }
    let alias = match plain {
        "M" => "mol/L",
        "mM" => "mmol/L",
        "g/l" => "g/L",
        "mg/l" => "mg/L",
        "wt%" | "wt %" => "%",
        other => other,
    };
    let squeezed = alias.replace(' ', "");
    match UNITS.iter().find(|u| u.0 == squeezed) {
        Some(u) if expected.contains(&u.1) => Ok(Unit { dimension: u.1, factor: u.2, offset: u.3 }),
        Some(_) => Err(Fault::new(format!("`{plain}` is not a unit for this quantity"))
            .help(format!("units here: {}", known.join(", ")))),
        None => {
            let hint = match plain {
                "C" | "c" => Some("degC"),
                "F" => Some("degF"),
                _ => nearest(&squeezed, &known),
            };
            let help =
                hint.map_or_else(|| format!("units here: {}", known.join(", ")), |h| format!("did you mean `{h}`?"));
            Err(Fault::new(format!("`{plain}` is not a known unit")).help(help))
        }
    }
}

/// Splits `1.2e-3 g/L` into number and rest.
fn number(text: &str) -> Result<(f64, &str), Fault> {
    let text = text.trim();
    let bytes = text.as_bytes();
    let digit = |i: usize| bytes.get(i).is_some_and(u8::is_ascii_digit);
    let mut end = 0;
    let mut i = usize::from(matches!(bytes.first(), Some(b'+' | b'-')));
    while digit(i) || bytes.get(i) == Some(&b'.') {
        i += 1;
        end = i;
    }
    if end > 0 && matches!(bytes.get(end), Some(b'e' | b'E')) {
        let mut j = end + 1 + usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        if digit(j) {
            while digit(j) {
                j += 1;
            }
            end = j;
        }
    }
    let (head, rest) = text.split_at(end);
    if rest.starts_with(',') && rest[1..].starts_with(|c: char| c.is_ascii_digit()) {
        return Err(Fault::new(format!("`{text}`: a comma does not belong in a number")).help("write a decimal point"));
    }
    let rest = rest.trim_start();
    if rest.starts_with(|c: char| c.is_ascii_digit()) {
        return Err(Fault::new(format!("`{text}`: two numbers side by side")).help("write thousands without a space"));
    }
    match head.parse::<f64>() {
        Ok(value) if value.is_finite() => Ok((value, rest)),
        _ => Err(Fault::new(format!("`{text}` does not begin with a number"))),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str, dimension: Dimension) -> Estimate {
        quantity(text, &[dimension]).map(|(e, _)| e).unwrap_or_else(|f| panic!("{text}: {}", f.message))
    }

    /// Definitions of the units (SI brochure; 1 atm = 101 325 Pa; 0 °C = 273.15 K; °F = 9/5 °C + 32).
    #[test]
    fn units_convert_to_si() {
        for (text, dimension, si) in [
            ("45 degC", Dimension::Temperature, 318.15),
            ("45°C", Dimension::Temperature, 318.15),
            ("212 degF", Dimension::Temperature, 373.15),
            ("300 K", Dimension::Temperature, 300.0),
            ("2.0 mol/L", Dimension::AmountPerVolume, 2000.0),
            ("5 mmol/L", Dimension::AmountPerVolume, 5.0),
            ("15 g/L", Dimension::MassPerVolume, 15.0),
            ("20 mg/L", Dimension::MassPerVolume, 0.02),
            ("0.3 mol/kg", Dimension::Molality, 0.3),
            ("640 mV", Dimension::Potential, 0.64),
            ("0.21 atm", Dimension::Pressure, 0.21 * 1.01325),
            ("20 kPa", Dimension::Pressure, 0.2),
            ("12 m3", Dimension::Volume, 12.0),
            ("500 L", Dimension::Volume, 0.5),
            ("25 cm2", Dimension::Area, 0.0025),
            ("2 g/t", Dimension::MassFraction, 2e-6),
            ("12.5 %", Dimension::MassFraction, 0.125),
            ("40 ppm", Dimension::MassFraction, 4e-5),
            ("−5 degC", Dimension::Temperature, 268.15),
            ("1e-3 mol/L", Dimension::AmountPerVolume, 1.0),
        ] {
            let found = read(text, dimension).value;
            assert!((found - si).abs() <= 1e-9 * si.abs(), "{text}: {found}");
        }
    }

    /// GUM (JCGM 100:2008): an expanded uncertainty with k = 2, and a rectangular distribution.
    #[test]
    fn spreads_become_standard_uncertainties() {
        let close = |a: f64, b: f64| (a - b).abs() < 1e-9;
        assert!(close(read("1.2 ± 0.2", Dimension::Number).standard_uncertainty, 0.1));
        assert!(close(read("1.2 +- 0.2", Dimension::Number).standard_uncertainty, 0.1));
        assert!(close(read("1.690 V ± 5 mV", Dimension::Potential).standard_uncertainty, 0.0025));
        assert!(close(read("45 ± 2 degC", Dimension::Temperature).standard_uncertainty, 1.0));
        assert!(close(read("15 g/L ± 10 %", Dimension::MassPerVolume).standard_uncertainty, 0.75));
        let range = read("40..60 degC", Dimension::Temperature);
        assert!(close(range.value, 323.15) && close(range.standard_uncertainty, 20.0 / 12f64.sqrt()));
    }

    #[test]
    fn faults_name_the_unit_meant() {
        for (text, dimension, word) in [
            ("45", Dimension::Temperature, "unit is missing"),
            ("45 C", Dimension::Temperature, "degC"),
            ("45 degc", Dimension::Temperature, "degC"),
            ("1,5 g/L", Dimension::MassPerVolume, "decimal point"),
            ("abc", Dimension::Number, "number"),
            ("1 200 g/L", Dimension::MassPerVolume, "space"),
            ("5 g/L", Dimension::Temperature, "degC"),
            ("60..40 degC", Dimension::Temperature, "lower end"),
            ("1.2 g/L", Dimension::Number, "without a unit"),
            ("", Dimension::Number, "number"),
        ] {
            let fault = quantity(text, &[dimension]).expect_err(text);
            let said = format!("{} {}", fault.message, fault.help.unwrap_or_default());
            assert!(said.contains(word), "{text}: {said}");
        }
    }
}
