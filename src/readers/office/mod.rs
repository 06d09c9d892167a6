//! What Word and OpenDocument files have in common: XML parts, lines of raised and lowered text,
//! a flow of paragraphs and tables, captions that only their wording gives away.

pub mod flow;
pub mod labels;
pub mod line;
pub mod setting;
pub mod style;
pub mod symbols;
pub mod tree;
