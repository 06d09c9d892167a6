//! tieout reads a scientific manuscript, finds every statistic it reports and works out which of
//! them cannot all be true together.

pub mod manuscript;
pub mod readers;
