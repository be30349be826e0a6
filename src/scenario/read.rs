//! The sections of a scenario file, each from its table to its part of the [`Scenario`].

use std::collections::BTreeSet;
use std::ops::Range;

use chrono::NaiveDate;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

use crate::quantity::Estimate;

use super::diagnostics::{Diagnostic, Diagnostics, Source, nearest};
use super::table::{Later, Table, concentration_of, positive, quantity_of, text_of};
use super::units::Dimension;
use super::{
    ContactSpec, Duty, LiquorSpec, MeasuredPotential, OxidantSpec, Placed, Scenario, SolidAmount, SolidKind, SolidSpec,
};

const SECTIONS: &[&str] = &["scenario", "liquor", "oxidant", "metal", "mineral", "contact"];
const LATER_SECTIONS: &[Later] = &[
    Later { key: "lining", why: "linings are not screened yet" },
    Later { key: "on_site", why: "wrong-reagent upsets are not screened yet" },
    Later { key: "upset", why: "upsets are not screened yet" },
    Later { key: "measured_couple", why: "potential tables are not reconciled yet" },
];
const LATER_LIQUOR: &[Later] = &[
    Later { key: "free_acid", why: "pH is not computed from free acid yet: give `pH`" },
    Later { key: "free_base", why: "pH is not computed from free base yet: give `pH`" },
    Later { key: "headspace", why: "headspace concentrations are not computed yet" },
    Later { key: "ventilation", why: "dilution is not computed yet" },
];
const LIQUOR_KEYS: &[&str] = &["pH", "temperature", "volume", "pulp_density", "potential", "dissolved", "gas"];
const SOLID_KEYS: &[&str] = &["name", "material", "duty", "amount", "area"];

/// Reads the whole file.
pub fn scenario(source: Source) -> Result<Scenario, Diagnostics> {
    let text = source.text.clone();
    // A byte-order mark is no part of the text; positions are given back with it.
    let (body, shift) = text.strip_prefix('\u{feff}').map_or((text.as_str(), 0), |rest| (rest, 3));
    let root = match DeTable::parse(body) {
        Ok(root) => root,
        Err(error) => {
            let span = error.span().unwrap_or(0..0);
            let span = span.start + shift..span.end + shift;
            let problem =
                Diagnostic::new(span, format!("not valid TOML: {}", error.message().replace('\n', ", ")), "here");
            return Err(Diagnostics::new(&source, vec![problem]));
        }
    };
    let mut problems = Vec::new();
    let scenario = sections(&source, root.get_ref(), &mut problems);
    for problem in &mut problems {
        problem.span = problem.span.start + shift..problem.span.end + shift;
    }
    match scenario {
        Some(scenario) if problems.is_empty() => Ok(scenario),
        _ => Err(Diagnostics::new(&source, problems)),
    }
}

fn sections<'t>(source: &Source, root: &'t DeTable<'t>, problems: &mut Vec<Diagnostic>) -> Option<Scenario> {
    let mut title = None;
    let mut liquor = None;
    let mut oxidants = Vec::new();
    let mut solids = Vec::new();
    let mut contacts = Vec::new();
    let mut seen = BTreeSet::new();
    let mut entries: Vec<_> = root.iter().collect();
    entries.sort_by_key(|(key, _)| key.span().start);
    for (key, value) in entries {
        let name = key.get_ref().to_string();
        seen.insert(name.clone());
        match name.as_str() {
            "scenario" => title = single("[scenario]", value, problems).and_then(|t| title_block(t, problems)),
            "liquor" => liquor = single("[liquor]", value, problems).and_then(|t| liquor_block(t, problems)),
            "oxidant" => oxidants = many("[[oxidant]]", value, problems, oxidant),
            "metal" => solids.extend(many("[[metal]]", value, problems, |t, p| solid(SolidKind::Metal, t, p))),
            "mineral" => solids.extend(many("[[mineral]]", value, problems, |t, p| solid(SolidKind::Mineral, t, p))),
            "contact" => contacts = many("[[contact]]", value, problems, contact),
            _ => unknown_section(&name, key.span(), problems),
        }
    }
    for section in ["scenario", "liquor"] {
        if !seen.contains(section) {
            problems.push(Diagnostic::new(0..0, format!("the section [{section}] is missing"), "a scenario needs it"));
        }
    }
    solids.sort_by_key(|s| s.name.span.start);
    check_names(&solids, &contacts, problems);
    let liquor = liquor?;
    check_amounts(&liquor, &solids, problems);
    let (title, reference, revision, prepared_by, date) = title?;
    Some(Scenario {
        source: source.clone(),
        title,
        reference,
        revision,
        prepared_by,
        date,
        liquor,
        oxidants,
        solids,
        contacts,
    })
}

fn unknown_section(name: &str, span: Range<usize>, problems: &mut Vec<Diagnostic>) {
    if let Some(refused) = LATER_SECTIONS.iter().find(|l| l.key == name) {
        let message = format!("`{name}` is not screened by this version");
        problems
            .push(Diagnostic::new(span, message, refused.why).with_help("remove it: nothing in it would be computed"));
        return;
    }
    let problem = Diagnostic::new(span, format!("`{name}` is not a section of a scenario"), "unknown section");
    problems.push(
        problem.with_help(
            nearest(name, SECTIONS)
                .map_or_else(|| format!("sections: {}", SECTIONS.join(", ")), |word| format!("did you mean `{word}`?")),
        ),
    );
}

fn single<'t>(
    name: &'static str,
    value: &'t Spanned<DeValue<'t>>,
    problems: &mut Vec<Diagnostic>,
) -> Option<Table<'t>> {
    match value.get_ref() {
        DeValue::Table(table) => Some(Table::new(name, value.span(), table)),
        _ => {
            problems.push(Diagnostic::new(value.span(), format!("{name} is one table"), "not a table"));
            None
        }
    }
}

fn many<'t, T>(
    name: &'static str,
    value: &'t Spanned<DeValue<'t>>,
    problems: &mut Vec<Diagnostic>,
    mut read: impl FnMut(Table<'t>, &mut Vec<Diagnostic>) -> Option<T>,
) -> Vec<T> {
    let DeValue::Array(items) = value.get_ref() else {
        let problem = Diagnostic::new(
            value.span(),
            format!("{name} is written with double brackets"),
            "one table, not a list of them",
        );
        problems.push(problem.with_help(format!("begin each with a line `{name}`")));
        return Vec::new();
    };
    let mut list = Vec::new();
    for item in items.iter() {
        if let Some(table) = single(name, item, problems) {
            list.extend(read(table, problems));
        }
    }
    list
}

type Title = (String, Option<String>, Option<String>, Option<String>, Option<NaiveDate>);

fn title_block(mut table: Table, problems: &mut Vec<Diagnostic>) -> Option<Title> {
    let title = table.required_text("title", problems);
    let mut optional = |key| table.text(key, problems).map(|t| t.value);
    let (reference, revision, prepared_by) = (optional("reference"), optional("revision"), optional("prepared_by"));
    let date = table.value("date").and_then(|value| date_of(value, problems));
    table.finish(&["title", "reference", "revision", "prepared_by", "date"], &[], problems);
    Some((title?.value, reference, revision, prepared_by, date))
}

fn date_of(value: &Spanned<DeValue>, problems: &mut Vec<Diagnostic>) -> Option<NaiveDate> {
    let text = match value.get_ref() {
        DeValue::Datetime(date) => date.to_string(),
        DeValue::String(text) => text.to_string(),
        _ => String::new(),
    };
    let date = text.parse::<NaiveDate>().ok();
    if date.is_none() {
        problems.push(Diagnostic::new(value.span(), "`date` is a date such as 2026-11-30", "not a date"));
    }
    date
}

fn liquor_block(mut table: Table, problems: &mut Vec<Diagnostic>) -> Option<LiquorSpec> {
    let ph = table.required_quantity("pH", &[Dimension::Number], problems).and_then(|v| ph_in_range(v, problems));
    let temperature = table.required_quantity("temperature", &[Dimension::Temperature], problems);
    let temperature = temperature.and_then(|v| temperature_in_range(v, problems));
    let volume = optional_positive(&mut table, "volume", &[Dimension::Volume], problems);
    let pulp_density = optional_positive(&mut table, "pulp_density", &[Dimension::MassPerVolume], problems);
    let potential = table.text("potential", problems).and_then(|text| potential_of(&text, problems));
    let mut dissolved = Vec::new();
    if let Some(inner) = table.value("dissolved").and_then(|v| single("dissolved", v, problems)) {
        for (name, value) in inner.entries() {
            dissolved.extend(concentration_of(&name.value, value, problems).map(|c| (name, c)));
        }
    }
    let mut gas = Vec::new();
    if let Some(inner) = table.value("gas").and_then(|v| single("gas", v, problems)) {
        for (name, value) in inner.entries() {
            let Some(read) = quantity_of(&name.value, value, &[Dimension::Pressure], problems) else { continue };
            if positive(&name.value, read.value.0.value, &read.span, problems).is_some() {
                gas.push((name, plain(read)));
            }
        }
    }
    table.finish(LIQUOR_KEYS, LATER_LIQUOR, problems);
    Some(LiquorSpec { ph: ph?, temperature: temperature?, volume, pulp_density, potential, dissolved, gas })
}

fn plain(read: Placed<(Estimate, Dimension)>) -> Placed<Estimate> {
    Placed { value: read.value.0, span: read.span }
}

fn optional_positive(
    table: &mut Table,
    key: &str,
    expected: &[Dimension],
    problems: &mut Vec<Diagnostic>,
) -> Option<Placed<Estimate>> {
    let read = table.quantity(key, expected, problems)?;
    positive(key, read.value.0.value, &read.span, problems).map(|()| plain(read))
}

fn ph_in_range(read: Placed<(Estimate, Dimension)>, problems: &mut Vec<Diagnostic>) -> Option<Placed<Estimate>> {
    let value = read.value.0.value;
    if (-2.0..=16.0).contains(&value) {
        return Some(plain(read));
    }
    let mut problem = Diagnostic::new(read.span, format!("pH {value} is outside −2 … 16"), "not a pH of a liquor");
    if (20.0..160.0).contains(&value) {
        problem = problem.with_help(format!("did you mean {}?", value / 10.0));
    }
    problems.push(problem);
    None
}

fn temperature_in_range(
    read: Placed<(Estimate, Dimension)>,
    problems: &mut Vec<Diagnostic>,
) -> Option<Placed<Estimate>> {
    let celsius = read.value.0.value - 273.15;
    if (0.0..=300.0).contains(&celsius) {
        return Some(plain(read));
    }
    let message = format!("temperature {celsius:.1} °C is outside 0 … 300 °C, where the models hold");
    problems.push(Diagnostic::new(read.span, message, "out of range"));
    None
}

fn potential_of(text: &Placed<String>, problems: &mut Vec<Diagnostic>) -> Option<Placed<MeasuredPotential>> {
    let (value, electrode) = match text.value.split_once(" vs ") {
        Some((value, electrode)) => (value, electrode.trim().trim_start_matches("the ").to_owned()),
        None => (text.value.as_str(), "SHE".to_owned()),
    };
    match super::units::quantity(value, &[Dimension::Potential]) {
        Ok((volts, _)) if volts.value.abs() <= 3.0 => {
            let electrode = Placed { value: electrode, span: text.span.clone() };
            Some(Placed { value: MeasuredPotential { volts, electrode }, span: text.span.clone() })
        }
        Ok((volts, _)) => {
            let message = format!("potential {} V is outside −3 … 3 V", volts.value);
            problems.push(Diagnostic::new(text.span.clone(), message, "out of range"));
            None
        }
        Err(fault) => {
            let mut problem =
                Diagnostic::new(text.span.clone(), format!("`potential`: {}", fault.message), "cannot be read");
            problem.help = fault.help.or_else(|| Some("such as \"640 mV vs Ag/AgCl 3 M KCl\"".into()));
            problems.push(problem);
            None
        }
    }
}

fn oxidant(mut table: Table, problems: &mut Vec<Diagnostic>) -> Option<OxidantSpec> {
    let name = table.required_text("name", problems);
    let species = table.required_text("species", problems);
    let span = table.span.clone();
    let amount = match table.value("amount") {
        Some(value) => concentration_of("amount", value, problems),
        None => {
            problems.push(Diagnostic::new(span, "[[oxidant]] needs `amount`", "`amount` is missing"));
            None
        }
    };
    table.finish(&["name", "species", "amount"], &[], problems);
    Some(OxidantSpec { name: name?, species: species?, amount: amount? })
}

fn solid(kind: SolidKind, mut table: Table, problems: &mut Vec<Diagnostic>) -> Option<SolidSpec> {
    let name = table.required_text("name", problems);
    let material = table.required_text("material", problems);
    let duty = table.required_text("duty", problems).and_then(|text| duty_of(text, problems));
    let amount = table
        .quantity("amount", &[Dimension::MassPerVolume, Dimension::MassFraction], problems)
        .filter(|read| positive("amount", read.value.0.value, &read.span, problems).is_some())
        .map(|read| {
            let (amount, dimension) = read.value;
            let value = if dimension == Dimension::MassFraction {
                SolidAmount::PerOre(amount)
            } else {
                SolidAmount::PerLiquor(amount)
            };
            Placed { value, span: read.span }
        });
    let area = optional_positive(&mut table, "area", &[Dimension::Area], problems);
    table.finish(SOLID_KEYS, &[], problems);
    Some(SolidSpec { kind, name: name?, material: material?, duty: duty?, amount, area })
}

fn duty_of(text: Placed<String>, problems: &mut Vec<Diagnostic>) -> Option<Placed<Duty>> {
    let value = match text.value.as_str() {
        "dissolve" => Duty::Dissolve,
        "resist" => Duty::Resist,
        other => {
            let help = nearest(other, &["dissolve", "resist"])
                .map_or("duties: dissolve, resist".into(), |w| format!("did you mean `{w}`?"));
            problems.push(
                Diagnostic::new(text.span, format!("`{other}` is not a duty"), "`dissolve` or `resist`")
                    .with_help(help),
            );
            return None;
        }
    };
    Some(Placed { value, span: text.span })
}

fn contact(mut table: Table, problems: &mut Vec<Diagnostic>) -> Option<ContactSpec> {
    let name = table.required_text("name", problems);
    let span = table.span.clone();
    let metals = match table.value("metals").map(|v| (v, v.get_ref())) {
        Some((_, DeValue::Array(items))) => {
            items.iter().filter_map(|item| text_of("metals", item, problems)).collect::<Vec<_>>()
        }
        Some((value, _)) => {
            problems.push(Diagnostic::new(value.span(), "`metals` is a list of names", "not a list"));
            Vec::new()
        }
        None => {
            problems.push(Diagnostic::new(span.clone(), "[[contact]] needs `metals`", "`metals` is missing"));
            Vec::new()
        }
    };
    if metals.len() == 1 {
        problems.push(Diagnostic::new(metals[0].span.clone(), "a contact has two members or more", "only one"));
    }
    table.finish(&["name", "metals"], &[], problems);
    Some(ContactSpec { name: name?, metals })
}

fn check_names(solids: &[SolidSpec], contacts: &[ContactSpec], problems: &mut Vec<Diagnostic>) {
    let mut seen = BTreeSet::new();
    for solid in solids {
        if !seen.insert(solid.name.value.as_str()) {
            let message = format!("two solids are named `{}`", solid.name.value);
            problems.push(Diagnostic::new(solid.name.span.clone(), message, "the second"));
        }
    }
    let names: Vec<&str> = seen.into_iter().collect();
    for member in contacts.iter().flat_map(|c| &c.metals) {
        if !names.contains(&member.value.as_str()) {
            let mut problem = Diagnostic::new(
                member.span.clone(),
                format!("no metal is named `{}`", member.value),
                "not in this file",
            );
            problem.help = nearest(&member.value, &names).map(|word| format!("did you mean `{word}`?"));
            problems.push(problem);
        }
    }
}

fn check_amounts(liquor: &LiquorSpec, solids: &[SolidSpec], problems: &mut Vec<Diagnostic>) {
    for solid in solids {
        if let (Some(Placed { value: SolidAmount::PerOre(_), span }), None) = (&solid.amount, &liquor.pulp_density) {
            let problem = Diagnostic::new(span.clone(), "an amount per tonne of ore needs the pulp density", "per ore");
            problems.push(problem.with_help("give `pulp_density` in [liquor], or the amount in kg/m3"));
        }
    }
}
