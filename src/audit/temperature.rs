//! Rules on how Gibbs energies change with temperature.

use crate::library::checks::Checks;
use crate::library::{Library, TemperatureModel};
use crate::quantity::{Kelvin, T_STANDARD};
use crate::thermo::gibbs::{GibbsTable, RANGE};
use crate::thermo::water::RangeError;

use super::{Check, Rule};

/// Largest second difference of G over 1 K, J/mol: a heat capacity of a few thousand J/(mol K) near 300 °C gives a few, a change
/// of form a few tens; a jump of a model gives more.
const LARGEST_BEND: f64 = 100.0;
/// kJ/mol that a constant heat capacity may miss by on the way to 600 K.
const HEAT_TOLERANCE: f64 = 0.5;

/// G(T) of every species is finite, and has no step from degree to degree, from 0 to 300 °C.
pub fn smooth(library: &Library) -> Result<Vec<Check>, RangeError> {
    let degrees = (RANGE.1.0 - RANGE.0.0).floor() as usize;
    let tables: Vec<GibbsTable> =
        (0..=degrees).map(|i| GibbsTable::at(library, Kelvin(RANGE.0.0 + i as f64))).collect::<Result<_, _>>()?;
    let checks = library.species().iter().zip(&library.records).map(|(species, record)| {
        let value = |i: usize| tables[i].of(species.id).value;
        let worst = (1..degrees).map(|i| (value(i + 1) - 2.0 * value(i) + value(i - 1)).abs()).fold(0.0, f64::max);
        let finite = (0..=degrees).all(|i| value(i).is_finite());
        let detail = format!("bends by {worst:.0} J/mol within a degree");
        Check::new(
            Rule::Temperature,
            species.label(),
            finite && worst < LARGEST_BEND,
            detail,
            record.explained.as_ref(),
        )
    });
    Ok(checks.collect())
}

/// Apparent changes of G° against published tables; heat capacities alone carry solids and gases to 600 K.
pub fn heat(library: &Library, published: &Checks) -> Result<Vec<Check>, RangeError> {
    let mut checks = Vec::new();
    for row in &published.heat {
        let same = |s: &&crate::library::Species| s.state == row.state && (row.form.is_none() || s.form == row.form);
        let Some(species) = library.records(&row.formula).into_iter().find(same) else {
            let detail = "is not in the library".to_owned();
            checks.push(Check::new(Rule::Heat, row.formula.clone(), false, detail, row.explained.as_ref()));
            continue;
        };
        let t = Kelvin(row.t_k);
        let change = match &species.temperature {
            TemperatureModel::HeatCapacity { .. } => crate::thermo::gibbs::heat_change(species, t),
            _ => {
                GibbsTable::at(library, t)?.of(species.id).value
                    - GibbsTable::at(library, T_STANDARD)?.of(species.id).value
            }
        };
        let miss = change * 1e-3 - row.dg_kj_mol;
        let detail =
            format!("{:.2} kJ/mol at {:.0} K, published {:.2} ({})", change * 1e-3, row.t_k, row.dg_kj_mol, row.source);
        let holds = miss.abs() <= HEAT_TOLERANCE;
        checks.push(Check::new(Rule::Heat, species.label(), holds, detail, row.explained.as_ref()));
    }
    Ok(checks)
}
