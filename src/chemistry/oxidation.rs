//! What a species is made of when oxidation states are kept apart: elements in a state, and units kept whole.

use std::collections::BTreeMap;
use std::fmt;

use thiserror::Error;

use super::formula::to_f64;
use super::{Element, Formula};

/// An element in one oxidation state, or a unit such as cyanide that does not exchange with other states of its elements.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Constituent {
    /// The oxidation number is held in thousandths so that it can be compared exactly.
    Element { element: Element, milli_oxidation: i32 },
    /// Canonical writing of the unit: `CN^-`.
    Unit { text: String, charge: i32 },
}

impl Constituent {
    pub fn of(element: Element, oxidation: f64) -> Self {
        Self::Element { element, milli_oxidation: (oxidation * 1000.0).round() as i32 }
    }

    /// Reads `Fe+3`, `S-2`, `O+0`, `S+2.5`, or the formula of a unit.
    pub fn parse(token: &str) -> Option<Self> {
        let split = token.find(['+', '-']).unwrap_or(token.len());
        let (head, number) = token.split_at(split);
        if let (Some(element), Ok(oxidation)) = (Element::from_symbol(head), number.parse::<f64>()) {
            return Some(Self::of(element, oxidation));
        }
        let formula = Formula::parse(token).ok()?;
        Some(Self::Unit { text: formula.canonical(), charge: formula.charge })
    }

    /// Oxidation number of an element; charge of a unit.
    pub fn oxidation(&self) -> f64 {
        match self {
            Self::Element { milli_oxidation, .. } => f64::from(*milli_oxidation) / 1000.0,
            Self::Unit { charge, .. } => f64::from(*charge),
        }
    }

    pub fn element(&self) -> Option<Element> {
        match self {
            Self::Element { element, .. } => Some(*element),
            Self::Unit { .. } => None,
        }
    }

    /// Symbol of the element, or the unit's formula.
    pub fn element_name(&self) -> String {
        match self {
            Self::Element { element, .. } => element.symbol().to_owned(),
            Self::Unit { text, .. } => text.clone(),
        }
    }

    /// The trade's writing: `Fe(III)`, `Cl(−I)`, or the unit itself.
    pub fn roman(&self) -> String {
        let Self::Element { element, milli_oxidation } = self else { return self.element_name() };
        if milli_oxidation % 1000 != 0 {
            return format!("{}({:+})", element.symbol(), self.oxidation());
        }
        let numerals = ["0", "I", "II", "III", "IV", "V", "VI", "VII", "VIII"];
        let size = usize::try_from((milli_oxidation / 1000).abs()).unwrap_or(0);
        let sign = if *milli_oxidation < 0 { "−" } else { "" };
        format!("{}({sign}{})", element.symbol(), numerals.get(size).copied().unwrap_or("?"))
    }
}

impl fmt::Display for Constituent {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Element { element, .. } => write!(f, "{}{:+}", element.symbol(), self.oxidation()),
            Self::Unit { text, .. } => f.write_str(text),
        }
    }
}

/// Why the constituents of a formula are not known.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum OxidationError {
    #[error("`{token}` is neither an element with an oxidation number (`Fe+3`) nor a unit (`CN^-`)")]
    Token { token: String },
    #[error("the parts given for {formula} hold {found} of {element}, the formula {expected}")]
    Atoms { formula: String, element: &'static str, found: f64, expected: f64 },
    #[error("the parts given for {formula} sum to a charge of {found}, the formula has {expected}")]
    Charge { formula: String, found: f64, expected: i32 },
    #[error("the rules of oxidation numbers do not settle {formula}: give its `parts`")]
    Unsettled { formula: String },
}

/// Constituents of a formula with their counts: from the `given` parts when there are any, else from the rules
/// (O −2, H +1, F −1, alkali +1, alkaline earth +2, Al +3, Zn and Cd +2, Ag +1, halide −1 with a metal; the one element that
/// remains takes the rest).
///
/// # Errors
/// [`OxidationError`] when the parts do not add up to the formula, or the rules leave more than one element open.
pub fn constituents(
    formula: &Formula,
    is_element: bool,
    given: &BTreeMap<String, f64>,
) -> Result<Vec<(Constituent, f64)>, OxidationError> {
    if !given.is_empty() {
        return from_parts(formula, given);
    }
    if is_element {
        return Ok(formula.composition.iter().map(|(e, n)| (Constituent::of(*e, 0.0), to_f64(*n))).collect());
    }
    by_rules(formula)
}

fn from_parts(formula: &Formula, given: &BTreeMap<String, f64>) -> Result<Vec<(Constituent, f64)>, OxidationError> {
    let mut list = Vec::new();
    let mut atoms: BTreeMap<Element, f64> = BTreeMap::new();
    let mut charge = 0.0;
    for (token, count) in given {
        let constituent = Constituent::parse(token).ok_or_else(|| OxidationError::Token { token: token.clone() })?;
        charge += constituent.oxidation() * count;
        match &constituent {
            Constituent::Element { element, .. } => *atoms.entry(*element).or_default() += count,
            Constituent::Unit { text, .. } => {
                let unit = Formula::parse(text).map_err(|_| OxidationError::Token { token: token.clone() })?;
                for (element, n) in &unit.composition {
                    *atoms.entry(*element).or_default() += to_f64(*n) * count;
                }
            }
        }
        list.push((constituent, *count));
    }
    // Hydrogen(+1) and oxygen(−2) that the parts leave out are those of the solvent.
    for (symbol, oxidation) in [("O", -2.0), ("H", 1.0)] {
        let Some(element) = Element::from_symbol(symbol) else { continue };
        let rest = to_f64(formula.count(element)) - atoms.get(&element).copied().unwrap_or(0.0);
        if rest > 1e-9 {
            *atoms.entry(element).or_default() += rest;
            charge += oxidation * rest;
            list.push((Constituent::of(element, oxidation), rest));
        }
    }
    check(formula, &atoms, charge)?;
    Ok(list)
}

fn check(formula: &Formula, atoms: &BTreeMap<Element, f64>, charge: f64) -> Result<(), OxidationError> {
    let elements = formula.composition.keys().chain(atoms.keys());
    for element in elements {
        let expected = to_f64(formula.count(*element));
        let found = atoms.get(element).copied().unwrap_or(0.0);
        if (found - expected).abs() > 1e-6 {
            return Err(OxidationError::Atoms {
                formula: formula.canonical(),
                element: element.symbol(),
                found,
                expected,
            });
        }
    }
    if (charge - f64::from(formula.charge)).abs() > 1e-3 {
        return Err(OxidationError::Charge { formula: formula.canonical(), found: charge, expected: formula.charge });
    }
    Ok(())
}

fn fixed(symbol: &str) -> Option<f64> {
    Some(match symbol {
        "O" => -2.0,
        "F" => -1.0,
        "H" | "Li" | "Na" | "K" | "Rb" | "Cs" | "Ag" => 1.0,
        "Be" | "Mg" | "Ca" | "Sr" | "Ba" | "Zn" | "Cd" => 2.0,
        "Al" | "Sc" | "Y" | "La" | "Ga" => 3.0,
        "B" => 3.0,
        "Si" => 4.0,
        _ => return None,
    })
}

/// State that an element has as part of a known oxyanion or ligand written out in the formula.
fn in_group(symbol: &str, body: &str) -> Option<f64> {
    let written = |groups: &[&str]| groups.iter().any(|g| body.contains(g));
    match symbol {
        "N" if written(&["NH3", "NH4"]) && !body.contains("NO") => Some(-3.0),
        "N" if body.contains("NO3") => Some(5.0),
        "S" if written(&["SO4"]) && !written(&["S2O", "HS)"]) => Some(6.0),
        "S" if written(&["SO3"]) => Some(4.0),
        "S" if written(&["HS", "H2S"]) => Some(-2.0),
        "C" if written(&["CO3"]) => Some(4.0),
        "P" if written(&["PO4"]) => Some(5.0),
        "As" if written(&["AsO4"]) => Some(5.0),
        "Cl" if written(&["ClO4"]) => Some(7.0),
        _ => None,
    }
}

fn by_rules(formula: &Formula) -> Result<Vec<(Constituent, f64)>, OxidationError> {
    let unsettled = || OxidationError::Unsettled { formula: formula.canonical() };
    let body = formula.body();
    if ["CN", "SCN", "OCN", "CNO"].iter().any(|unit| body.contains(unit)) {
        return Err(unsettled());
    }
    let mut rest = f64::from(formula.charge);
    let mut list = Vec::new();
    let mut open: Vec<(Element, f64)> = Vec::new();
    for (element, n) in &formula.composition {
        let count = to_f64(*n);
        match fixed(element.symbol()) {
            Some(state) => {
                rest -= state * count;
                list.push((Constituent::of(*element, state), count));
            }
            None => open.push((*element, count)),
        }
    }
    // From the strongest ligand down, an element takes its ligand's state as long as another is left to take the rest.
    for symbol in ["Cl", "Br", "I", "C", "P", "N", "As", "S", "Se", "Te"] {
        if open.len() < 2 {
            break;
        }
        if let Some(place) = open.iter().position(|(e, _)| e.symbol() == symbol) {
            let (element, count) = open[place];
            let ligand = match symbol {
                "Cl" | "Br" | "I" => -1.0,
                "S" | "Se" | "Te" => -2.0,
                _ => f64::NAN,
            };
            let state = in_group(symbol, body).unwrap_or(ligand);
            if state.is_nan() {
                continue;
            }
            open.remove(place);
            rest -= state * count;
            list.push((Constituent::of(element, state), count));
        }
    }
    match open.as_slice() {
        [(element, count)] => list.push((Constituent::of(*element, rest / count), *count)),
        [] if rest.abs() < 1e-6 => {}
        _ => return Err(unsettled()),
    }
    Ok(list)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn state(text: &str, symbol: &str) -> f64 {
        let formula = Formula::parse(text).expect(text);
        let parts = constituents(&formula, false, &BTreeMap::new()).expect(text);
        let element = Element::from_symbol(symbol);
        parts.iter().find(|(c, _)| c.element() == element).map(|(c, _)| c.oxidation()).expect(text)
    }

    /// IUPAC rules for oxidation states (Karen, McArdle, Takats, Pure Appl. Chem. 88 (2016) 831).
    #[test]
    fn rules_settle_common_species() {
        for (text, symbol, expected) in [
            ("MnO4^-", "Mn", 7.0),
            ("Cr2O7^2-", "Cr", 6.0),
            ("HCrO4^-", "Cr", 6.0),
            ("FeSO4^+", "Fe", 3.0),
            ("CuCl2^-", "Cu", 1.0),
            ("AuCl4^-", "Au", 3.0),
            ("ClO3^-", "Cl", 5.0),
            ("HClO", "Cl", 1.0),
            ("Cu(NH3)4^2+", "Cu", 2.0),
            ("NH4^+", "N", -3.0),
            ("SO2", "S", 4.0),
            ("H2S", "S", -2.0),
            ("KFe3(SO4)2(OH)6", "Fe", 3.0),
            ("Cu2(OH)2CO3", "Cu", 2.0),
            ("Ag2S", "S", -2.0),
            ("Cu2S", "Cu", 1.0),
            ("PbSO4", "Pb", 2.0),
            ("H3AsO4", "As", 5.0),
            ("As2S3", "As", 3.0),
            ("Fe(OH)2^+", "Fe", 3.0),
        ] {
            assert_eq!(state(text, symbol), expected, "{symbol} in {text}");
        }
    }

    #[test]
    fn parts_must_add_up() {
        let formula = Formula::parse("Fe3O4").expect("magnetite");
        let good = BTreeMap::from([("Fe+2".to_owned(), 1.0), ("Fe+3".to_owned(), 2.0)]);
        assert!(constituents(&formula, false, &good).is_ok());
        let wrong_charge = BTreeMap::from([("Fe+2".to_owned(), 3.0)]);
        assert!(matches!(constituents(&formula, false, &wrong_charge), Err(OxidationError::Charge { .. })));
        let wrong_atoms = BTreeMap::from([("Fe+3".to_owned(), 2.0)]);
        assert!(matches!(constituents(&formula, false, &wrong_atoms), Err(OxidationError::Atoms { .. })));
    }

    #[test]
    fn units_are_never_guessed() {
        let formula = Formula::parse("Au(CN)2^-").expect("cyanide complex");
        assert!(constituents(&formula, false, &BTreeMap::new()).is_err());
        let given = BTreeMap::from([("Au+1".to_owned(), 1.0), ("CN^-".to_owned(), 2.0)]);
        assert_eq!(constituents(&formula, false, &given).map(|p| p.len()), Ok(2));
    }
}
