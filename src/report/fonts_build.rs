//! Cuts the report's fonts to the characters that reports use. Runs at build time only.
//!
//! Each face becomes a small TrueType program and, in `fonts.rs` of the output directory, a table of its characters with
//! glyph numbers and advance widths, so that nothing is parsed when a report is written.

use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::fs;
use std::ops::RangeInclusive;
use std::path::Path;

use subsetter::GlyphRemapper;
use ttf_parser::Face;

/// Constant in the generated source, and the file of the face without its extension.
const FACES: &[(&str, &str)] =
    &[("REGULAR", "SourceSans3-Regular"), ("STRONG", "SourceSans3-Semibold"), ("EMPHASIS", "SourceSans3-It")];

/// Whole blocks of Unicode that are kept as far as a face has them.
const BLOCKS: &[RangeInclusive<char>] = &[
    ' '..='~',               // Basic Latin
    '\u{A0}'..='\u{FF}',     // Latin-1
    '\u{100}'..='\u{17F}',   // Latin Extended-A
    '\u{384}'..='\u{3CE}',   // Greek
    '\u{2010}'..='\u{2015}', // dashes
    '\u{2070}'..='\u{209C}', // superscripts and subscripts
];

/// Single signs that are kept as far as a face has them.
const SIGNS: &str = "\u{2009}\u{202F}‘’‚“”„†‡•…‰′″‹›⁄€ℓ™Ω→←↑↓↔∂∆∏∑−√∞∫≈≠≤≥■□▪▫▲△▶▷▼▽◆◇○●◦✓✗";

/// Cuts every face in `source_dir` and writes the programs and the generated source into `out_dir`.
///
/// # Errors
/// A sentence that names the face or file when it cannot be read, cut or written.
pub fn cut_fonts(source_dir: &Path, out_dir: &Path) -> Result<(), String> {
    let mut source = String::new();
    for (constant, name) in FACES {
        let file = source_dir.join(format!("{name}.ttf"));
        let whole = fs::read(&file).map_err(|error| format!("cannot read the font {}: {error}", file.display()))?;
        let (program, entry) = cut_face(constant, name, &whole).map_err(|error| format!("font {name}: {error}"))?;
        write_file(&out_dir.join(format!("{name}.cut.ttf")), &program)?;
        source.push_str(&entry);
    }
    write_file(&out_dir.join("fonts.rs"), source.as_bytes())
}

/// The cut program of one face and its entry in the generated source.
fn cut_face(constant: &str, name: &str, whole: &[u8]) -> Result<(Vec<u8>, String), String> {
    let face = Face::parse(whole, 0).map_err(|error| error.to_string())?;
    let mut remapper = GlyphRemapper::new();
    let mut glyphs = BTreeMap::new();
    for character in repertoire() {
        if let Some(glyph) = face.glyph_index(character) {
            let advance = face.glyph_hor_advance(glyph).unwrap_or(0);
            glyphs.insert(character, (remapper.remap(glyph.0), advance));
        }
    }
    if !glyphs.contains_key(&'?') {
        return Err("has no question mark to stand for missing characters".into());
    }
    let program = subsetter::subset(whole, 0, &remapper).map_err(|error| error.to_string())?;
    Ok((program, source_entry(constant, name, &face, &glyphs)))
}

fn repertoire() -> impl Iterator<Item = char> {
    BLOCKS.iter().cloned().flatten().chain(SIGNS.chars())
}

/// A `static` of type `Face` as Rust source; `src/report/fonts.rs` includes it.
fn source_entry(constant: &str, name: &str, face: &Face, glyphs: &BTreeMap<char, (u16, u16)>) -> String {
    let bounds = face.global_bounding_box();
    let mut table = String::new();
    for (character, (glyph, advance)) in glyphs {
        // Writing to a string cannot fail.
        let _ = write!(table, "({character:?}, {glyph}, {advance}), ");
    }
    format!(
        "static {constant}: Face = Face {{ name: {name:?}, units_per_em: {}, ascent: {}, descent: {}, \
         bounds: [{}, {}, {}, {}], weight: {}, italic: {}, \
         program: include_bytes!(concat!(env!(\"OUT_DIR\"), \"/{name}.cut.ttf\")), glyphs: &[{table}] }};\n",
        face.units_per_em(),
        face.ascender(),
        face.descender(),
        bounds.x_min,
        bounds.y_min,
        bounds.x_max,
        bounds.y_max,
        face.weight().to_number(),
        face.is_italic(),
    )
}

fn write_file(path: &Path, bytes: &[u8]) -> Result<(), String> {
    fs::write(path, bytes).map_err(|error| format!("cannot write {}: {error}", path.display()))
}
