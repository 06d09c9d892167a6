//! `tieout try`: one statement typed by hand.

use super::inputs::Input;
use super::run::{self, Work};
use super::{Judging, Output, Refused, Showing, Status};
use clap::Args;

#[derive(Args)]
pub struct Try {
    /// The statement as a paper would print it, e.g. 't(28) = 2.20, p = .036'; - reads standard input
    #[arg(value_name = "TEXT", allow_hyphen_values = true)]
    text: String,
    #[command(flatten)]
    judging: Judging,
    #[command(flatten)]
    showing: Showing,
}

impl Try {
    pub(super) fn run(self) -> Result<Status, Refused> {
        let input = match self.text.as_str() {
            "-" => Input::PipedText,
            text => Input::Typed(text.to_string()),
        };
        run::all(Work {
            inputs: vec![input],
            options: self.judging.options()?,
            grammars: self.judging.grammar,
            report: self.showing.report(false, true),
            read_only: self.showing.format == Output::TextOnly,
            jobs: 1,
        })
    }
}
