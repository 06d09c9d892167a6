//! A *command* is one thing that tieout can be asked to do. This room turns what was typed into
//! work for the other rooms and their results into output and an exit status.

mod boxes;
mod check;
mod explain;
mod inputs;
mod run;
mod try_text;

use crate::judge;
use crate::readers::contained::worker;
use crate::relations::REGISTRY;
use crate::reports::{self, Report, Show};
use crate::statements::Grammar;
use clap::{Args, Parser, Subcommand, ValueEnum};
use std::io::{IsTerminal, Write};
use std::path::PathBuf;
use std::process::ExitCode;

/// Checks the statistics that scientific manuscripts report
///
/// tieout finds every statistic that a manuscript reports and says which of them cannot all be
/// true together. Manuscripts stay on this computer: nothing is sent anywhere.
#[derive(Parser)]
#[command(
    name = "tieout",
    version,
    propagate_version = false,
    subcommand_required = true,
    arg_required_else_help = true
)]
#[command(disable_help_subcommand = true, after_help = EXIT_HELP)]
pub struct Cli {
    #[command(subcommand)]
    command: Command,
}

const EXIT_HELP: &str = "Exit status: 0 everything was read and nothing conflicts, 1 something conflicts or \
    reverses, 2 bad usage or an input that could not be read.";

#[derive(Subcommand)]
enum Command {
    /// Check one or a few manuscripts and show what conflicts
    Check(check::Check),
    /// Check one statement typed by hand
    Try(try_text::Try),
    /// List the relations, or explain one: formula, assumptions, cautions, source
    Explain(explain::Explain),
    #[command(hide = true)]
    Boxes(boxes::Boxes),
    /// The process of its own in which files of binary formats are read; never called by hand
    #[command(name = worker::COMMAND, hide = true)]
    Worker,
}

impl Cli {
    /// Does what was asked.
    pub fn run(self) -> ExitCode {
        let done = match self.command {
            Command::Check(check) => check.run(),
            Command::Try(try_text) => try_text.run(),
            Command::Explain(explain) => explain.run(),
            Command::Boxes(boxes) => boxes.run(),
            Command::Worker => return worker::run(),
        };
        match done {
            Ok(status) => status.into(),
            Err(Refused(reason)) => {
                complain(&reason);
                Status::Trouble.into()
            }
        }
    }
}

/// How a run ended, as the exit status tells it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Status {
    /// Everything was read and nothing conflicts.
    Clean = 0,
    /// Something conflicts or reverses.
    Conflicts = 1,
    /// Bad usage, or an input that could not be read.
    Trouble = 2,
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> ExitCode {
        ExitCode::from(status as u8)
    }
}

impl From<reports::Tally> for Status {
    fn from(tally: reports::Tally) -> Status {
        if tally.unreadable > 0 {
            Status::Trouble
        } else if tally.with_conflicts > 0 {
            Status::Conflicts
        } else {
            Status::Clean
        }
    }
}

/// Why a command can't even begin: one line for the person.
#[derive(Debug, PartialEq, Eq)]
struct Refused(String);

/// One line on standard error. When even that is closed there is nobody left to tell.
fn complain(reason: &str) {
    let line = reports::harmless(reason).replace('\n', " ");
    let _ = writeln!(std::io::stderr(), "tieout: {line}");
}

/// Options that decide how statements are found and judged.
#[derive(Args)]
struct Judging {
    /// Level of significance, unless the manuscript states its own [default: 0.05]
    #[arg(long, value_name = "LEVEL", value_parser = level)]
    alpha: Option<f64>,
    /// Try every test as one-sided as well as two-sided
    #[arg(long)]
    one_sided: bool,
    /// Try only these relations; may be repeated or separated by commas
    #[arg(long, value_name = "RELATION", value_delimiter = ',')]
    only: Vec<String>,
    /// Leave these relations out; may be repeated or separated by commas
    #[arg(long, value_name = "RELATION", value_delimiter = ',')]
    skip: Vec<String>,
    /// Read this file of further ways to write results; may be repeated
    #[arg(long, value_name = "FILE")]
    grammar: Vec<PathBuf>,
}

impl Judging {
    fn options(&self) -> Result<judge::Options, Refused> {
        let known = |names: &[String]| {
            let names = names.iter().map(|n| relation_named(n).map(String::from));
            names.collect::<Result<Vec<String>, Refused>>()
        };
        Ok(judge::Options {
            alpha: self.alpha,
            one_sided: self.one_sided,
            only: known(&self.only)?,
            skip: known(&self.skip)?,
        })
    }
}

/// The built-in grammar, with these files of further ways to write results.
fn grammar(files: &[PathBuf]) -> Result<&'static Grammar, Refused> {
    if files.is_empty() {
        return Ok(Grammar::built_in());
    }
    let grammar = Grammar::built_in_with(files).map_err(Refused)?;
    // One per run of the program, needed until its end by all threads.
    Ok(Box::leak(Box::new(grammar)))
}

fn level(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(level) if level > 0.0 && level < 1.0 => Ok(level),
        _ => Err("a level of significance lies between 0 and 1, e.g. 0.05".into()),
    }
}

/// Options that decide what is shown of the findings.
#[derive(Args)]
struct Showing {
    /// What to write
    #[arg(long, value_enum, default_value_t = Output::Text)]
    format: Output,
    /// Which findings to show; each choice includes the ones below it [default: conflicts; all for JSON and for try]
    #[arg(long, value_enum, value_name = "WHICH")]
    show: Option<Show>,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Output {
    /// A report to read
    Text,
    /// One JSON object with all documents
    Json,
    /// One JSON document per line
    Ndjson,
    /// The text as read from the file, nothing else
    TextOnly,
}

impl Showing {
    /// The report that was asked for. `several` inputs are shown, or a text `typed` by hand.
    fn report(&self, several: bool, typed: bool) -> Box<dyn Report> {
        let to_terminal = std::io::stdout().is_terminal();
        // Programs that read JSON are served with everything unless they ask for less.
        let show = |default| self.show.unwrap_or(default);
        match self.format {
            Output::Json => Box::new(reports::Json {
                show: show(Show::All),
            }),
            Output::Ndjson => Box::new(reports::NdJson {
                show: show(Show::All),
            }),
            Output::TextOnly => Box::new(reports::TextOnly { several, to_terminal }),
            Output::Text => Box::new(reports::Text {
                show: show(if typed { Show::All } else { Show::Conflicts }),
                width: width(),
                bold: to_terminal && bold_is_wanted(),
                typed,
                several,
            }),
        }
    }
}

/// Nobody has asked for plain output, in the way that <https://no-color.org> proposes.
fn bold_is_wanted() -> bool {
    let unset = std::env::var_os("NO_COLOR").is_none_or(|v| v.is_empty());
    unset && std::env::var_os("TERM").is_none_or(|v| v != "dumb")
}

/// Columns for text: of the terminal, within what is comfortable to read.
fn width() -> usize {
    const COMFORTABLE: std::ops::RangeInclusive<usize> = 40..=100;
    let set = std::env::var("COLUMNS")
        .ok()
        .and_then(|c| c.trim().parse::<usize>().ok());
    let of_terminal = || {
        let (columns, _) = terminal_size::terminal_size_of(std::io::stdout())?;
        Some(usize::from(columns.0))
    };
    let columns = set.or_else(of_terminal).unwrap_or(80);
    columns.clamp(*COMFORTABLE.start(), *COMFORTABLE.end())
}

/// The relation with this name, or a refusal that names those with a similar name.
fn relation_named(typed: &str) -> Result<&'static str, Refused> {
    let names = || REGISTRY.iter().map(|r| r.name);
    if let Some(name) = names().find(|n| *n == typed.trim()) {
        return Ok(name);
    }
    let close = close_names(typed.trim(), names());
    let hint = match close.as_slice() {
        [] => String::new(),
        close => format!("did you mean {}? ", close.join(" or ")),
    };
    Err(Refused(format!(
        "there is no relation \"{typed}\"; {hint}\"tieout explain\" lists them all"
    )))
}

/// The names that are most like what was typed, the closest first, three at most.
fn close_names<'a>(typed: &str, names: impl Iterator<Item = &'a str>) -> Vec<&'a str> {
    let typed = typed.to_lowercase().replace('_', "-");
    let mut close: Vec<(usize, &str)> = names
        .map(|name| match !typed.is_empty() && name.contains(&typed) {
            true => (0, name),
            false => (distance(&typed, name), name),
        })
        .filter(|(far, name)| *far <= (name.len() / 3).max(2))
        .collect();
    close.sort();
    close.into_iter().take(3).map(|(_, name)| name).collect()
}

/// How many letters have to be put in, taken out, replaced or swapped with their neighbour to turn
/// one word into the other (optimal string alignment).
fn distance(a: &str, b: &str) -> usize {
    let (a, b): (Vec<char>, Vec<char>) = (a.chars().collect(), b.chars().collect());
    let mut rows = vec![vec![0usize; b.len() + 1]; a.len() + 1];
    for i in 0..=a.len() {
        for j in 0..=b.len() {
            if i == 0 || j == 0 {
                rows[i][j] = i + j;
                continue;
            }
            let replaced = rows[i - 1][j - 1] + usize::from(a[i - 1] != b[j - 1]);
            let mut least = replaced.min(rows[i - 1][j] + 1).min(rows[i][j - 1] + 1);
            if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                least = least.min(rows[i - 2][j - 2] + 1);
            }
            rows[i][j] = least;
        }
    }
    rows[a.len()][b.len()]
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::reports::Tally;
    use clap::CommandFactory;

    #[test]
    fn the_command_line_is_well_formed() {
        Cli::command().debug_assert();
    }

    #[test]
    fn an_unreadable_input_outweighs_a_conflict() {
        let tally = |unreadable, with_conflicts| Tally {
            read: 3,
            unreadable,
            with_conflicts,
            ..Tally::default()
        };
        assert_eq!(Status::from(tally(0, 0)), Status::Clean);
        assert_eq!(Status::from(tally(0, 1)), Status::Conflicts);
        assert_eq!(Status::from(tally(1, 1)), Status::Trouble);
    }

    #[test]
    fn slips_of_the_finger_are_small_distances() {
        assert_eq!(distance("p-from-t", "p-from-t"), 0);
        assert_eq!(distance("p-form-t", "p-from-t"), 1);
        assert_eq!(distance("p-fromt", "p-from-t"), 1);
        assert_eq!(distance("", "abc"), 3);
    }

    #[test]
    fn close_names_are_offered_and_far_ones_are_not() {
        let names = ["p-from-t", "p-from-f", "ci-of-mean", "se-from-sd"];
        let close = |typed| close_names(typed, names.into_iter());
        assert_eq!(close("p_form_t"), ["p-from-t", "p-from-f"]);
        assert_eq!(close("mean"), ["ci-of-mean"]);
        assert!(close("watering").is_empty());
        assert!(close("").is_empty());
    }

    #[test]
    fn an_unknown_relation_is_refused_with_a_hint() {
        assert_eq!(relation_named("p-from-t"), Ok("p-from-t"));
        let Err(Refused(reason)) = relation_named("p-form-t") else {
            panic!("must be refused");
        };
        assert!(
            reason.starts_with("there is no relation \"p-form-t\"; did you mean p-from-t"),
            "{reason}"
        );
    }
}
