//! Outline, properties and saving: what printpdf leaves out or cannot do without chance.

use lopdf::{Dictionary, Document as PdfFile, Object, ObjectId, text_string};

use super::PdfError;
use super::look::PAGE_HEIGHT;
use super::page::Page;
use crate::report::document::Document;

/// Headings that have been opened and may still get headings below them.
struct Open {
    level: u8,
    id: ObjectId,
    children: Vec<ObjectId>,
}

/// Adds the outline of the headings and the document's properties, and saves the file.
pub fn finish(mut file: PdfFile, document: &Document, pages: &[Page]) -> Result<Vec<u8>, PdfError> {
    file.version = "1.7".to_owned();
    // printpdf counts its identifiers up from one call to the next. The entry is not required.
    file.trailer.remove(b"ID");
    let info = file.trailer.get(b"Info").and_then(Object::as_reference)?;
    file.set_object(info, properties(document));
    let outline = add_outline(&mut file, pages);
    let catalog = file.catalog_mut()?;
    catalog.set("Lang", text_string("en"));
    catalog.set("ViewerPreferences", Dictionary::from_iter([("DisplayDocTitle", Object::Boolean(true))]));
    if let Some(outline) = outline {
        catalog.set("Outlines", outline);
        catalog.set("PageMode", "UseOutlines");
    }
    file.compress();
    let mut bytes = Vec::new();
    file.save_to(&mut bytes)?;
    Ok(bytes)
}

fn properties(document: &Document) -> Dictionary {
    let date = text_string(&document.date.format("D:%Y%m%d000000Z").to_string());
    let program = text_string(concat!(env!("CARGO_PKG_NAME"), " ", env!("CARGO_PKG_VERSION")));
    let mut properties = Dictionary::from_iter([
        ("Title", text_string(&document.title)),
        ("Subject", text_string(&document.subject)),
        ("Creator", program.clone()),
        ("Producer", program),
        ("CreationDate", date.clone()),
        ("ModDate", date),
    ]);
    if let Some(author) = &document.author {
        properties.set("Author", text_string(author));
    }
    properties
}

/// The outline as nested as the levels of the headings; none without headings.
fn add_outline(file: &mut PdfFile, pages: &[Page]) -> Option<ObjectId> {
    if pages.iter().all(|page| page.entries.is_empty()) {
        return None;
    }
    let sheets: Vec<ObjectId> = file.get_pages().into_values().collect();
    let root = file.add_object(Dictionary::from_iter([("Type", Object::from("Outlines"))]));
    let mut open = vec![Open { level: 0, id: root, children: Vec::new() }];
    for (page, sheet) in pages.iter().zip(sheets) {
        for (entry, y) in &page.entries {
            // Level 0 is the outline itself.
            let level = entry.level.max(1);
            while open.last().is_some_and(|last| last.level >= level) {
                close(file, &mut open);
            }
            let top = Object::Real(PAGE_HEIGHT - y);
            let target = vec![sheet.into(), "XYZ".into(), Object::Null, top, Object::Null];
            let item = Dictionary::from_iter([("Title", text_string(&entry.text)), ("Dest", target.into())]);
            let id = file.add_object(item);
            if let Some(parent) = open.last_mut() {
                parent.children.push(id);
            }
            open.push(Open { level, id, children: Vec::new() });
        }
    }
    while !open.is_empty() {
        close(file, &mut open);
    }
    Some(root)
}

fn close(file: &mut PdfFile, open: &mut Vec<Open>) {
    if let Some(closed) = open.pop() {
        link(file, &closed);
    }
}

/// Chains the children of a heading to it and to each other.
fn link(file: &mut PdfFile, parent: &Open) {
    let (Some(&first), Some(&last)) = (parent.children.first(), parent.children.last()) else {
        return;
    };
    for (place, &child) in parent.children.iter().enumerate() {
        let before = place.checked_sub(1).and_then(|before| parent.children.get(before));
        let after = parent.children.get(place + 1);
        if let Ok(child) = file.get_object_mut(child).and_then(Object::as_dict_mut) {
            child.set("Parent", parent.id);
            if let Some(&before) = before {
                child.set("Prev", before);
            }
            if let Some(&after) = after {
                child.set("Next", after);
            }
        }
    }
    if let Ok(dictionary) = file.get_object_mut(parent.id).and_then(Object::as_dict_mut) {
        dictionary.set("First", first);
        dictionary.set("Last", last);
        // Sections stay folded below the first level, which a negative count says.
        let count = parent.children.len() as i64;
        dictionary.set("Count", if parent.level == 0 { count } else { -count });
    }
}
