//! How a solid can leave into a liquor: every product of every element in it, weighed at a given potential.

use crate::chemistry::{Constituent, Element};
use crate::equilibrium::couples::spread_of;
use crate::equilibrium::liquor::is_solvent;
use crate::equilibrium::states::{self, Basis, StateForm};
use crate::equilibrium::{Closer, Liquor};
use crate::library::SpeciesId;
use crate::quantity::{Estimate, FARADAY};
use crate::thermo::equation::Equation;

/// What becomes of the sulfur (or arsenic) of a sulfide mineral.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Route {
    /// No sulfide in the solid, or no choice to make.
    Plain,
    ToSulfur,
    ToSulfate,
    ToSulfide,
}

impl Route {
    pub fn words(self) -> &'static str {
        match self {
            Self::Plain => "",
            Self::ToSulfur => "sulfur stays as S⁰",
            Self::ToSulfate => "sulfur goes to sulfate",
            Self::ToSulfide => "sulfur leaves as sulfide",
        }
    }
}

/// One way by which the solid leaves.
#[derive(Debug, Clone)]
pub struct Path {
    pub route: Route,
    /// Product of each constituent and its count in the solid.
    pub products: Vec<(StateForm, f64)>,
    /// Electrons released per formula of the solid; negative when the solid is reduced.
    pub electrons: f64,
    /// ΔG/RT per formula at zero electron potential, with its standard uncertainty.
    energy: Estimate,
}

impl Path {
    /// Driving force at potential `e` (V against SHE): E − E(dissolution) for an oxidation, the reverse for a reduction, V.
    /// `None` when no electron moves.
    pub fn driving_force(&self, liquor: &Liquor, e: Estimate) -> Option<Estimate> {
        let own = self.potential(liquor)?;
        let sign = self.electrons.signum();
        let spread = own.standard_uncertainty.hypot(e.standard_uncertainty);
        Some(Estimate::new(sign * (e.value - own.value), spread))
    }

    /// E(dissolution), V against SHE; `None` when no electron moves.
    pub fn potential(&self, liquor: &Liquor) -> Option<Estimate> {
        if self.electrons.abs() < 1e-9 {
            return None;
        }
        let thermal = liquor.temperature().rt() / FARADAY;
        let value = liquor.gibbs.electron() / FARADAY + thermal * self.energy.value / self.electrons;
        Some(Estimate::new(value, (thermal * self.energy.standard_uncertainty / self.electrons).abs()))
    }

    /// ΔG at potential `e`, J per mole of the solid.
    pub fn delta_g(&self, liquor: &Liquor, e: f64) -> Estimate {
        let electron = liquor.gibbs.electron() - FARADAY * e;
        let rt = liquor.temperature().rt();
        Estimate::new(rt * self.energy.value + self.electrons * electron, rt * self.energy.standard_uncertainty)
    }

    /// Solids among the products, sulfur apart.
    pub fn films(&self) -> impl Iterator<Item = &StateForm> {
        self.products.iter().map(|(form, _)| form).filter(|f| f.basis == Basis::Condensed && !is_element_symbol(f, "S"))
    }

    /// The oxidation half-reaction, per formula of the solid.
    pub fn half(&self, liquor: &Liquor, solid: SpeciesId) -> Equation {
        let mut named = vec![(solid, -1.0)];
        for (form, count) in &self.products {
            let id = states::named_form(liquor, form);
            let species = liquor.library.get(id);
            let held: f64 = species.constituents.iter().filter(|(c, _)| *c == form.constituent).map(|(_, n)| n).sum();
            named.push((id, count / held));
        }
        Closer::new(liquor).close(&merged(named))
    }
}

fn merged(terms: Vec<(SpeciesId, f64)>) -> Vec<(SpeciesId, f64)> {
    let mut out: Vec<(SpeciesId, f64)> = Vec::new();
    for (id, n) in terms {
        match out.iter_mut().find(|(known, _)| *known == id) {
            Some((_, count)) => *count += n,
            None => out.push((id, n)),
        }
    }
    out
}

/// Which products count.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Products {
    /// Dissolved ones only (elemental sulfur apart).
    Dissolved,
    /// Solids too, where they are more stable.
    All,
}

/// The best path of each route at potential `e` (V), with the solid's elements reaching `moles` per kg of water times
/// their count (plus what the liquor holds already).
pub fn paths(liquor: &Liquor, solid: SpeciesId, moles: f64, e: f64, products: Products) -> Vec<Path> {
    routes(liquor, solid).into_iter().filter_map(|route| path(liquor, solid, moles, e, products, route)).collect()
}

/// The path on which every constituent keeps its state: acid, base or ligands alone.
pub fn without_electrons(liquor: &Liquor, solid: SpeciesId, moles: f64) -> Option<Path> {
    assemble(liquor, solid, 0.0, Route::Plain, |constituent, count| {
        states::dissolved_at(liquor, constituent, count * moles + liquor.total(constituent)).into_iter().collect()
    })
}

fn routes(liquor: &Liquor, solid: SpeciesId) -> Vec<Route> {
    let sulfide = |(c, _): &(Constituent, f64)| symbol(c) == "S" && c.oxidation() < 0.0;
    if liquor.library.get(solid).constituents.iter().any(sulfide) {
        vec![Route::ToSulfur, Route::ToSulfate, Route::ToSulfide]
    } else {
        vec![Route::Plain]
    }
}

fn path(liquor: &Liquor, solid: SpeciesId, moles: f64, e: f64, products: Products, route: Route) -> Option<Path> {
    assemble(liquor, solid, e, route, |constituent, count| {
        candidates(liquor, constituent, count * moles, products, route)
    })
}

/// Puts the cheapest form of each constituent together; `forms` lists what a constituent of a given count may become.
fn assemble(
    liquor: &Liquor,
    solid: SpeciesId,
    e: f64,
    route: Route,
    forms: impl Fn(&Constituent, f64) -> Vec<StateForm>,
) -> Option<Path> {
    let species = liquor.library.get(solid);
    let electron = (liquor.gibbs.electron() - FARADAY * e) / liquor.temperature().rt();
    let mut energy = -liquor.reduced_gibbs(solid);
    let mut electrons = 0.0;
    let mut chosen = Vec::new();
    for (constituent, count) in &species.constituents {
        if is_solvent(constituent) {
            energy += count * liquor.potential(constituent)?;
            continue;
        }
        let cost = |form: &StateForm| form.potential + (form.oxidation() - constituent.oxidation()) * electron;
        let form = forms(constituent, *count)
            .into_iter()
            .filter(|form| form.leading != solid)
            .min_by(|a, b| cost(a).total_cmp(&cost(b)))?;
        electrons += count * (form.oxidation() - constituent.oxidation());
        energy += count * form.potential;
        chosen.push((form, *count));
    }
    let forms: Vec<(&StateForm, f64)> = chosen.iter().map(|(form, n)| (form, *n)).collect();
    let spread = spread_of(liquor, &forms, &[(solid, -1.0)]);
    Some(Path { route, products: chosen, electrons, energy: Estimate::new(energy, spread) })
}

/// Forms that a constituent of a solid may take.
fn candidates(
    liquor: &Liquor,
    constituent: &Constituent,
    moles: f64,
    products: Products,
    route: Route,
) -> Vec<StateForm> {
    let sulfide = symbol(constituent) == "S" && constituent.oxidation() < 0.0;
    let states = match constituent.element() {
        Some(element) if sulfide => sulfur_states(liquor, element, route),
        Some(element) if may_change(element) => states::states_of(liquor, element)
            .into_iter()
            .filter(|s| s.oxidation() > 0.0 || *s == *constituent)
            .collect(),
        _ => vec![constituent.clone()],
    };
    let mut forms = Vec::new();
    for state in states {
        // Charged elements do not leave as themselves, and the metal in its own state 0 is the solid.
        let element_itself = state.oxidation() == 0.0 && state == *constituent;
        if element_itself {
            continue;
        }
        forms.extend(states::dissolved_at(liquor, &state, moles + liquor.total(&state)));
        let solid_allowed = products == Products::All || (sulfide && state.oxidation() == 0.0);
        if solid_allowed {
            forms.extend(states::own_condensed(liquor, &state));
        }
    }
    forms
}

fn sulfur_states(liquor: &Liquor, element: Element, route: Route) -> Vec<Constituent> {
    let wanted = match route {
        Route::ToSulfur => 0.0,
        Route::ToSulfate => 6.0,
        Route::ToSulfide | Route::Plain => -2.0,
    };
    states::states_of(liquor, element).into_iter().filter(|s| s.oxidation() == wanted).collect()
}

/// Elements whose state is left as it is in a dissolving compound: the ligands.
fn may_change(element: Element) -> bool {
    !matches!(element.symbol(), "H" | "F" | "Cl" | "Br" | "I" | "N" | "C" | "P" | "Si" | "B" | "O" | "S" | "Se")
}

fn symbol(constituent: &Constituent) -> &'static str {
    constituent.element().map_or("", |e| e.symbol())
}

fn is_element_symbol(form: &StateForm, wanted: &str) -> bool {
    symbol(&form.constituent) == wanted
}

/// log₁₀ K of a dissolution that moves no electrons, and whether it is driven: −ΔG/(RT ln 10) at the liquor's activities.
pub fn affinity(path: &Path, liquor: &Liquor) -> Estimate {
    path.delta_g(liquor, 0.0).scaled(-1.0 / (liquor.temperature().rt() * std::f64::consts::LN_10))
}
