//! Turns the blocks of a document into strips.

use super::look::{
    ACCENT, BODY, BODY_WIDTH, Colour, INK, LABEL, RULE, SMALL, SOFT_INK, SUBJECT, TABLE, TITLE, Type, heading,
    tone_colour, tone_ground,
};
use super::strip::{Breaking, Cell, Mark, OutlineEntry, Strip, height, keep_together, row};
use super::table::table_strips;
use super::text::{natural_width, wrap};
use crate::report::document::{Align, Block, Document, Text, Tone};

/// Air between paragraphs.
const PARAGRAPH_GAP: f32 = 6.0;
const BULLET_INDENT: f32 = 13.0;
const BULLET_GAP: f32 = 2.5;
/// Labels of facts take at most this share of the width.
const WIDEST_LABEL: f32 = 0.36;
const FACT_GAP: f32 = 1.5;
const NOTICE_BAR: f32 = 3.0;
const NOTICE_INDENT: f32 = 14.0;
const NOTICE_PADDING: f32 = 7.0;
/// Air between the two columns of the title block.
const GUTTER: f32 = 18.0;
const SIGNING_HEIGHT: f32 = 31.0;
/// Parts of the width for role, name, signature and date.
const SIGNING_PARTS: [f32; 4] = [0.25, 0.27, 0.28, 0.2];

/// The strips of the whole document in reading order.
pub fn strips(document: &Document) -> Vec<Strip> {
    let mut strips = Vec::new();
    let mut opens_page = false;
    for block in &document.blocks {
        if *block == Block::PageBreak {
            opens_page = true;
            continue;
        }
        let mut of_block = block_strips(block, document);
        if let Some(first) = of_block.first_mut() {
            first.opens_page = std::mem::take(&mut opens_page);
        }
        strips.extend(of_block);
    }
    strips
}

fn block_strips(block: &Block, document: &Document) -> Vec<Strip> {
    match block {
        Block::TitleBlock(pairs) => title_block(document, pairs),
        Block::Heading { level, text } => heading_strips(*level, text),
        Block::Paragraph(text) => paragraph(text, BODY, INK, BODY_WIDTH),
        Block::Small(text) => paragraph(text, SMALL, SOFT_INK, BODY_WIDTH),
        Block::Bullets(items) => bullets(items),
        Block::Facts(facts) => fact_strips(facts),
        Block::Table(table) => table_strips(table),
        Block::Notice { tone, title, body } => notice(*tone, title, body),
        Block::SignOff(roles) => sign_off(roles),
        Block::Space => vec![Strip { space_before: 8.0, ..Strip::blank(0.0) }],
        // Between the blocks of a document; blocks kept together have no page break.
        Block::PageBreak => Vec::new(),
        Block::KeepTogether(blocks) => {
            keep_together(blocks.iter().flat_map(|block| block_strips(block, document)).collect())
        }
    }
}

/// Sets the air above the first and below the last strip.
fn spaced(mut strips: Vec<Strip>, above: f32, below: f32) -> Vec<Strip> {
    if let Some(first) = strips.first_mut() {
        first.space_before = above;
    }
    if let Some(last) = strips.last_mut() {
        last.height += below;
    }
    strips
}

fn text_cell(text: &Text, kind: Type, x: f32, width: f32, colour: Colour) -> Cell {
    Cell { x, width, align: Align::Left, lines: wrap(text, kind.size, width), colour }
}

fn paragraph(text: &Text, kind: Type, colour: Colour, width: f32) -> Vec<Strip> {
    spaced(row(&[text_cell(text, kind, 0.0, width, colour)], kind, Breaking::AsParagraph), 0.0, PARAGRAPH_GAP)
}

fn heading_strips(level: u8, text: &str) -> Vec<Strip> {
    let (kind, above, below, colour) = heading(level);
    let strong = Text::default().strong(text);
    let mut strips = row(&[text_cell(&strong, kind, 0.0, BODY_WIDTH, colour)], kind, Breaking::AsParagraph);
    for strip in &mut strips {
        strip.keep_with_next = true;
    }
    if let Some(first) = strips.first_mut() {
        first.entry = Some(OutlineEntry { level, text: text.to_owned() });
    }
    spaced(strips, above, below)
}

fn bullets(items: &[Text]) -> Vec<Strip> {
    let width = BODY_WIDTH - BULLET_INDENT;
    let mark = text_cell(&Text::default().strong("•"), BODY, 2.0, BULLET_INDENT, ACCENT);
    let item = |text| {
        let cells = [mark.clone(), text_cell(text, BODY, BULLET_INDENT, width, INK)];
        spaced(row(&cells, BODY, Breaking::AsParagraph), 0.0, BULLET_GAP)
    };
    spaced(items.iter().flat_map(item).collect(), 0.0, PARAGRAPH_GAP - BULLET_GAP)
}

fn fact_strips(facts: &[(String, Text)]) -> Vec<Strip> {
    let widest = facts.iter().map(|(label, _)| natural_width(&label.as_str().into(), BODY.size)).fold(0.0, f32::max);
    let left = widest.min(WIDEST_LABEL * BODY_WIDTH) + 0.1;
    let value_at = left + GUTTER;
    let fact = |(label, value): &(String, Text)| {
        let cells = [
            text_cell(&label.as_str().into(), BODY, 0.0, left, SOFT_INK),
            text_cell(value, BODY, value_at, BODY_WIDTH - value_at, INK),
        ];
        spaced(row(&cells, BODY, Breaking::AsParagraph), 0.0, FACT_GAP)
    };
    spaced(facts.iter().flat_map(fact).collect(), 0.0, PARAGRAPH_GAP - FACT_GAP)
}

fn notice(tone: Tone, title: &str, body: &[Text]) -> Vec<Strip> {
    let width = BODY_WIDTH - NOTICE_INDENT - NOTICE_PADDING;
    let colour = tone_colour(tone).unwrap_or(ACCENT);
    let mut strips = notice_title(tone, title, width, colour);
    for text in body {
        strips.extend(spaced(row(&[text_cell(text, BODY, 0.0, width, INK)], BODY, Breaking::AsParagraph), 0.0, 3.0));
    }
    let last = strips.len().saturating_sub(1);
    let boxed = |(place, strip): (usize, Strip)| {
        let above = if place == 0 { NOTICE_PADDING } else { 0.0 };
        let below = if place == last { NOTICE_PADDING - 2.0 } else { 0.0 };
        strip.indented(NOTICE_INDENT).padded(above, below).with_ground(0.0, NOTICE_BAR, colour).with_ground(
            0.0,
            BODY_WIDTH,
            tone_ground(tone),
        )
    };
    let boxed: Vec<Strip> = strips.into_iter().enumerate().map(boxed).collect();
    let mut strips = spaced(keep_together(boxed), 4.0, 0.0);
    // Air below the box must not be part of its ground.
    strips.push(Strip::blank(6.0));
    strips
}

/// The tone's word in its colour, and the title behind it.
fn notice_title(tone: Tone, title: &str, width: f32, colour: Colour) -> Vec<Strip> {
    let mut cells = Vec::new();
    let mut title_at = 0.0;
    if let Some(word) = tone.word() {
        let word = Text::default().strong(word.to_uppercase());
        let word_width = natural_width(&word, BODY.size) + 0.1;
        cells.push(text_cell(&word, BODY, 0.0, word_width, colour));
        title_at = word_width + 8.0;
    }
    cells.push(text_cell(&Text::default().strong(title), BODY, title_at, width - title_at, INK));
    let mut strips = spaced(row(&cells, BODY, Breaking::AsParagraph), 0.0, 2.0);
    for strip in &mut strips {
        strip.keep_with_next = true;
    }
    strips
}

/// A thick rule, title and subject, and below them label over value in two columns, a wide value in a row of its own.
fn title_block(document: &Document, pairs: &[(String, Text)]) -> Vec<Strip> {
    let bar = Strip::blank(22.0).with_ground(0.0, BODY_WIDTH, ACCENT);
    let bar = Strip { marks: bar.marks.into_iter().map(|mark| thinned(mark, 3.0)).collect(), ..bar };
    let mut strips = vec![bar];
    let title = Text::default().strong(&document.title);
    strips.extend(row(&[text_cell(&title, TITLE, 0.0, BODY_WIDTH, ACCENT)], TITLE, Breaking::AsParagraph));
    if !document.subject.is_empty() {
        let subject = text_cell(&document.subject.as_str().into(), SUBJECT, 0.0, BODY_WIDTH, SOFT_INK);
        strips.extend(spaced(row(&[subject], SUBJECT, Breaking::AsParagraph), 3.0, 0.0));
    }
    let half = (BODY_WIDTH - GUTTER) / 2.0;
    strips.push(Strip::blank(14.0).with_rule_below(0.0, BODY_WIDTH, 0.5, RULE));
    let mut waiting: Option<&(String, Text)> = None;
    for pair in pairs {
        let wide = natural_width(&pair.1, BODY.size) > half;
        match waiting.take() {
            Some(left) if !wide => strips.extend(title_row(&[left, pair], half)),
            Some(left) => {
                strips.extend(title_row(&[left], half));
                strips.extend(title_row(&[pair], BODY_WIDTH));
            }
            None if wide => strips.extend(title_row(&[pair], BODY_WIDTH)),
            None => waiting = Some(pair),
        }
    }
    if let Some(left) = waiting {
        strips.extend(title_row(&[left], half));
    }
    spaced(keep_together(strips), 0.0, 14.0)
}

fn thinned(mark: Mark, thickness: f32) -> Mark {
    match mark {
        Mark::Fill { x, y, width, colour, .. } => Mark::Fill { x, y, width, height: thickness, colour },
        text => text,
    }
}

fn title_row(pairs: &[&(String, Text)], width: f32) -> Vec<Strip> {
    let left = |place: usize| place as f32 * (width + GUTTER);
    let labels: Vec<Cell> = (0..)
        .zip(pairs)
        .map(|(place, pair)| text_cell(&pair.0.as_str().into(), LABEL, left(place), width, SOFT_INK))
        .collect();
    let values: Vec<Cell> =
        (0..).zip(pairs).map(|(place, pair)| text_cell(&pair.1, BODY, left(place), width, INK)).collect();
    let mut strips = row(&labels, LABEL, Breaking::Whole);
    strips.extend(row(&values, BODY, Breaking::Whole));
    if let Some(first) = strips.first_mut() {
        *first = Strip { keep_with_next: true, ..std::mem::take(first).padded(3.5, 0.0) };
    }
    if let Some(last) = strips.last_mut() {
        *last = std::mem::take(last).padded(0.0, 4.0).with_rule_below(0.0, BODY_WIDTH, 0.5, RULE);
    }
    strips
}

/// One line for each role, with room to sign above rules for name, signature and date.
fn sign_off(roles: &[String]) -> Vec<Strip> {
    let parts = SIGNING_PARTS.map(|part| part * BODY_WIDTH);
    let lefts = [0.0, parts[0], parts[0] + parts[1], parts[0] + parts[1] + parts[2]];
    let heads = ["Role", "Name", "Signature", "Date"];
    let head: Vec<Cell> =
        (0..4).map(|place| text_cell(&heads[place].into(), LABEL, lefts[place], parts[place], SOFT_INK)).collect();
    let mut strips = row(&head, LABEL, Breaking::Whole);
    for role in roles {
        let strong = Text::default().strong(role);
        let role = text_cell(&strong, TABLE, 0.0, parts[0] - GUTTER, INK);
        let mut line = row(&[role], TABLE, Breaking::Whole);
        let above = (SIGNING_HEIGHT - height(&line)).max(6.0);
        if let Some(first) = line.first_mut() {
            *first = std::mem::take(first).padded(above, 0.0);
        }
        if let Some(last) = line.last_mut() {
            *last = std::mem::take(last).padded(0.0, 3.0);
            for place in 1..4 {
                let gap = if place == 3 { 0.0 } else { GUTTER };
                *last = std::mem::take(last).with_rule_below(lefts[place], parts[place] - gap, 0.6, SOFT_INK);
            }
        }
        strips.extend(line);
    }
    spaced(keep_together(strips), 10.0, 10.0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::document::Style;
    use chrono::NaiveDate;

    fn document(blocks: Vec<Block>) -> Document {
        Document {
            title: "Strip of copper shred".into(),
            subject: "Screening".into(),
            author: None,
            reference: None,
            revision: None,
            date: NaiveDate::default(),
            running_head: String::new(),
            footer: String::new(),
            blocks,
        }
    }

    fn texts(strips: &[Strip]) -> Vec<String> {
        let text = |mark: &Mark| match mark {
            Mark::Text { text, .. } => Some(text.clone()),
            Mark::Fill { .. } => None,
        };
        strips.iter().flat_map(|strip| strip.marks.iter().filter_map(text)).collect()
    }

    #[test]
    fn a_notice_says_its_tone_in_a_word() {
        let block = Block::Notice { tone: Tone::Act, title: "Chlorine".into(), body: vec!["can form".into()] };
        assert_eq!(texts(&strips(&document(vec![block]))), ["ACT", "Chlorine", "can form"]);
    }

    #[test]
    fn a_heading_is_kept_with_what_follows() {
        let strips = strips(&document(vec![Block::Heading { level: 1, text: "Liquor".into() }]));
        assert!(strips.iter().all(|strip| strip.keep_with_next));
        assert_eq!(strips[0].entry, Some(OutlineEntry { level: 1, text: "Liquor".into() }));
    }

    #[test]
    fn wide_values_of_the_title_block_take_the_full_width() {
        let pairs = vec![
            ("Reference".to_owned(), Text::from("TR-014")),
            ("Scenario".to_owned(), Text::from("a long description of the liquor and its purpose ".repeat(3))),
            ("Date".to_owned(), Text::from("30 November 2026")),
        ];
        let strips = strips(&document(vec![Block::TitleBlock(pairs)]));
        let texts = texts(&strips);
        assert_eq!(&texts[..4], ["Strip of copper shred", "Screening", "Reference", "TR-014"]);
        assert!(height(&strips) < 260.0);
    }

    #[test]
    fn every_style_of_a_paragraph_reaches_the_page() {
        let text = Text::from("a ").strong("b ").emphasis("c");
        let strips = strips(&document(vec![Block::Paragraph(text)]));
        let styles: Vec<Style> = strips[0]
            .marks
            .iter()
            .filter_map(|mark| match mark {
                Mark::Text { style, .. } => Some(*style),
                Mark::Fill { .. } => None,
            })
            .collect();
        assert_eq!(styles, Style::ALL);
    }
}
