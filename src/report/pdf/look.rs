//! The look of the page: sizes, distances and colours. Lengths in points (1/72 inch).

use crate::report::document::Tone;

/// A4.
pub const PAGE_WIDTH: f32 = 595.276;
pub const PAGE_HEIGHT: f32 = 841.890;
pub const MARGIN_LEFT: f32 = 65.0;
pub const MARGIN_RIGHT: f32 = 62.0;
/// Where the text area begins and ends, from the top of the sheet.
pub const BODY_TOP: f32 = 76.0;
pub const BODY_BOTTOM: f32 = PAGE_HEIGHT - 74.0;
pub const BODY_WIDTH: f32 = PAGE_WIDTH - MARGIN_LEFT - MARGIN_RIGHT;
pub const BODY_HEIGHT: f32 = BODY_BOTTOM - BODY_TOP;
/// Base lines of the running head and of the foot, from the top of the sheet.
pub const HEAD_BASELINE: f32 = 46.0;
pub const FOOT_BASELINE: f32 = PAGE_HEIGHT - 42.0;
/// Distance from the base line of the head or foot to its rule.
pub const FURNITURE_GAP: f32 = 8.0;
pub const FURNITURE_LEADING: f32 = 10.0;

pub const BODY: Type = Type { size: 9.75, leading: 13.75 };
pub const SMALL: Type = Type { size: 8.25, leading: 11.25 };
pub const TABLE: Type = Type { size: 8.5, leading: 11.5 };
pub const TABLE_HEAD: Type = Type { size: 8.0, leading: 10.5 };
pub const LABEL: Type = Type { size: 7.5, leading: 10.0 };
pub const FURNITURE: Type = Type { size: 7.75, leading: FURNITURE_LEADING };
pub const TITLE: Type = Type { size: 21.0, leading: 25.5 };
pub const SUBJECT: Type = Type { size: 11.5, leading: 15.5 };

pub const INK: Colour = Colour(0x1B, 0x24, 0x28);
pub const SOFT_INK: Colour = Colour(0x56, 0x63, 0x68);
pub const ACCENT: Colour = Colour(0x1F, 0x4E, 0x5A);
pub const RULE: Colour = Colour(0xCF, 0xD7, 0xD9);
pub const BAND: Colour = Colour(0xE9, 0xEF, 0xF0);

/// Size of the letters and distance between base lines.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Type {
    pub size: f32,
    pub leading: f32,
}

impl Type {
    /// Base line below the top of a line, so that capitals stand in its middle.
    pub fn baseline(self) -> f32 {
        // Half of the height of the capitals, 0.66 of the size.
        self.leading / 2.0 + 0.33 * self.size
    }
}

/// Red, green and blue, 0 to 255.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Colour(pub u8, pub u8, pub u8);

/// How a heading of each level is set: type, air above, air below, colour.
pub fn heading(level: u8) -> (Type, f32, f32, Colour) {
    match level {
        0 | 1 => (Type { size: 14.5, leading: 18.5 }, 22.0, 6.0, ACCENT),
        2 => (Type { size: 11.5, leading: 15.0 }, 15.0, 4.0, ACCENT),
        _ => (Type { size: 9.75, leading: 13.5 }, 10.0, 2.0, INK),
    }
}

/// Colour of a tone's bar and word; none for plain text.
pub fn tone_colour(tone: Tone) -> Option<Colour> {
    match tone {
        Tone::Plain => None,
        Tone::Act => Some(Colour(0x9C, 0x2F, 0x1E)),
        Tone::Review => Some(Colour(0x99, 0x66, 0x0C)),
        Tone::Note => Some(Colour(0x2F, 0x6B, 0x87)),
        Tone::Quiet => Some(Colour(0x9A, 0xA5, 0xA9)),
    }
}

/// Ground behind a notice.
pub fn tone_ground(tone: Tone) -> Colour {
    match tone {
        Tone::Act => Colour(0xFB, 0xF1, 0xEF),
        Tone::Review => Colour(0xFA, 0xF5, 0xE9),
        Tone::Note => Colour(0xEF, 0xF5, 0xF8),
        Tone::Plain | Tone::Quiet => Colour(0xF5, 0xF7, 0xF7),
    }
}
