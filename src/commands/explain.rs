//! `tieout explain`: the documentation of the relations.

use super::{Refused, Status, relation_named, run, width};
use crate::relations::REGISTRY;
use crate::reports;
use clap::Args;

#[derive(Args)]
pub struct Explain {
    /// The relation to explain; without it, all are listed
    #[arg(value_name = "RELATION")]
    relation: Option<String>,
}

impl Explain {
    pub(super) fn run(self) -> Result<Status, Refused> {
        let text = match self.relation {
            None => {
                let entries = REGISTRY.iter().map(|r| (r.name, r.summary()));
                reports::two_columns(&entries.collect::<Vec<_>>(), width())
            }
            Some(typed) => {
                let name = relation_named(&typed)?;
                // The name comes from the registry.
                REGISTRY
                    .iter()
                    .find(|r| r.name == name)
                    .map(|r| format!("{name}\n\n{}", reports::paragraphs(&r.documentation(), width())))
                    .unwrap_or_default()
            }
        };
        run::write(text.as_bytes())?;
        Ok(Status::Clean)
    }
}
