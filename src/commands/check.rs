//! `tieout check`: manuscripts, folders or standard input, for reading.

use super::inputs::{self, Input};
use super::run::{self, Work};
use super::{Judging, Output, Refused, Showing, Status};
use clap::Args;
use std::path::PathBuf;

#[derive(Args)]
pub struct Check {
    /// Manuscripts, or folders to look through for them; - reads standard input
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    #[command(flatten)]
    judging: Judging,
    #[command(flatten)]
    showing: Showing,
    /// How many files to work on at once [default: one per processor core]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=256))]
    jobs: Option<u16>,
}

impl Check {
    pub(super) fn run(self) -> Result<Status, Refused> {
        let options = self.judging.options()?;
        let inputs: Vec<Input> = inputs::expand(&self.files);
        let report = self.showing.report(inputs.len() > 1, false);
        run::all(Work {
            inputs,
            options,
            grammars: self.judging.grammar,
            report,
            read_only: self.showing.format == Output::TextOnly,
            jobs: self.jobs.map_or(0, usize::from),
        })
    }
}
