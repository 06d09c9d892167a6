use clap::Parser;
use std::process::ExitCode;

fn main() -> ExitCode {
    tieout::commands::Cli::parse().run()
}
