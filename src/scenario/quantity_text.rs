//! Quantities in words: a number, an optional spread, a unit; given back in SI.
//!
//! `15 g/L`, `1.2 ± 0.2`, `1.690 V ± 5 mV`, `15 g/L ± 10 %`, `40..60 degC`. What stands after `±` (or `+-`) is an
//! expanded uncertainty with coverage factor 2; `a..b` is a rectangular distribution between its ends, standard
//! uncertainty (b − a)/√12 (JCGM 100:2008, 4.3.7 and 6.2).

use crate::quantity::Estimate;

use super::piece::{Fault, Piece};
use super::units::{self, Dimension, Unit};

/// A quantity as read, in the SI unit of its dimension.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    pub estimate: Estimate,
    pub dimension: Dimension,
    /// Ends of a range `a..b`; both are the value where none was given.
    pub lowest: f64,
    pub highest: f64,
}

/// Reads a quantity that may have one of several dimensions.
///
/// # Errors
/// [`Fault`] says which units belong there, or what is wrong with the number, and in which part of the text.
pub fn read(text: Piece, expected: &[Dimension]) -> Result<Reading, Fault> {
    let (main, spread) = match split_spread(text) {
        Some((main, spread)) => (main, Some(spread)),
        None => (text, None),
    };
    if let Some((low, high)) = main.split_once("..") {
        return match spread {
            Some(spread) => Err(spread.fault("a range `a..b` takes no further `±`", "not expected")),
            None => range(low, high, expected),
        };
    }
    let (value, unit_text) = number(main)?;
    let (unit, half) = match spread {
        None => (unit_or_missing(unit_text, text, expected)?, 0.0),
        Some(spread) => unit_and_spread(value, unit_text, spread, text, expected)?,
    };
    let si = unit.to_si(value);
    Ok(Reading { estimate: Estimate::new(si, half / 2.0), dimension: unit.dimension, lowest: si, highest: si })
}

/// Before and after the first `±`, in any of its spellings.
fn split_spread(text: Piece) -> Option<(Piece, Piece)> {
    ["±", "+/-", "+-", "+/−", "+−"].iter().find_map(|mark| text.split_once(mark))
}

fn unit_or_missing(unit: Piece, whole: Piece, expected: &[Dimension]) -> Result<Unit, Fault> {
    if unit.text.is_empty() && expected != [Dimension::Number] {
        let fault = whole.fault("a unit is missing", "number without unit");
        return Err(fault.with_help(units::wanted(expected)));
    }
    units::find(unit, expected)
}

/// Unit of the value, and the spread in SI.
///
/// In `1.2 ± 0.2 g/L` the unit of both follows the spread; in `1.69 V ± 5 mV` each has its own; in `15 g/L ± 10 %` the
/// spread is relative. `12 % ± 1 %` is 11 % to 13 %.
fn unit_and_spread(
    value: f64,
    unit_text: Piece,
    spread: Piece,
    whole: Piece,
    expected: &[Dimension],
) -> Result<(Unit, f64), Fault> {
    let (half, half_text) = number(spread)?;
    if half < 0.0 {
        return Err(spread.fault("a spread after `±` is not negative", "negative"));
    }
    let relative = half_text.text == "%";
    if unit_text.text.is_empty() {
        if relative {
            let help = "write the unit after the first number too, such as `12 g/L ± 5 %`";
            return Err(whole.fault("a spread in % of a number without unit", "of what?").with_help(help));
        }
        let unit = unit_or_missing(half_text, whole, expected)?;
        return Ok((unit, half * unit.factor));
    }
    let unit = units::find(unit_text, expected)?;
    if half_text.text.is_empty() {
        return Ok((unit, half * unit.factor));
    }
    if relative && !matches!(unit.name, "%" | "wt%") {
        if matches!(unit.dimension, Dimension::Temperature | Dimension::Potential) {
            let message = "a spread in % needs a scale with a true zero";
            let help = format!("write the spread in {}", unit.name);
            return Err(spread.fault(message, "relative spread").with_help(help));
        }
        return Ok((unit, half / 100.0 * unit.to_si(value).abs()));
    }
    // A difference: the offset of the scale falls out.
    Ok((unit, half * units::find(half_text, &[unit.dimension])?.factor))
}

fn range(low: Piece, high: Piece, expected: &[Dimension]) -> Result<Reading, Fault> {
    if high.text.starts_with('.') {
        return Err(high.fault("a range has two dots between its ends", "third dot"));
    }
    let (from, from_unit) = number(low)?;
    let (to, to_unit) = number(high)?;
    let upper = unit_or_missing(to_unit, high, expected)?;
    let lower = match from_unit.text {
        "" => upper,
        _ => units::find(from_unit, &[upper.dimension])?,
    };
    let (lowest, highest) = (lower.to_si(from), upper.to_si(to));
    if lowest > highest {
        return Err(Fault::of_all("the range runs downwards", "lower end last").with_help("write the lower end first"));
    }
    let estimate = Estimate::new(f64::midpoint(lowest, highest), (highest - lowest) / 12f64.sqrt());
    Ok(Reading { estimate, dimension: upper.dimension, lowest, highest })
}

/// Splits `1.2e-3 g/L` into number and rest.
fn number(piece: Piece) -> Result<(f64, Piece), Fault> {
    let end = number_end(piece.text);
    let (head, rest) = piece.split_at(end);
    if !head.text.contains(|c: char| c.is_ascii_digit()) {
        return Err(no_number(piece));
    }
    if let Some(fault) = unfinished_number(piece, rest) {
        return Err(fault);
    }
    match head.text.replace('−', "-").parse::<f64>() {
        Ok(value) if value.is_finite() => Ok((value, rest)),
        Ok(_) => Err(head.fault(format!("`{}` is too large a number", head.text), "too large")),
        Err(_) => Err(head.fault(format!("`{}` is not a number", head.text), "not a number")),
    }
}

/// Where the number at the beginning of a text ends.
fn number_end(text: &str) -> usize {
    let sign = |at: usize| text[at..].chars().next().filter(|c| matches!(c, '+' | '-' | '−')).map_or(0, char::len_utf8);
    let digits = |at: usize| text[at..].bytes().take_while(|b| b.is_ascii_digit() || *b == b'.').count();
    let start = sign(0);
    let end = start + digits(start);
    if end == start || !text[end..].starts_with(['e', 'E']) {
        return end;
    }
    let power = end + 1 + sign(end + 1);
    let power_digits = text[power..].bytes().take_while(u8::is_ascii_digit).count();
    if power_digits == 0 { end } else { power + power_digits }
}

fn no_number(piece: Piece) -> Fault {
    let fault = match piece.text {
        "" => piece.fault("a number is missing", "empty"),
        text => piece.fault(format!("`{text}` does not begin with a number"), "no number"),
    };
    if piece.text.starts_with(['<', '>', '≤', '≥']) {
        return fault.with_help("write what is only bounded as a range, such as `0..5 mg/L`");
    }
    if piece.text.starts_with(['~', '≈']) {
        return fault.with_help("write the doubt as a spread, such as `45 ± 5 degC`");
    }
    fault
}

/// A mistake of notation that shows in what follows the number.
fn unfinished_number(piece: Piece, rest: Piece) -> Option<Fault> {
    let first = rest.text.chars().next()?;
    let after = rest.text[first.len_utf8()..].trim_start();
    let then_digit = after.starts_with(|c: char| c.is_ascii_digit());
    let (message, help) = match first {
        ',' => ("a comma does not belong in a number", "write a decimal point, and thousands without a mark"),
        '0'..='9' => ("two numbers side by side", "write thousands without a space"),
        '\'' | '’' | '_' if then_digit => ("a mark inside a number", "write thousands without a mark"),
        '×' | '*' | '·' | 'x' | '^' if then_digit || after.starts_with(['-', '−']) => {
            ("a power of ten is not written so", "write it as in `1.5e-3`")
        }
        '-' | '−' | '–' | '—' | '…' if then_digit => {
            ("a range is not written so", "write two dots between the ends, such as `40..60`")
        }
        _ if rest.text.starts_with("to ") => {
            ("a range is not written so", "write two dots between the ends, such as `40..60`")
        }
        _ => return None,
    };
    Some(piece.fault(format!("`{}`: {message}", piece.text), "cannot be read").with_help(help))
}
