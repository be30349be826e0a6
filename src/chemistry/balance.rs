//! Whole-number coefficients from the exact rational null space of the matrix of elements and charge.

use std::collections::BTreeSet;
use std::fmt;

use num_rational::Ratio;
use thiserror::Error;

use super::{Element, Formula};

type Exact = Ratio<i128>;

/// Why a reaction cannot be balanced.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum BalanceError {
    #[error("it cannot balance: {what} appears on one side only, or in proportions that nothing makes up")]
    NotPossible { what: String },
    #[error("it is not one reaction but {dimension} independent ones; name fewer species or balance them apart")]
    NotUnique { dimension: usize },
    #[error("{formula} would have to stand on the other side, or takes no part")]
    WrongSide { formula: String },
    #[error("the couple is written the wrong way round: {oxidised} does not take electrons to become {reduced}")]
    NotReduction { oxidised: String, reduced: String },
    #[error("the coefficients are too large to be meant")]
    Overflow,
}

/// Acid: H⁺ and H₂O close a half-reaction. Base: OH⁻ and H₂O.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Medium {
    Acid,
    Base,
}

/// A balanced reaction: negative coefficients are used up, positive ones made.
#[derive(Debug, Clone, PartialEq)]
pub struct Balanced {
    pub coefficients: Vec<(Formula, i64)>,
}

impl Balanced {
    /// Electrons used up (positive in a reduction), zero when none appear.
    pub fn electrons(&self) -> i64 {
        self.coefficients.iter().filter(|(f, _)| f.is_electron()).map(|(_, n)| -n).sum()
    }

    fn write(&self, arrow: &str, name: impl Fn(&Formula) -> String) -> String {
        let side = |sign: i64| {
            let words: Vec<String> = self
                .coefficients
                .iter()
                .filter(|(_, n)| n * sign > 0)
                .map(|(f, n)| if n * sign == 1 { name(f) } else { format!("{} {}", n * sign, name(f)) })
                .collect();
            words.join(" + ")
        };
        format!("{}{arrow}{}", side(-1), side(1))
    }

    /// `2 Fe³⁺ + Cu → 2 Fe²⁺ + Cu²⁺`
    pub fn pretty(&self) -> String {
        self.write(" → ", Formula::pretty)
    }
}

impl fmt::Display for Balanced {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.write(" = ", Formula::canonical))
    }
}

/// Smallest whole coefficients, all positive, left side first.
///
/// # Errors
/// [`BalanceError`] names what cannot balance, how many reactions are mixed, or who stands on the wrong side.
pub fn balance(left: &[Formula], right: &[Formula]) -> Result<Vec<i64>, BalanceError> {
    let columns: Vec<(&Formula, i128)> = left.iter().map(|f| (f, -1)).chain(right.iter().map(|f| (f, 1))).collect();
    let basis = null_space(&columns)?;
    match basis.as_slice() {
        [] => Err(BalanceError::NotPossible { what: culprit(&columns) }),
        [one] => {
            let whole = whole_numbers(one)?;
            let flipped: Vec<i64> =
                if whole.iter().sum::<i64>() < 0 { whole.iter().map(|n| -n).collect() } else { whole };
            match flipped.iter().position(|n| *n <= 0) {
                Some(place) => Err(BalanceError::WrongSide { formula: columns[place].0.canonical() }),
                None => Ok(flipped),
            }
        }
        many => Err(BalanceError::NotUnique { dimension: many.len() }),
    }
}

/// Balances with as few of the `helpers` (H₂O, H⁺ or OH⁻, e⁻, ligands) as are needed, on whichever side they fall.
///
/// # Errors
/// As [`balance`]; the error of the largest set of helpers is the one reported.
pub fn balance_with(left: &[Formula], right: &[Formula], helpers: &[Formula]) -> Result<Balanced, BalanceError> {
    let mut last = BalanceError::NotPossible { what: "nothing".into() };
    for set in subsets(helpers) {
        match try_with(left, right, &set) {
            Ok(balanced) => return Ok(balanced),
            // More helpers only add freedom to a reaction that is already ambiguous.
            Err(error @ BalanceError::NotUnique { .. }) if set.is_empty() => return Err(error),
            Err(error) => last = error,
        }
    }
    Err(last)
}

/// Balances a reduction: oxidised + n e⁻ → reduced, with the medium's ions, water and the `spectators` (ligands).
///
/// # Errors
/// [`BalanceError::NotReduction`] when no electron is taken up; else as [`balance_with`].
pub fn half_reaction(
    oxidised: &Formula,
    reduced: &Formula,
    spectators: &[Formula],
    medium: Medium,
) -> Result<Balanced, BalanceError> {
    let ion = if medium == Medium::Acid { "H^+" } else { "OH^-" };
    let parse = |texts: &[&str]| texts.iter().filter_map(|t| Formula::parse(t).ok()).collect::<Vec<_>>();
    let mut helpers = parse(&["H2O", ion]);
    helpers.extend(spectators.iter().cloned());
    helpers.retain(|h| h != oxidised && h != reduced);
    // The electron takes part by right: oxygen and water alone would otherwise balance to hydrogen peroxide.
    let left: Vec<Formula> = std::iter::once(oxidised.clone()).chain(parse(&["e^-"])).collect();
    balance_with(&left, std::slice::from_ref(reduced), &helpers).map_err(|error| match error {
        BalanceError::WrongSide { formula } if formula == "e^-" => {
            BalanceError::NotReduction { oxidised: oxidised.canonical(), reduced: reduced.canonical() }
        }
        other => other,
    })
}

/// Subsets in order of size, each keeping the order of the helpers; helper lists are short.
fn subsets(helpers: &[Formula]) -> Vec<Vec<&Formula>> {
    let helpers = &helpers[..helpers.len().min(8)];
    let mut sets: Vec<Vec<&Formula>> = (0u32..1 << helpers.len())
        .map(|mask| helpers.iter().enumerate().filter(|(i, _)| mask >> i & 1 == 1).map(|(_, h)| h).collect())
        .collect();
    sets.sort_by_key(Vec::len);
    sets
}

fn try_with(left: &[Formula], right: &[Formula], helpers: &[&Formula]) -> Result<Balanced, BalanceError> {
    let named = left.iter().map(|f| (f, -1)).chain(right.iter().map(|f| (f, 1)));
    let columns: Vec<(&Formula, i128)> = named.chain(helpers.iter().map(|f| (*f, 1))).collect();
    let count = left.len() + right.len();
    let basis = null_space(&columns)?;
    let one = match basis.as_slice() {
        [] => return Err(BalanceError::NotPossible { what: culprit(&columns) }),
        [one] => one,
        many => return Err(BalanceError::NotUnique { dimension: many.len() }),
    };
    let mut whole = whole_numbers(one)?;
    if whole.iter().take(count).sum::<i64>() < 0 {
        whole.iter_mut().for_each(|n| *n = -*n);
    }
    if let Some(place) = whole.iter().take(count).position(|n| *n <= 0) {
        return Err(BalanceError::WrongSide { formula: columns[place].0.canonical() });
    }
    let coefficients = columns
        .iter()
        .zip(whole)
        .map(|((formula, sign), n)| ((*formula).clone(), n * i64::try_from(*sign).unwrap_or(1)))
        .filter(|(_, n)| *n != 0)
        .collect();
    Ok(Balanced { coefficients })
}

/// Rows: elements and charge. Columns: species, those on the left with their sign turned.
fn matrix(columns: &[(&Formula, i128)]) -> Vec<Vec<Exact>> {
    let elements: BTreeSet<Element> = columns.iter().flat_map(|(f, _)| f.composition.keys().copied()).collect();
    let sign = |s: i128| Exact::from_integer(s);
    let mut rows: Vec<Vec<Exact>> =
        elements.iter().map(|e| columns.iter().map(|(f, s)| f.count(*e) * sign(*s)).collect()).collect();
    rows.push(columns.iter().map(|(f, s)| Exact::from_integer(i128::from(f.charge)) * sign(*s)).collect());
    rows
}

/// Basis of the null space by exact elimination to the reduced echelon form.
fn null_space(columns: &[(&Formula, i128)]) -> Result<Vec<Vec<Exact>>, BalanceError> {
    let zero = Exact::from_integer(0);
    let mut rows = matrix(columns);
    let width = columns.len();
    let mut pivots: Vec<usize> = Vec::new();
    for column in 0..width {
        let top = pivots.len();
        let Some(found) = (top..rows.len()).find(|r| rows[*r][column] != zero) else { continue };
        rows.swap(top, found);
        let lead = rows[top][column];
        rows[top].iter_mut().for_each(|v| *v /= lead);
        let pivot_row = rows[top].clone();
        for (r, row) in rows.iter_mut().enumerate() {
            let factor = row[column];
            if r != top && factor != zero {
                for (value, pivot) in row.iter_mut().zip(&pivot_row) {
                    *value -= factor * *pivot;
                }
            }
        }
        if rows.iter().flatten().any(|v| v.denom().abs() > 1 << 60 || v.numer().abs() > 1 << 60) {
            return Err(BalanceError::Overflow);
        }
        pivots.push(column);
    }
    let free = (0..width).filter(|c| !pivots.contains(c));
    Ok(free
        .map(|c| {
            let mut vector = vec![zero; width];
            vector[c] = Exact::from_integer(1);
            for (row, pivot) in pivots.iter().enumerate() {
                vector[*pivot] = -rows[row][c];
            }
            vector
        })
        .collect())
}

fn whole_numbers(vector: &[Exact]) -> Result<Vec<i64>, BalanceError> {
    let multiple = vector.iter().fold(1i128, |m, v| m / gcd(m, *v.denom()) * v.denom());
    let scaled: Vec<i128> = vector.iter().map(|v| v.numer() * (multiple / v.denom())).collect();
    let shared = scaled.iter().fold(0i128, |g, v| gcd(g, v.abs())).max(1);
    scaled.iter().map(|v| i64::try_from(v / shared).map_err(|_| BalanceError::Overflow)).collect()
}

fn gcd(a: i128, b: i128) -> i128 {
    if b == 0 { a.abs() } else { gcd(b, a % b) }
}

/// The first element that one side lacks, to name in the message; else the charge.
fn culprit(columns: &[(&Formula, i128)]) -> String {
    let elements: BTreeSet<Element> = columns.iter().flat_map(|(f, _)| f.composition.keys().copied()).collect();
    let one_sided = |e: &Element| {
        let signs: BTreeSet<i128> =
            columns.iter().filter(|(f, _)| f.composition.contains_key(e)).map(|(_, s)| *s).collect();
        signs.len() == 1
    };
    elements
        .iter()
        .find(|e| one_sided(e))
        .map_or_else(|| "the charge or an element".to_owned(), |e| e.name().to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chemistry::ReactionText;

    fn parse(texts: &[&str]) -> Vec<Formula> {
        texts.iter().map(|t| Formula::parse(t).expect(t)).collect()
    }

    fn balanced(text: &str, helpers: &[&str]) -> Result<String, BalanceError> {
        let reaction = ReactionText::parse(text).expect(text);
        let side = |terms: &[super::super::Term]| terms.iter().map(|t| t.formula.clone()).collect::<Vec<_>>();
        balance_with(&side(&reaction.left), &side(&reaction.right), &parse(helpers)).map(|b| b.to_string())
    }

    const ACID: &[&str] = &["H2O", "H^+"];
    const BASE: &[&str] = &["H2O", "OH^-"];

    /// Coefficients as the trade and general chemistry texts print them; common practice, no source.
    #[test]
    fn known_reactions() {
        for (text, helpers, expected) in [
            ("CuFeS2 + Fe^3+ -> Cu^2+ + Fe^2+ + S", ACID, "CuFeS2 + 4 Fe^3+ = Cu^2+ + 5 Fe^2+ + 2 S"),
            ("Au + CN^- + O2 -> Au(CN)2^-", BASE, "4 Au + 8 CN^- + O2 + 2 H2O = 4 Au(CN)2^- + 4 OH^-"),
            ("MnO4^- + Cl^- -> Mn^2+ + Cl2", ACID, "2 MnO4^- + 10 Cl^- + 16 H^+ = 2 Mn^2+ + 5 Cl2 + 8 H2O"),
            ("Cr2O7^2- + Fe^2+ -> Cr^3+ + Fe^3+", ACID, "Cr2O7^2- + 6 Fe^2+ + 14 H^+ = 2 Cr^3+ + 6 Fe^3+ + 7 H2O"),
            ("FeS2 + Fe^3+ -> Fe^2+ + SO4^2-", ACID, "FeS2 + 14 Fe^3+ + 8 H2O = 15 Fe^2+ + 2 SO4^2- + 16 H^+"),
            ("Cu + NO3^- -> Cu^2+ + NO", ACID, "3 Cu + 2 NO3^- + 8 H^+ = 3 Cu^2+ + 2 NO + 4 H2O"),
            ("S2O3^2- + I2 -> S4O6^2- + I^-", ACID, "2 S2O3^2- + I2 = S4O6^2- + 2 I^-"),
            ("Zn -> Zn(OH)4^2- + H2", BASE, "Zn + 2 H2O + 2 OH^- = Zn(OH)4^2- + H2"),
            ("ClO3^- + Cl^- -> Cl2", ACID, "ClO3^- + 5 Cl^- + 6 H^+ = 3 Cl2 + 3 H2O"),
            ("MnO2 + Fe^2+ -> Mn^2+ + Fe^3+", ACID, "MnO2 + 2 Fe^2+ + 4 H^+ = Mn^2+ + 2 Fe^3+ + 2 H2O"),
            (
                "As2S3 + NO3^- -> H3AsO4 + SO4^2- + NO",
                ACID,
                "3 As2S3 + 28 NO3^- + 4 H2O + 10 H^+ = 6 H3AsO4 + 9 SO4^2- + 28 NO",
            ),
            ("CN^- + ClO^- -> OCN^- + Cl^-", BASE, "CN^- + ClO^- = OCN^- + Cl^-"),
            ("Cu2O -> Cu + Cu^2+", ACID, "Cu2O + 2 H^+ = Cu + Cu^2+ + H2O"),
            ("Al -> Al(OH)4^- + H2", BASE, "2 Al + 6 H2O + 2 OH^- = 2 Al(OH)4^- + 3 H2"),
        ] {
            assert_eq!(balanced(text, helpers).as_deref(), Ok(expected), "{text}");
        }
    }

    #[test]
    fn half_reactions_count_their_electrons() {
        for (oxidised, reduced, ligands, medium, expected) in [
            ("MnO4^-", "Mn^2+", vec![], Medium::Acid, "MnO4^- + 5 e^- + 8 H^+ = Mn^2+ + 4 H2O"),
            ("AuCl4^-", "Au", vec!["Cl^-"], Medium::Acid, "AuCl4^- + 3 e^- = Au + 4 Cl^-"),
            ("MnO4^-", "MnO2", vec![], Medium::Base, "MnO4^- + 3 e^- + 2 H2O = MnO2 + 4 OH^-"),
            ("Fe^3+", "Fe^2+", vec![], Medium::Acid, "Fe^3+ + e^- = Fe^2+"),
            ("O2", "H2O", vec![], Medium::Acid, "O2 + 4 e^- + 4 H^+ = 2 H2O"),
            ("O2", "H2O2", vec![], Medium::Acid, "O2 + 2 e^- + 2 H^+ = H2O2"),
        ] {
            let pair = parse(&[oxidised, reduced]);
            let half = half_reaction(&pair[0], &pair[1], &parse(&ligands), medium).expect(oxidised);
            assert_eq!(half.to_string(), expected);
        }
        let pair = parse(&["Fe^2+", "Fe^3+"]);
        assert!(matches!(half_reaction(&pair[0], &pair[1], &[], Medium::Acid), Err(BalanceError::NotReduction { .. })));
    }

    #[test]
    fn faults_are_named() {
        let impossible = balance(&parse(&["Fe"]), &parse(&["Cu"]));
        assert!(matches!(impossible, Err(BalanceError::NotPossible { .. })), "{impossible:?}");
        let mixed = balance(&parse(&["H2O2", "MnO4^-", "H^+"]), &parse(&["O2", "Mn^2+", "H2O"]));
        assert_eq!(mixed, Err(BalanceError::NotUnique { dimension: 2 }));
        assert_eq!(balanced("ClO3^- + Cl^- -> ClO2 + Cl2", ACID), Err(BalanceError::NotUnique { dimension: 2 }));
        assert!(balanced("Cu + H2O -> Cu^2+ + Cu2O", &["H^+"]).is_err());
    }
}
