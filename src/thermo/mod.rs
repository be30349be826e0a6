//! From a species and a temperature to its Gibbs energy and its activity.

pub mod criss_cobble;
pub mod henry;
pub mod water;
