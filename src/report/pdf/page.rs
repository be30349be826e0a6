//! Fills pages with strips and adds what stands on every page.

use std::collections::VecDeque;

use super::look::{
    BODY_BOTTOM, BODY_HEIGHT, BODY_TOP, BODY_WIDTH, FOOT_BASELINE, FURNITURE, FURNITURE_GAP, HEAD_BASELINE,
    MARGIN_LEFT, RULE, SOFT_INK,
};
use super::strip::{Mark, OutlineEntry, Strip, height};
use super::text::{Line, one_line, wrap};
use crate::report::document::{Document, Style};

/// Strips of a chain taller than a page that must fit where it begins.
const FIRST_OF_TALL_CHAIN: usize = 4;
const HAIRLINE: f32 = 0.5;
/// Least air between what stands left and right in head and foot.
const FURNITURE_APART: f32 = 20.0;
const LINES_IN_FOOT: usize = 2;

/// One page: marks from the upper left corner of the sheet, and where the headings on it stand.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Page {
    pub marks: Vec<Mark>,
    /// Headings with the distance of their top from the top of the sheet, pt.
    pub entries: Vec<(OutlineEntry, f32)>,
}

/// The pages of the document, head and foot included. At least one.
pub fn pages(document: &Document, strips: Vec<Strip>) -> Vec<Page> {
    let mut pages = fill(strips);
    let count = pages.len();
    for (place, page) in pages.iter_mut().enumerate() {
        page.marks.extend(furniture(document, place + 1, count));
    }
    pages
}

/// The page being filled and those before it.
struct Filling {
    done: Vec<Page>,
    page: Page,
    /// Where the next strip begins, from the top of the sheet.
    y: f32,
}

fn fill(strips: Vec<Strip>) -> Vec<Page> {
    let mut filling = Filling { done: Vec::new(), page: Page::default(), y: BODY_TOP };
    let mut waiting = VecDeque::from(strips);
    while !waiting.is_empty() {
        let chained = waiting.iter().take_while(|strip| strip.keep_with_next).count();
        let chain: Vec<Strip> = waiting.drain(..(chained + 1).min(waiting.len())).collect();
        filling.place_chain(chain);
    }
    filling.done.push(filling.page);
    filling.done
}

impl Filling {
    /// Places strips that belong on one page there, if there is a page that holds them.
    fn place_chain(&mut self, chain: Vec<Strip>) {
        let on_one_page = height(&chain) + head_height(&chain[0]) <= BODY_HEIGHT;
        let needed = if on_one_page { &chain[..] } else { &chain[..FIRST_OF_TALL_CHAIN.min(chain.len())] };
        let break_wanted = chain[0].opens_page || !self.has_room(chain[0].space_before + height(needed));
        if break_wanted && !self.at_top() {
            self.next_page();
        }
        for strip in chain {
            let air = if self.at_top() { 0.0 } else { strip.space_before };
            if !self.at_top() && !self.has_room(air + strip.height) {
                self.next_page();
            }
            self.place(strip);
        }
    }

    fn place(&mut self, strip: Strip) {
        if self.at_top() {
            if let Some(head) = &strip.head {
                self.put(&head.marks, head.height);
            }
        } else {
            self.y += strip.space_before;
        }
        self.page.entries.extend(strip.entry.map(|entry| (entry, self.y)));
        self.put(&strip.marks, strip.height);
    }

    fn put(&mut self, marks: &[Mark], height: f32) {
        let y = self.y;
        self.page.marks.extend(marks.iter().map(|mark| mark.clone().moved(MARGIN_LEFT, y)));
        self.y += height;
    }

    fn has_room(&self, height: f32) -> bool {
        // The air below the last strip of a page may stand in the margin.
        self.y + height <= BODY_BOTTOM + 0.5
    }

    fn at_top(&self) -> bool {
        self.y <= BODY_TOP
    }

    fn next_page(&mut self) {
        self.done.push(std::mem::take(&mut self.page));
        self.y = BODY_TOP;
    }
}

fn head_height(strip: &Strip) -> f32 {
    strip.head.as_ref().map_or(0.0, |head| head.height)
}

/// Running head and foot with their rules.
fn furniture(document: &Document, number: usize, count: usize) -> Vec<Mark> {
    let size = FURNITURE.size;
    let date = document.date.format("%-d %B %Y");
    let short = |text: &str, style, width| one_line(text, style, size, width);
    let number_of_document = short(&document_number(document), Style::Regular, 0.5 * BODY_WIDTH);
    let number_of_page = short(&format!("{date}  ·  page {number} of {count}"), Style::Regular, 0.5 * BODY_WIDTH);
    let beside = |line: &Line| BODY_WIDTH - line.width - FURNITURE_APART;
    let title = short(&document.running_head, Style::Strong, beside(&number_of_document));
    let foot = wrap(&document.footer.as_str().into(), size, beside(&number_of_page));

    let mut marks = vec![rule(HEAD_BASELINE + FURNITURE_GAP - 1.5), rule(FOOT_BASELINE - FURNITURE_GAP - size)];
    marks.extend(set(&title, 0.0, HEAD_BASELINE));
    marks.extend(set_right(&number_of_document, HEAD_BASELINE));
    for (line, y) in foot.iter().take(LINES_IN_FOOT).zip([FOOT_BASELINE, FOOT_BASELINE + FURNITURE.leading]) {
        marks.extend(set(line, 0.0, y));
    }
    marks.extend(set_right(&number_of_page, FOOT_BASELINE));
    marks
}

/// Reference and revision as far as there are any.
fn document_number(document: &Document) -> String {
    let revision = document.revision.as_ref().map(|revision| format!("revision {revision}"));
    let parts = [document.reference.clone(), revision];
    parts.into_iter().flatten().filter(|part| !part.is_empty()).collect::<Vec<_>>().join("  ·  ")
}

fn rule(y: f32) -> Mark {
    Mark::Fill { x: MARGIN_LEFT, y, width: BODY_WIDTH, height: HAIRLINE, colour: RULE }
}

fn set_right(line: &Line, y: f32) -> Vec<Mark> {
    set(line, BODY_WIDTH - line.width, y)
}

fn set(line: &Line, left: f32, y: f32) -> Vec<Mark> {
    line.spans
        .iter()
        .map(|span| Mark::Text {
            x: MARGIN_LEFT + left + span.x,
            y,
            size: FURNITURE.size,
            style: span.style,
            colour: SOFT_INK,
            text: span.text.clone(),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::rc::Rc;

    fn strip(height: f32) -> Strip {
        let mark = Mark::Fill { x: 0.0, y: 0.0, width: 1.0, height, colour: RULE };
        Strip { height, marks: vec![mark], ..Strip::default() }
    }

    #[test]
    fn strips_that_belong_together_go_over_together() {
        let mut heading = strip(20.0);
        heading.keep_with_next = true;
        let pages = fill(vec![strip(BODY_HEIGHT - 30.0), heading, strip(20.0)]);
        assert_eq!(pages.iter().map(|page| page.marks.len()).collect::<Vec<_>>(), [1, 2]);
    }

    #[test]
    fn a_chain_taller_than_a_page_is_broken_rather_than_lost() {
        let mut strips = vec![strip(10.0); 200];
        strips.iter_mut().for_each(|strip| strip.keep_with_next = true);
        let pages = fill(strips);
        assert_eq!(pages.iter().map(|page| page.marks.len()).sum::<usize>(), 200);
        assert_eq!(pages.len(), 3);
    }

    #[test]
    fn a_row_that_opens_a_page_is_headed_again() {
        let head = Rc::new(strip(15.0));
        let row = Strip { head: Some(head), ..strip(100.0) };
        let pages = fill(vec![row; 14]);
        assert!(pages.len() > 1);
        assert_eq!(pages.iter().map(|page| page.marks.len()).sum::<usize>(), 14 + pages.len());
    }

    #[test]
    fn a_break_is_made_once_and_never_leaves_an_empty_page() {
        let breaking = Strip { opens_page: true, ..strip(10.0) };
        assert_eq!(fill(vec![breaking.clone(), breaking]).len(), 2);
        assert_eq!(fill(Vec::new()).len(), 1);
    }
}
