//! The conditions as given, and the liquor as computed.

use super::results::number;
use crate::equilibrium::couples;
use crate::equilibrium::states::Basis;
use crate::report::Subject;
use crate::report::compose::heading;
use crate::report::document::{Block, Column, Row, Table, Text};
use crate::report::json::all_couples;
use crate::report::saturated_solids;
use crate::scenario::{Concentration, ConcentrationBasis};
use crate::screens::drivers::plain_form;

/// Most species and couples that the report prints; the JSON report holds all.
const MOST_SPECIES: usize = 30;
const MOST_COUPLES: usize = 30;

/// What the user stated.
pub fn conditions(subject: &Subject) -> Vec<Block> {
    let scenario = subject.scenario;
    let case = subject.setting.case;
    let liquor = &scenario.liquor;
    let spread = |u: f64, decimals: usize| if u > 0.0 { format!(" (u = {u:.decimals$})") } else { String::new() };
    let t = liquor.temperature.value;
    let mut facts: Vec<(String, Text)> = vec![
        (
            "Temperature".into(),
            format!("{} °C{}", number(t.value - 273.15, 1), spread(t.standard_uncertainty, 1)).into(),
        ),
        (
            "pH".into(),
            format!("{}{}", number(liquor.ph.value.value, 2), spread(liquor.ph.value.standard_uncertainty, 2)).into(),
        ),
    ];
    for (name, amount) in &liquor.dissolved {
        facts.push((
            format!("Dissolved {}", super::results::pretty_label(&name.value)),
            concentration(&amount.value).into(),
        ));
    }
    for oxidant in &scenario.oxidants {
        let label = format!("Oxidant {}", oxidant.name.value);
        facts.push((
            label,
            format!(
                "{} {}",
                super::results::pretty_label(&oxidant.species.value),
                concentration(&oxidant.amount.value)
            )
            .into(),
        ));
    }
    for (name, bar) in &liquor.gas {
        facts.push((
            format!("Gas {}", super::results::pretty_label(&name.value)),
            format!("{:.3} bar", bar.value.value).into(),
        ));
    }
    if let Some((volts, electrode)) = &case.measured {
        facts.push((
            "Measured potential".into(),
            format!("{:.3} V against SHE (electrode {electrode})", volts.value).into(),
        ));
    }
    if let Some(volume) = case.volume {
        facts.push(("Volume".into(), format!("{volume} m³").into()));
    }
    for solid in &case.solids {
        let amount = solid.mass_per_volume.map(|m| format!(", {m:.3} kg/m³")).unwrap_or_default();
        let area = solid.area.map(|a| format!(", {a} m²")).unwrap_or_default();
        let duty = if solid.duty == crate::scenario::Duty::Dissolve { "to dissolve" } else { "to resist" };
        facts.push((solid.name.clone(), format!("{}, {duty}{amount}{area}", solid.material_name).into()));
    }
    vec![heading("Conditions"), Block::Facts(facts)]
}

fn concentration(c: &Concentration) -> String {
    let (value, u) = (c.amount.value, c.amount.standard_uncertainty);
    let (factor, unit) = match c.basis {
        ConcentrationBasis::AmountPerVolume => (1e-3, "mol/L"),
        ConcentrationBasis::Molality => (1.0, "mol/kg"),
        ConcentrationBasis::MassPerVolume => (1.0, "g/L"),
        ConcentrationBasis::MassFraction => (1e6, "mg/kg of solution"),
    };
    let spread = if u > 0.0 { format!(" (u = {:.3})", u * factor) } else { String::new() };
    let value = value * factor;
    if value >= 0.001 {
        format!("{} {unit}{spread}", significant(value))
    } else {
        format!("{value:.2e} {unit}{spread}")
    }
}

/// Four significant figures without an exponent for everyday numbers.
fn significant(value: f64) -> String {
    let decimals = (3 - value.abs().log10().floor() as i32).clamp(0, 6) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// Species, couples, saturation.
pub fn liquor(subject: &Subject) -> Vec<Block> {
    let liquor = &subject.setting.liquor;
    let library = liquor.library;
    let facts = vec![
        ("Ionic strength".into(), format!("{:.2} mol/kg", liquor.ionic_strength).into()),
        (
            "Activity model".into(),
            format!("{}, used to {} mol/kg", liquor.activity_model.name(), liquor.activity_model.upper_limit()).into(),
        ),
        ("Water activity".into(), format!("{:.3}", liquor.ln_water_activity.exp()).into()),
        ("Water in the liquor".into(), format!("{:.0} kg/m³", subject.setting.case.water_per_volume).into()),
        ("Worst balance".into(), format!("{:.0e} of its total", liquor.worst_balance).into()),
    ];
    let rows = liquor
        .dissolved
        .iter()
        .filter(|d| d.molality > 1e-9)
        .take(MOST_SPECIES)
        .map(|d| {
            Row::plain(vec![
                library.get(d.species).pretty().into(),
                library.get(d.species).name.clone().into(),
                scientific(d.molality).into(),
                scientific(d.ln_activity.exp()).into(),
            ])
        })
        .collect();
    let mut blocks = vec![
        heading("The liquor as mixed"),
        Block::Facts(facts),
        Block::Table(Table {
            caption: Some("Dissolved species, most abundant first".into()),
            columns: vec![
                Column::fit("Species"),
                Column::share("Name", 1.0),
                Column::number("mol/kg"),
                Column::number("Activity"),
            ],
            rows,
        }),
        couple_table(subject),
    ];
    blocks.extend(saturation(subject));
    blocks
}

fn couple_table(subject: &Subject) -> Block {
    let liquor = &subject.setting.liquor;
    let library = liquor.library;
    let rows = all_couples(liquor)
        .iter()
        .filter(|couple| couple.oxidised.basis == Basis::Liquor)
        .take(MOST_COUPLES)
        .map(|couple| {
            let name = |form| library.get(plain_form(liquor, form)).formula.pretty();
            let basis = match (&couple.oxidised.basis, &couple.reduced.basis) {
                (Basis::Liquor, Basis::Liquor) => "both sides in the liquor".to_owned(),
                (_, Basis::Assumed(m)) => format!("reduced side taken at {}", scientific(*m)),
                (_, Basis::Condensed) | (Basis::Condensed, _) => "solid side at activity 1".to_owned(),
                _ => "gas side at 1 bar".to_owned(),
            };
            let practice = if couples::held_back(liquor, couple, None).is_some() { "slow or inert" } else { "" };
            Row::plain(vec![
                format!("{}/{}", name(&couple.oxidised), name(&couple.reduced)).into(),
                format!("{} V", number(couple.potential.value, 3)).into(),
                format!("{:.0} mV", (couple.potential.standard_uncertainty * 1e3).max(1.0)).into(),
                basis.into(),
                practice.into(),
            ])
        })
        .collect();
    Block::Table(Table {
        caption: Some(
            "Couples whose oxidised side the liquor holds, by potential against SHE (the JSON report has all)".into(),
        ),
        columns: vec![
            Column::share("Couple", 1.0),
            Column::number("E"),
            Column::number("u"),
            Column::share("Basis", 1.2),
            Column::fit("Practice"),
        ],
        rows,
    })
}

fn saturation(subject: &Subject) -> Option<Block> {
    let rows: Vec<Row> = saturated_solids(&subject.setting.liquor)
        .into_iter()
        .take(15)
        .map(|(species, index)| {
            let words = if index > 0.3 {
                "can precipitate"
            } else if index > -0.3 {
                "at saturation"
            } else {
                "close below"
            };
            Row::plain(vec![
                species.pretty().into(),
                species.name.clone().into(),
                number(index, 1).into(),
                words.into(),
            ])
        })
        .collect();
    (!rows.is_empty()).then(|| {
        Block::Table(Table {
            caption: Some(
                "Solids near or above saturation (log of ion product over solubility product, per formula)".into(),
            ),
            columns: vec![Column::fit("Solid"), Column::share("Name", 1.0), Column::number("Index"), Column::fit("")],
            rows,
        })
    })
}

fn scientific(value: f64) -> String {
    if (0.001..1000.0).contains(&value) { significant(value) } else { format!("{value:.2e}").replace('-', "−") }
}
