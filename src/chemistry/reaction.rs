//! The text of a reaction, read into terms.

use thiserror::Error;

use super::formula::parse_count;
use super::{Count, Formula, FormulaError};

/// State written behind a formula.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum StateSuffix {
    Aqueous,
    /// Any solid: `(s)`.
    Solid,
    Crystal,
    Amorphous,
    Liquid,
    Gas,
}

/// One term of a reaction as written.
#[derive(Debug, Clone, PartialEq)]
pub struct Term {
    pub coefficient: Option<Count>,
    pub formula: Formula,
    pub state: Option<StateSuffix>,
}

/// Both sides of a reaction as written.
#[derive(Debug, Clone, PartialEq)]
pub struct ReactionText {
    pub left: Vec<Term>,
    pub right: Vec<Term>,
}

/// Why a reaction cannot be read.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum ReactionError {
    #[error("a reaction needs one arrow (`->` or `=`) between its sides; found {found} in `{text}`")]
    Arrow { text: String, found: usize },
    #[error("the {side} side of `{text}` is empty")]
    EmptySide { text: String, side: &'static str },
    #[error(transparent)]
    Formula(#[from] FormulaError),
    #[error("a species is missing beside a `+` in `{side}`")]
    MissingTerm { side: String },
}

impl ReactionText {
    /// Reads `2 Fe^3+ + Cu(cr) -> 2 Fe^2+ + Cu^2+`; `->`, `→`, `=`, `⇌` and `<=>` part the sides, ` + ` with spaces the terms.
    ///
    /// # Errors
    /// [`ReactionError`] names the side or the formula at fault.
    pub fn parse(text: &str) -> Result<Self, ReactionError> {
        let plain = text.replace("<=>", "=").replace("<->", "=").replace("->", "=").replace(['→', '⇌', '↔'], "=");
        let sides: Vec<&str> = plain.split('=').collect();
        let [left, right] = sides.as_slice() else {
            return Err(ReactionError::Arrow { text: text.to_owned(), found: sides.len() - 1 });
        };
        for (side, name) in [(left, "left"), (right, "right")] {
            if side.trim().is_empty() {
                return Err(ReactionError::EmptySide { text: text.to_owned(), side: name });
            }
        }
        Ok(Self { left: terms(left)?, right: terms(right)? })
    }
}

fn terms(side: &str) -> Result<Vec<Term>, ReactionError> {
    let missing = || ReactionError::MissingTerm { side: side.trim().to_owned() };
    let mut groups: Vec<Vec<&str>> = vec![Vec::new()];
    for word in side.split_whitespace() {
        match (word, groups.last_mut()) {
            ("+", _) => groups.push(Vec::new()),
            (_, Some(group)) => group.push(word),
            (_, None) => {}
        }
    }
    groups.into_iter().map(|words| term(&words, missing)).collect()
}

fn term(words: &[&str], missing: impl Fn() -> ReactionError) -> Result<Term, ReactionError> {
    match words {
        [] => Err(missing()),
        [one] => {
            let digits = one.find(|c: char| !(c.is_ascii_digit() || c == '.' || c == '/')).unwrap_or(one.len());
            let (number, formula) = one.split_at(digits);
            species(formula, if number.is_empty() { None } else { parse_count(number) })
        }
        [number, rest @ ..] => match parse_count(number) {
            Some(count) => species(&rest.concat(), Some(count)),
            None => species(&words.concat(), None),
        },
    }
}

fn species(text: &str, coefficient: Option<Count>) -> Result<Term, ReactionError> {
    const SUFFIXES: [(&str, StateSuffix); 6] = [
        ("(aq)", StateSuffix::Aqueous),
        ("(cr)", StateSuffix::Crystal),
        ("(am)", StateSuffix::Amorphous),
        ("(s)", StateSuffix::Solid),
        ("(l)", StateSuffix::Liquid),
        ("(g)", StateSuffix::Gas),
    ];
    let found = SUFFIXES.iter().find_map(|(suffix, state)| text.strip_suffix(suffix).map(|formula| (formula, *state)));
    let (formula, state) = found.map_or((text, None), |(formula, state)| (formula, Some(state)));
    Ok(Term { coefficient, formula: Formula::parse(formula)?, state })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reads_coefficients_states_and_charges() {
        let reaction = ReactionText::parse("2 Fe^3+ + Cu(cr) → 2Fe^2+ + Cu^2+ + 1/2 O2(g)").expect("a reaction");
        assert_eq!(reaction.left.len(), 2);
        assert_eq!(reaction.left[0].coefficient, Some(Count::from_integer(2)));
        assert_eq!(reaction.left[1].state, Some(StateSuffix::Crystal));
        assert_eq!(reaction.right[0].coefficient, Some(Count::from_integer(2)));
        assert_eq!(reaction.right[2].coefficient, Some(Count::new(1, 2)));
        assert_eq!(reaction.right[2].state, Some(StateSuffix::Gas));
    }

    #[test]
    fn faults_are_named() {
        assert!(matches!(ReactionText::parse("Fe + Cu"), Err(ReactionError::Arrow { found: 0, .. })));
        assert!(matches!(ReactionText::parse("-> Cu"), Err(ReactionError::EmptySide { side: "left", .. })));
        assert!(matches!(ReactionText::parse("Fe + -> Cu"), Err(ReactionError::MissingTerm { .. })));
        assert!(matches!(ReactionText::parse("Fe -> Qz"), Err(ReactionError::Formula(_))));
    }
}
