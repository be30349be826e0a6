//! Writes documents, reads the files back and looks at what stands where.

use chrono::NaiveDate;
use lopdf::Document as PdfFile;

use super::look::{BODY_BOTTOM, BODY_TOP, BODY_WIDTH, MARGIN_LEFT};
use super::strip::Mark;
use super::*;
use crate::report::document::{Block, Column, Row, Table, Text, Tone};

fn document(blocks: Vec<Block>) -> Document {
    Document {
        title: "Oxidising chloride strip of copper shred".into(),
        subject: "Which solids dissolve, which hold, and what else can form".into(),
        author: Some("Process group – Ångström".into()),
        reference: Some("TR-014".into()),
        revision: Some("A".into()),
        date: NaiveDate::from_ymd_opt(2026, 11, 30).unwrap_or_default(),
        running_head: "Screening report – chloride strip".into(),
        footer: "Screening result. Thermodynamics permits; it does not promise.".into(),
        blocks,
    }
}

fn heading(level: u8, text: &str) -> Block {
    Block::Heading { level, text: text.into() }
}

fn long_table(rows: usize) -> Block {
    let row = |number: usize| Row {
        cells: vec![
            format!("species {number}").into(),
            format!("{:.3}", number as f64 / 7.0).into(),
            "NBS tables".into(),
        ],
        tone: if number.is_multiple_of(9) { Tone::Review } else { Tone::Plain },
    };
    Block::Table(Table {
        caption: Some("Species of the liquor".into()),
        columns: vec![Column::fit("Name of species"), Column::number("Molality, mol/kg"), Column::share("Source", 1.0)],
        rows: (1..=rows).map(row).collect(),
    })
}

/// Every kind of block, with text that is hard to set.
fn everything() -> Document {
    let wordy = "The dissolution is driven by the couple and ends where the potential has fallen. ".repeat(12);
    document(vec![
        Block::TitleBlock(vec![("Reference".into(), "TR-014".into()), ("Liquor".into(), wordy.as_str().into())]),
        heading(1, "Summary"),
        Block::Notice { tone: Tone::Act, title: "Chlorine can form".into(), body: vec![wordy.as_str().into()] },
        Block::Paragraph(Text::from("Copper is ").strong("driven").plain(" by Fe³⁺ SO₄²⁻ → ΔG° with ").emphasis("K")),
        Block::Paragraph("x".repeat(300).into()),
        Block::Bullets(vec![wordy.as_str().into(), "鉄 has no glyph".into()]),
        Block::Facts(vec![("Temperature".into(), "45 °C".into()), ("Long ".repeat(40), wordy.as_str().into())]),
        Block::PageBreak,
        heading(1, "Liquor"),
        heading(2, "Species"),
        long_table(200),
        Block::KeepTogether(vec![heading(2, "Review"), Block::Small("Signed on paper.".into())]),
        Block::SignOff(vec!["Prepared".into(), "Checked by a process-safety engineer".into()]),
        Block::Space,
        heading(1, "Sources"),
    ])
}

fn read(document: &Document) -> PdfFile {
    PdfFile::load_mem(&write(document).expect("written")).expect("readable")
}

/// The text of each page; pieces are read in drawing order.
fn texts(document: &Document) -> Vec<String> {
    let file = read(document);
    file.get_pages().into_keys().map(|number| file.extract_text(&[number]).expect("text")).collect()
}

fn laid_out(document: &Document) -> Vec<Page> {
    page::pages(document, layout::strips(document))
}

#[test]
fn text_is_read_back_letter_for_letter() {
    let texts = texts(&everything());
    assert!(texts[0].contains("Fe³⁺ SO₄²⁻ → ΔG°"), "{}", texts[0]);
    assert!(texts[0].contains("Oxidising chloride strip of copper shred"));
    assert!(texts.iter().any(|text| text.contains("? has no glyph")));
}

#[test]
fn every_page_bears_head_and_foot() {
    let texts = texts(&everything());
    let count = texts.len();
    for (place, text) in texts.iter().enumerate() {
        assert!(text.contains("Screening report – chloride strip"), "{text}");
        assert!(text.contains("TR-014  ·  revision A"), "{text}");
        assert!(text.contains("it does not promise."), "{text}");
        assert!(text.contains(&format!("30 November 2026  ·  page {} of {count}", place + 1)), "{text}");
    }
}

#[test]
fn a_long_table_is_headed_on_each_of_its_pages_and_loses_no_row() {
    let texts = texts(&document(vec![heading(1, "Liquor"), long_table(200)]));
    assert!(texts.len() > 4);
    for text in &texts {
        assert!(text.contains("Name of species") && text.contains("Molality, mol/kg"), "{text}");
    }
    let all = texts.concat();
    for number in 1..=200 {
        assert_eq!(all.matches(&format!("species {number}\n")).count(), 1, "row {number}");
    }
}

#[test]
fn a_row_stays_whole_on_one_page() {
    let cell = "A cell of several lines. ".repeat(20);
    let rows = (0..30).map(|number| Row::plain(vec![format!("[{number} {cell} {number}]").into()])).collect();
    let table = Table { caption: None, columns: vec![Column::share("Statement", 1.0)], rows };
    let texts = texts(&document(vec![Block::Table(table)]));
    for number in 0..30 {
        let (start, end) = (format!("[{number} "), format!(" {number}]"));
        let on_page = |needle: &str| texts.iter().position(|text| text.replace('\n', " ").contains(needle));
        assert_eq!(on_page(&start), on_page(&end), "row {number}");
    }
}

#[test]
fn a_row_taller_than_a_page_is_spread_over_pages() {
    let rows = vec![Row::plain(vec!["start".into(), format!("{}end", "long story ".repeat(2500)).into()])];
    let table = Table { caption: None, columns: vec![Column::fit("Key"), Column::share("Story", 1.0)], rows };
    let texts = texts(&document(vec![heading(1, "Tall"), Block::Table(table)]));
    assert!(texts.len() > 2);
    assert!(texts[0].contains("start") && texts[0].contains("long story"));
    assert!(texts[texts.len() - 1].contains("end") && texts[texts.len() - 1].contains("Story"));
}

#[test]
fn nothing_stands_outside_the_margins() {
    let left = MARGIN_LEFT - 0.05;
    let right = MARGIN_LEFT + BODY_WIDTH + 0.05;
    for page in laid_out(&everything()) {
        for mark in &page.marks {
            let (start, end, top, bottom) = match mark {
                Mark::Text { x, y, size, style, text, .. } => {
                    (*x, x + Face::of(*style).width(text.trim_end(), *size), y - size, *y)
                }
                Mark::Fill { x, y, width, height, .. } => (*x, x + width, *y, y + height),
            };
            assert!(start >= left && end <= right, "{mark:?}");
            assert!(top > 30.0 && bottom < PAGE_HEIGHT - 25.0, "{mark:?}");
        }
    }
}

#[test]
fn text_and_page_furniture_do_not_meet() {
    for page in laid_out(&everything()) {
        for mark in &page.marks {
            let Mark::Text { y, size, .. } = mark else {
                continue;
            };
            let furniture = (size - look::FURNITURE.size).abs() < 0.01;
            assert!(furniture || (*y > BODY_TOP && *y < BODY_BOTTOM), "{mark:?}");
        }
    }
}

#[test]
fn a_heading_is_never_left_alone_at_the_foot_of_a_page() {
    for lines in 30..60 {
        let mut blocks = vec![Block::Paragraph("line".into()); lines];
        blocks.push(heading(2, "Heading at some place"));
        blocks.push(Block::Paragraph("below the heading".into()));
        let texts = texts(&document(blocks));
        for text in texts {
            assert_eq!(text.contains("Heading at some place"), text.contains("below the heading"), "{lines} lines");
        }
    }
}

#[test]
fn the_same_document_gives_the_same_bytes() {
    let once = write(&everything()).expect("written");
    assert_eq!(once, write(&everything()).expect("written"));
    assert!(once.len() < 200_000, "{} bytes", once.len());
}

#[test]
fn the_outline_follows_the_headings() {
    let file = read(&everything());
    let contents = file.get_toc().expect("outline").toc;
    let titles: Vec<(usize, &str)> = contents.iter().map(|entry| (entry.level, entry.title.as_str())).collect();
    assert_eq!(titles, [(1, "Summary"), (1, "Liquor"), (2, "Species"), (2, "Review"), (1, "Sources")]);
    let texts = texts(&everything());
    for entry in &contents {
        assert!(texts[entry.page - 1].contains(&entry.title), "{}", entry.title);
    }
}

#[test]
fn the_properties_are_the_documents() {
    let file = read(&everything());
    let info = file.trailer.get(b"Info").and_then(|info| file.dereference(info)).expect("properties").1;
    let property = |key: &[u8]| {
        let value = info.as_dict().and_then(|info| info.get(key)).expect("property");
        lopdf::decode_text_string(value).expect("text")
    };
    assert_eq!(property(b"Title"), "Oxidising chloride strip of copper shred");
    assert_eq!(property(b"Author"), "Process group – Ångström");
    assert_eq!(property(b"CreationDate"), "D:20261130000000Z");
}

#[test]
fn a_document_without_blocks_is_one_page() {
    assert_eq!(texts(&document(Vec::new())).len(), 1);
}
