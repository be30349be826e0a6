//! The limits of what a scenario may state. Beyond them a number is a slip of the pen, or no model holds.

use super::piece::Fault;
use super::quantity_text::Reading;
use super::units::Dimension;

/// pH of −2 … 16.
pub fn ph(reading: &Reading) -> Result<(), Fault> {
    let inside = |value: f64| (-2.0..=16.0).contains(&value);
    if inside(reading.lowest) && inside(reading.highest) {
        return Ok(());
    }
    let value = reading.estimate.value;
    let beyond = [reading.lowest, reading.highest].into_iter().find(|end| !inside(*end)).unwrap_or(value);
    let fault = Fault::of_all(format!("pH {} is outside −2 … 16", shown(beyond)), "not the pH of a liquor");
    // A decimal point left out is the usual slip.
    let is_point_lost = reading.lowest == reading.highest && (20.0..160.0).contains(&value);
    Err(if is_point_lost { fault.with_help(format!("did you mean {}?", shown(value / 10.0))) } else { fault })
}

/// Temperature of 0 … 300 °C, where the models of water and solutes hold.
pub fn temperature(reading: &Reading) -> Result<(), Fault> {
    let celsius = |kelvin: f64| kelvin - 273.15;
    // A thousandth of a degree forgives the rounding of the conversion.
    let inside = |kelvin: f64| (-0.001..=300.001).contains(&celsius(kelvin));
    match [reading.lowest, reading.highest].into_iter().find(|end| !inside(*end)) {
        None => Ok(()),
        Some(end) => {
            let message = format!("temperature {} °C is outside 0 … 300 °C", shown(celsius(end)));
            Err(Fault::of_all(message, "beyond the models of water and solutes"))
        }
    }
}

/// Potential of −3 … 3 V against any electrode.
pub fn potential(reading: &Reading) -> Result<(), Fault> {
    match [reading.lowest, reading.highest].into_iter().find(|end| end.abs() > 3.0) {
        None => Ok(()),
        Some(volts) => {
            let fault = Fault::of_all(format!("potential {} V is outside −3 … 3 V", shown(volts)), "beyond any liquor");
            Err(if volts.abs() <= 3000.0 { fault.with_help("is it in mV?") } else { fault })
        }
    }
}

/// Above zero; a range may begin at zero.
pub fn positive(reading: &Reading) -> Result<(), Fault> {
    if reading.estimate.value > 0.0 && reading.lowest >= 0.0 {
        return Ok(());
    }
    Err(Fault::of_all("the value must be above zero", "zero or negative").with_help("leave out what is not there"))
}

/// Above zero, and no more than a solution can hold: 60 mol/L is more than pure water has of itself.
pub fn concentration(reading: &Reading) -> Result<(), Fault> {
    positive(reading)?;
    let (most, words) = match reading.dimension {
        Dimension::AmountPerVolume => (60e3, "more than 60 mol/L"),
        Dimension::MassPerVolume => (3e3, "more than 3000 g/L"),
        Dimension::Molality => (500.0, "more than 500 mol/kg"),
        _ => (1.0, "the whole or more"),
    };
    if reading.highest >= most {
        return Err(Fault::of_all(format!("{words} is no solution"), "too much").with_help("check the unit"));
    }
    Ok(())
}

/// Above zero; a share of ore is less than the whole.
pub fn solid_amount(reading: &Reading) -> Result<(), Fault> {
    positive(reading)?;
    if reading.dimension == Dimension::MassFraction && reading.highest > 1.0 {
        return Err(Fault::of_all("more than the whole of the ore", "too much").with_help("check the unit"));
    }
    Ok(())
}

/// A number in a message: at most three decimals, typographic minus.
fn shown(value: f64) -> String {
    let text = format!("{value:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    text.replace('-', "−")
}
