//! Laws that hold whatever the data: balances, path independence, direction of change.

use std::collections::BTreeMap;

use halfcell::case::Case;
use halfcell::chemistry::{Element, Formula, Medium, ReactionText};
use halfcell::equilibrium::{Liquor, Recipe};
use halfcell::library::Library;
use halfcell::library::record::State;
use halfcell::quantity::{FARADAY, Kelvin, T_STANDARD};
use halfcell::scenario::Scenario;
use halfcell::screens::{self, Setting};
use halfcell::thermo::gibbs::GibbsTable;
use halfcell::thermo::named;
use proptest::prelude::*;

fn library() -> &'static Library {
    static LIBRARY: std::sync::OnceLock<Library> = std::sync::OnceLock::new();
    LIBRARY.get_or_init(|| Library::embedded().expect("the embedded library"))
}

/// Solutes that are mixed at random: acids, ligands, metals in several states.
const SOLUTES: [&str; 16] = [
    "Fe^3+", "Fe^2+", "Cu^2+", "Zn^2+", "Ni^2+", "Ag^+", "Pb^2+", "Al^3+", "Cl^-", "SO4^2-", "NH3", "F^-", "CO3^2-",
    "CN^-", "ClO^-", "HCrO4^-",
];

fn mixed(amounts: &[(usize, f64)], ph: f64, celsius: f64) -> Liquor<'static> {
    let mut totals = BTreeMap::new();
    for (i, molality) in amounts {
        let species = library().dissolved(SOLUTES[*i]).expect(SOLUTES[*i]);
        for (constituent, n) in
            species.constituents.iter().filter(|(c, _)| !halfcell::equilibrium::liquor::is_solvent(c))
        {
            *totals.entry(constituent.clone()).or_insert(0.0) += n * molality;
        }
    }
    let recipe = Recipe { temperature: Kelvin::from_celsius(celsius), ph, totals, gases: Vec::new() };
    Liquor::mix(library(), recipe).expect("a liquor")
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(60))]

    /// Every constituent that goes in is found again, whatever complexes form; totals over nine decades.
    #[test]
    fn what_goes_into_a_liquor_is_found_in_it(
        amounts in prop::collection::vec((0usize..SOLUTES.len(), -9.0f64..-0.3), 1..8),
        ph in 0.0f64..13.0,
        celsius in 5.0f64..95.0,
    ) {
        let amounts: Vec<(usize, f64)> = amounts.into_iter().map(|(i, log)| (i, 10f64.powf(log))).collect();
        let liquor = mixed(&amounts, ph, celsius);
        for (constituent, total) in &liquor.recipe.totals {
            let found = liquor.total(constituent);
            prop_assert!((found / total - 1.0).abs() < 1e-9, "{constituent}: {found} of {total}");
        }
        prop_assert!(liquor.worst_balance <= 1e-10);
    }

    /// Hydrogen cyanide over a liquor rises as its pH falls.
    #[test]
    fn acid_drives_hydrogen_cyanide_out(ph in 2.0f64..11.5, step in 0.1f64..1.0, molality in 1e-5f64..0.1) {
        let gas = library().in_state("HCN", State::Gas).expect("HCN(g)");
        let place = SOLUTES.iter().position(|s| *s == "CN^-").expect("cyanide");
        let pressure = |ph: f64| mixed(&[(place, molality)], ph, 25.0).ln_activity(gas).expect("pressure");
        prop_assert!(pressure(ph) >= pressure(ph + step));
    }

    /// G° of reactions adds up along any path: 2 × (Fe³⁺ + e) and (Cu²⁺ + 2 e) give the whole reaction at any temperature.
    #[test]
    fn energies_add_up_along_any_path(celsius in 0.0f64..300.0) {
        let t = Kelvin::from_celsius(celsius);
        let table = GibbsTable::at(library(), t).expect("in range");
        let energy = |text: &str| {
            let equation = named::reaction(text, library(), Medium::Acid).expect(text);
            equation.delta_g(&table, library()).value
        };
        let whole = energy("2 Fe^3+ + Cu = 2 Fe^2+ + Cu^2+");
        let parts = 2.0 * energy("Fe^3+ + e^- = Fe^2+") - energy("Cu^2+ + 2 e^- = Cu");
        prop_assert!((whole - parts).abs() < 1e-6);
        // Hydrogen is the zero of potential at every temperature.
        prop_assert!(energy("2 H^+ + 2 e^- = H2(g)").abs() < 1e-6);
    }
}

/// Potentials are never added without their electrons: E(a/c)·n = E(a/b)·n₁ + E(b/c)·n₂.
#[test]
fn potentials_are_path_independent_when_weighted_by_electrons() {
    let table = GibbsTable::at(library(), T_STANDARD).expect("25 °C");
    let energy = |couple: &str| {
        let (_, _, equation) = named::couple(couple, library(), Medium::Acid).expect(couple);
        (equation.delta_g(&table, library()).value, -equation.electrons)
    };
    for (whole, first, second) in [
        ("MnO4^-/Mn^2+", "MnO4^-/MnO2", "MnO2/Mn^2+"),
        ("Cu^2+/Cu", "Cu^2+/Cu^+", "Cu^+/Cu"),
        ("O2(g)/H2O", "O2(g)/H2O2(aq)", "H2O2(aq)/H2O"),
    ] {
        let ((w, nw), (a, na), (b, nb)) = (energy(whole), energy(first), energy(second));
        // Couples are balanced to whole numbers of their own: the second is scaled to the atoms of the first.
        let multiple = (nw - na) / nb;
        assert!((w - a - multiple * b).abs() / FARADAY < 1e-9, "{whole}");
    }
}

/// Every reaction that a report prints balances in every element and in charge.
#[test]
fn every_reaction_in_the_demonstration_balances() {
    let scenario = Scenario::parse("demonstration", halfcell::cli::DEMONSTRATION).expect("the demonstration reads");
    let case = Case::resolve(&scenario, library()).expect("its names are known");
    let setting = Setting::new(&case).expect("it computes");
    let mut checked = 0;
    for finding in screens::run(&setting) {
        let Some(reaction) = &finding.reaction else { continue };
        assert!(closes(reaction), "{}: {reaction}", finding.id);
        checked += 1;
    }
    assert!(checked > 30, "only {checked} reactions");
}

/// Whether the text of a reaction closes; crystal forms in brackets are names, not formulae.
fn closes(reaction: &str) -> bool {
    let plain: String = reaction
        .split(' ')
        .filter(|word| !(word.starts_with('(') && word.ends_with(')') && !word.contains(['^', '2', '3', '4'])))
        .collect::<Vec<_>>()
        .join(" ");
    let parsed = ReactionText::parse(&plain).expect(&plain);
    let mut atoms: BTreeMap<Element, f64> = BTreeMap::new();
    let mut charge = 0.0;
    for (terms, sign) in [(&parsed.left, -1.0), (&parsed.right, 1.0)] {
        for term in terms {
            let n = sign * term.coefficient.map_or(1.0, |c| *c.numer() as f64 / *c.denom() as f64);
            let formula: &Formula = &term.formula;
            charge += n * f64::from(formula.charge);
            for (element, count) in &formula.composition {
                *atoms.entry(*element).or_default() += n * *count.numer() as f64 / *count.denom() as f64;
            }
        }
    }
    charge.abs() < 1e-6 && atoms.values().all(|n| n.abs() < 1e-6)
}

/// Electrons close half-reactions only: what is written whole stays whole.
#[test]
fn whole_reactions_have_no_electron_left_over() {
    for text in ["SCN^- + O2 -> SO4^2- + CN^-", "Au + CN^- + O2 -> Au(CN)2^-", "ClO^- + CN^- -> Cl^- + OCN^-"] {
        let equation = named::reaction(text, library(), Medium::Acid).expect(text);
        assert_eq!(equation.electrons, 0.0, "{}", equation.ascii(library()));
    }
}

/// A reference zero cancels from a complexation and from nothing else.
#[test]
fn ligands_of_unknown_energy_cannot_be_burnt() {
    for text in ["C6H5O7^3- + O2 -> CO2 + H2O", "CuC6H5O7^- + O2 -> Cu^2+ + CO2 + H2O"] {
        let refused = named::reaction(text, library(), Medium::Acid).expect_err(text).to_string();
        assert!(refused.contains("ligand only"), "{refused}");
    }
    assert!(named::reaction("Cu^2+ + C6H5O7^3- -> CuC6H5O7^-", library(), Medium::Acid).is_ok());
}
