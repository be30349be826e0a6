//! `halfcell couple`: half-reaction, standard potential, and the potential at a pH with ligands.

use std::process::ExitCode;

use clap::Args;
use serde_json::json;

use super::AtTemperature;
use super::output::{self, Failure};
use crate::chemistry::Medium;
use crate::equilibrium::states::{self, StateForm};
use crate::equilibrium::{Liquor, Recipe, couples};
use crate::library::record::State;
use crate::library::{Library, SpeciesId};
use crate::quantity::{FARADAY, Kelvin};
use crate::scenario::{self, ConcentrationBasis};
use crate::thermo::{gibbs::GibbsTable, named};

/// Total at which each dissolved side stands unless `--with` says otherwise, mol/kg.
const USUAL_TOTAL: f64 = 1e-3;

#[derive(Debug, Args)]
pub struct CoupleArgs {
    /// `oxidised/reduced`, such as "Fe^3+/Fe^2+" or "AuCl4^-/Au"
    couple: String,
    #[command(flatten)]
    at: AtTemperature,
    /// pH of the liquor
    #[arg(long = "pH", value_name = "PH", default_value_t = 0.0, allow_hyphen_values = true)]
    ph: f64,
    /// A ligand, or a side of the couple, with its total: "Cl^-=1 mol/L" (repeatable)
    #[arg(long, value_name = "SPECIES=AMOUNT")]
    with: Vec<String>,
    /// Print the result as JSON
    #[arg(long)]
    json: bool,
}

pub fn run(args: &CoupleArgs, library: &Library) -> Result<ExitCode, Failure> {
    let t = scenario::temperature(&args.at.temperature).map_err(Failure::input)?;
    if !(-2.0..=16.0).contains(&args.ph) {
        return Err(Failure::input(format!("pH {} is outside −2 … 16", args.ph)));
    }
    let medium = if args.ph > 8.0 { Medium::Base } else { Medium::Acid };
    let (oxidised, reduced, equation) = named::couple(&args.couple, library, medium).map_err(Failure::input)?;
    let table = GibbsTable::at(library, t).map_err(Failure::input)?;
    let electrons = -equation.electrons;
    let standard = equation.delta_g(&table, library).scaled(-1.0 / (electrons * FARADAY));
    let conditions = Conditions::read(args, library, t)?;
    let actual = conditions.potential(oxidised, reduced, library)?;
    let text = equation.ascii(library);
    if args.json {
        output::print_json(&json!({
            "couple": args.couple, "reaction": text, "electrons": electrons, "temperature_K": t.0, "pH": args.ph,
            "E_standard_V": standard.value, "E_standard_uncertainty_V": standard.standard_uncertainty,
            "E_V": actual.map(|e| e.value),
        }))?;
        return Ok(ExitCode::SUCCESS);
    }
    let mut out = format!("{text}\n  at {t}\n  E°  {:>8.4} ± {:.4} V\n", standard.value, standard.standard_uncertainty);
    if let Some(e) = actual {
        out.push_str(&format!(
            "  E   {:>8.4} ± {:.4} V at pH {}, each dissolved side at {USUAL_TOTAL} mol/kg in all its forms unless given{}\n",
            e.value,
            e.standard_uncertainty,
            args.ph,
            if args.with.is_empty() { String::new() } else { format!(", with {}", args.with.join(", ")) }
        ));
    }
    out.push_str(&super::reaction::sources(&equation, library));
    output::print(&out)?;
    Ok(ExitCode::SUCCESS)
}

struct Conditions {
    recipe: Recipe,
    /// Totals given for single species, mol/kg.
    given: Vec<(SpeciesId, f64)>,
}

impl Conditions {
    fn read(args: &CoupleArgs, library: &Library, t: Kelvin) -> Result<Self, Failure> {
        let mut conditions = Self {
            recipe: Recipe { temperature: t, ph: args.ph, totals: Default::default(), gases: Vec::new() },
            given: Vec::new(),
        };
        for item in &args.with {
            let (name, amount) = item
                .split_once('=')
                .ok_or_else(|| Failure::input(format!("--with takes SPECIES=AMOUNT, found `{item}`")))?;
            let species = library.dissolved(name.trim()).map_err(Failure::input)?;
            let amount = scenario::concentration(amount.trim()).map_err(Failure::input)?;
            let water = crate::thermo::water::density(t).map_err(Failure::input)?;
            let molality = match amount.basis {
                ConcentrationBasis::Molality => amount.amount.value,
                ConcentrationBasis::AmountPerVolume => amount.amount.value / water,
                ConcentrationBasis::MassPerVolume => {
                    amount.amount.value / water / (species.formula.molar_mass() * 1e-3)
                }
                ConcentrationBasis::MassFraction => amount.amount.value / (species.formula.molar_mass() * 1e-3),
            };
            conditions.given.push((species.id, molality));
        }
        Ok(conditions)
    }

    /// E with each side in all the forms that the liquor makes of it.
    fn potential(
        &self,
        oxidised: SpeciesId,
        reduced: SpeciesId,
        library: &Library,
    ) -> Result<Option<crate::quantity::Estimate>, Failure> {
        let mut recipe = self.recipe.clone();
        let sides: Vec<_> =
            [oxidised, reduced].iter().flat_map(|id| &library.get(*id).constituents).map(|(c, _)| c.clone()).collect();
        let changing = |c: &crate::chemistry::Constituent| {
            sides.iter().filter(|s| s.element_name() == c.element_name()).any(|s| s != c) && sides.contains(c)
        };
        for (id, molality) in &self.given {
            for (constituent, n) in &library.get(*id).constituents {
                if !changing(constituent) && !crate::equilibrium::liquor::is_solvent(constituent) {
                    *recipe.totals.entry(constituent.clone()).or_insert(0.0) += n * molality;
                }
            }
        }
        let liquor = Liquor::mix(library, recipe).map_err(Failure::computation)?;
        let form = |id: SpeciesId| -> Option<StateForm> {
            let species = library.get(id);
            let (constituent, _) = species.constituents.iter().find(|(c, _)| changing(c))?;
            let total = self.given.iter().find(|(given, _)| *given == id).map_or(USUAL_TOTAL, |(_, m)| *m);
            match species.state {
                State::Aqueous if crate::equilibrium::liquor::is_solvent(constituent) => {
                    states::present(&liquor, constituent)
                }
                State::Aqueous => states::dissolved_at(&liquor, constituent, total),
                State::Gas => states::gaseous(&liquor, constituent, 1.0),
                _ if crate::equilibrium::liquor::is_solvent(constituent) => states::present(&liquor, constituent),
                _ => states::condensed(&liquor, constituent).into_iter().find(|f| f.leading == id),
            }
        };
        Ok(form(oxidised).zip(form(reduced)).map(|(ox, red)| couples::couple(&liquor, ox, red).potential))
    }
}
