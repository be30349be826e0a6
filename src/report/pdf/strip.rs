//! The strips that pages are filled with: full-width slices of the text area that are never cut.

use std::rc::Rc;

use super::look::{BODY_HEIGHT, Colour, Type};
use super::text::Line;
use crate::report::document::{Align, Style};

/// Something drawn. Lengths in pt, x to the right and y down from a corner that the holder names.
#[derive(Debug, Clone, PartialEq)]
pub enum Mark {
    /// y is the base line.
    Text { x: f32, y: f32, size: f32, style: Style, colour: Colour, text: String },
    /// A filled rectangle; rules and bars are thin ones. x, y is its upper left corner.
    Fill { x: f32, y: f32, width: f32, height: f32, colour: Colour },
}

/// A heading's line in the outline of the file.
#[derive(Debug, Clone, PartialEq)]
pub struct OutlineEntry {
    pub level: u8,
    pub text: String,
}

/// A slice of the text area as wide as the page's body; marks stand relative to its upper left corner.
#[derive(Debug, Clone, Default)]
pub struct Strip {
    pub height: f32,
    /// Air above, dropped at the top of a page.
    pub space_before: f32,
    pub marks: Vec<Mark>,
    /// Must not be the last on its page while more follows.
    pub keep_with_next: bool,
    /// Printed again above this strip when it opens a page: the head of its table.
    pub head: Option<Rc<Strip>>,
    pub entry: Option<OutlineEntry>,
    pub opens_page: bool,
}

/// Wrapped text in a column.
#[derive(Debug, Clone)]
pub struct Cell {
    pub x: f32,
    pub width: f32,
    pub align: Align,
    pub lines: Vec<Line>,
    pub colour: Colour,
}

/// Whether a row of cells may be spread over two pages.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Breaking {
    /// Only when the row is taller than a page.
    Whole,
    /// Between lines, but two lines at least stay on either page.
    AsParagraph,
}

impl Mark {
    /// The mark moved to the right and down.
    pub fn moved(mut self, right: f32, down: f32) -> Self {
        let (Self::Text { x, y, .. } | Self::Fill { x, y, .. }) = &mut self;
        *x += right;
        *y += down;
        self
    }
}

impl Strip {
    /// Only air, with nothing drawn on it.
    pub fn blank(height: f32) -> Self {
        Self { height, ..Self::default() }
    }

    /// The strip with its marks moved to the right.
    pub fn indented(mut self, right: f32) -> Self {
        self.marks = self.marks.into_iter().map(|mark| mark.moved(right, 0.0)).collect();
        self
    }

    /// The strip made taller above and below its marks.
    pub fn padded(mut self, above: f32, below: f32) -> Self {
        self.height += above + below;
        self.marks = self.marks.into_iter().map(|mark| mark.moved(0.0, above)).collect();
        self
    }

    /// The strip with a filled rectangle of its own height behind its marks.
    pub fn with_ground(mut self, x: f32, width: f32, colour: Colour) -> Self {
        let height = self.height;
        self.marks.insert(0, Mark::Fill { x, y: 0.0, width, height, colour });
        self
    }

    /// The strip with a rule on its lower edge, inside its height.
    pub fn with_rule_below(mut self, x: f32, width: f32, thickness: f32, colour: Colour) -> Self {
        let y = self.height - thickness;
        self.marks.push(Mark::Fill { x, y, width, height: thickness, colour });
        self
    }
}

/// The strips of cells that stand side by side: one strip if the row stays whole, else one for each line.
pub fn row(cells: &[Cell], kind: Type, breaking: Breaking) -> Vec<Strip> {
    let count = cells.iter().map(|cell| cell.lines.len()).max().unwrap_or(0);
    // Room is left for a table's head and the row's own padding.
    if breaking == Breaking::Whole && count as f32 * kind.leading <= 0.8 * BODY_HEIGHT {
        let marks = cells.iter().flat_map(|cell| (0..count).flat_map(|line| cell.marks(line, line, kind))).collect();
        return vec![Strip { height: count as f32 * kind.leading, marks, ..Strip::default() }];
    }
    (0..count)
        .map(|line| Strip {
            height: kind.leading,
            marks: cells.iter().flat_map(|cell| cell.marks(line, 0, kind)).collect(),
            keep_with_next: count > 1 && (line == 0 || line + 2 == count),
            ..Strip::default()
        })
        .collect()
}

/// Binds the strips to one page unless together they are taller than one.
pub fn keep_together(mut strips: Vec<Strip>) -> Vec<Strip> {
    if height(&strips) <= BODY_HEIGHT {
        let bound = strips.len().saturating_sub(1);
        for strip in &mut strips[..bound] {
            strip.keep_with_next = true;
        }
    }
    strips
}

/// Height of the strips in one column, with the air between them but not above the first, pt.
pub fn height(strips: &[Strip]) -> f32 {
    let air: f32 = strips.iter().skip(1).map(|strip| strip.space_before).sum();
    air + strips.iter().map(|strip| strip.height).sum::<f32>()
}

impl Cell {
    /// The marks of one of the cell's lines, set as line number `place` of its strip.
    fn marks(&self, line: usize, place: usize, kind: Type) -> Vec<Mark> {
        let Some(line) = self.lines.get(line) else {
            return Vec::new();
        };
        let left = match self.align {
            Align::Left => self.x,
            Align::Right => self.x + self.width - line.width,
            Align::Centre => self.x + (self.width - line.width) / 2.0,
        };
        let y = place as f32 * kind.leading + kind.baseline();
        line.spans
            .iter()
            .map(|span| Mark::Text {
                x: left + span.x,
                y,
                size: kind.size,
                style: span.style,
                colour: self.colour,
                text: span.text.clone(),
            })
            .collect()
    }
}
