//! The liquor as mixed: acid–base, complexes and imposed gases at equilibrium, oxidation states kept apart.

use std::collections::{BTreeMap, HashMap};

use nalgebra::DVector;
use thiserror::Error;

use crate::chemistry::Constituent;
use crate::library::record::State;
use crate::library::{Library, Species, SpeciesId};
use crate::quantity::Kelvin;
use crate::thermo::activity::{ActivityCoefficients, ActivityModel};
use crate::thermo::gibbs::GibbsTable;
use crate::thermo::water::RangeError;

use super::dual::{Dual, DualError, Imposed};

/// Molar mass of water, kg/mol.
const WATER_KG_MOL: f64 = 0.018_015_28;

/// What a liquor is made from.
#[derive(Debug, Clone)]
pub struct Recipe {
    pub temperature: Kelvin,
    /// −log₁₀ of the hydrogen ion activity.
    pub ph: f64,
    /// Totals by constituent, mol per kg of water.
    pub totals: BTreeMap<Constituent, f64>,
    /// Imposed gases, bar.
    pub gases: Vec<(SpeciesId, f64)>,
}

/// Why a liquor could not be computed.
#[derive(Debug, Error)]
pub enum LiquorError {
    #[error(transparent)]
    Range(#[from] RangeError),
    #[error("no dissolved species of {0} is in the library, so its total cannot be met")]
    NoSpecies(String),
    #[error("the imposed gases contradict each other: {0}")]
    Gases(String),
    #[error("the total of {component} cannot be met at this pH (missed by {miss:.1e} of itself)")]
    NotMet { component: String, miss: f64 },
    #[error("activity coefficients did not settle (last change {0:.1e} in ln γ)")]
    Activity(f64),
    #[error("the library lacks {0}")]
    Lacks(&'static str),
}

/// A dissolved species of a liquor.
#[derive(Debug, Clone, Copy)]
pub struct Dissolved {
    pub species: SpeciesId,
    /// mol/kg
    pub molality: f64,
    pub ln_activity: f64,
}

/// The computed liquor.
pub struct Liquor<'l> {
    pub library: &'l Library,
    pub recipe: Recipe,
    pub gibbs: GibbsTable,
    /// Most abundant first; H⁺ and OH⁻ included.
    pub dissolved: Vec<Dissolved>,
    /// mol/kg
    pub ionic_strength: f64,
    pub activity_model: ActivityModel,
    pub ln_water_activity: f64,
    /// Charge that the named species leave open, mol/kg: positive when anions are missing.
    pub open_charge: f64,
    /// Largest relative error of a total.
    pub worst_balance: f64,
    potentials: HashMap<Constituent, f64>,
    ln_gamma: Vec<f64>,
}

/// The dissolved species that a recipe can hold, with the problem they pose.
struct Setup {
    components: Vec<Constituent>,
    species: Vec<SpeciesId>,
    dual: Dual,
}

impl<'l> Liquor<'l> {
    /// Mixes the recipe and lets everything but oxidation states come to equilibrium.
    ///
    /// # Errors
    /// [`LiquorError`] names the constituent that cannot be met or the quantity out of range.
    pub fn mix(library: &'l Library, recipe: Recipe) -> Result<Self, LiquorError> {
        let t = recipe.temperature;
        let gibbs = GibbsTable::at(library, t)?;
        let water = library.in_state("H2O", State::Liquid).ok_or(LiquorError::Lacks("liquid water"))?.id;
        let proton = library.in_state("H^+", State::Aqueous).ok_or(LiquorError::Lacks("the hydrogen ion"))?.id;
        let hydrogen = gibbs.of(proton).value / t.rt() - recipe.ph * std::f64::consts::LN_10;
        let pure_water = gibbs.of(water).value / t.rt();
        let solvent = move |ln_water_activity: f64| Solvent { hydrogen, water: pure_water + ln_water_activity };
        let setup = set_up(library, &recipe, &gibbs, &solvent(0.0))?;
        let coefficients = ActivityCoefficients::new(library, &setup.species, t)?;
        let mut state = Iterate::new(&setup, library);
        let mut model = ActivityModel::Ideal;
        for round in 0..4 {
            state.settle(&setup, library, &gibbs, &coefficients, model, &solvent)?;
            let better = ActivityModel::for_ionic_strength(state.ionic_strength);
            if better == model || round == 3 || (round > 1 && better.upper_limit() < model.upper_limit()) {
                break;
            }
            model = better;
        }
        state.finish(library, recipe, gibbs, &setup, model, &solvent)
    }

    /// Potential of a constituent, units of RT; `None` when the liquor holds none of it.
    pub fn potential(&self, constituent: &Constituent) -> Option<f64> {
        self.potentials.get(constituent).copied()
    }

    pub fn temperature(&self) -> Kelvin {
        self.recipe.temperature
    }

    pub fn ph(&self) -> f64 {
        self.recipe.ph
    }

    /// ln γ of any dissolved species of the library at this liquor's ionic strength.
    pub fn ln_gamma(&self, id: SpeciesId) -> f64 {
        self.ln_gamma[id.index()]
    }

    /// G°/RT.
    pub fn reduced_gibbs(&self, id: SpeciesId) -> f64 {
        self.gibbs.of(id).value / self.temperature().rt()
    }

    /// ln of a species' activity (dissolved), fugacity in bar (gas) or saturation ratio (solid) in equilibrium with the
    /// liquor; `None` when the liquor lacks one of its constituents.
    pub fn ln_activity(&self, species: &Species) -> Option<f64> {
        let mut sum = -self.reduced_gibbs(species.id);
        for (constituent, count) in &species.constituents {
            sum += count * self.potential(constituent)?;
        }
        Some(sum)
    }

    /// Total of a constituent in the liquor, mol/kg: as given, or as the imposed gas makes it.
    pub fn total(&self, constituent: &Constituent) -> f64 {
        self.dissolved
            .iter()
            .flat_map(|d| self.library.get(d.species).constituents.iter().map(move |(c, n)| (c, n * d.molality)))
            .filter(|(c, _)| *c == constituent)
            .map(|(_, amount)| amount)
            .sum()
    }

    /// Constituents present, hydrogen(+1) and oxygen(−2) of the water left out.
    pub fn constituents(&self) -> impl Iterator<Item = &Constituent> {
        self.potentials.keys().filter(|c| !is_solvent(c))
    }
}

/// Potentials of H(+1) and H₂O, units of RT.
struct Solvent {
    hydrogen: f64,
    water: f64,
}

impl Solvent {
    fn of(&self, constituent: &Constituent) -> Option<f64> {
        match state_of(constituent) {
            ("H", 1000) => Some(self.hydrogen),
            ("O", -2000) => Some(self.water - 2.0 * self.hydrogen),
            _ => None,
        }
    }

    /// Share of the solvent in Σ ν λ of a species.
    fn share(&self, species: &Species) -> f64 {
        species.constituents.iter().filter_map(|(c, n)| self.of(c).map(|v| n * v)).sum()
    }
}

/// True for the hydrogen(+1) and oxygen(−2) that water supplies without limit.
pub fn is_solvent(constituent: &Constituent) -> bool {
    matches!(state_of(constituent), ("H", 1000) | ("O", -2000))
}

/// Symbol and thousandths of the oxidation number.
fn state_of(constituent: &Constituent) -> (&'static str, i32) {
    match constituent {
        Constituent::Element { element, milli_oxidation } => (element.symbol(), *milli_oxidation),
        Constituent::Unit { .. } => ("", 0),
    }
}

fn set_up(library: &Library, recipe: &Recipe, gibbs: &GibbsTable, solvent: &Solvent) -> Result<Setup, LiquorError> {
    let mut totals: BTreeMap<Constituent, f64> = recipe
        .totals
        .iter()
        .filter(|(c, total)| !is_solvent(c) && **total > 0.0)
        .map(|(c, t)| (c.clone(), *t))
        .collect();
    for (gas, _) in &recipe.gases {
        for (constituent, _) in library.get(*gas).constituents.iter().filter(|(c, _)| !is_solvent(c)) {
            totals.entry(constituent.clone()).or_insert(0.0);
        }
    }
    let components: Vec<Constituent> = totals.keys().cloned().collect();
    let place: HashMap<&Constituent, usize> = components.iter().enumerate().map(|(i, c)| (c, i)).collect();
    let terms_of = |species: &Species| -> Option<Vec<(usize, f64)>> {
        species
            .constituents
            .iter()
            .filter(|(c, _)| !is_solvent(c))
            .map(|(c, count)| place.get(c).map(|i| (*i, *count)))
            .collect()
    };
    let mut species = Vec::new();
    let mut stoichiometry = Vec::new();
    for one in library.species().iter().filter(|s| s.state == State::Aqueous) {
        if let Some(terms) = terms_of(one) {
            species.push(one.id);
            stoichiometry.push(terms);
        }
    }
    for (i, component) in components.iter().enumerate() {
        if !stoichiometry.iter().flatten().any(|(c, _)| *c == i) {
            return Err(LiquorError::NoSpecies(component.to_string()));
        }
    }
    let imposed: Vec<Imposed> = recipe
        .gases
        .iter()
        .map(|(gas, bar)| {
            let record = library.get(*gas);
            Imposed {
                coefficients: terms_of(record).unwrap_or_default(),
                value: gibbs.of(*gas).value / recipe.temperature.rt() + bar.ln() - solvent.share(record),
            }
        })
        .collect();
    let dual = Dual::new(stoichiometry, totals.into_values().collect(), &imposed)
        .map_err(|e| LiquorError::Gases(e.to_string()))?;
    Ok(Setup { components, species, dual })
}

/// The state of the outer loop over activity coefficients.
struct Iterate {
    lambda: DVector<f64>,
    ln_gamma: Vec<f64>,
    molalities: Vec<f64>,
    charges: Vec<f64>,
    ionic_strength: f64,
    ln_water_activity: f64,
}

impl Iterate {
    fn new(setup: &Setup, library: &Library) -> Self {
        let n = setup.species.len();
        Self {
            lambda: DVector::from_element(setup.components.len(), 0.0),
            ln_gamma: vec![0.0; n],
            molalities: vec![0.0; n],
            charges: setup.species.iter().map(|id| f64::from(library.get(*id).formula.charge)).collect(),
            ionic_strength: 0.0,
            ln_water_activity: 0.0,
        }
    }

    /// Goes round between equilibrium and activity coefficients until both hold.
    fn settle(
        &mut self,
        setup: &Setup,
        library: &Library,
        gibbs: &GibbsTable,
        coefficients: &ActivityCoefficients,
        model: ActivityModel,
        solvent: &impl Fn(f64) -> Solvent,
    ) -> Result<(), LiquorError> {
        let rt = gibbs.temperature.rt();
        let mut change = f64::INFINITY;
        let mut next = self.ln_gamma.clone();
        for round in 0..200 {
            let now = solvent(self.ln_water_activity);
            let constants: Vec<f64> = setup
                .species
                .iter()
                .zip(&self.ln_gamma)
                .map(|(id, ln_gamma)| now.share(library.get(*id)) - gibbs.of(*id).value / rt - ln_gamma)
                .collect();
            if round == 0 && self.ionic_strength == 0.0 {
                self.lambda = first_guess(setup, &constants);
            }
            setup.dual.solve(&constants, &mut self.lambda).map_err(|e| named(e, setup))?;
            self.measure(setup, &constants);
            if change < 1e-11 {
                return Ok(());
            }
            coefficients.evaluate(model, self.ionic_strength, &self.molalities, &mut next);
            // Half a step damps the swing of highly charged complexes in strong liquors.
            let weight = if round < 8 { 1.0 } else { 0.5 };
            change = 0.0;
            for (old, new) in self.ln_gamma.iter_mut().zip(&next) {
                change = f64::max(change, (new - *old).abs());
                *old += weight * (new - *old);
            }
        }
        if change < 1e-6 { Ok(()) } else { Err(LiquorError::Activity(change)) }
    }

    fn measure(&mut self, setup: &Setup, constants: &[f64]) {
        let mut open = 0.0;
        let mut strength = 0.0;
        let mut solute = 0.0;
        for (i, terms) in setup.dual.stoichiometry.iter().enumerate() {
            let exponent: f64 = constants[i] + terms.iter().map(|(c, n)| n * self.lambda[*c]).sum::<f64>();
            let m = exponent.exp();
            self.molalities[i] = m;
            open += self.charges[i] * m;
            strength += 0.5 * self.charges[i] * self.charges[i] * m;
            solute += m;
        }
        // The counter-ion that the user did not name carries a single charge.
        self.ionic_strength = strength + 0.5 * open.abs();
        self.ln_water_activity = -WATER_KG_MOL * (solute + open.abs());
    }

    fn finish<'l>(
        self,
        library: &'l Library,
        recipe: Recipe,
        gibbs: GibbsTable,
        setup: &Setup,
        model: ActivityModel,
        solvent: &impl Fn(f64) -> Solvent,
    ) -> Result<Liquor<'l>, LiquorError> {
        let now = solvent(self.ln_water_activity);
        let mut potentials: HashMap<Constituent, f64> =
            setup.components.iter().cloned().zip(self.lambda.iter().copied()).collect();
        for token in library.constituents().filter(|c| is_solvent(c)) {
            potentials.extend(now.of(token).map(|v| (token.clone(), v)));
        }
        let mut dissolved: Vec<Dissolved> = setup
            .species
            .iter()
            .zip(self.molalities.iter().zip(&self.ln_gamma))
            .map(|(id, (m, g))| Dissolved { species: *id, molality: *m, ln_activity: m.ln() + g })
            .collect();
        dissolved.sort_by(|a, b| b.molality.total_cmp(&a.molality));
        let open_charge = self.charges.iter().zip(&self.molalities).map(|(z, m)| z * m).sum();
        let worst_balance = setup.dual.balance_error(&self.molalities);
        let ln_gamma = everywhere(library, gibbs.temperature, model, self.ionic_strength, &dissolved)?;
        Ok(Liquor {
            library,
            recipe,
            gibbs,
            dissolved,
            ionic_strength: self.ionic_strength,
            activity_model: model,
            ln_water_activity: self.ln_water_activity,
            open_charge,
            worst_balance,
            potentials,
            ln_gamma,
        })
    }
}

/// Starts each component where its own simple species alone would hold its total.
fn first_guess(setup: &Setup, constants: &[f64]) -> DVector<f64> {
    let mut lambda = DVector::from_element(setup.components.len(), f64::INFINITY);
    for (terms, k) in setup.dual.stoichiometry.iter().zip(constants) {
        if let [(c, count)] = terms.as_slice() {
            let total = setup.dual.totals[*c].max(1e-12);
            lambda[*c] = lambda[*c].min(((total / count).ln() - k) / count);
        }
    }
    lambda.map(|v| if v.is_finite() { v } else { 0.0 })
}

fn named(error: DualError, setup: &Setup) -> LiquorError {
    match error {
        DualError::Contradiction(i) => LiquorError::Gases(format!("condition {}", i + 1)),
        DualError::NotMet { component, miss } => {
            LiquorError::NotMet { component: setup.components[component].to_string(), miss }
        }
    }
}

/// ln γ of every dissolved species of the library in the liquor's medium, indexed by species.
fn everywhere(
    library: &Library,
    t: Kelvin,
    model: ActivityModel,
    ionic_strength: f64,
    dissolved: &[Dissolved],
) -> Result<Vec<f64>, RangeError> {
    let all: Vec<SpeciesId> = library.species().iter().filter(|s| s.state == State::Aqueous).map(|s| s.id).collect();
    let mut amounts = vec![0.0; library.species().len()];
    for one in dissolved {
        amounts[one.species.index()] = one.molality;
    }
    let molalities: Vec<f64> = all.iter().map(|id| amounts[id.index()]).collect();
    let mut ln_gamma = vec![0.0; all.len()];
    ActivityCoefficients::new(library, &all, t)?.evaluate(model, ionic_strength, &molalities, &mut ln_gamma);
    let mut table = vec![0.0; library.species().len()];
    for (id, value) in all.iter().zip(ln_gamma) {
        table[id.index()] = value;
    }
    Ok(table)
}
