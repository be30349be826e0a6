//! Reactions and couples as a user writes them, found in the library and balanced.

use std::collections::BTreeMap;

use thiserror::Error;

use crate::chemistry::{
    self, BalanceError, Constituent, Element, Formula, Medium, ReactionError, ReactionText, StateSuffix, Term,
};
use crate::library::record::State;
use crate::library::{Library, NotFound, Species, SpeciesId};
use crate::quantity::{Estimate, FARADAY, Kelvin};

use super::equation::{Equation, add};
use super::gibbs::GibbsTable;
use super::water::RangeError;

/// Why a reaction or couple in words cannot be computed.
#[derive(Debug, Error)]
pub enum NamedError {
    #[error(transparent)]
    Text(#[from] ReactionError),
    #[error(transparent)]
    NotFound(#[from] NotFound),
    #[error("`{text}` cannot be balanced: {source}")]
    Balance { text: String, source: BalanceError },
    #[error("`{formula}` is in the library, but not in the state asked for; it is known as {known}")]
    State { formula: String, known: String },
    #[error("a couple is written `oxidised/reduced`, such as `Fe^3+/Fe^2+`; found `{0}`")]
    Couple(String),
    #[error("the coefficients given in `{text}` do not balance; without them it is {balanced}")]
    Coefficients { text: String, balanced: String },
    #[error(
        "`{0}` is held as a ligand only: its Gibbs energy is a reference zero, so a reaction that breaks it up has no energy here"
    )]
    Ligand(String),
    #[error(transparent)]
    Range(#[from] RangeError),
}

/// What a reaction gives at one temperature.
#[derive(Debug, Clone)]
pub struct ReactionValues {
    pub delta_g: Estimate,
    /// J/mol, by Gibbs and Helmholtz from G over ± 1 K.
    pub delta_h: f64,
    pub log_k: Estimate,
    /// V, when electrons move: −ΔG/nF.
    pub potential: Option<Estimate>,
}

/// Reads a reaction, finds its species and balances it with water, H⁺ (or OH⁻ in base) and electrons as needed.
///
/// # Errors
/// [`NamedError`] names the species, the state or the element at fault.
pub fn reaction(text: &str, library: &Library, medium: Medium) -> Result<Equation, NamedError> {
    let parsed = ReactionText::parse(text)?;
    let terms: Vec<&Term> = parsed.left.iter().chain(&parsed.right).collect();
    let places = terms.iter().map(|term| place(term, library)).collect::<Result<Vec<_>, _>>()?;
    let coefficients = coefficients(text, &parsed, medium)?;
    let mut equation = Equation { terms: Vec::new(), electrons: 0.0 };
    for (i, (formula, n)) in coefficients.iter().enumerate() {
        match places.get(i) {
            _ if formula.is_electron() => equation.electrons += n,
            Some(Some(id)) => add(&mut equation.terms, *id, *n),
            _ => add(&mut equation.terms, library.find(&formula.canonical())?.id, *n),
        }
    }
    keeps_ligands(&equation, library)?;
    Ok(equation)
}

/// Organic ligands whose Gibbs energy is a reference must leave a reaction as they entered it.
fn keeps_ligands(equation: &Equation, library: &Library) -> Result<(), NamedError> {
    let mut units: BTreeMap<String, f64> = BTreeMap::new();
    for (id, n) in &equation.terms {
        for (constituent, count) in &library.get(*id).constituents {
            if let Constituent::Unit { text, .. } = constituent {
                *units.entry(text.clone()).or_default() += n * count;
            }
        }
    }
    let broken = units
        .into_iter()
        .find(|(text, n)| n.abs() > 1e-9 && library.records(text).first().is_some_and(|s| s.is_ligand_reference()));
    broken.map_or(Ok(()), |(text, _)| Err(NamedError::Ligand(text)))
}

/// The species of a term; none for the electron.
fn place(term: &Term, library: &Library) -> Result<Option<SpeciesId>, NamedError> {
    if term.formula.is_electron() {
        return Ok(None);
    }
    find(term, library).map(|species| Some(species.id))
}

/// Signed coefficients of the terms in their order, then of the helpers that closing took.
fn coefficients(text: &str, parsed: &ReactionText, medium: Medium) -> Result<Vec<(Formula, f64)>, NamedError> {
    let side = |terms: &[Term]| terms.iter().map(|t| t.formula.clone()).collect::<Vec<_>>();
    let (left, right) = (side(&parsed.left), side(&parsed.right));
    let terms = || parsed.left.iter().chain(&parsed.right);
    let ion = if medium == Medium::Acid { "H^+" } else { "OH^-" };
    let helpers: Vec<Formula> = ["H2O", ion, "e^-"]
        .iter()
        .filter_map(|h| Formula::parse(h).ok())
        .filter(|h| terms().all(|t| t.formula != *h))
        .collect();
    let given: Vec<f64> = terms().map(|t| t.coefficient.map_or(1.0, ratio)).collect();
    let some_given = terms().any(|t| t.coefficient.is_some());
    // Electrons close a half-reaction only: a whole reaction that water and its ions close has none left over.
    let without: Vec<Formula> = helpers.iter().filter(|h| !h.is_electron()).cloned().collect();
    let whole = chemistry::balance_with(&left, &right, &without);
    match whole.or_else(|_| chemistry::balance_with(&left, &right, &helpers)) {
        Ok(balanced) => {
            let plain: Vec<(Formula, f64)> =
                balanced.coefficients.iter().map(|(f, n)| (f.clone(), *n as f64)).collect();
            if some_given { scaled_as_given(text, &plain, &given, &balanced.to_string()) } else { Ok(plain) }
        }
        // A reaction with several answers is taken as written when its own coefficients close it.
        Err(source) => {
            let signs = left.iter().map(|_| -1.0).chain(right.iter().map(|_| 1.0));
            let own: Vec<(Formula, f64)> =
                left.iter().chain(&right).cloned().zip(signs.zip(&given).map(|(s, n)| s * n)).collect();
            let several = matches!(source, BalanceError::NotUnique { .. });
            if several && closes(&own) { Ok(own) } else { Err(NamedError::Balance { text: text.to_owned(), source }) }
        }
    }
}

fn ratio(count: chemistry::Count) -> f64 {
    *count.numer() as f64 / *count.denom() as f64
}

/// Scales the balanced reaction to the coefficients that the user wrote, which must be in the same proportions.
fn scaled_as_given(
    text: &str,
    balanced: &[(Formula, f64)],
    given: &[f64],
    words: &str,
) -> Result<Vec<(Formula, f64)>, NamedError> {
    let factor = given[0] / balanced[0].1.abs();
    let same = given.iter().zip(balanced).all(|(g, (_, n))| (g - n.abs() * factor).abs() < 1e-9);
    if same {
        return Ok(balanced.iter().map(|(f, n)| (f.clone(), n * factor)).collect());
    }
    Err(NamedError::Coefficients { text: text.to_owned(), balanced: words.to_owned() })
}

fn closes(terms: &[(Formula, f64)]) -> bool {
    let charge: f64 = terms.iter().map(|(f, n)| n * f64::from(f.charge)).sum();
    let mut atoms: BTreeMap<Element, f64> = BTreeMap::new();
    for (formula, n) in terms {
        for (element, count) in &formula.composition {
            *atoms.entry(*element).or_default() += n * ratio(*count);
        }
    }
    charge.abs() < 1e-9 && atoms.values().all(|n| n.abs() < 1e-9)
}

fn find<'l>(term: &Term, library: &'l Library) -> Result<&'l Species, NamedError> {
    let text = term.formula.canonical();
    let states: &[State] = match term.state {
        None => return Ok(library.find(&text)?),
        Some(StateSuffix::Aqueous) => &[State::Aqueous],
        Some(StateSuffix::Solid) => &[State::Crystal, State::Amorphous],
        Some(StateSuffix::Crystal) => &[State::Crystal],
        Some(StateSuffix::Amorphous) => &[State::Amorphous],
        Some(StateSuffix::Liquid) => &[State::Liquid],
        Some(StateSuffix::Gas) => &[State::Gas],
    };
    let records = library.records(&text);
    if records.is_empty() {
        library.find(&text)?;
    }
    states.iter().find_map(|state| records.iter().find(|s| s.state == *state).copied()).ok_or_else(|| {
        NamedError::State { formula: text, known: records.iter().map(|s| s.label()).collect::<Vec<_>>().join(", ") }
    })
}

/// The standard half-reaction of a couple written `oxidised/reduced`, with the ligands that its complexes set free.
///
/// # Errors
/// [`NamedError`] when a side is not known or the couple does not take up electrons.
pub fn couple(text: &str, library: &Library, medium: Medium) -> Result<(SpeciesId, SpeciesId, Equation), NamedError> {
    let (oxidised, reduced) = text.split_once('/').ok_or_else(|| NamedError::Couple(text.to_owned()))?;
    let side = |part: &str| -> Result<&Species, NamedError> {
        let reaction = ReactionText::parse(&format!("{part} = {part}"))?;
        reaction.left.first().map_or_else(|| Err(NamedError::Couple(text.to_owned())), |term| find(term, library))
    };
    let (ox, red) = (side(oxidised)?, side(reduced)?);
    let spectators: Vec<Formula> = ligands(ox, red, library).into_iter().map(|s| s.formula.clone()).collect();
    let balanced = chemistry::half_reaction(&ox.formula, &red.formula, &spectators, medium)
        .map_err(|source| NamedError::Balance { text: text.to_owned(), source })?;
    let mut equation = Equation { terms: Vec::new(), electrons: 0.0 };
    for (formula, n) in &balanced.coefficients {
        let n = *n as f64;
        if formula.is_electron() {
            equation.electrons += n;
        } else if *formula == ox.formula {
            equation.terms.push((ox.id, n));
        } else if *formula == red.formula {
            equation.terms.push((red.id, n));
        } else {
            let text = formula.canonical();
            let species = library.dissolved(&text).or_else(|_| library.find(&text))?;
            equation.terms.push((species.id, n));
        }
    }
    keeps_ligands(&equation, library)?;
    Ok((ox.id, red.id, equation))
}

/// Plain ions of the constituents that stand on one side only in one state: the ligands.
fn ligands<'l>(ox: &'l Species, red: &'l Species, library: &'l Library) -> Vec<&'l Species> {
    let mut list = Vec::new();
    for (one, other) in [(ox, red), (red, ox)] {
        for (constituent, _) in &one.constituents {
            let shared = other.constituents.iter().any(|(c, _)| c.element_name() == constituent.element_name());
            let solvent = matches!(constituent.to_string().as_str(), "H+1" | "O-2");
            if shared || solvent {
                continue;
            }
            let plain = library
                .holding(constituent)
                .filter(|s| s.state == State::Aqueous)
                .filter(|s| {
                    s.constituents
                        .iter()
                        .all(|(c, _)| c == constituent || matches!(c.to_string().as_str(), "H+1" | "O-2"))
                })
                .min_by_key(|s| (s.formula.atoms("H") as i64, s.formula.charge.abs()));
            list.extend(plain);
        }
    }
    list
}

/// Electrons that move in an equation: those written, else those that the oxidation numbers of its constituents demand.
pub fn electrons_moved(equation: &Equation, library: &Library) -> f64 {
    if equation.electrons != 0.0 {
        return equation.electrons.abs();
    }
    // Per element, atoms leave states (negative) and enter states (positive); the work of moving them along the axis of
    // oxidation numbers, upward, is the number of electrons lost.
    let mut change: BTreeMap<String, BTreeMap<i64, f64>> = BTreeMap::new();
    for (id, n) in &equation.terms {
        for (constituent, count) in &library.get(*id).constituents {
            let milli = (constituent.oxidation() * 1000.0).round() as i64;
            *change.entry(constituent.element_name()).or_default().entry(milli).or_default() += n * count;
        }
    }
    change.values().map(upward).sum()
}

fn upward(states: &BTreeMap<i64, f64>) -> f64 {
    let mut carried = 0.0;
    let mut work = 0.0;
    let mut previous: Option<i64> = None;
    for (state, n) in states {
        if let Some(before) = previous {
            let gap = (state - before) as f64 / 1000.0;
            // Atoms taken from lower states travel up across this gap.
            work += f64::max(-carried, 0.0) * gap;
        }
        carried += n;
        previous = Some(*state);
    }
    work
}

/// ΔG, ΔH, log K and E of an equation at `t`.
///
/// # Errors
/// [`RangeError`] outside 0 … 300 °C.
pub fn values(equation: &Equation, library: &Library, t: Kelvin) -> Result<ReactionValues, RangeError> {
    let table = GibbsTable::at(library, t)?;
    let delta_g = equation.delta_g(&table, library);
    let (low, high) = (Kelvin((t.0 - 1.0).max(273.15)), Kelvin((t.0 + 1.0).min(573.15)));
    let over_t = |t: Kelvin| GibbsTable::at(library, t).map(|table| equation.delta_g(&table, library).value / t.0);
    let slope = (over_t(high)? - over_t(low)?) / (1.0 / high.0 - 1.0 / low.0);
    let moved = electrons_moved(equation, library);
    Ok(ReactionValues {
        delta_g,
        delta_h: slope,
        log_k: equation.log_k(&table, library),
        potential: (moved > 1e-9).then(|| delta_g.scaled(-1.0 / (moved * FARADAY))),
    })
}
