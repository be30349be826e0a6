//! The whole file: its sections, each from its table to its part of the [`Scenario`], and what must hold between them.

use std::ops::Range;

use chrono::NaiveDate;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::diagnostics::{Diagnostic, Diagnostics, Source, line_of, nearest, suggestion};
use super::table::{Later, REMOVE, Reader, Table, Words, entries};
use super::units::Dimension;
use super::{
    ConcentrationBasis, ContactSpec, Duty, LiquorSpec, OxidantSpec, Placed, Scenario, SolidAmount, SolidKind,
    SolidSpec, limits, liquor, syntax,
};

const SECTIONS: &[&str] = &["scenario", "liquor", "oxidant", "metal", "mineral", "contact"];
const LATER_SECTIONS: &[Later] = &[
    Later { key: "lining", why: "no lining is screened" },
    Later { key: "on_site", why: "no wrong reagent is screened" },
    Later { key: "upset", why: "no deviation is screened" },
    Later { key: "measured_couple", why: "no potential table is reconciled" },
];
const TITLE: Words =
    Words { table: "[scenario]", keys: &["title", "reference", "revision", "prepared_by", "date"], later: &[] };
const OXIDANT: Words = Words { table: "[[oxidant]]", keys: &["name", "species", "amount"], later: &[] };
const SOLID_KEYS: &[&str] = &["name", "material", "duty", "amount", "area"];
const METAL: Words = Words { table: "[[metal]]", keys: SOLID_KEYS, later: &[] };
const MINERAL: Words = Words { table: "[[mineral]]", keys: SOLID_KEYS, later: &[] };
const CONTACT: Words = Words { table: "[[contact]]", keys: &["name", "metals"], later: &[] };

/// Reads the whole file.
pub fn scenario(source: Source) -> Result<Scenario, Diagnostics> {
    let (root, errors) = DeTable::parse_recoverable(&source.text);
    let mut problems = syntax::diagnostics(&source.text, &errors);
    if !syntax::is_confined(&errors) {
        return Err(Diagnostics::new(&source, problems));
    }
    let mut reader = Reader::new(&source.text);
    let parts = Parts::read(root.get_ref(), &mut reader);
    // What a line that is not TOML was taken to mean is not worth a second message.
    let line = |problem: &Diagnostic| line_of(&source.text, problem.span.start);
    let unreadable: Vec<usize> = problems.iter().map(line).collect();
    problems.extend(reader.problems.into_iter().filter(|problem| !unreadable.contains(&line(problem))));
    match (parts.title, parts.liquor) {
        (Some(title), Some(liquor)) if problems.is_empty() => Ok(Scenario {
            source,
            title: title.title,
            reference: title.reference,
            revision: title.revision,
            prepared_by: title.prepared_by,
            date: title.date,
            liquor,
            oxidants: parts.oxidants,
            solids: parts.solids,
            contacts: parts.contacts,
        }),
        _ => Err(Diagnostics::new(&source, problems)),
    }
}

/// What `[scenario]` says.
struct Title {
    title: String,
    reference: Option<String>,
    revision: Option<String>,
    prepared_by: Option<String>,
    date: Option<NaiveDate>,
}

/// The sections as far as they have been read.
#[derive(Default)]
struct Parts {
    title: Option<Title>,
    liquor: Option<LiquorSpec>,
    oxidants: Vec<OxidantSpec>,
    solids: Vec<SolidSpec>,
    contacts: Vec<ContactSpec>,
    /// Names of all solids, those with mistakes included.
    solid_names: Vec<Placed<String>>,
}

impl Parts {
    fn read<'t>(root: &'t DeTable<'t>, reader: &mut Reader) -> Self {
        let sections = entries(root);
        let written: Vec<&str> = sections.iter().map(|(key, _)| key.value.as_str()).collect();
        let mut read: Vec<&str> = Vec::new();
        let mut parts = Self::default();
        for (key, value) in &sections {
            let name = key.value.as_str();
            if SECTIONS.contains(&name) {
                parts.section(name, value, reader);
                read.push(name);
                continue;
            }
            unknown_section(key, value, reader);
            // A misspelt section is read as the one that was meant, for the mistakes inside it.
            let meant = nearest(name, SECTIONS).filter(|meant| !written.contains(meant) && !read.contains(meant));
            if let (Some(meant), DeValue::Table(_) | DeValue::Array(_)) = (meant, value.get_ref()) {
                parts.section(meant, value, reader);
                read.push(meant);
            }
        }
        for section in ["scenario", "liquor"].into_iter().filter(|section| !read.contains(section)) {
            reader.report_at_end(format!("the section [{section}] is missing"), "a scenario needs it");
        }
        parts.solids.sort_by_key(|solid| solid.name.span.start);
        parts.check(reader);
        parts
    }

    fn section<'t>(&mut self, name: &str, value: &'t Spanned<DeValue<'t>>, reader: &mut Reader) {
        match name {
            "scenario" => {
                let table = reader.table_of("[scenario]", value);
                self.title = table.and_then(|table| title(value.span(), table, reader));
            }
            "liquor" => {
                let table = reader.table_of("[liquor]", value);
                self.liquor = table.and_then(|table| liquor::read(value.span(), table, reader));
            }
            "oxidant" => {
                for table in many(&OXIDANT, value, reader) {
                    self.oxidants.extend(oxidant(table, reader));
                }
            }
            "metal" => self.read_solids(SolidKind::Metal, many(&METAL, value, reader), reader),
            "mineral" => self.read_solids(SolidKind::Mineral, many(&MINERAL, value, reader), reader),
            _ => {
                for table in many(&CONTACT, value, reader) {
                    self.contacts.extend(contact(table, reader));
                }
            }
        }
    }

    fn read_solids(&mut self, kind: SolidKind, tables: Vec<Table>, reader: &mut Reader) {
        for mut table in tables {
            let name = table.required_text("name", reader);
            self.solid_names.extend(name.clone());
            self.solids.extend(solid(kind, name, table, reader));
        }
    }

    /// What must hold between the sections.
    fn check(&mut self, reader: &mut Reader) {
        self.solid_names.sort_by_key(|name| name.span.start);
        check_unique("solids", &self.solid_names, reader);
        let oxidants: Vec<_> = self.oxidants.iter().map(|oxidant| oxidant.name.clone()).collect();
        check_unique("oxidants", &oxidants, reader);
        let contacts: Vec<_> = self.contacts.iter().map(|contact| contact.name.clone()).collect();
        check_unique("contacts", &contacts, reader);
        let mut names: Vec<&str> = self.solid_names.iter().map(|name| name.value.as_str()).collect();
        names.sort_unstable();
        names.dedup();
        for contact in &self.contacts {
            check_members(contact, &names, reader);
        }
        let Some(liquor) = &self.liquor else { return };
        check_shares(liquor, &self.oxidants, reader);
        for solid in &self.solids {
            if let (Some(Placed { value: SolidAmount::PerOre(_), span }), None) = (&solid.amount, &liquor.pulp_density)
            {
                let message = "an amount per mass of ore needs the pulp density";
                let problem = Diagnostic::new(span.clone(), message, "per ore");
                reader.report(problem.with_help("give `pulp_density` in [liquor], or the amount in kg/m3"));
            }
        }
    }
}

fn unknown_section(key: &Placed<String>, value: &Spanned<DeValue>, reader: &mut Reader) {
    let name = key.value.as_str();
    let span = key.span.clone();
    if let Some(later) = LATER_SECTIONS.iter().find(|later| later.key == name) {
        let brackets = if matches!(value.get_ref(), DeValue::Array(_)) { ("[[", "]]") } else { ("[", "]") };
        let message = format!("`{}{name}{}` is not screened by this version", brackets.0, brackets.1);
        reader.report(Diagnostic::new(span, message, later.why).with_help(REMOVE));
        return;
    }
    let home = [&TITLE, &liquor::WORDS].into_iter().find(|words| words.keys.contains(&name));
    if let Some(words) = home {
        let problem = Diagnostic::new(span, format!("`{name}` stands outside its section"), "in no section");
        reader.report(problem.with_help(format!("write it below the line {}", words.table)));
        return;
    }
    let problem = Diagnostic::new(span, format!("`{name}` is not a section of a scenario"), "unknown section");
    reader.report(problem.with_help(suggestion(name, SECTIONS, "sections")));
}

/// The tables of a repeated section. A single one is read as well, after its brackets have been reported.
fn many<'t>(words: &Words, value: &'t Spanned<DeValue<'t>>, reader: &mut Reader) -> Vec<Table<'t>> {
    let list: Vec<&'t Spanned<DeValue<'t>>> = match value.get_ref() {
        DeValue::Array(items) => items.iter().collect(),
        _ => {
            let message = format!("{} is written with double brackets", words.table);
            let problem = Diagnostic::new(value.span(), message, "not a list of tables");
            reader.report(problem.with_help(format!("begin each with a line {}", words.table)));
            vec![value]
        }
    };
    let mut tables = Vec::new();
    for item in list {
        if let Some(table) = reader.table_of(words.table, item) {
            tables.push(Table::open(words, item.span(), table, reader));
        }
    }
    tables
}

fn title<'t>(span: Range<usize>, table: &'t DeTable<'t>, reader: &mut Reader) -> Option<Title> {
    let mut table = Table::open(&TITLE, span, table, reader);
    let title = table.required_text("title", reader);
    let mut optional = |key| table.optional_text(key, reader).map(|text| text.value);
    let (reference, revision, prepared_by) = (optional("reference"), optional("revision"), optional("prepared_by"));
    let date = table.optional("date").and_then(|value| date(value, reader));
    Some(Title { title: title?.value, reference, revision, prepared_by, date })
}

fn date(value: &Spanned<DeValue>, reader: &mut Reader) -> Option<NaiveDate> {
    let text = match value.get_ref() {
        DeValue::Datetime(date) => date.to_string(),
        DeValue::String(text) => text.to_string(),
        _ => String::new(),
    };
    let date = text.trim().parse::<NaiveDate>().ok();
    if date.is_none() {
        let problem = Diagnostic::new(value.span(), "`date` is not a date", "not a day of the calendar");
        reader.report(problem.with_help("write year, month and day: 2026-11-30"));
    }
    date
}

fn oxidant(mut table: Table, reader: &mut Reader) -> Option<OxidantSpec> {
    let name = table.required_text("name", reader);
    let species = table.required_text("species", reader);
    let amount = table.required("amount", reader).and_then(|value| reader.concentration_of("amount", value));
    Some(OxidantSpec { name: name?, species: species?, amount: amount? })
}

fn solid(kind: SolidKind, name: Option<Placed<String>>, mut table: Table, reader: &mut Reader) -> Option<SolidSpec> {
    let material = table.required_text("material", reader);
    let duty = table.required_text("duty", reader).and_then(|text| duty(text, reader));
    let amount = table.optional("amount").and_then(|value| solid_amount(value, reader));
    let area = table.optional_positive("area", Dimension::Area, reader);
    Some(SolidSpec { kind, name: name?, material: material?, duty: duty?, amount, area })
}

fn solid_amount(value: &Spanned<DeValue>, reader: &mut Reader) -> Option<Placed<SolidAmount>> {
    let expected = [Dimension::MassPerVolume, Dimension::MassFraction];
    let read = reader.quantity_of("amount", value, &expected, limits::solid_amount)?;
    let amount = match read.value.dimension {
        Dimension::MassFraction => SolidAmount::PerOre(read.value.estimate),
        _ => SolidAmount::PerLiquor(read.value.estimate),
    };
    Some(Placed { value: amount, span: read.span })
}

fn duty(text: Placed<String>, reader: &mut Reader) -> Option<Placed<Duty>> {
    let value = match text.value.as_str() {
        "dissolve" => Duty::Dissolve,
        "resist" => Duty::Resist,
        other => {
            let problem = Diagnostic::new(text.span, format!("`{other}` is not a duty"), "`dissolve` or `resist`");
            reader.report(problem.with_help(suggestion(other, &["dissolve", "resist"], "duties")));
            return None;
        }
    };
    Some(Placed { value, span: text.span })
}

fn contact(mut table: Table, reader: &mut Reader) -> Option<ContactSpec> {
    let name = table.required_text("name", reader);
    let value = table.required("metals", reader)?;
    let DeValue::Array(items) = value.get_ref() else {
        let problem = Diagnostic::new(value.span(), "`metals` is a list of names", "not a list");
        reader.report(problem.with_help("write it as in metals = [\"tank shell\", \"agitator\"]"));
        return None;
    };
    if items.len() < 2 {
        reader.report(Diagnostic::new(value.span(), "a contact has two members or more", "too few"));
    }
    let metals = items.iter().filter_map(|item| reader.text_of("metals", item)).collect();
    Some(ContactSpec { name: name?, metals })
}

/// Shares of the solution by mass must leave some of it for the water.
fn check_shares(liquor: &LiquorSpec, oxidants: &[OxidantSpec], reader: &mut Reader) {
    let dissolved = liquor.dissolved.iter().map(|(_, amount)| amount);
    let mut sum = 0.0;
    for amount in dissolved.chain(oxidants.iter().map(|oxidant| &oxidant.amount)) {
        if amount.value.basis != ConcentrationBasis::MassFraction {
            continue;
        }
        sum += amount.value.amount.value;
        if sum >= 1.0 {
            let problem =
                Diagnostic::new(amount.span.clone(), "the shares make up the whole solution", "100 % or more");
            reader.report(problem.with_help("leave some for the water"));
            return;
        }
    }
}

fn check_unique(plural: &str, names: &[Placed<String>], reader: &mut Reader) {
    for (place, name) in names.iter().enumerate() {
        if names[..place].iter().any(|earlier| earlier.value == name.value) {
            let message = format!("two {plural} are named `{}`", name.value);
            let problem = Diagnostic::new(name.span.clone(), message, "the second");
            reader.report(problem.with_help("give each a name of its own"));
        }
    }
}

fn check_members(contact: &ContactSpec, names: &[&str], reader: &mut Reader) {
    for (place, member) in contact.metals.iter().enumerate() {
        if contact.metals[..place].iter().any(|earlier| earlier.value == member.value) {
            let message = format!("`{}` stands twice in one contact", member.value);
            reader.report(Diagnostic::new(member.span.clone(), message, "the second"));
        }
        if !names.contains(&member.value.as_str()) {
            let message = format!("no solid is named `{}`", member.value);
            let problem = Diagnostic::new(member.span.clone(), message, "not in this file");
            reader.report(problem.with_help(match names {
                [] => "add a [[metal]] of that name".to_owned(),
                names => suggestion(&member.value, names, "solids"),
            }));
        }
    }
}
