//! From a species and a temperature to its Gibbs energy and its activity.

pub mod activity;
pub mod criss_cobble;
pub mod equation;
pub mod gibbs;
pub mod henry;
pub mod named;
pub mod water;
