//! Totals, temperature and fixed pH → the [`Liquor`]: every activity, and the potential of every couple.

pub mod couples;
mod dual;
pub mod equation;
pub mod liquor;
pub mod states;

pub use couples::Couple;
pub use equation::{Closer, Equation};
pub use liquor::{Liquor, LiquorError, Recipe};
pub use states::{Basis, StateForm};
