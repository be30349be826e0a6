//! The embedded faces: which characters they print, how wide, and how they enter a PDF.
//!
//! Source Sans 3 under the SIL Open Font License (`templates/fonts/LICENSE.md`), cut at build time by `fonts_build.rs`.

use std::collections::BTreeMap;

use printpdf::{FontMetrics, ParsedFont};

use super::document::Style;

// Generated at build time: the statics REGULAR, STRONG and EMPHASIS.
include!(concat!(env!("OUT_DIR"), "/fonts.rs"));

/// What is printed where no face has the character.
const MISSING: char = '?';

/// One face cut to the repertoire of reports. Lengths in font units.
pub struct Face {
    name: &'static str,
    units_per_em: u16,
    ascent: i16,
    descent: i16,
    /// Smallest box around all glyphs: left, bottom, right, top.
    bounds: [i16; 4],
    weight: u16,
    italic: bool,
    program: &'static [u8],
    /// Character, glyph number and advance width, in the order of the characters.
    glyphs: &'static [(char, u16, u16)],
}

/// The text as it is printed: look-alikes unified, characters without a glyph replaced by a question mark, and
/// characters without a shape (soft hyphens, marks for break and direction, controls) left out.
pub fn printable(text: &str) -> String {
    text.chars().filter(|&character| !has_no_shape(character)).map(substitute).collect()
}

impl Face {
    /// The face that sets a style.
    pub fn of(style: Style) -> &'static Self {
        match style {
            Style::Regular => &REGULAR,
            Style::Strong => &STRONG,
            Style::Emphasis => &EMPHASIS,
        }
    }

    /// Width of the text as printed at this size, in the unit of the size.
    pub fn width(&self, text: &str, size: f32) -> f32 {
        let units: u32 = text.chars().map(|character| u32::from(self.advance(character))).sum();
        units as f32 * size / f32::from(self.units_per_em)
    }

    /// The face as the PDF writer takes it.
    pub fn to_parsed_font(&self) -> ParsedFont {
        let metrics = FontMetrics { ascent: self.ascent, descent: self.descent };
        let characters = self.glyphs.iter().map(|&(character, glyph, _)| (u32::from(character), glyph));
        let widths: BTreeMap<u16, u16> = self.glyphs.iter().map(|&(_, glyph, advance)| (glyph, advance)).collect();
        // Six letters and a plus sign mark a font program that holds only some of its glyphs (ISO 32000-1, 9.6.4).
        let name = Some(format!("HALFCL+{}", self.name));
        let mut font = ParsedFont::with_glyph_data(
            self.program.to_vec(),
            0,
            name,
            characters.collect(),
            widths,
            self.units_per_em,
            metrics,
        );
        [
            font.pdf_font_metrics.x_min,
            font.pdf_font_metrics.y_min,
            font.pdf_font_metrics.x_max,
            font.pdf_font_metrics.y_max,
        ] = self.bounds;
        font.pdf_font_metrics.us_weight_class = self.weight;
        if self.italic {
            // The slant of the italic face, 11° from the upright, as rise and run.
            (font.pdf_font_metrics.caret_slope_rise, font.pdf_font_metrics.caret_slope_run) = (1000, 194);
        }
        font
    }

    fn advance(&self, character: char) -> u16 {
        if has_no_shape(character) {
            return 0;
        }
        self.glyph(substitute(character)).map_or(0, |(_, advance)| advance)
    }

    fn glyph(&self, character: char) -> Option<(u16, u16)> {
        let place = self.glyphs.binary_search_by_key(&character, |&(held, _, _)| held).ok()?;
        let (_, glyph, advance) = self.glyphs[place];
        Some((glyph, advance))
    }
}

/// The character that is printed for this one.
fn substitute(character: char) -> char {
    let printed = look_alike(character);
    // All faces are cut to the same repertoire.
    if REGULAR.glyph(printed).is_some() { printed } else { stand_in(character) }
}

/// One of each set of characters that share a glyph, so that copied text is the same whichever
/// was written.
fn look_alike(character: char) -> char {
    match character {
        '\u{A0}' | '\u{2007}' => ' ',
        '\u{2010}' | '\u{2011}' => '-',
        'μ' => 'µ',
        '∆' => 'Δ',
        other => other,
    }
}

/// What stands for a character that the faces lack.
fn stand_in(character: char) -> char {
    match character {
        '⇌' => '=',
        _ => MISSING,
    }
}

fn has_no_shape(character: char) -> bool {
    matches!(character, '\u{AD}' | '\u{200B}'..='\u{200F}' | '\u{202A}'..='\u{202E}' | '\u{2060}' | '\u{FEFF}')
        || character.is_control()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Whether every face prints this character as itself, or as another that looks the same.
    fn covers(character: char) -> bool {
        let printed = look_alike(character);
        Style::ALL.iter().all(|&style| Face::of(style).glyph(printed).is_some())
    }

    #[test]
    fn the_characters_of_chemistry_are_covered() {
        for character in
            "Fe³⁺ SO₄²⁻ → ΔG° ⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻ ₀₁₂₃₄₅₆₇₈₉₊₋ ←↑↓↔ −±×·≤≥≈≠∞√∆ΣΩ∂µμ‰–—…•‘’“”✓■▪●○◆▲△ αβγφλ ÅéøßŁž".chars()
        {
            assert!(covers(character), "{character}");
        }
    }

    #[test]
    fn a_character_without_a_glyph_is_replaced_visibly() {
        assert!(!covers('鉄'));
        assert_eq!(printable("鉄 Fe"), "? Fe");
        assert_eq!(Face::of(Style::Regular).width("鉄", 10.0), Face::of(Style::Regular).width("?", 10.0));
    }

    #[test]
    fn shapeless_characters_take_no_room() {
        assert_eq!(printable("hydro\u{AD}metal\u{200B}lurgy"), "hydrometallurgy");
        assert_eq!(Face::of(Style::Regular).width("\u{AD}\u{200B}\u{7}", 10.0), 0.0);
    }

    #[test]
    fn figures_are_equally_wide_so_that_columns_of_numbers_line_up() {
        for style in Style::ALL {
            let face = Face::of(style);
            for figure in "123456789".chars() {
                assert_eq!(face.advance(figure), face.advance('0'), "{figure}");
            }
        }
    }
}
