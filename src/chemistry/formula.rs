//! Chemical formulae with nesting, hydrate parts and charge.

use std::collections::BTreeMap;
use std::fmt;

use thiserror::Error;

use super::{Count, Element};

/// What is wrong with a formula, and where.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
#[error("`{formula}`: {problem} (at character {position})")]
pub struct FormulaError {
    pub formula: String,
    /// Character at which the problem stands, counted from 1.
    pub position: usize,
    pub problem: String,
}

/// A formula: what is in it, and its charge.
#[derive(Clone, PartialEq, Eq)]
pub struct Formula {
    /// ASCII writing without the charge, grouping as the user wrote it.
    body: String,
    pub composition: BTreeMap<Element, Count>,
    pub charge: i32,
}

impl Formula {
    /// Reads `SO4^2-`, `Fe³⁺`, `Na+`, `KFe3(SO4)2(OH)6`, `CuSO4*5H2O`, `Fe0.877S`, `e^-`.
    ///
    /// # Errors
    /// [`FormulaError`] says at which character what was expected.
    pub fn parse(text: &str) -> Result<Self, FormulaError> {
        let plain = to_ascii(text.trim());
        let fail = |position: usize, problem: &str| FormulaError {
            formula: text.trim().to_owned(),
            position,
            problem: problem.to_owned(),
        };
        let (body, charge) = split_charge(&plain).map_err(|(p, m)| fail(p, &m))?;
        if body == "e" && charge == -1 {
            return Ok(Self { body: "e".into(), composition: BTreeMap::new(), charge });
        }
        if body.is_empty() {
            return Err(fail(1, "a formula was expected"));
        }
        let composition = Reader::new(body).formula().map_err(|(p, m)| fail(p, &m))?;
        Ok(Self { body: body.to_owned(), composition, charge })
    }

    /// True for `e^-`.
    pub fn is_electron(&self) -> bool {
        self.composition.is_empty() && self.charge == -1
    }

    /// ASCII writing: `SO4^2-`, `Ag^+`.
    pub fn canonical(&self) -> String {
        match self.charge {
            0 => self.body.clone(),
            z => {
                let size = if z.abs() == 1 { String::new() } else { z.abs().to_string() };
                format!("{}^{size}{}", self.body, if z > 0 { '+' } else { '-' })
            }
        }
    }

    /// Writing with sub- and superscripts: `SO₄²⁻`.
    pub fn pretty(&self) -> String {
        let mut out = String::new();
        let mut after_symbol = false;
        for c in self.body.chars() {
            match c {
                '0'..='9' if after_symbol => out.push(subscript(c)),
                '.' if after_symbol => out.push('.'),
                '*' => {
                    out.push('·');
                    after_symbol = false;
                    continue;
                }
                _ => out.push(c),
            }
            after_symbol |= c.is_ascii_alphabetic() || c == ')' || c == ']';
        }
        if self.charge != 0 {
            if self.charge.abs() > 1 {
                out.extend(self.charge.abs().to_string().chars().map(superscript));
            }
            out.push(if self.charge > 0 { '⁺' } else { '⁻' });
        }
        out
    }

    /// g/mol
    pub fn molar_mass(&self) -> f64 {
        self.composition.iter().map(|(element, n)| element.molar_mass() * to_f64(*n)).sum()
    }

    /// Atoms of an element.
    pub fn count(&self, element: Element) -> Count {
        self.composition.get(&element).copied().unwrap_or_else(|| Count::from_integer(0))
    }

    /// Atoms of an element named by symbol.
    pub fn atoms(&self, symbol: &str) -> f64 {
        Element::from_symbol(symbol).map_or(0.0, |element| to_f64(self.count(element)))
    }

    /// kg of the element per kg of the substance.
    pub fn mass_fraction(&self, element: Element) -> f64 {
        element.molar_mass() * to_f64(self.count(element)) / self.molar_mass()
    }

    pub(super) fn body(&self) -> &str {
        &self.body
    }
}

impl fmt::Debug for Formula {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "Formula({})", self.canonical())
    }
}

impl fmt::Display for Formula {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.canonical())
    }
}

pub(super) fn to_f64(count: Count) -> f64 {
    *count.numer() as f64 / *count.denom() as f64
}

const SUPERSCRIPTS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
const SUBSCRIPTS: [char; 10] = ['₀', '₁', '₂', '₃', '₄', '₅', '₆', '₇', '₈', '₉'];

fn digit(c: char, table: [char; 10]) -> char {
    c.to_digit(10).map_or(c, |d| table[d as usize])
}

fn superscript(c: char) -> char {
    digit(c, SUPERSCRIPTS)
}

fn subscript(c: char) -> char {
    digit(c, SUBSCRIPTS)
}

/// Replaces sub-/superscripts and typographic signs by ASCII; a run of superscripts becomes `^…`.
fn to_ascii(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut raised = false;
    for c in text.chars() {
        let up = SUPERSCRIPTS.iter().position(|s| *s == c).map(|d| char::from(b'0' + d as u8)).or(match c {
            '⁺' => Some('+'),
            '⁻' => Some('-'),
            _ => None,
        });
        if let Some(plain) = up {
            if !raised && !out.ends_with('^') {
                out.push('^');
            }
            out.push(plain);
            raised = true;
            continue;
        }
        raised = false;
        match c {
            '−' | '–' => out.push('-'),
            '·' | '•' | '⋅' => out.push('*'),
            '[' => out.push('('),
            ']' => out.push(')'),
            c => match SUBSCRIPTS.iter().position(|s| *s == c) {
                Some(d) => out.push(char::from(b'0' + d as u8)),
                None => out.push(c),
            },
        }
    }
    out
}

type Problem = (usize, String);

/// Splits `SO4^2-` into body and charge; a bare trailing sign is a single charge unless a digit before it makes it ambiguous.
fn split_charge(text: &str) -> Result<(&str, i32), Problem> {
    if let Some((body, charge)) = text.split_once('^') {
        let at = body.chars().count() + 2;
        let expected = || (at, format!("after `^` a charge such as `2-` or `+` was expected, found `{charge}`"));
        let sign = match charge.chars().last() {
            Some('+') => 1,
            Some('-') => -1,
            _ => return Err(expected()),
        };
        let size = &charge[..charge.len() - 1];
        let size: i32 = if size.is_empty() { 1 } else { size.parse().map_err(|_| expected())? };
        return if (1..=12).contains(&size) { Ok((body, sign * size)) } else { Err(expected()) };
    }
    let Some(sign) = text.chars().last().filter(|c| matches!(c, '+' | '-')) else {
        return Ok((text, 0));
    };
    let body = &text[..text.len() - 1];
    let unit = if sign == '+' { 1 } else { -1 };
    let ambiguous = body.chars().last().is_some_and(|c| c.is_ascii_digit() || matches!(c, '+' | '-'));
    // `NO3-` and `NH4+` are read as single charges; `Fe3+` could be either and is not guessed.
    let simple = body.trim_end_matches(|c: char| c.is_ascii_digit());
    let lone_element = Element::from_symbol(simple).is_some();
    if ambiguous && (lone_element || body.ends_with(['+', '-'])) {
        let digits = &body[simple.len()..];
        return Err((
            body.chars().count() + 1,
            format!("the charge is ambiguous; write `{simple}^{digits}{sign}` for a charge of {digits}"),
        ));
    }
    Ok((body, unit))
}

struct Reader {
    chars: Vec<char>,
    at: usize,
}

impl Reader {
    fn new(text: &str) -> Self {
        Self { chars: text.chars().collect(), at: 0 }
    }

    fn peek(&self) -> Option<char> {
        self.chars.get(self.at).copied()
    }

    fn fail<T>(&self, problem: impl Into<String>) -> Result<T, Problem> {
        Err((self.at + 1, problem.into()))
    }

    fn formula(mut self) -> Result<BTreeMap<Element, Count>, Problem> {
        let mut total = BTreeMap::new();
        loop {
            let factor = self.number()?.unwrap_or_else(|| Count::from_integer(1));
            let part = self.group(0)?;
            if part.is_empty() {
                return self.fail("an element was expected");
            }
            add(&mut total, &part, factor);
            match self.peek() {
                None => return Ok(total),
                Some('*') => self.at += 1,
                Some(')') => return self.fail("a bracket closes that was not opened"),
                Some(c) => return self.fail(format!("`{c}` does not belong in a formula")),
            }
        }
    }

    /// Elements and bracketed groups up to `*`, `)` or the end.
    fn group(&mut self, depth: usize) -> Result<BTreeMap<Element, Count>, Problem> {
        if depth > 16 {
            return self.fail("brackets are nested too deep");
        }
        let mut total = BTreeMap::new();
        while let Some(c) = self.peek() {
            let part = match c {
                '(' => {
                    self.at += 1;
                    let inner = self.group(depth + 1)?;
                    if self.peek() != Some(')') {
                        return self.fail("a closing bracket was expected");
                    }
                    self.at += 1;
                    inner
                }
                c if c.is_ascii_uppercase() => BTreeMap::from([(self.element()?, Count::from_integer(1))]),
                _ => break,
            };
            let factor = self.number()?.unwrap_or_else(|| Count::from_integer(1));
            add(&mut total, &part, factor);
        }
        Ok(total)
    }

    fn element(&mut self) -> Result<Element, Problem> {
        for length in [2, 1] {
            let symbol: String = self.chars.iter().skip(self.at).take(length).collect();
            let whole = symbol.chars().count() == length && symbol.chars().skip(1).all(|c| c.is_ascii_lowercase());
            if let (true, Some(element)) = (whole, Element::from_symbol(&symbol)) {
                self.at += length;
                return Ok(element);
            }
        }
        let word: String = self.chars.iter().skip(self.at).take_while(|c| c.is_ascii_alphabetic()).collect();
        self.fail(format!("`{word}` does not begin with an element"))
    }

    /// An integer, decimal or fraction; `None` when no digit stands here.
    fn number(&mut self) -> Result<Option<Count>, Problem> {
        let start = self.at;
        while self.peek().is_some_and(|c| c.is_ascii_digit() || c == '.' || c == '/') {
            self.at += 1;
        }
        if start == self.at {
            return Ok(None);
        }
        let text: String = self.chars[start..self.at].iter().collect();
        match parse_count(&text) {
            Some(count) if count > Count::from_integer(0) => Ok(Some(count)),
            _ => {
                self.at = start;
                self.fail(format!("`{text}` is not a count"))
            }
        }
    }
}

/// `5`, `0.877` or `8/3` as an exact fraction.
pub(super) fn parse_count(text: &str) -> Option<Count> {
    if let Some((above, below)) = text.split_once('/') {
        let below = parse_count(below)?;
        return (below != Count::from_integer(0)).then(|| parse_count(above).map(|a| a / below))?;
    }
    let (whole, decimals) = text.split_once('.').unwrap_or((text, ""));
    if whole.len() + decimals.len() > 15 || (whole.is_empty() && decimals.is_empty()) {
        return None;
    }
    let digits: i128 = format!("{whole}{decimals}").parse().ok()?;
    Some(Count::new(digits, 10i128.pow(u32::try_from(decimals.len()).ok()?)))
}

fn add(total: &mut BTreeMap<Element, Count>, part: &BTreeMap<Element, Count>, factor: Count) {
    for (element, n) in part {
        *total.entry(*element).or_insert_with(|| Count::from_integer(0)) += *n * factor;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn atoms(text: &str, symbol: &str) -> f64 {
        Formula::parse(text).expect("a formula").atoms(symbol)
    }

    #[test]
    fn reads_nesting_hydrates_decimals_and_charge() {
        assert_eq!(atoms("KFe3(SO4)2(OH)6", "O"), 14.0);
        assert_eq!(atoms("CuSO4*5H2O", "H"), 10.0);
        assert_eq!(atoms("CdSO4·8/3H2O", "O"), 20.0 / 3.0);
        assert_eq!(atoms("Fe0.877S", "Fe"), 0.877);
        for (text, charge) in
            [("SO4^2-", -2), ("SO₄²⁻", -2), ("Fe³⁺", 3), ("Na+", 1), ("Cl-", -1), ("NO3-", -1), ("e^-", -1)]
        {
            assert_eq!(Formula::parse(text).expect(text).charge, charge, "{text}");
        }
    }

    #[test]
    fn writes_both_ways() {
        for (text, pretty) in [
            ("SO4^2-", "SO₄²⁻"),
            ("CuSO4*5H2O", "CuSO₄·5H₂O"),
            ("Fe^3+", "Fe³⁺"),
            ("KFe3(SO4)2(OH)6", "KFe₃(SO₄)₂(OH)₆"),
        ] {
            let formula = Formula::parse(text).expect(text);
            assert_eq!(formula.canonical(), text);
            assert_eq!(formula.pretty(), pretty);
            assert_eq!(Formula::parse(pretty).expect(pretty), formula);
        }
    }

    #[test]
    fn says_where_a_formula_is_wrong() {
        for (text, position, word) in [
            ("Fe3+", 4, "Fe^3+"),
            ("Fe(OH", 6, "closing"),
            ("Xx2", 1, "element"),
            ("Fe^+3", 4, "charge"),
            ("", 1, "expected"),
            ("FeO)", 4, "bracket"),
        ] {
            let error = Formula::parse(text).expect_err(text);
            assert_eq!(error.position, position, "{text}: {error}");
            assert!(error.to_string().contains(word), "{text}: {error}");
        }
    }

    /// IUPAC molar masses of common reagents, g/mol (sums of the abridged atomic weights).
    #[test]
    fn molar_masses() {
        for (text, mass) in [
            ("H2O", 18.015),
            ("CuFeS2", 183.511),
            ("CuSO4*5H2O", 249.677),
            ("NaClO3", 106.44),
            ("K2Cr2O7", 294.182),
            ("Au(CN)2^-", 249.006),
        ] {
            let found = Formula::parse(text).expect(text).molar_mass();
            assert!((found - mass).abs() < 0.02, "{text}: {found}");
        }
    }
}
