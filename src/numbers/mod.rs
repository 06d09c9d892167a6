//! A *number* is never a point here: what is printed stands for every true value that prints that
//! way. This room turns printed digits into such [`Interval`]s and back; it knows no statistics.

mod comparator;
mod decimal;
mod interval;
pub mod sets;

pub use comparator::Comparator;
pub use decimal::Decimal;
pub use interval::{Interval, Set};
