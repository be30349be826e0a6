//! Cautions, method and limits, and the data with their sources.

use std::collections::BTreeSet;

use super::results::number;
use crate::library::record::Status;
use crate::library::{Change, Library, Species, SpeciesId, TemperatureModel};
use crate::report::Subject;
use crate::report::compose::heading;
use crate::report::document::{Block, Column, Row, Table, Text, Tone};
use crate::screens::Verdict;

/// Each caution that a finding calls for, once; the general one always.
pub fn cautions(subject: &Subject) -> Vec<Block> {
    let called: BTreeSet<&str> =
        subject.findings.iter().flat_map(|f| f.cautions.iter().map(String::as_str)).chain(["general"]).collect();
    let mut blocks = vec![heading("Cautions")];
    let general_first = |(key, _): &(&String, &crate::report::house::Caution)| key.as_str() != "general";
    let mut known: Vec<_> = subject.house.caution.iter().collect();
    known.sort_by_key(general_first);
    for (key, caution) in known {
        if called.contains(key.as_str()) {
            blocks.push(Block::Notice {
                tone: Tone::Plain,
                title: caution.title.clone(),
                body: vec![caution.text.as_str().into()],
            });
        }
    }
    blocks
}

/// How the answers were made, and what they do not see.
pub fn method(subject: &Subject) -> Vec<Block> {
    let list = |items: &[String]| Block::Bullets(items.iter().map(|i| i.as_str().into()).collect());
    vec![
        heading("Method and limits"),
        list(&subject.house.method),
        Block::Heading { level: 2, text: "What this screen does not see".into() },
        list(&subject.house.limits),
    ]
}

/// Every species that the liquor or a driven reaction rests on, with its source.
pub fn data(subject: &Subject) -> Vec<Block> {
    let liquor = &subject.setting.liquor;
    let library = liquor.library;
    let present = liquor.dissolved.iter().filter(|d| d.molality > 1e-6).map(|d| d.species);
    let named =
        subject.findings.iter().filter(|f| f.verdict != Verdict::Opposed).flat_map(|f| f.species.iter().copied());
    let ids: BTreeSet<SpeciesId> = present.chain(named).collect();
    let mut used: Vec<&Species> = ids.into_iter().map(|id| library.get(id)).collect();
    used.sort_by(|a, b| a.text.cmp(&b.text).then(a.state.cmp(&b.state)));
    let rows = used.iter().map(|s| row(s, liquor)).collect();
    let mut blocks = vec![
        heading("Data and sources"),
        Block::Table(Table {
            caption: Some("Standard Gibbs energies used; G at the liquor's temperature is the apparent value (elements not reset)".into()),
            columns: vec![
                Column::share("Species", 0.6),
                Column::number("ΔfG° 25 °C, kJ/mol"),
                Column::number("u"),
                Column::number("G at T"),
                Column::share("Temperature by", 1.0),
                Column::fit("Source"),
                Column::fit("Status"),
            ],
            rows,
        }),
    ];
    blocks.push(sources(subject, &used));
    blocks.extend(overlays(library));
    blocks
}

/// What the user's own files changed in the library.
fn overlays(library: &Library) -> Vec<Block> {
    if library.changes.is_empty() {
        return Vec::new();
    }
    let line = |change: &Change| {
        let verb = if change.overrides { "overrides" } else { "adds" };
        Text::default().strong(change.file.as_str()).plain(format!(" {verb} {}", change.record))
    };
    vec![
        Block::Heading { level: 2, text: "Records of the user's own".into() },
        Block::Bullets(library.changes.iter().map(line).collect()),
    ]
}

fn row(species: &Species, liquor: &crate::equilibrium::Liquor) -> Row {
    let status = match species.status {
        Status::Published => "published",
        Status::Derived => "derived",
        Status::Memory => "memory",
    };
    Row::plain(vec![
        species.pretty().into(),
        number(species.gibbs.value * 1e-3, 2).into(),
        format!("{:.2}", species.gibbs.standard_uncertainty * 1e-3).into(),
        number(liquor.gibbs.of(species.id).value * 1e-3, 2).into(),
        short_model(&species.temperature).into(),
        species.source.clone().into(),
        status.into(),
    ])
}

/// The model in two or three words; the method section spells them out.
fn short_model(model: &TemperatureModel) -> &'static str {
    match model {
        TemperatureModel::Water => "IAPWS-IF97",
        TemperatureModel::HydrogenIon | TemperatureModel::CorrespondencePrinciple(_) => "Criss and Cobble",
        TemperatureModel::HeatCapacity { .. } => "heat capacity",
        TemperatureModel::GasSolubility { .. } => "Henry curve, IAPWS",
        TemperatureModel::MeasuredCurve { .. } => "measured log K(T)",
        TemperatureModel::ReactionEnthalpy { .. } => "van 't Hoff",
        TemperatureModel::ConstantLogK { .. } => "log K held",
        TemperatureModel::EntropyOnly => "entropy held",
        TemperatureModel::ConstantGibbs => "G° held",
    }
}

fn sources(subject: &Subject, used: &[&Species]) -> Block {
    let library = subject.setting.liquor.library;
    let keys: BTreeSet<&str> = used
        .iter()
        .map(|s| s.source.as_str())
        .chain(subject.findings.iter().flat_map(|f| f.sources.iter().map(String::as_str)))
        .collect();
    Block::Bullets(
        keys.into_iter()
            .map(|key| {
                let citation = library.sources.get(key).map_or("no citation in the library", String::as_str);
                Text::default().strong(key).plain(format!(": {citation}"))
            })
            .collect(),
    )
}
