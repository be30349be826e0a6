//! Formulae, charge, oxidation numbers, and exact balancing of reactions. It knows nothing of temperature.
//!
//! - [`element`]: the elements and their standard atomic weights;
//! - [`formula`]: `KFe3(SO4)2(OH)6`, `CuSO4*5H2O`, `SO4^2-` → composition and charge;
//! - [`oxidation`]: what a species is made of when oxidation states are kept apart;
//! - [`reaction`]: the text of a reaction → terms;
//! - [`balance`]: whole-number coefficients from the exact rational null space.

mod balance;
mod element;
mod formula;
mod oxidation;
mod reaction;

pub use balance::{BalanceError, Balanced, Medium, balance, balance_with, half_reaction};
pub use element::Element;
pub use formula::{Formula, FormulaError};
pub use oxidation::{Constituent, OxidationError, constituents};
pub use reaction::{ReactionError, ReactionText, StateSuffix, Term};

/// Exact count of atoms or moles.
pub type Count = num_rational::Ratio<i128>;
