//! The sections of the report, each from the subject to blocks.

mod answer;
mod basis;
mod liquor;
mod results;

pub use answer::{answer, leading};
pub use basis::{cautions, data, method};
pub use liquor::{conditions, liquor};
pub use results::{gases, ladders, reactions, reasons, solids};
