//! The order of the report: the answer first, then what it rests on.

use super::Subject;
use super::document::{Block, Document, Text, Tone};
use super::sections;
use crate::screens::Attention;

/// The whole report as a document.
pub fn compose(subject: &Subject) -> Document {
    let scenario = subject.scenario;
    let mut blocks = vec![title_block(subject)];
    blocks.push(Block::Notice {
        tone: Tone::Plain,
        title: "How to read this".into(),
        body: vec![subject.house.standing.as_str().into()],
    });
    blocks.extend(sections::answer(subject));
    blocks.extend(sections::conditions(subject));
    blocks.extend(sections::solids(subject));
    blocks.extend(sections::gases(subject));
    blocks.extend(sections::ladders(subject));
    blocks.extend(sections::liquor(subject));
    blocks.extend(sections::reactions(subject));
    blocks.extend(sections::reasons(subject));
    blocks.extend(sections::cautions(subject));
    blocks.extend(sections::method(subject));
    blocks.extend(sections::data(subject));
    blocks.push(Block::KeepTogether(vec![heading("Sign-off"), Block::SignOff(subject.house.sign_off.clone())]));
    Document {
        title: scenario.title.clone(),
        subject: "Hydrometallurgy and corrosion risk screening".into(),
        author: scenario.prepared_by.clone(),
        reference: scenario.reference.clone(),
        revision: scenario.revision.clone(),
        date: subject.date,
        running_head: scenario.title.clone(),
        footer: subject.house.footer.clone(),
        blocks,
    }
}

fn title_block(subject: &Subject) -> Block {
    let scenario = subject.scenario;
    let leading = sections::leading(subject.findings);
    let count = |attention| leading.iter().filter(|f| f.attention == attention).count();
    let given = |value: &Option<String>| Text::from(value.clone().unwrap_or_else(|| "—".into()));
    Block::TitleBlock(vec![
        ("Reference".into(), given(&scenario.reference)),
        ("Revision".into(), given(&scenario.revision)),
        ("Date".into(), subject.date.format("%Y-%m-%d").to_string().into()),
        ("Prepared by".into(), given(&scenario.prepared_by)),
        (
            "Findings".into(),
            Text::default().strong(format!("{} act", count(Attention::Act))).plain(format!(
                " · {} review · {} note",
                count(Attention::Review),
                count(Attention::Note)
            )),
        ),
        ("Scenario file".into(), format!("SHA-256 {}", &subject.scenario_sha256()[..16]).into()),
        (
            "Made with".into(),
            format!(
                "{} {}, library {}",
                env!("CARGO_PKG_NAME"),
                env!("CARGO_PKG_VERSION"),
                &crate::library::Library::sha256()[..12]
            )
            .into(),
        ),
    ])
}

pub(super) fn heading(text: &str) -> Block {
    Block::Heading { level: 1, text: text.into() }
}

pub(super) fn tone(attention: Attention) -> Tone {
    match attention {
        Attention::Act => Tone::Act,
        Attention::Review => Tone::Review,
        Attention::Note => Tone::Note,
    }
}
