//! The *judge* tries every relation on every statement and says what it found. It knows neither
//! file formats nor how findings are shown.

mod finding;

pub use finding::{Counts, Document, Finding, Repair, Verdict};
