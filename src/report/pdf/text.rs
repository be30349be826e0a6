//! Measures text and breaks it into lines.

use crate::report::document::{Style, Text};
use crate::report::fonts::{Face, printable};

/// Rounding that a measured width may be off by, pt.
const SLACK: f32 = 0.01;

const NO_BREAK_SPACE: char = '\u{A0}';

/// Units, as far as the first stroke or exponent, that stay on the line of their number.
const UNITS: &[&str] = &[
    "%", "‰", "°C", "K", "V", "mV", "mol", "mmol", "J", "kJ", "MJ", "g", "mg", "µg", "kg", "t", "m", "mm", "µm", "cm",
    "L", "mL", "h", "min", "s", "d", "bar", "mbar", "Pa", "kPa", "MPa", "atm", "A", "mA", "µA", "W", "kW", "ppm",
    "ppb",
];

/// A stretch of a line in one style, as printed.
#[derive(Debug, Clone, PartialEq)]
pub struct Span {
    /// From the left edge of the line, pt.
    pub x: f32,
    pub style: Style,
    pub text: String,
}

/// One line of text, width in pt.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Line {
    pub spans: Vec<Span>,
    pub width: f32,
}

/// A stretch of text within which a line only breaks when the stretch alone is too wide.
#[derive(Debug, Default)]
struct Word {
    letters: Vec<(char, Style)>,
    /// Follows the word before it without a space.
    joined: bool,
}

/// The lines of a text set at this size in this width, pt. At least one line.
///
/// Lines break at white space and after the hyphens of compound words. What is wider than a line (a long formula)
/// breaks after a hyphen, plus sign, comma or the like, and only failing that between any two letters.
pub fn wrap(text: &Text, size: f32, width: f32) -> Vec<Line> {
    let mut lines = Vec::new();
    for words in words_of_lines(text) {
        let mut line = Line::default();
        for word in words {
            let gap = if word.joined { 0.0 } else { line.gap(size) };
            if line.width + gap + word.width(size) <= width + SLACK {
                line.push(&word.letters, !word.joined, size);
                continue;
            }
            if !line.spans.is_empty() {
                lines.push(std::mem::take(&mut line));
            }
            let mut rest = word.letters.as_slice();
            while rest.len() > 1 && letters_width(rest, size) > width + SLACK {
                let (piece, remainder) = rest.split_at(break_point(rest, size, width));
                line.push(piece, false, size);
                lines.push(std::mem::take(&mut line));
                rest = remainder;
            }
            line.push(rest, false, size);
        }
        lines.push(line);
    }
    lines
}

/// Width that the text takes when it breaks only at line feeds, pt.
pub fn natural_width(text: &Text, size: f32) -> f32 {
    wrap(text, size, f32::INFINITY).iter().map(|line| line.width).fold(0.0, f32::max)
}

/// Width of the widest stretch that should not be broken, pt.
pub fn unbroken_width(text: &Text, size: f32) -> f32 {
    words_of_lines(text).iter().flatten().map(|word| word.width(size)).fold(0.0, f32::max)
}

/// The text on one line, cut with an ellipsis where it is wider than the width, pt.
pub fn one_line(text: &str, style: Style, size: f32, width: f32) -> Line {
    let letters =
        |text: &str| -> Vec<_> { printable(&text.replace('\n', " ")).chars().map(|letter| (letter, style)).collect() };
    let mut kept = letters(text);
    if letters_width(&kept, size) > width {
        let room = width - Face::of(style).width("…", size);
        kept.truncate(fitting(&kept, size, room));
        kept.push(('…', style));
    }
    let mut line = Line::default();
    line.push(&kept, false, size);
    line
}

impl Word {
    fn width(&self, size: f32) -> f32 {
        letters_width(&self.letters, size)
    }
}

impl Line {
    /// Width of a space after what stands on the line.
    fn gap(&self, size: f32) -> f32 {
        self.spans.last().map_or(0.0, |span| Face::of(span.style).width(" ", size))
    }

    /// Appends letters; the space before them is real, so that copied text has it too.
    fn push(&mut self, letters: &[(char, Style)], spaced: bool, size: f32) {
        if spaced {
            self.width += self.gap(size);
            if let Some(span) = self.spans.last_mut() {
                span.text.push(' ');
            }
        }
        for stretch in letters.chunk_by(|one, next| one.1 == next.1) {
            let style = stretch[0].1;
            let text = printable(&stretch.iter().map(|&(letter, _)| letter).collect::<String>());
            let x = self.width;
            self.width += Face::of(style).width(&text, size);
            match self.spans.last_mut() {
                Some(span) if span.style == style => span.text.push_str(&text),
                _ => self.spans.push(Span { x, style, text }),
            }
        }
    }
}

/// The words of each line that the text's own line feeds make.
fn words_of_lines(text: &Text) -> Vec<Vec<Word>> {
    let letters: Vec<(char, Style)> =
        text.0.iter().flat_map(|run| run.text.chars().map(|letter| (letter, run.style))).collect();
    letters.split(|&(letter, _)| letter == '\n').map(words).collect()
}

fn words(letters: &[(char, Style)]) -> Vec<Word> {
    let mut words = Vec::new();
    for stretch in bound_stretches(letters) {
        let mut start = 0;
        for place in 1..stretch.len() {
            if ends_part_of_compound(&stretch, place) {
                words.push(Word { letters: stretch[start..place].to_vec(), joined: start > 0 });
                start = place;
            }
        }
        words.push(Word { letters: stretch[start..].to_vec(), joined: start > 0 });
    }
    words
}

/// The stretches between white space; a number is bound to its unit and uncertainty, a
/// coefficient to its formula, by a space without a break.
fn bound_stretches(letters: &[(char, Style)]) -> Vec<Vec<(char, Style)>> {
    let mut bound: Vec<Vec<(char, Style)>> = Vec::new();
    let mut before = String::new();
    for stretch in letters.split(|&(letter, _)| is_breaking_space(letter)).filter(|stretch| !stretch.is_empty()) {
        let token: String = stretch.iter().map(|&(letter, _)| letter).collect();
        match bound.last_mut() {
            Some(last) if belongs_to_number_before(&before, &token) => {
                last.push((NO_BREAK_SPACE, stretch[0].1));
                last.extend(stretch);
            }
            _ => bound.push(stretch.to_vec()),
        }
        before = token;
    }
    bound
}

fn belongs_to_number_before(before: &str, token: &str) -> bool {
    let after_number = before.ends_with(|letter: char| letter.is_ascii_digit() || is_superscript_figure(letter));
    let number = token.starts_with(|letter: char| letter.is_ascii_digit());
    let unit = token.split(['/', ',', '.', ';', ':', ')', '⁻', '²', '³']).next().unwrap_or_default();
    let coefficient = before.bytes().all(|byte| byte.is_ascii_digit());
    let formula = token.contains(|letter| matches!(letter, '\u{2070}'..='\u{209C}' | '²' | '³'));
    (after_number && (token == "±" || UNITS.contains(&unit))) || (before == "±" && number) || (coefficient && formula)
}

fn is_superscript_figure(letter: char) -> bool {
    matches!(letter, '¹' | '²' | '³' | '⁰' | '⁴'..='⁹')
}

fn is_breaking_space(letter: char) -> bool {
    letter.is_whitespace() && !matches!(letter, '\u{A0}' | '\u{2007}' | '\u{2009}' | '\u{202F}')
}

/// Whether a compound word ("acid-base") may be broken before this place. Charges, signs and ranges are not compounds.
fn ends_part_of_compound(letters: &[(char, Style)], place: usize) -> bool {
    let letter = |back: usize| place.checked_sub(back).map(|index| letters[index].0);
    let hyphen = matches!(letter(1), Some('-' | '\u{2010}'));
    let between_letters =
        letters[place].0.is_alphabetic() && [2, 3].iter().all(|&back| letter(back).is_some_and(char::is_alphabetic));
    (hyphen && between_letters) || letter(1) == Some('\u{200B}')
}

fn letters_width(letters: &[(char, Style)], size: f32) -> f32 {
    let mut buffer = [0; 4];
    letters.iter().map(|&(letter, style)| Face::of(style).width(letter.encode_utf8(&mut buffer), size)).sum()
}

/// How many of the letters fit in the width.
fn fitting(letters: &[(char, Style)], size: f32, width: f32) -> usize {
    let mut buffer = [0; 4];
    let mut used = 0.0;
    letters
        .iter()
        .take_while(|&&(letter, style)| {
            used += Face::of(style).width(letter.encode_utf8(&mut buffer), size);
            used <= width
        })
        .count()
}

/// Where a stretch that is too wide is broken: at least one letter, at most what fits.
fn break_point(letters: &[(char, Style)], size: f32, width: f32) -> usize {
    let fitting = fitting(letters, size, width).clamp(1, letters.len());
    let may_start_line = |place: usize| letters.get(place).is_none_or(|&(letter, _)| !belongs_to_letter_before(letter));
    let after_joint = |place: usize| may_start_line(place) && is_joint(letters[place - 1].0);
    // A joint in the first third would leave the line too empty.
    (fitting / 3 + 1..=fitting)
        .rev()
        .find(|&place| after_joint(place))
        .or_else(|| (1..=fitting).rev().find(|&place| may_start_line(place)))
        .unwrap_or(fitting)
}

fn is_joint(letter: char) -> bool {
    matches!(
        letter,
        NO_BREAK_SPACE
            | '-'
            | '\u{2010}'
            | '–'
            | '—'
            | '/'
            | '\\'
            | ','
            | ';'
            | ':'
            | '+'
            | ')'
            | ']'
            | '→'
            | '='
            | '·'
            | '_'
            | '&'
    )
}

/// Subscripts, superscripts, closing signs and combining marks never open a line.
fn belongs_to_letter_before(letter: char) -> bool {
    matches!(letter, '\u{2070}'..='\u{209C}' | '¹' | '²' | '³' | '\u{300}'..='\u{36F}' | ')' | ']' | ',' | ';' | '.' | '^')
}

#[cfg(test)]
mod tests {
    use super::*;

    fn plain(lines: &[Line]) -> Vec<String> {
        lines.iter().map(|line| line.spans.iter().map(|span| span.text.as_str()).collect()).collect()
    }

    #[test]
    fn no_line_is_wider_than_the_width_and_no_word_is_lost() {
        let words = "The mixed potential of the contact follows from a balance of anodic and cathodic currents";
        for width in [40.0, 77.0, 130.0, 400.0] {
            let lines = wrap(&Text::from(words), 10.0, width);
            assert!(lines.iter().all(|line| line.width <= width + SLACK));
            assert_eq!(plain(&lines).join(" "), words);
        }
    }

    #[test]
    fn styles_change_within_a_line_without_a_gap() {
        let text = Text::from("E of ").strong("Fe³⁺").plain("/").emphasis("Fe²⁺");
        let lines = wrap(&text, 10.0, 500.0);
        assert_eq!(plain(&lines), ["E of Fe³⁺/Fe²⁺"]);
        let line = &lines[0];
        for pair in line.spans.windows(2) {
            let end = pair[0].x + Face::of(pair[0].style).width(&pair[0].text, 10.0);
            assert!((end - pair[1].x).abs() < 0.01, "{pair:?}");
        }
    }

    #[test]
    fn compound_words_break_after_the_hyphen_and_charges_do_not() {
        let narrow = Face::of(Style::Regular).width("temperature-", 10.0) + 1.0;
        assert_eq!(plain(&wrap(&Text::from("temperature-dependent"), 10.0, narrow)), ["temperature-", "dependent"]);
        let narrow = Face::of(Style::Regular).width("of Cl", 10.0) + 1.0;
        assert_eq!(plain(&wrap(&Text::from("of Cl- and"), 10.0, narrow)), ["of", "Cl-", "and"]);
    }

    #[test]
    fn a_number_stays_with_its_unit_and_uncertainty() {
        let text = Text::from("a driving force of +480 ± 9 mV against the couple, ΔG = −92.6 kJ/mol in all");
        for width in (60..300).step_by(7) {
            let lines = plain(&wrap(&text, 10.0, width as f32));
            assert!(lines.iter().any(|line| line.contains("+480 ± 9 mV")), "{lines:?}");
            assert!(lines.iter().any(|line| line.contains("−92.6 kJ/mol")), "{lines:?}");
        }
        let reaction = Text::from("2 Fe³⁺ + Cu → 2 Fe²⁺ + Cu²⁺");
        for width in 40..150 {
            let lines = plain(&wrap(&reaction, 10.0, width as f32));
            assert!(lines.iter().all(|line| !line.trim_end().ends_with('2')), "{lines:?}");
        }
        // Too narrow for both: broken between them.
        let width = Face::of(Style::Regular).width("92.6 ", 10.0) + 1.0;
        assert_eq!(plain(&wrap(&Text::from("92.6 kJ"), 10.0, width)), ["92.6 ", "kJ"]);
    }

    #[test]
    fn a_long_formula_breaks_at_its_joints() {
        let lines = wrap(&Text::from("2Fe³⁺+CuFeS₂+4Cl⁻+3H₂O+2SO₄²⁻+UO₂²⁺"), 10.0, 70.0);
        assert!(lines.len() > 2);
        assert!(plain(&lines)[..lines.len() - 1].iter().all(|line| line.ends_with('+')), "{lines:?}");
    }

    #[test]
    fn an_unbreakable_word_of_300_letters_is_broken_to_fit() {
        let word = "x".repeat(300);
        let lines = wrap(&Text::from(word.as_str()), 10.0, 200.0);
        assert!(lines.iter().all(|line| line.width <= 200.0 + SLACK));
        assert_eq!(plain(&lines).concat(), word);
        // Narrower than one letter: one letter a line, no endless loop.
        assert_eq!(wrap(&Text::from("xxx"), 10.0, 1.0).len(), 3);
    }

    #[test]
    fn line_feeds_end_lines_and_empty_text_is_one_empty_line() {
        assert_eq!(plain(&wrap(&Text::from("one\ntwo three"), 10.0, 500.0)), ["one", "two three"]);
        assert_eq!(plain(&wrap(&Text::default(), 10.0, 500.0)), [""]);
    }

    #[test]
    fn an_overlong_running_head_is_cut_with_an_ellipsis() {
        let line = one_line(&"liquor ".repeat(50), Style::Regular, 8.0, 100.0);
        assert!(line.width <= 100.0);
        assert!(line.spans[0].text.ends_with('…'));
    }
}
