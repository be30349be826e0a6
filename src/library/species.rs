//! A species as the rest of the program uses it: parsed, closed (G, H, S), with the model that carries its temperature.

use crate::chemistry::{Constituent, Formula};
use crate::quantity::Estimate;

use super::record::{Curve, HeatCapacity, IonClass, Rejected, State, Status, Transition};

/// Place of a species in the library; only the library hands these out.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct SpeciesId(pub(super) usize);

impl SpeciesId {
    /// Index into tables that run over all species of the library.
    pub fn index(self) -> usize {
        self.0
    }
}

/// How G° of a species is carried away from 298.15 K.
#[derive(Debug, Clone)]
pub enum TemperatureModel {
    /// Liquid water by IAPWS-IF97.
    Water,
    /// H⁺(aq) on the absolute entropy scale.
    HydrogenIon,
    /// Heat capacity integrated, with changes of form.
    HeatCapacity { capacity: HeatCapacity, transitions: Vec<Transition> },
    /// Correspondence principle of Criss and Cobble (1964).
    CorrespondencePrinciple(IonClass),
    /// Solubility of the gas by the IAPWS guideline on Henry's constant.
    GasSolubility { gas: SpeciesId },
    /// log K(T) measured for a reaction with the partners named; `own` is the species' own coefficient in it.
    MeasuredCurve { curve: Curve, own: f64, partners: Vec<(SpeciesId, f64)> },
    /// Enthalpy of formation from the partners constant, heat capacity change zero (van 't Hoff).
    ReactionEnthalpy { joules_per_mole: f64, partners: Vec<(SpeciesId, f64)> },
    /// log K of formation held constant: no enthalpy is known.
    ConstantLogK { partners: Vec<(SpeciesId, f64)> },
    /// S° known, heat capacity not: taken as zero.
    EntropyOnly,
    /// Only G° known: held constant.
    ConstantGibbs,
}

impl TemperatureModel {
    /// Plain name for reports.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Water => "IAPWS-IF97",
            Self::HydrogenIon | Self::CorrespondencePrinciple(_) => "correspondence principle (Criss and Cobble 1964)",
            Self::HeatCapacity { .. } => "heat capacity integrated",
            Self::GasSolubility { .. } => "IAPWS guideline on Henry's constant",
            Self::MeasuredCurve { .. } => "measured log K(T)",
            Self::ReactionEnthalpy { .. } => "constant reaction enthalpy (van 't Hoff)",
            Self::ConstantLogK { .. } => "constant log K (no enthalpy known)",
            Self::EntropyOnly => "constant entropy (no heat capacity known)",
            Self::ConstantGibbs => "constant G° (no entropy known)",
        }
    }
}

/// One species of the library, SI, at 298.15 K, 1 bar, molality scale.
#[derive(Debug, Clone)]
pub struct Species {
    pub id: SpeciesId,
    pub formula: Formula,
    /// ASCII writing of the formula, the name other records use.
    pub text: String,
    pub state: State,
    pub form: Option<String>,
    pub name: String,
    /// Gibbs energy of formation, J/mol.
    pub gibbs: Estimate,
    /// Partners that define G° by a measured equilibrium: G° = Σ coefficient · partner + a measured term.
    pub tied_to: Vec<(SpeciesId, f64)>,
    /// Standard uncertainty of what is this record's own: of G°, or of the measured term alone when it is tied, J/mol.
    pub own_uncertainty: f64,
    /// Enthalpy of formation, J/mol.
    pub enthalpy: Option<Estimate>,
    /// Conventional entropy, J/(mol K), S(H⁺) = 0.
    pub entropy: Option<Estimate>,
    pub temperature: TemperatureModel,
    /// What it is made of when oxidation states are kept apart; hydrogen(+1) and oxygen(−2) included.
    pub constituents: Vec<(Constituent, f64)>,
    pub source: String,
    pub status: Status,
    pub note: Option<String>,
    /// Values considered and not taken, with the reason.
    pub rejected: Vec<Rejected>,
}

impl Species {
    /// True for an ion that the library holds as a ligand only: its G° is a reference zero, and differences alone count.
    pub fn is_ligand_reference(&self) -> bool {
        let one_unit = matches!(self.constituents.as_slice(), [(Constituent::Unit { .. }, _)]);
        one_unit && self.gibbs.value == 0.0 && self.own_uncertainty == 0.0
    }

    /// True for pure solids and liquids, whose activity is one.
    pub fn is_condensed(&self) -> bool {
        matches!(self.state, State::Crystal | State::Amorphous | State::Liquid)
    }

    /// `AgCl (cr)`, `TiO2 (rutile)`, `Fe^3+`: the ASCII name with what tells it apart.
    pub fn label(&self) -> String {
        match (&self.form, self.state) {
            (Some(form), _) => format!("{} ({form})", self.text),
            (None, State::Gas) => format!("{}(g)", self.text),
            (None, State::Aqueous) if self.formula.charge == 0 => format!("{}(aq)", self.text),
            _ => self.text.clone(),
        }
    }

    /// The same with sub- and superscripts, for reports.
    pub fn pretty(&self) -> String {
        let formula = self.formula.pretty();
        match (&self.form, self.state) {
            (Some(form), _) => format!("{formula} ({form})"),
            (None, State::Gas) => format!("{formula}(g)"),
            (None, State::Aqueous) if self.formula.charge == 0 => format!("{formula}(aq)"),
            _ => formula,
        }
    }
}
