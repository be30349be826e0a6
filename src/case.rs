//! A scenario with its names found in the library and its concentrations on the molality scale: what the core computes.
//!
//! This is where words of the file meet records. Every name that is not known is reported at its place, all at once.

use crate::chemistry::Constituent;
use crate::equilibrium::Recipe;
use crate::equilibrium::liquor::is_solvent;
use crate::library::record::State;
use crate::library::tables::{AlloyRecord, MineralRecord};
use crate::library::{self, Library, NotFound, Species, SpeciesId};
use crate::quantity::{Estimate, Kelvin};
use crate::scenario::{
    Concentration, ConcentrationBasis, Diagnostic, Diagnostics, Duty, Placed, Scenario, SolidAmount, SolidKind,
    SolidSpec,
};
use crate::thermo::water;

/// An oxidant put in.
#[derive(Debug, Clone)]
pub struct Oxidant {
    pub name: String,
    pub species: SpeciesId,
    /// mol per kg of water
    pub molality: f64,
}

/// What a solid is made of.
#[derive(Debug, Clone, Copy)]
pub enum Material<'l> {
    /// A pure metal or an alloy; `element` is the species of the element that carries its dissolution.
    Metal { record: Option<&'l AlloyRecord>, element: SpeciesId },
    /// A mineral or another compound.
    Compound { species: SpeciesId, mineral: Option<&'l MineralRecord> },
}

impl Material<'_> {
    /// The species that dissolves.
    pub fn species(&self) -> SpeciesId {
        match self {
            Self::Metal { element, .. } => *element,
            Self::Compound { species, .. } => *species,
        }
    }
}

/// A solid that meets the liquor.
#[derive(Debug, Clone)]
pub struct Solid<'l> {
    pub name: String,
    /// As the user wrote it.
    pub material_name: String,
    pub material: Material<'l>,
    pub duty: Duty,
    /// Moles of the dissolving species per kg of water, when an amount is given.
    pub amount: Option<f64>,
    /// kg per m³ of liquor, when an amount is given.
    pub mass_per_volume: Option<f64>,
    /// m²
    pub area: Option<f64>,
}

/// Parts that touch electrically; the members are places in [`Case::solids`].
#[derive(Debug, Clone)]
pub struct Contact {
    pub name: String,
    pub members: Vec<usize>,
}

/// One uncertain input moved by one standard uncertainty.
#[derive(Debug, Clone)]
pub struct Variation {
    /// `pH`, `temperature`, or the species.
    pub input: String,
    pub recipe: Recipe,
}

/// A scenario ready to compute.
pub struct Case<'l> {
    pub library: &'l Library,
    pub recipe: Recipe,
    pub variations: Vec<Variation>,
    pub oxidants: Vec<Oxidant>,
    pub solids: Vec<Solid<'l>>,
    pub contacts: Vec<Contact>,
    /// Measured potential, V against SHE, and the electrode it was read against.
    pub measured: Option<(Estimate, String)>,
    /// kg of water in a m³ of liquor.
    pub water_per_volume: f64,
    /// m³
    pub volume: Option<f64>,
}

impl<'l> Case<'l> {
    /// Finds every name and converts every amount.
    ///
    /// # Errors
    /// [`Diagnostics`] with one entry for each name that the library does not hold.
    pub fn resolve(scenario: &Scenario, library: &'l Library) -> Result<Self, Diagnostics> {
        let mut desk = Desk { library, problems: Vec::new() };
        let solutes = desk.solutes(scenario);
        let gases = desk.gases(scenario);
        let measured = desk.measured(scenario);
        let materials: Vec<Option<Material<'l>>> = scenario.solids.iter().map(|s| desk.material(s)).collect();
        if !desk.problems.is_empty() {
            return Err(Diagnostics::new(&scenario.source, desk.problems));
        }
        let t = Kelvin(scenario.liquor.temperature.value.value);
        let pure_water = water::density(t).map_err(|e| {
            let place = scenario.liquor.temperature.span.clone();
            Diagnostics::new(&scenario.source, vec![Diagnostic::new(place, e.to_string(), "out of range")])
        })?;
        let solvent = solvent(&solutes, pure_water);
        let water_per_volume = solvent.water;
        let molality = |solute: &Solute| solute.concentration.amount.scaled(solute.per_molality(solvent));
        let recipe = recipe(library, scenario, &solutes, &gases, molality);
        let solids = scenario
            .solids
            .iter()
            .zip(materials)
            .filter_map(|(spec, material)| material.map(|m| solid(library, scenario, spec, m, water_per_volume)))
            .collect::<Vec<_>>();
        let contacts = scenario
            .contacts
            .iter()
            .map(|contact| Contact {
                name: contact.name.value.clone(),
                members: contact.metals.iter().filter_map(|m| solids.iter().position(|s| s.name == m.value)).collect(),
            })
            .collect();
        let oxidants = solutes
            .iter()
            .filter_map(|s| {
                let name = s.oxidant.clone()?;
                Some(Oxidant { name, species: s.species, molality: molality(s).value })
            })
            .collect();
        Ok(Self {
            library,
            variations: variations(library, scenario, &solutes, &recipe, molality),
            recipe,
            oxidants,
            solids,
            contacts,
            measured,
            water_per_volume,
            volume: scenario.liquor.volume.as_ref().map(|v| v.value.value),
        })
    }
}

/// A dissolved reagent with its record.
struct Solute {
    text: String,
    species: SpeciesId,
    molar_mass_kg: f64,
    volume_m3_mol: f64,
    concentration: Concentration,
    /// Name, when the scenario lists it as an oxidant.
    oxidant: Option<String>,
}

impl Solute {
    /// Factor from the concentration as given to mol per kg of water.
    fn per_molality(&self, solvent: Solvent) -> f64 {
        match self.concentration.basis {
            ConcentrationBasis::Molality => 1.0,
            ConcentrationBasis::AmountPerVolume => 1.0 / solvent.water,
            ConcentrationBasis::MassPerVolume => 1.0 / (self.molar_mass_kg * solvent.water),
            ConcentrationBasis::MassFraction => solvent.density / (self.molar_mass_kg * solvent.water),
        }
    }
}

/// Looks names up and keeps what was not found.
struct Desk<'l> {
    library: &'l Library,
    problems: Vec<Diagnostic>,
}

impl<'l> Desk<'l> {
    fn solutes(&mut self, scenario: &Scenario) -> Vec<Solute> {
        let mut solutes = Vec::new();
        for (name, concentration) in &scenario.liquor.dissolved {
            let found = self.species(name);
            solutes.extend(found.map(|s| self.solute(s, concentration.value.clone(), None)));
        }
        for oxidant in &scenario.oxidants {
            let found = self.species(&oxidant.species);
            solutes
                .extend(found.map(|s| self.solute(s, oxidant.amount.value.clone(), Some(oxidant.name.value.clone()))));
        }
        solutes
    }

    fn solute(&self, species: &Species, concentration: Concentration, oxidant: Option<String>) -> Solute {
        let table = &self.library.activity.partial_molar_volume;
        let volume = table.iter().find(|v| v.formula == species.text).map_or(0.0, |v| v.cm3_mol * 1e-6);
        Solute {
            text: species.text.clone(),
            species: species.id,
            molar_mass_kg: species.formula.molar_mass() * 1e-3,
            volume_m3_mol: volume,
            concentration,
            oxidant,
        }
    }

    /// A solute: the dissolved record, else the salt that brings its ions.
    fn species(&mut self, name: &Placed<String>) -> Option<&'l Species> {
        let found = self.library.dissolved(&name.value).or_else(|e| self.library.find(&name.value).map_err(|_| e));
        found.map_err(|e| self.missing("species", name, &e)).ok()
    }

    fn gases(&mut self, scenario: &Scenario) -> Vec<(SpeciesId, Estimate)> {
        let mut gases = Vec::new();
        for (name, bar) in &scenario.liquor.gas {
            match self.library.in_state(&name.value, State::Gas) {
                Some(species) => gases.push((species.id, bar.value)),
                None => {
                    let words =
                        self.library.species().iter().filter(|s| s.state == State::Gas).map(|s| s.text.as_str());
                    let nearest = library::nearest(&name.value, words, 4);
                    self.missing("gas", name, &NotFound { name: name.value.clone(), nearest });
                }
            }
        }
        gases
    }

    fn measured(&mut self, scenario: &Scenario) -> Option<(Estimate, String)> {
        let potential = scenario.liquor.potential.as_ref()?;
        let electrode = &potential.value.electrode;
        match self.library.electrode(&electrode.value) {
            Ok(record) => {
                let warmer = scenario.liquor.temperature.value.value - 298.15;
                let offset = record.e_v_she_25c + record.de_dt_mv_k.unwrap_or(0.0) * 1e-3 * warmer;
                let read = potential.value.volts;
                let spread = read.standard_uncertainty.hypot(record.u_mv * 1e-3);
                Some((Estimate::new(read.value + offset, spread), record.name.clone()))
            }
            Err(e) => {
                self.missing("reference electrode", electrode, &e);
                None
            }
        }
    }

    fn material(&mut self, spec: &SolidSpec) -> Option<Material<'l>> {
        let name = &spec.material;
        if let Some(record) = self.library.alloy(&name.value) {
            let element = self.library.find(&record.base).map_err(|e| self.missing("element", name, &e)).ok()?;
            return Some(Material::Metal { record: Some(record), element: element.id });
        }
        if let Some(mineral) = self.library.mineral(&name.value) {
            let records = self.library.records(&mineral.formula);
            let same = |s: &&&Species| mineral.form.is_none() || s.form == mineral.form;
            if let Some(species) = records.iter().find(same).or(records.first()) {
                return Some(Material::Compound { species: species.id, mineral: Some(mineral) });
            }
        }
        let solid = self.library.records(&name.value).into_iter().find(|s| s.is_condensed());
        match solid {
            Some(species) if species.formula.composition.len() == 1 => {
                Some(Material::Metal { record: None, element: species.id })
            }
            Some(species) => Some(Material::Compound { species: species.id, mineral: None }),
            None => {
                let nearest = library::nearest(&name.value, self.materials(spec.kind), 4);
                self.missing("material", name, &NotFound { name: name.value.clone(), nearest });
                None
            }
        }
    }

    fn materials(&self, kind: SolidKind) -> impl Iterator<Item = &'l str> {
        let library = self.library;
        let alloys =
            library.alloys.iter().flat_map(|a| [a.uns.as_deref(), a.element.as_deref(), Some(a.name.as_str())]);
        let minerals = library.minerals.iter().map(|m| Some(m.name.as_str()));
        let (first, second): (Vec<_>, Vec<_>) = (alloys.flatten().collect(), minerals.flatten().collect());
        match kind {
            SolidKind::Metal => first.into_iter().chain(second),
            SolidKind::Mineral => second.into_iter().chain(first),
        }
    }

    fn missing(&mut self, what: &str, name: &Placed<String>, error: &NotFound) {
        let help = (!error.nearest.is_empty()).then(|| format!("nearest in the library: {}", error.nearest.join(", ")));
        self.problems.push(Diagnostic {
            span: name.span.clone(),
            message: format!("{what} `{}` is not in the library", name.value),
            label: format!("no such {what}"),
            help,
        });
    }
}

/// The solvent of a liquor: what turns concentrations per volume and per mass into molalities.
#[derive(Debug, Clone, Copy)]
struct Solvent {
    /// kg of water per m³ of liquor
    water: f64,
    /// kg of liquor per m³
    density: f64,
}

/// Water that the ionic volumes leave (conventional partial molar volumes; solutes without a tabulated volume are taken to
/// add none), and the density that follows from it and the solutes' mass.
fn solvent(solutes: &[Solute], pure_water: f64) -> Solvent {
    let mut solvent = Solvent { water: pure_water, density: pure_water };
    for _ in 0..20 {
        let per_volume = |s: &Solute| s.concentration.amount.value * s.per_molality(solvent) * solvent.water;
        let taken: f64 = solutes.iter().map(|s| per_volume(s) * s.volume_m3_mol).sum();
        let mass: f64 = solutes.iter().map(|s| per_volume(s) * s.molar_mass_kg).sum();
        let water = (pure_water * (1.0 - taken)).clamp(0.3 * pure_water, 1.05 * pure_water);
        solvent = Solvent { water, density: water + mass };
    }
    solvent
}

fn recipe(
    library: &Library,
    scenario: &Scenario,
    solutes: &[Solute],
    gases: &[(SpeciesId, Estimate)],
    molality: impl Fn(&Solute) -> Estimate,
) -> Recipe {
    let mut recipe = Recipe {
        temperature: Kelvin(scenario.liquor.temperature.value.value),
        ph: scenario.liquor.ph.value.value,
        totals: Default::default(),
        gases: gases.iter().map(|(id, bar)| (*id, bar.value)).collect(),
    };
    for solute in solutes {
        add(&mut recipe, library, solute.species, molality(solute).value);
    }
    recipe
}

fn add(recipe: &mut Recipe, library: &Library, species: SpeciesId, moles: f64) {
    for (constituent, count) in library.get(species).constituents.iter().filter(|(c, _)| !is_solvent(c)) {
        *recipe.totals.entry(constituent.clone()).or_insert(0.0) += count * moles;
    }
}

/// The recipe with each uncertain input moved up by one standard uncertainty.
fn variations(
    library: &Library,
    scenario: &Scenario,
    solutes: &[Solute],
    recipe: &Recipe,
    molality: impl Fn(&Solute) -> Estimate,
) -> Vec<Variation> {
    let mut list = Vec::new();
    let mut push = |input: &str, spread: f64, change: &dyn Fn(&mut Recipe)| {
        if spread > 0.0 {
            let mut moved = recipe.clone();
            change(&mut moved);
            list.push(Variation { input: input.to_owned(), recipe: moved });
        }
    };
    let liquor = &scenario.liquor;
    let ph_spread = liquor.ph.value.standard_uncertainty;
    push("pH", ph_spread, &|r| r.ph += ph_spread);
    let t_spread = liquor.temperature.value.standard_uncertainty;
    push("temperature", t_spread, &|r| r.temperature = Kelvin(r.temperature.0 + t_spread));
    for solute in solutes {
        let spread = molality(solute).standard_uncertainty;
        push(&solute.text, spread, &|r| add(r, library, solute.species, spread));
    }
    list
}

fn solid<'l>(
    library: &Library,
    scenario: &Scenario,
    spec: &SolidSpec,
    material: Material<'l>,
    water_per_volume: f64,
) -> Solid<'l> {
    let pulp = scenario.liquor.pulp_density.as_ref().map_or(0.0, |p| p.value.value);
    let mass_per_volume = spec.amount.as_ref().map(|amount| match &amount.value {
        SolidAmount::PerLiquor(mass) => mass.value,
        SolidAmount::PerOre(share) => share.value * pulp,
    });
    let molar_mass = library.get(material.species()).formula.molar_mass() * 1e-3;
    Solid {
        name: spec.name.value.clone(),
        material_name: spec.material.value.clone(),
        material,
        duty: spec.duty.value,
        amount: mass_per_volume.map(|mass| mass / molar_mass / water_per_volume),
        mass_per_volume,
        area: spec.area.as_ref().map(|a| a.value.value),
    }
}

/// Constituents of the solids and oxidants of a case, the solvent's left out.
pub fn constituents_named(case: &Case) -> Vec<Constituent> {
    let solids = case.solids.iter().map(|s| s.material.species());
    let oxidants = case.oxidants.iter().map(|o| o.species);
    let mut list: Vec<Constituent> = solids
        .chain(oxidants)
        .flat_map(|id| case.library.get(id).constituents.iter().map(|(c, _)| c.clone()))
        .filter(|c| !is_solvent(c))
        .collect();
    list.sort();
    list.dedup();
    list
}
