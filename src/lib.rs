//! Hydrometallurgy and corrosion risk screening: one scenario file in, one dated report out.
//!
//! The way through, in order: [`scenario`] reads the file; [`library`] holds the records of `materials/`; [`case`] finds
//! the scenario's names in the library; [`chemistry`] knows formulae and balancing, [`thermo`] carries Gibbs energies over
//! temperature and activity; [`equilibrium`] computes the liquor; [`screens`] ask one question each and give findings;
//! [`audit`] holds the library against itself and published values; [`report`] makes one document of them and writes it as PDF, JSON or terminal text; [`cli`] is the only place that reads
//! arguments, opens files and prints. Arrows point one way: a later stage never reaches back.

pub mod audit;
pub mod case;
pub mod chemistry;
pub mod cli;
pub mod equilibrium;
pub mod library;
pub mod quantity;
pub mod report;
pub mod scenario;
pub mod screens;
pub mod thermo;
