//! The section `[liquor]`.

use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::diagnostics::Diagnostic;
use super::piece::{Fault, Piece};
use super::table::{Later, Reader, Table, Words, entries, estimate};
use super::units::{self, Dimension};
use super::{LiquorSpec, MeasuredPotential, Placed, limits, quantity_text};

pub const WORDS: Words = Words {
    table: "[liquor]",
    keys: &["pH", "temperature", "volume", "pulp_density", "potential", "dissolved", "gas"],
    later: &[
        Later { key: "free_acid", why: "give the `pH`" },
        Later { key: "free_base", why: "give the `pH`" },
        Later { key: "headspace", why: "gas is not followed into a headspace" },
        Later { key: "ventilation", why: "gas is not diluted" },
    ],
};

pub fn read<'t>(span: Range<usize>, table: &'t DeTable<'t>, reader: &mut Reader) -> Option<LiquorSpec> {
    let mut table = Table::open(&WORDS, span, table, reader);
    let ph = table.required("pH", reader);
    let ph = ph.and_then(|value| reader.quantity_of("pH", value, &[Dimension::Number], limits::ph));
    let temperature = table
        .required("temperature", reader)
        .and_then(|value| reader.quantity_of("temperature", value, &[Dimension::Temperature], limits::temperature));
    let volume = table.optional_positive("volume", Dimension::Volume, reader);
    let pulp_density = table.optional_positive("pulp_density", Dimension::MassPerVolume, reader);
    let potential = table.optional("potential").and_then(|value| measured_potential(value, reader));
    let mut dissolved = Vec::new();
    for (species, value) in members("dissolved", table.optional("dissolved"), reader) {
        let amount = reader.concentration_of(&species.value, value);
        dissolved.extend(amount.map(|amount| (species, amount)));
    }
    let mut gas = Vec::new();
    for (species, value) in members("gas", table.optional("gas"), reader) {
        let pressure = reader.quantity_of(&species.value, value, &[Dimension::Pressure], limits::positive);
        gas.extend(pressure.map(|pressure| (species, estimate(pressure))));
    }
    let (ph, temperature) = (estimate(ph?), estimate(temperature?));
    Some(LiquorSpec { ph, temperature, volume, pulp_density, potential, dissolved, gas })
}

/// What `dissolved` or `gas` lists. In TOML everything after a header `[liquor.dissolved]` belongs to it, so that a
/// key of `[liquor]` written there is told where it should stand.
fn members<'t>(
    name: &'static str,
    value: Option<&'t Spanned<DeValue<'t>>>,
    reader: &mut Reader,
) -> Vec<(Placed<String>, &'t Spanned<DeValue<'t>>)> {
    let Some(table) = value.and_then(|value| reader.table_of(&format!("`{name}`"), value)) else {
        return Vec::new();
    };
    let (strayed, members): (Vec<_>, Vec<_>) =
        entries(table).into_iter().partition(|(key, _)| WORDS.keys.contains(&key.value.as_str()));
    for (key, _) in strayed {
        let message = format!("`{}` is no species; it belongs to [liquor], not to `{name}`", key.value);
        let problem = Diagnostic::new(key.span, message, "after the header of another table");
        reader.report(problem.with_help(format!("move it above the line [liquor.{name}]")));
    }
    members
}

/// A measured potential: `640 mV vs Ag/AgCl 3 M KCl`; against SHE when no electrode is named.
fn measured_potential(value: &Spanned<DeValue>, reader: &mut Reader) -> Option<Placed<MeasuredPotential>> {
    let span = value.span();
    let DeValue::String(text) = value.get_ref() else {
        let problem = Diagnostic::new(span, "`potential` is a quantity in quotes", "not a quantity");
        reader.report(problem.with_help(EXAMPLE));
        return None;
    };
    match potential_text(text) {
        Ok((volts, electrode)) => {
            let place = match (electrode, reader.inside(&span, text)) {
                (Some(piece), Some(start)) => start + piece.start..start + piece.start + piece.text.len(),
                _ => span.clone(),
            };
            let name = electrode.map_or("SHE", |piece| piece.text);
            let electrode = Placed { value: name.to_owned(), span: place };
            Some(Placed { value: MeasuredPotential { volts: volts.estimate, electrode }, span })
        }
        Err(fault) => {
            reader.fault("potential", &span, text, fault);
            None
        }
    }
}

const EXAMPLE: &str = "write it as in \"640 mV vs Ag/AgCl 3 M KCl\"";

fn potential_text(text: &str) -> Result<(quantity_text::Reading, Option<Piece<'_>>), Fault> {
    let whole = Piece::whole(text);
    let (quantity, electrode) = split_electrode(whole);
    if let Some(electrode) = electrode {
        if electrode.text.is_empty() {
            return Err(whole
                .fault("the reference electrode after `vs` is missing", "against what?")
                .with_help(EXAMPLE));
        }
        if electrode.text.contains('±') || electrode.text.contains("+-") {
            let fault = electrode.fault("the spread stands after the electrode", "spread in the wrong place");
            return Err(fault.with_help("write it as in \"640 ± 5 mV vs SHE\""));
        }
    }
    let reading = quantity_text::read(quantity, &[Dimension::Potential]).map_err(|fault| {
        let names_electrode = electrode.is_none() && quantity.text.split_whitespace().count() > 2;
        if names_electrode && fault.label == units::UNKNOWN { fault.with_help(EXAMPLE) } else { fault }
    })?;
    limits::potential(&reading)?;
    Ok((reading, electrode))
}

/// Before and after the word `vs` (or `vs.`).
fn split_electrode(whole: Piece) -> (Piece, Option<Piece>) {
    let is_blank = |c: Option<char>| c.is_none_or(char::is_whitespace);
    for (at, _) in whole.text.match_indices("vs") {
        let after = &whole.text[at + 2..];
        let length = if after.starts_with('.') { 3 } else { 2 };
        let ends = is_blank(whole.text[at + length..].chars().next());
        if ends && is_blank(whole.text[..at].chars().next_back()) {
            let (quantity, _) = whole.split_at(at);
            let (_, electrode) = whole.split_at(at + length);
            return (quantity, Some(electrode));
        }
    }
    (whole, None)
}
