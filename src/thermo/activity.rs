//! Activity coefficients of dissolved species, molality scale.

use std::collections::HashMap;

use crate::library::{Library, SpeciesId};
use crate::quantity::Kelvin;

use super::water::{self, RangeError};

/// Models in order of reach.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ActivityModel {
    /// All coefficients one.
    Ideal,
    /// log γ = −A z² √I / (1 + B å √I), å after Kielland (1937).
    ExtendedDebyeHueckel,
    /// log γ = −A z² (√I / (1 + √I) − 0.3 I), Davies (1962).
    Davies,
    /// log γ = −A z² √I / (1 + 1.5 √I) + Σ ε m, specific ion interaction theory (NEA convention).
    SpecificIonInteraction,
}

impl ActivityModel {
    /// The model that fits an ionic strength, mol/kg.
    pub fn for_ionic_strength(ionic_strength: f64) -> Self {
        match ionic_strength {
            i if i < 0.1 => Self::ExtendedDebyeHueckel,
            i if i <= 0.5 => Self::Davies,
            _ => Self::SpecificIonInteraction,
        }
    }

    /// Upper end of the range in which the model is used with confidence, mol/kg.
    pub fn upper_limit(self) -> f64 {
        match self {
            Self::Ideal => 1e-3,
            Self::ExtendedDebyeHueckel => 0.1,
            Self::Davies => 0.5,
            Self::SpecificIonInteraction => 3.5,
        }
    }

    pub fn name(self) -> &'static str {
        match self {
            Self::Ideal => "ideal",
            Self::ExtendedDebyeHueckel => "extended Debye-Hückel",
            Self::Davies => "Davies",
            Self::SpecificIonInteraction => "SIT",
        }
    }

    /// Standard uncertainty of ln γ of a species of charge `z` at ionic strength `i`: our own judgement, no source, from the
    /// misfit of each model to mean activity coefficients of common salts. Grows fast outside the range.
    pub fn ln_gamma_uncertainty(self, z: i32, i: f64) -> f64 {
        let z2 = f64::from(z * z);
        let inside = match self {
            Self::Ideal => 1.2 * z2 * i.sqrt(),
            Self::ExtendedDebyeHueckel | Self::Davies => 0.1 * z2 * i.min(0.5),
            Self::SpecificIonInteraction => (0.04 * z2 * i.min(3.5)).min(0.6),
        };
        inside + 0.2 * z2.min(4.0) * (i - self.upper_limit()).max(0.0)
    }
}

/// Coefficients for a fixed list of species at one temperature.
pub struct ActivityCoefficients {
    charges: Vec<f64>,
    sizes_angstrom: Vec<f64>,
    /// For each species: (index of partner, ε).
    interactions: Vec<Vec<(usize, f64)>>,
    a: f64,
    b: f64,
}

/// Ion size where Kielland's table has none, Å: the middle of that table for common ions.
const USUAL_ION_SIZE: f64 = 4.5;

impl ActivityCoefficients {
    /// Prepares the tables for `species` at `t`.
    ///
    /// # Errors
    /// [`RangeError`] when the water properties do not reach `t`.
    pub fn new(library: &Library, species: &[SpeciesId], t: Kelvin) -> Result<Self, RangeError> {
        let place: HashMap<&str, usize> =
            species.iter().enumerate().map(|(i, id)| (library.get(*id).text.as_str(), i)).collect();
        let mut sizes_angstrom = vec![USUAL_ION_SIZE; species.len()];
        for size in &library.activity.ion_size {
            if let Some(i) = place.get(size.formula.as_str()) {
                sizes_angstrom[*i] = size.angstrom;
            }
        }
        let mut interactions = vec![Vec::new(); species.len()];
        for pair in &library.activity.sit {
            if let (Some(i), Some(j)) = (place.get(pair.cation.as_str()), place.get(pair.anion.as_str())) {
                interactions[*i].push((*j, pair.epsilon));
                interactions[*j].push((*i, pair.epsilon));
            }
        }
        Ok(Self {
            charges: species.iter().map(|id| f64::from(library.get(*id).formula.charge)).collect(),
            sizes_angstrom,
            interactions,
            a: water::debye_hueckel_a(t)?,
            b: water::debye_hueckel_b(t)?,
        })
    }

    /// ln γ of every species at the molalities given, into `ln_gamma`.
    pub fn evaluate(&self, model: ActivityModel, ionic_strength: f64, molalities: &[f64], ln_gamma: &mut [f64]) {
        let root = ionic_strength.sqrt();
        for (i, out) in ln_gamma.iter_mut().enumerate() {
            let z2 = self.charges[i] * self.charges[i];
            let log10 = match model {
                ActivityModel::Ideal => 0.0,
                ActivityModel::ExtendedDebyeHueckel => {
                    -self.a * z2 * root / (1.0 + self.b * self.sizes_angstrom[i] * root)
                }
                ActivityModel::Davies => -self.a * z2 * (root / (1.0 + root) - 0.3 * ionic_strength),
                ActivityModel::SpecificIonInteraction => {
                    let specific: f64 = self.interactions[i].iter().map(|(j, e)| e * molalities[*j]).sum();
                    -self.a * z2 * root / (1.0 + 1.5 * root) + specific
                }
            };
            *out = log10 * std::f64::consts::LN_10;
        }
    }
}
