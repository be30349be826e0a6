//! One question a file: each takes the [`Setting`] and gives [`Finding`]s. None knows of output formats.

pub mod attack;
pub mod contact;
pub mod dissolution;
pub mod drivers;
pub mod film;
pub mod finding;
pub mod gas;
pub mod liquor_check;
pub mod states;
mod text;

use crate::case::{Case, Solid};
use crate::equilibrium::{Liquor, LiquorError};
use crate::quantity::Estimate;

use attack::{Path, Products};
use drivers::Driver;
pub use finding::{Attention, Finding, Question, Verdict};

/// A liquor with what can take electrons in it: the same case computed once as stated and once for each uncertain input.
pub struct Setting<'c, 'l> {
    pub case: &'c Case<'l>,
    pub liquor: Liquor<'l>,
    pub drivers: Vec<Driver<'l>>,
    /// The liquor with one input moved by one standard uncertainty each.
    pub variations: Vec<Varied<'l>>,
}

/// The liquor with one input moved.
pub struct Varied<'l> {
    pub input: String,
    pub liquor: Liquor<'l>,
    pub drivers: Vec<Driver<'l>>,
}

impl<'c, 'l> Setting<'c, 'l> {
    /// Computes the liquor and its variations.
    ///
    /// # Errors
    /// [`LiquorError`] when the liquor as stated, or moved by one standard uncertainty, cannot be computed.
    pub fn new(case: &'c Case<'l>) -> Result<Self, LiquorError> {
        let liquor = Liquor::mix(case.library, case.recipe.clone())?;
        let drivers = drivers::drivers(case, &liquor);
        let variations = case
            .variations
            .iter()
            .map(|variation| {
                let liquor = Liquor::mix(case.library, variation.recipe.clone())?;
                let drivers = drivers::drivers(case, &liquor);
                Ok(Varied { input: variation.input.clone(), liquor, drivers })
            })
            .collect::<Result<Vec<_>, LiquorError>>()?;
        Ok(Self { case, liquor, drivers, variations })
    }

    /// Standard uncertainty of a result: `own` from data and models, with what each moved input adds to it.
    fn input_spread(&self, own: f64, value: impl Fn(&Varied<'l>) -> Option<f64>, base: f64) -> f64 {
        let inputs = self.variations.iter().filter_map(|v| value(v).map(|moved| (moved - base).powi(2)));
        (own * own + inputs.sum::<f64>()).sqrt()
    }
}

impl<'l> Varied<'l> {
    /// Driving force of the same pairing by the same route in the moved liquor, V.
    fn force(&self, solid: &Solid<'l>, driver: &str, path: &Path) -> Option<f64> {
        let e = self.drivers.iter().find(|d| d.label == driver)?.potential;
        let reach = dissolution::reach_of(solid);
        attack::paths(&self.liquor, solid.material.species(), reach, e.value, Products::Dissolved)
            .into_iter()
            .find(|p| p.route == path.route)?
            .driving_force(&self.liquor, e)
            .map(|force| force.value)
    }
}

/// All findings of a case, those that ask for action first.
pub fn run(setting: &Setting) -> Vec<Finding> {
    let mut findings = gas::screen(setting);
    findings.extend(dissolution::screen(setting));
    findings.extend(contact::screen(setting));
    findings.extend(states::screen(setting));
    findings.extend(liquor_check::screen(setting));
    for finding in &mut findings {
        finding.sources.sort();
        finding.sources.dedup();
    }
    findings.sort_by_key(|f| f.attention);
    findings
}

/// E and its standard uncertainty as the difference of two potentials.
fn difference(a: Estimate, b: Estimate) -> Estimate {
    Estimate::new(a.value - b.value, a.standard_uncertainty.hypot(b.standard_uncertainty))
}
