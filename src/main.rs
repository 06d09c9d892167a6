use clap::Parser;
use std::process::ExitCode;
use tieout::readers::contained::memory::Counted;

/// A worker's memory is limited by counting it.
#[global_allocator]
static ALLOCATOR: Counted = Counted;

fn main() -> ExitCode {
    tieout::commands::Cli::parse().run()
}
