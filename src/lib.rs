//! tieout reads a scientific manuscript, finds every statistic it reports and works out which of
//! them cannot all be true together.

pub mod distributions;
pub mod judge;
pub mod manuscript;
pub mod numbers;
pub mod readers;
pub mod relations;
pub mod statements;
