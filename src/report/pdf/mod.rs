//! Writes a document as a PDF: A4, searchable, with an outline, the same bytes for the same document.
//!
//! The way of a document: `layout` makes strips of its blocks (`table` those of tables, `text` the lines), `page` fills
//! pages with them, this file draws the pages, and `finish` adds outline and properties.

mod finish;
mod layout;
mod look;
mod page;
mod strip;
mod table;
mod text;

use printpdf::{
    Color, FontId, Mm, Op, PaintMode, PdfDocument, PdfFont, PdfFontHandle, PdfPage, PdfSaveOptions, Point, Pt, Rect,
    Rgb, TextItem, to_lopdf_doc,
};

use crate::report::document::{Document, Style};
use crate::report::fonts::Face;
use look::{Colour, PAGE_HEIGHT, PAGE_WIDTH};
use page::Page;
use strip::Mark;

/// Why a PDF could not be written.
#[derive(Debug, thiserror::Error)]
pub enum PdfError {
    #[error("the PDF library refused a part of the report: {0}")]
    Refused(String),
    #[error("the PDF could not be put together: {0}")]
    Assembly(#[from] lopdf::Error),
    #[error("the PDF could not be written: {0}")]
    Writing(#[from] std::io::Error),
}

/// The document as the bytes of a PDF file.
///
/// The bytes depend on nothing but the document: dates in the file are the document's own.
///
/// # Errors
/// [`PdfError`] when the PDF library refuses a font or a drawing, or the file cannot be put together.
pub fn write(document: &Document) -> Result<Vec<u8>, PdfError> {
    let pages = page::pages(document, layout::strips(document));
    let mut drawn = PdfDocument::new(&document.title);
    for style in Style::ALL {
        let font = PdfFont::new(Face::of(style).to_parsed_font());
        drawn.resources.fonts.map.insert(font_id(style), font);
    }
    drawn.pages = pages.iter().map(draw).collect();

    let mut warnings = Vec::new();
    let file = to_lopdf_doc(&drawn, &PdfSaveOptions::default(), &mut warnings);
    if let Some(warning) = warnings.into_iter().next() {
        return Err(PdfError::Refused(warning.msg));
    }
    finish::finish(file, document, &pages)
}

/// Name of the face among the resources of a page.
fn font_id(style: Style) -> FontId {
    let name = match style {
        Style::Regular => "Regular",
        Style::Strong => "Strong",
        Style::Emphasis => "Emphasis",
    };
    FontId(name.to_owned())
}

fn draw(page: &Page) -> PdfPage {
    let ops = page.marks.iter().flat_map(draw_mark).collect();
    let mut sheet = PdfPage::new(Mm(210.0), Mm(297.0), ops);
    let whole = Rect::from_wh(Pt(PAGE_WIDTH), Pt(PAGE_HEIGHT));
    (sheet.media_box, sheet.trim_box, sheet.crop_box) = (whole.clone(), whole.clone(), whole);
    sheet
}

fn draw_mark(mark: &Mark) -> Vec<Op> {
    match mark {
        Mark::Text { x, y, size, style, colour, text } => vec![
            Op::StartTextSection,
            Op::SetFillColor { col: ink(*colour) },
            Op::SetFont { font: PdfFontHandle::External(font_id(*style)), size: Pt(*size) },
            Op::SetTextCursor { pos: Point { x: rounded(*x), y: rounded(PAGE_HEIGHT - y) } },
            Op::ShowText { items: vec![TextItem::Text(text.clone())] },
            Op::EndTextSection,
        ],
        Mark::Fill { x, y, width, height, colour } => {
            let rectangle = Rect {
                x: rounded(*x),
                y: rounded(PAGE_HEIGHT - y - height),
                width: rounded(*width),
                height: rounded(*height),
                mode: Some(PaintMode::Fill),
                winding_order: None,
            };
            vec![Op::SetFillColor { col: ink(*colour) }, Op::DrawRectangle { rectangle }]
        }
    }
}

/// Hundredths of a point are finer than any printer.
fn rounded(length: f32) -> Pt {
    Pt((length * 100.0).round() / 100.0)
}

fn ink(Colour(red, green, blue): Colour) -> Color {
    let part = |value: u8| (f32::from(value) / 255.0 * 1000.0).round() / 1000.0;
    Color::Rgb(Rgb { r: part(red), g: part(green), b: part(blue), icc_profile: None })
}

#[cfg(test)]
mod tests;
