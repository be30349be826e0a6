//! What needs action, before anything else.

use crate::report::Subject;
use crate::report::compose::{heading, tone};
use crate::report::document::{Block, Column, Row, Table, Text};
use crate::scenario::Duty;
use crate::screens::{Attention, Finding, Question, Verdict};

/// The findings that ask for action or review, then whether each duty is met.
pub fn answer(subject: &Subject) -> Vec<Block> {
    let mut blocks = vec![heading("What needs attention")];
    let urgent: Vec<&Finding> =
        leading(subject.findings).into_iter().filter(|f| f.attention < Attention::Note).collect();
    if urgent.is_empty() {
        blocks.push(Block::Paragraph(
            "No finding asks for action or review. That is not a clearance: read the limits of the method and the cautions.".into(),
        ));
    } else {
        let rows = urgent
            .iter()
            .map(|f| Row {
                cells: vec![
                    Text::default().strong(f.attention.name()),
                    f.question.name().into(),
                    f.statement.clone().into(),
                ],
                tone: tone(f.attention),
            })
            .collect();
        blocks.push(Block::Table(Table {
            caption: None,
            columns: vec![Column::fit("Attention"), Column::fit("Question"), Column::share("Finding", 1.0)],
            rows,
        }));
    }
    blocks.push(Block::Heading { level: 2, text: "Is each duty met?".into() });
    blocks.push(duties(subject));
    blocks
}

/// For each question and subject, the strongest finding only: what a reader wants before the tables.
pub fn leading(findings: &[Finding]) -> Vec<&Finding> {
    let mut list: Vec<&Finding> = Vec::new();
    for finding in findings {
        let apart = matches!(finding.question, Question::Contact | Question::Gas);
        let same = |f: &&mut &Finding| f.question == finding.question && f.subject == finding.subject && !apart;
        match list.iter_mut().find(same) {
            Some(known) if stronger(finding, known) => *known = finding,
            Some(_) => {}
            None => list.push(finding),
        }
    }
    list.sort_by_key(|f| f.attention);
    list
}

fn stronger(a: &Finding, b: &Finding) -> bool {
    let size = |f: &Finding| {
        let pressure = f.quantities.get("partial_pressure_bar").map(|p| p.ln());
        f.driving_force.map(|e| e.value).or(pressure).unwrap_or(f64::MIN)
    };
    (a.attention, -size(a)) < (b.attention, -size(b))
}

fn duties(subject: &Subject) -> Block {
    let rows = subject
        .setting
        .case
        .solids
        .iter()
        .map(|solid| {
            let own: Vec<&Finding> = subject
                .findings
                .iter()
                .filter(|f| {
                    f.subject == solid.name
                        && matches!(f.question, Question::Dissolution | Question::Leaching | Question::Cementation)
                })
                .collect();
            let governing = governing(&own);
            let duty = if solid.duty == Duty::Dissolve { "dissolve" } else { "resist" };
            let (verdict, attention) =
                governing.map_or(("not assessed", Attention::Review), |f| (f.verdict.name(), f.attention));
            Row {
                cells: vec![
                    Text::default().strong(attention.name()),
                    solid.name.clone().into(),
                    solid.material_name.clone().into(),
                    duty.into(),
                    Text::default().strong(verdict),
                    governing.map_or_else(|| "no pairing could be computed".into(), |f| f.statement.clone().into()),
                ],
                tone: tone(attention),
            }
        })
        .collect();
    Block::Table(Table {
        caption: None,
        columns: vec![
            Column::fit("Attention"),
            Column::share("Solid", 0.22),
            Column::share("Material", 0.17),
            Column::fit("Duty"),
            Column::fit("Verdict"),
            Column::share("Governed by", 0.61),
        ],
        rows,
    })
}

/// The finding that decides a solid: the strongest driving force that practice does not hold back.
pub fn governing<'f>(own: &[&'f Finding]) -> Option<&'f Finding> {
    let measured = own.iter().find(|f| f.against.as_deref() == Some("measured potential"));
    let driven = |f: &&&&Finding| f.verdict == Verdict::Driven;
    let strongest = own.iter().filter(|f| !f.held_back).max_by(|a, b| force(a).total_cmp(&force(b)));
    let acid_alone = own.iter().filter(|f| f.driving_force.is_none()).find(|f| f.verdict == Verdict::Driven);
    measured.or(strongest.as_ref().filter(driven).copied()).or(acid_alone).or(strongest).copied()
}

fn force(finding: &Finding) -> f64 {
    finding.driving_force.map_or(-10.0, |e| e.value)
}
