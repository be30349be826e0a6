//! Totals, temperature and fixed pH → the [`Liquor`]: every activity, and the potential of every couple.

mod closer;
pub mod couples;
mod dual;
pub mod liquor;
pub mod states;

pub use closer::Closer;
pub use couples::Couple;
pub use liquor::{Liquor, LiquorError, Recipe};
pub use states::{Basis, StateForm};
