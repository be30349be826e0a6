//! Small wording shared by the screens.

use crate::quantity::Estimate;

/// First letter in upper case.
pub fn capital(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |first| first.to_uppercase().chain(chars).collect())
}

/// With a capital and one full stop.
pub fn sentence(text: &str) -> String {
    let text = text.trim().trim_end_matches(['.', ';']);
    format!("{}.", capital(text))
}

/// `+480 ± 9 mV`
pub fn millivolts(volts: Estimate) -> String {
    let value = volts.value * 1e3;
    let spread = volts.standard_uncertainty * 1e3;
    let sign = if value < 0.0 { "−" } else { "+" };
    format!("{sign}{:.0} ± {:.0} mV", value.abs(), spread.max(1.0))
}

/// A pressure in bar as a person would say it: `590 ppm`, `0.16 bar`, `more than 1 bar`.
pub fn pressure(bar: f64) -> String {
    match bar {
        p if p > 1.0 => "more than 1 bar".into(),
        p if p >= 0.01 => format!("{p:.2} bar"),
        p => ppm(p * 1e6),
    }
}

/// Parts per million of the atmosphere with two figures.
pub fn ppm(value: f64) -> String {
    match value {
        v if v >= 10_000.0 => format!("{:.1} %", v * 1e-4),
        v if v >= 100.0 => format!("{:.0} ppm", (v / 10.0).round() * 10.0),
        v if v >= 1.0 => format!("{v:.1} ppm"),
        v if v >= 0.01 => format!("{v:.2} ppm"),
        v => format!("{v:.0e} ppm"),
    }
}
