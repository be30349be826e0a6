//! What a screen tells a reader: one finding for one question on one subject.

use std::collections::BTreeMap;

use serde::Serialize;

use crate::equilibrium::Liquor;
use crate::library::SpeciesId;
use crate::quantity::Estimate;
use crate::thermo::equation::Equation;

/// The question that a finding answers.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Question {
    /// Does the liquor attack a part?
    Dissolution,
    /// Does the liquor dissolve a feed?
    Leaching,
    /// Does a solid throw a dissolved metal out?
    Cementation,
    /// What do parts in electrical contact do to each other?
    Contact,
    /// Is an oxidation state stable here?
    State,
    /// Can a hazardous gas form?
    Gas,
    /// Do the stated conditions agree with each other?
    Liquor,
}

impl Question {
    pub fn name(self) -> &'static str {
        match self {
            Self::Dissolution => "dissolution",
            Self::Leaching => "leaching",
            Self::Cementation => "cementation",
            Self::Contact => "contact",
            Self::State => "state",
            Self::Gas => "gas",
            Self::Liquor => "liquor",
        }
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub enum Verdict {
    #[serde(rename = "driven")]
    Driven,
    #[serde(rename = "near balance")]
    NearBalance,
    #[serde(rename = "opposed")]
    Opposed,
    #[serde(rename = "not assessed")]
    NotAssessed,
}

impl Verdict {
    /// `driven` or `opposed` only beyond two standard uncertainties.
    pub fn of(driving_force: Estimate) -> Self {
        let doubt = 2.0 * driving_force.standard_uncertainty;
        match driving_force.value {
            v if !v.is_finite() => Self::NotAssessed,
            v if v > doubt => Self::Driven,
            v if v < -doubt => Self::Opposed,
            _ => Self::NearBalance,
        }
    }

    pub fn name(self) -> &'static str {
        match self {
            Self::Driven => "driven",
            Self::NearBalance => "near balance",
            Self::Opposed => "opposed",
            Self::NotAssessed => "not assessed",
        }
    }
}

/// What a reader must do; the order is the order of reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Attention {
    Act,
    Review,
    Note,
}

impl Attention {
    pub fn name(self) -> &'static str {
        match self {
            Self::Act => "act",
            Self::Review => "review",
            Self::Note => "note",
        }
    }
}

/// Everything a reader is told about one question on one subject.
#[derive(Debug, Clone)]
pub struct Finding {
    pub id: String,
    pub question: Question,
    pub subject: String,
    pub against: Option<String>,
    pub verdict: Verdict,
    pub attention: Attention,
    /// One plain sentence.
    pub statement: String,
    /// Practice finds the couple too slow to count on.
    pub held_back: bool,
    /// E(oxidant) − E(dissolution), V; positive drives the solid into solution.
    pub driving_force: Option<Estimate>,
    /// At the liquor's conditions, J per mole of the subject.
    pub delta_g: Option<f64>,
    /// Of the reaction as written, at the liquor's temperature.
    pub log_k: Option<f64>,
    /// Species of the reaction.
    pub species: Vec<SpeciesId>,
    /// ASCII equation.
    pub reaction: Option<String>,
    /// The same with sub- and superscripts.
    pub reaction_pretty: Option<String>,
    pub products: Vec<String>,
    /// Further numbers; the names carry the unit.
    pub quantities: BTreeMap<String, f64>,
    /// Sentences that say why, what was assumed, and what practice knows.
    pub reasons: Vec<String>,
    /// Keys into the library's sources.
    pub sources: Vec<String>,
    /// Keys into the house text of cautions.
    pub cautions: Vec<String>,
}

impl Finding {
    /// A finding with its sentence; the numbers are added by the screen.
    pub fn new(
        question: Question,
        subject: &str,
        against: Option<&str>,
        verdict: Verdict,
        attention: Attention,
        statement: String,
    ) -> Self {
        let id = [Some(question.name()), Some(subject), against]
            .into_iter()
            .flatten()
            .map(slug)
            .collect::<Vec<_>>()
            .join(".");
        Self {
            id,
            question,
            subject: subject.to_owned(),
            against: against.map(str::to_owned),
            verdict,
            attention,
            statement,
            held_back: false,
            driving_force: None,
            delta_g: None,
            log_k: None,
            species: Vec::new(),
            reaction: None,
            reaction_pretty: None,
            products: Vec::new(),
            quantities: BTreeMap::new(),
            reasons: Vec::new(),
            sources: Vec::new(),
            cautions: Vec::new(),
        }
    }

    /// Takes over a reaction: its text, its log K when no electron is left over, and the sources of its species.
    pub fn take_equation(&mut self, equation: &Equation, liquor: &Liquor) {
        let library = liquor.library;
        if equation.electrons == 0.0 {
            self.log_k = Some(equation.log_k(&liquor.gibbs, library).value);
        }
        self.species = equation.terms.iter().map(|(id, _)| *id).collect();
        self.reaction = Some(equation.ascii(library));
        self.reaction_pretty = Some(equation.pretty(library));
        self.sources.extend(equation.terms.iter().map(|(id, _)| library.get(*id).source.clone()));
    }
}

/// Lower-case letters, digits and hyphens; signs of charge kept as words so that ids stay apart.
fn slug(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        match c {
            c if c.is_alphanumeric() => out.extend(c.to_lowercase()),
            '+' => out.push('p'),
            _ if out.ends_with('-') => {}
            _ => out.push('-'),
        }
    }
    out.trim_matches('-').to_owned()
}
