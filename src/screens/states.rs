//! Which oxidation states are unstable in this liquor, and into what they turn.
//!
//! ΔG against oxidation number: a state above the lower convex hull is driven apart into the two states that bracket it.

use crate::chemistry::Element;
use crate::equilibrium::couples;
use crate::equilibrium::states::{self as forms, Basis, StateForm};
use crate::equilibrium::{Closer, Liquor};
use crate::library::tables::InertRecord;
use crate::quantity::{Estimate, FARADAY};
use crate::thermo::equation::Equation;

use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};

/// Total at which states are compared when the liquor holds none of the element, mol/kg.
const USUAL_TOTAL: f64 = 1e-3;

/// How a state falls apart.
#[derive(Debug, Clone)]
pub struct Disproportionation<'l> {
    pub lower: StateForm,
    pub upper: StateForm,
    /// E(state/lower) − E(upper/state), V; positive drives the state apart.
    pub driving_force: Estimate,
    pub equation: Equation,
    pub held_back: Option<&'l InertRecord>,
}

/// One oxidation state of an element in the liquor.
#[derive(Debug, Clone)]
pub struct Rung<'l> {
    pub form: StateForm,
    /// E to the next lower state, V against SHE.
    pub step_down: Option<Estimate>,
    /// Set when the state lies above the hull.
    pub falls_apart: Option<Disproportionation<'l>>,
}

/// All states of one element, lowest first.
#[derive(Debug, Clone)]
pub struct Ladder<'l> {
    pub element: Element,
    pub rungs: Vec<Rung<'l>>,
}

/// Ladders of the elements that the liquor or a solid brings and that have three states or more.
pub fn ladders<'l>(setting: &Setting<'_, 'l>) -> Vec<Ladder<'l>> {
    let liquor = &setting.liquor;
    let mut elements: Vec<Element> = liquor.constituents().filter_map(|c| c.element()).collect();
    elements.extend(crate::case::constituents_named(setting.case).iter().filter_map(|c| c.element()));
    elements.sort();
    elements.dedup();
    elements.into_iter().filter_map(|element| ladder(liquor, element)).collect()
}

/// The ladder of one element in a liquor; `None` with fewer than three states.
pub fn ladder<'l>(liquor: &Liquor<'l>, element: Element) -> Option<Ladder<'l>> {
    let states = forms::states_of(liquor, element);
    let held: f64 = states.iter().map(|s| liquor.total(s)).sum();
    let total = if held > 0.0 { couples::ASSUMED_SHARE * held } else { USUAL_TOTAL };
    let reached =
        |s: &&crate::chemistry::Constituent| liquor.potential(s).is_some() || !couples::never_reached(liquor, s);
    let list: Vec<StateForm> =
        states.iter().filter(reached).filter_map(|s| forms::in_liquor(liquor, s, total)).collect();
    if list.len() < 3 {
        return None;
    }
    let height = |f: &StateForm| f.potential + f.oxidation() * liquor.gibbs.electron() / liquor.temperature().rt();
    let hull = lower_hull(&list, height);
    let rungs = list
        .iter()
        .enumerate()
        .map(|(i, form)| Rung {
            form: form.clone(),
            step_down: (i > 0).then(|| couples::couple(liquor, form.clone(), list[i - 1].clone()).potential),
            falls_apart: bracket(&hull, i).map(|(a, b)| disproportionation(liquor, form, &list[a], &list[b])),
        })
        .collect();
    Some(Ladder { element, rungs })
}

/// Indices on the lower convex hull, in order of oxidation number.
fn lower_hull(list: &[StateForm], height: impl Fn(&StateForm) -> f64) -> Vec<usize> {
    let mut hull: Vec<usize> = Vec::new();
    for i in 0..list.len() {
        while let [.., a, b] = hull.as_slice() {
            let slope = |from: usize, to: usize| {
                (height(&list[to]) - height(&list[from])) / (list[to].oxidation() - list[from].oxidation())
            };
            if slope(*a, *b) < slope(*b, i) {
                break;
            }
            hull.pop();
        }
        hull.push(i);
    }
    hull
}

/// The hull states on either side of state `i`; `None` when it is on the hull itself.
fn bracket(hull: &[usize], i: usize) -> Option<(usize, usize)> {
    let above = hull.iter().position(|h| *h >= i)?;
    (hull[above] != i && above > 0).then(|| (hull[above - 1], hull[above]))
}

fn disproportionation<'l>(
    liquor: &Liquor<'l>,
    state: &StateForm,
    lower: &StateForm,
    upper: &StateForm,
) -> Disproportionation<'l> {
    let down = couples::couple(liquor, state.clone(), lower.clone());
    let up = couples::couple(liquor, upper.clone(), state.clone());
    let thermal = liquor.temperature().rt() / FARADAY;
    let (n_down, n_up) = (down.electrons, up.electrons);
    let weights = [(state, 1.0 / n_down + 1.0 / n_up), (lower, -1.0 / n_down), (upper, -1.0 / n_up)];
    let spread = couples::spread_of(liquor, &weights, &[]);
    let driving_force = Estimate::new(down.potential.value - up.potential.value, thermal * spread);
    let share = n_down / (n_down + n_up);
    let held_back = couples::held_back(liquor, &down, None).or_else(|| couples::held_back(liquor, &up, None));
    let per_atom = |form: &StateForm| {
        let id = forms::named_form(liquor, form);
        let species = liquor.library.get(id);
        let count: f64 = species.constituents.iter().filter(|(c, _)| *c == form.constituent).map(|(_, n)| n).sum();
        (id, 1.0 / count.max(1e-9))
    };
    let (from, n) = per_atom(state);
    let (low, l) = per_atom(lower);
    let (high, h) = per_atom(upper);
    let equation = Closer::new(liquor).close(&[(from, -n), (low, l * (1.0 - share)), (high, h * share)]).whole();
    Disproportionation { lower: lower.clone(), upper: upper.clone(), driving_force, equation, held_back }
}

/// One finding for each unstable state.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let liquor = &setting.liquor;
    let mut findings = Vec::new();
    for ladder in ladders(setting) {
        for rung in &ladder.rungs {
            if let Some(apart) = &rung.falls_apart {
                findings.push(unstable(setting, liquor, rung, apart));
            }
        }
    }
    findings
}

fn unstable(setting: &Setting, liquor: &Liquor, rung: &Rung, apart: &Disproportionation) -> Finding {
    let library = liquor.library;
    let verdict = Verdict::of(apart.driving_force);
    let name = |f: &StateForm| library.get(forms::named_form(liquor, f)).pretty();
    let subject = rung.form.constituent.roman();
    let in_use = rung.form.basis == Basis::Liquor;
    let persists = apart.held_back.is_some();
    let attention = if in_use && verdict == Verdict::Driven && !persists { Attention::Review } else { Attention::Note };
    let words = text::millivolts(apart.driving_force);
    let statement = match (verdict, persists) {
        (Verdict::Driven, false) => {
            format!(
                "{subject}, here {}, is unstable: it goes to {} and {} ({words}).",
                name(&rung.form),
                name(&apart.lower),
                name(&apart.upper)
            )
        }
        (Verdict::Driven, true) => format!(
            "{subject}, here {}, lies above {} and {} ({words}) but practice sees it persist.",
            name(&rung.form),
            name(&apart.lower),
            name(&apart.upper)
        ),
        _ => format!(
            "{subject}, here {}, is close to balance with {} and {} ({words}).",
            name(&rung.form),
            name(&apart.lower),
            name(&apart.upper)
        ),
    };
    let mut finding = Finding::new(Question::State, &subject, None, verdict, attention, statement);
    finding.driving_force = Some(apart.driving_force);
    finding.take_equation(&apart.equation, liquor);
    finding.products = [&apart.lower, &apart.upper].iter().map(|f| library.get(f.leading).label()).collect();
    if let Some(record) = apart.held_back {
        finding.reasons.push(format!("Practice: {}", text::sentence(&record.practice)));
        finding.sources.push(record.source.clone());
    }
    if !in_use {
        finding.reasons.push("The liquor as given holds none of this state; it is judged as an intermediate.".into());
    }
    let _ = setting;
    finding.cautions.push("general".into());
    finding
}
