//! Solids, gases, oxidation states, reactions and the reasons behind each finding.

use crate::report::Subject;
use crate::report::compose::{heading, tone};
use crate::report::document::{Block, Column, Row, Table, Text};
use crate::screens::states::ladders as all_ladders;
use crate::screens::{Attention, Finding, Question, Verdict};

/// Every pairing, solid by solid.
pub fn solids(subject: &Subject) -> Vec<Block> {
    let mut blocks = vec![heading("Solids against oxidants")];
    for solid in &subject.setting.case.solids {
        let rows: Vec<Row> = subject
            .findings
            .iter()
            .filter(|f| {
                f.subject == solid.name && !matches!(f.question, Question::Gas | Question::State | Question::Contact)
            })
            .map(pairing_row)
            .collect();
        let caption = format!("{} ({}), duty: {}", solid.name, solid.material_name, duty(solid));
        blocks.push(Block::Table(Table {
            caption: Some(caption),
            columns: vec![
                Column::share("Against", 1.0),
                Column::number("Driving force"),
                Column::number("ΔG, kJ/mol"),
                Column::number("log K"),
                Column::share("Leaves as", 0.9),
                Column::fit("Verdict"),
                Column::fit("Attention"),
            ],
            rows,
        }));
    }
    let contacts: Vec<&Finding> = subject.findings.iter().filter(|f| f.question == Question::Contact).collect();
    if !contacts.is_empty() {
        blocks.push(Block::Heading { level: 2, text: "Contacts by practical nobility".into() });
        blocks.push(statements(&contacts));
    }
    blocks
}

fn duty(solid: &crate::case::Solid) -> &'static str {
    match solid.duty {
        crate::scenario::Duty::Dissolve => "dissolve",
        crate::scenario::Duty::Resist => "resist",
    }
}

fn pairing_row(finding: &Finding) -> Row {
    Row {
        cells: vec![
            pretty_label(finding.against.as_deref().unwrap_or("")).into(),
            finding.driving_force.map_or_else(|| "—".into(), |e| millivolts(e).into()),
            finding.delta_g.map_or_else(|| "—".into(), |g| number(g * 1e-3, 0).into()),
            finding.log_k.map_or_else(|| "—".into(), |k| number(k, 1).into()),
            finding.products.iter().map(|p| pretty_label(p)).collect::<Vec<_>>().join(", ").into(),
            finding.verdict.name().into(),
            Text::default().strong(finding.attention.name()),
        ],
        tone: tone(finding.attention),
    }
}

fn millivolts(e: crate::quantity::Estimate) -> String {
    format!("{} ± {:.0} mV", number(e.value * 1e3, 0), (e.standard_uncertainty * 1e3).max(1.0))
}

/// A number with a typographic minus.
pub(super) fn number(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    let plain = if text.trim_start_matches(['-', '0', '.']).is_empty() { text.replace('-', "") } else { text };
    plain.replace('-', "−")
}

/// `Fe^3+/Fe^2+` with sub- and superscripts; words are left alone.
pub(super) fn pretty_label(label: &str) -> String {
    let one = |word: &str| {
        let (formula, state) = match word.find(['(']).filter(|_| word.ends_with("(aq)") || word.ends_with("(g)")) {
            Some(_) => word.rsplit_once('(').map_or((word, String::new()), |(f, s)| (f, format!("({s}"))),
            None => (word, String::new()),
        };
        crate::chemistry::Formula::parse(formula).map_or_else(|_| word.to_owned(), |f| format!("{}{state}", f.pretty()))
    };
    if label.contains(' ') {
        let mut words = label.split(' ');
        let first = words.next().map(one).unwrap_or_default();
        let rest: Vec<&str> = words.collect();
        return format!("{first} {}", rest.join(" "));
    }
    label.split('/').map(one).collect::<Vec<_>>().join("/")
}

fn statements(findings: &[&Finding]) -> Block {
    let rows = findings
        .iter()
        .map(|f| Row {
            cells: vec![
                Text::default().strong(f.attention.name()),
                f.verdict.name().into(),
                f.statement.clone().into(),
            ],
            tone: tone(f.attention),
        })
        .collect();
    Block::Table(Table {
        caption: None,
        columns: vec![Column::fit("Attention"), Column::fit("Verdict"), Column::share("Finding", 1.0)],
        rows,
    })
}

/// Gases against their public limits.
pub fn gases(subject: &Subject) -> Vec<Block> {
    let list: Vec<&Finding> = subject.findings.iter().filter(|f| f.question == Question::Gas).collect();
    let mut blocks = vec![heading("Gases")];
    if list.is_empty() {
        blocks.push(Block::Paragraph(
            "No gas of the library comes within a tenth of its lowest public limit by the routes screened: the liquor as mixed, its oxidants, the solids as reductants, acid on the solids.".into(),
        ));
        return blocks;
    }
    let rows = list
        .iter()
        .map(|f| {
            let get = |key: &str| f.quantities.get(key).copied();
            let ppm = |v: Option<f64>| v.map_or_else(|| "—".to_owned(), |v| number(v, if v < 10.0 { 1 } else { 0 }));
            let pressure = get("partial_pressure_bar").unwrap_or(0.0);
            let limit = get("lowest_limit_ppm");
            Row {
                cells: vec![
                    pretty_label(&f.subject).into(),
                    pretty_label(f.against.as_deref().unwrap_or("")).into(),
                    pressure_words(pressure).into(),
                    ppm(limit).into(),
                    ppm(get("idlh_ppm")).into(),
                    get("lower_flammable_limit_percent").map_or_else(|| "—".into(), |v| number(v, 1).into()),
                    get("ceiling_kg_per_m3").map_or_else(|| "—".into(), |v| format!("{v:.2}").into()),
                    f.verdict.name().into(),
                    Text::default().strong(f.attention.name()),
                ],
                tone: tone(f.attention),
            }
        })
        .collect();
    blocks.push(Block::Table(Table {
        caption: Some(
            "Equilibrium pressure against public limits; driven = above the lowest limit beyond doubt".into(),
        ),
        columns: vec![
            Column::fit("Gas"),
            Column::share("Route", 1.0),
            Column::number("Equilibrium"),
            Column::number("Lowest limit, ppm"),
            Column::number("IDLH, ppm"),
            Column::number("LFL, %"),
            Column::number("Ceiling, kg/m³"),
            Column::fit("Verdict"),
            Column::fit("Attention"),
        ],
        rows,
    }));
    blocks.push(Block::Small("Ceiling: most that the reagents named can give per m³ of liquor. Pressures above 1 bar mean that the gas leaves until a reagent is used up.".into()));
    blocks
}

fn pressure_words(bar: f64) -> String {
    match bar {
        p if p > 1.0 => "> 1 bar".into(),
        p if p >= 0.01 => format!("{p:.2} bar"),
        p => format!("{} ppm", number(p / 1.013_25e-6, if p > 1e-5 { 0 } else { 2 })),
    }
}

/// Each element's states with what is unstable.
pub fn ladders(subject: &Subject) -> Vec<Block> {
    let library = subject.setting.liquor.library;
    let mut blocks = vec![heading("Oxidation states on the way")];
    let list = all_ladders(subject.setting);
    if list.is_empty() {
        blocks.push(Block::Paragraph("No element of the liquor has three or more states in the library.".into()));
    }
    let mut rows = Vec::new();
    for ladder in &list {
        for rung in ladder.rungs.iter().rev() {
            let outcome = match &rung.falls_apart {
                None => Text::from("stable against falling apart"),
                Some(apart) => {
                    let verdict = Verdict::of(apart.driving_force);
                    let word = match (verdict, apart.held_back.is_some()) {
                        (Verdict::Driven, true) => "unstable, yet persists in practice",
                        (Verdict::Driven, false) => "unstable",
                        _ => "near balance",
                    };
                    Text::default().strong(word).plain(format!(
                        ": {} ({}, log K {})",
                        apart.equation.pretty(library),
                        millivolts(apart.driving_force),
                        number(apart.equation.log_k(&subject.setting.liquor.gibbs, library).value, 1)
                    ))
                }
            };
            rows.push(Row::plain(vec![
                rung.form.constituent.roman().into(),
                library.get(rung.form.leading).pretty().into(),
                rung.step_down.map_or_else(|| "—".into(), |e| format!("{} V", number(e.value, 3)).into()),
                outcome,
            ]));
        }
    }
    if !rows.is_empty() {
        blocks.push(Block::Table(Table {
            caption: Some("States at the liquor's pH, temperature and ligands, highest first".into()),
            columns: vec![
                Column::fit("State"),
                Column::fit("Leading form"),
                Column::number("E to the next lower"),
                Column::share("Stability", 1.0),
            ],
            rows,
        }));
    }
    blocks
}

/// Every reaction that a finding rests on, once.
pub fn reactions(subject: &Subject) -> Vec<Block> {
    let mut seen: Vec<&str> = Vec::new();
    let mut rows = Vec::new();
    let wanted = |f: &&&Finding| {
        f.question != Question::State && f.attention < Attention::Note || f.question == Question::Leaching
    };
    for finding in super::answer::leading(subject.findings).iter().filter(wanted) {
        let Some(reaction) = finding.reaction_pretty.as_deref() else { continue };
        if seen.contains(&reaction) || finding.verdict == Verdict::Opposed {
            continue;
        }
        seen.push(reaction);
        rows.push(Row::plain(vec![
            reaction.into(),
            finding.log_k.map_or_else(|| "—".into(), |k| number(k, 1).into()),
            pretty_label(&finding.subject).into(),
        ]));
    }
    let mut blocks = vec![heading("Reactions behind the findings")];
    if rows.is_empty() {
        blocks.push(Block::Paragraph("No reaction is driven or near balance.".into()));
        return blocks;
    }
    blocks.push(Block::Table(Table {
        caption: Some("Balanced between the forms that lead in this liquor; log K at its temperature".into()),
        columns: vec![Column::share("Reaction", 1.0), Column::number("log K"), Column::share("For", 0.25)],
        rows,
    }));
    blocks
}

/// Why each finding that asks for attention says what it says.
pub fn reasons(subject: &Subject) -> Vec<Block> {
    let mut blocks = vec![heading("Why: reasons and assumptions")];
    let before = blocks.len();
    for finding in super::answer::leading(subject.findings) {
        // What breaks a film is told even where nothing here breaks it.
        let part = finding.question == Question::Dissolution && finding.verdict == Verdict::Driven;
        if finding.reasons.is_empty() || (finding.attention == Attention::Note && !part) {
            continue;
        }
        let head = match &finding.against {
            Some(against) => format!(
                "{}: {} against {}",
                finding.question.name(),
                pretty_label(&finding.subject),
                pretty_label(against)
            ),
            None => format!("{}: {}", finding.question.name(), pretty_label(&finding.subject)),
        };
        blocks.push(Block::KeepTogether(vec![
            Block::Paragraph(Text::default().strong(head)),
            Block::Bullets(finding.reasons.iter().map(|r| r.as_str().into()).collect()),
        ]));
    }
    if blocks.len() == before {
        blocks.push(Block::Paragraph("No finding asks for action or review.".into()));
    }
    blocks.push(Block::Small("The reasons behind the notes are in the JSON report.".into()));
    blocks
}
